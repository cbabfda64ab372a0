package scenario

import (
	"fmt"
	"math"
	"reflect"
	"slices"
	"strconv"
	"strings"
)

// NumberAt returns a number by its path. A number of the default logic that the
// file leaves out is what follows from hull, speed and goal.
func (s *Scenario) NumberAt(path string) (float64, error) {
	_, v, err := s.at(path, false)
	if err != nil {
		return 0, err
	}
	if v.Kind() == reflect.Pointer {
		if v.IsNil() {
			return s.derived(path), nil
		}
		v = v.Elem()
	}
	if v.CanInt() {
		return float64(v.Int()), nil
	}
	return v.Float(), nil
}

// SetNumber changes a number by its path; the error says the range, or what the number would
// clash with, and leaves s as it was. Setting ring.beams spreads them evenly; a hull
// that gets smaller than the ring's mount takes the mount with it.
func (s *Scenario) SetNumber(path string, number float64) error {
	r, v, err := s.at(path, false)
	if err != nil {
		return err
	}
	if !(number >= r.Min && number <= r.Max) {
		return fmt.Errorf("%s must be %s; it is %s", path, between(r), short(number))
	}
	was := s.Clone()
	number += 0 // −0 becomes 0
	if v.CanInt() && number != math.Trunc(number) {
		return fmt.Errorf("%s must be a whole number; it is %s", path, short(number))
	}
	s.put(path, v, number)
	return s.accept(was)
}

// follow changes what goes along with a number that has been set.
func (s *Scenario) follow(path string) {
	switch path {
	case "ring.beams":
		s.Ring.Bearings = nil
	case "robot.radius_m":
		s.Ring.Mount = min(s.Ring.Mount, s.Robot.Radius)
	}
}

// put writes a number into its place v, unchecked.
func (s *Scenario) put(path string, v reflect.Value, number float64) {
	switch v.Kind() {
	case reflect.Pointer:
		v.Set(reflect.ValueOf(&number))
	case reflect.Float64:
		v.SetFloat(number)
	default:
		v.SetInt(int64(number))
	}
	s.follow(path)
}

// ChoiceAt returns a choice by its path.
func (s *Scenario) ChoiceAt(path string) (string, error) {
	_, v, err := s.at(path, true)
	if err != nil {
		return "", err
	}
	if v.Kind() == reflect.Bool {
		return strconv.FormatBool(v.Bool()), nil
	}
	return v.String(), nil
}

// SetChoice changes a choice by its path; the error says the options, and leaves s as it was.
func (s *Scenario) SetChoice(path, value string) error {
	r, v, err := s.at(path, true)
	if err != nil {
		return err
	}
	if !r.allows(value) {
		return fmt.Errorf("%s %s", path, r.mustBe(value))
	}
	was := s.Clone()
	if v.Kind() == reflect.Bool {
		v.SetBool(value == "true")
	} else {
		v.SetString(value)
	}
	return s.accept(was)
}

// at finds the rule and the place of an editable field.
func (s *Scenario) at(path string, wantChoice bool) (*rule, reflect.Value, error) {
	r := ruleAt()[path]
	if r == nil || !r.edit {
		return nil, reflect.Value{}, fmt.Errorf("there is no field %s to change", path)
	}
	if wantChoice != (r.Options != nil) {
		return nil, reflect.Value{}, fmt.Errorf("%s is %s", path, map[bool]string{true: "a number, not a choice", false: "a choice, not a number"}[wantChoice])
	}
	p, v := root(), reflect.ValueOf(s).Elem()
	for _, name := range strings.Split(path, ".") {
		f := p.field(name)
		if form := p.form(v); !f.in(form) {
			return nil, reflect.Value{}, fmt.Errorf("%s has no place in %s", path, describeForm(p, form))
		}
		p, v = f.spec, v.Field(f.index)
	}
	return r, v, nil
}

// accept keeps a change unless it brought problems that were not there before.
func (s *Scenario) accept(was *Scenario) error {
	before := was.Validate()
	for _, p := range s.Validate() {
		if !slices.ContainsFunc(before, func(q Problem) bool { return q.Path == p.Path }) {
			*s = *was
			return fmt.Errorf("%s", p.Text)
		}
	}
	return nil
}

// Clone returns a deep copy.
func (s *Scenario) Clone() *Scenario {
	c := *s
	c.Floor.Walls = slices.Clone(s.Floor.Walls)
	for i, w := range c.Floor.Walls {
		c.Floor.Walls[i].Points = slices.Clone(w.Points)
	}
	c.Floor.Solids = slices.Clone(s.Floor.Solids)
	for i, o := range c.Floor.Solids {
		c.Floor.Solids[i].Corners = slices.Clone(o.Corners)
	}
	c.Floor.Movers = slices.Clone(s.Floor.Movers)
	for i, m := range c.Floor.Movers {
		c.Floor.Movers[i].Route = slices.Clone(m.Route)
	}
	c.Ring.Bearings = slices.Clone(s.Ring.Bearings)
	for _, n := range []**float64{&c.Logic.Notice, &c.Logic.StandOff, &c.Logic.Safe, &c.Logic.Band, &c.Logic.Gain, &c.Logic.MinTime} {
		if *n != nil {
			v := **n
			*n = &v
		}
	}
	c.Logic.Modes = slices.Clone(s.Logic.Modes)
	c.Logic.Transitions = slices.Clone(s.Logic.Transitions)
	for i, t := range c.Logic.Transitions {
		c.Logic.Transitions[i].When = slices.Clone(t.When)
	}
	c.Ideal = slices.Clone(s.Ideal)
	c.Edits = slices.Clone(s.Edits)
	c.Vary = s.Vary.clone()
	return &c
}
