package scenario

import (
	"fmt"
	"math"
	"reflect"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Validate reports every impossible value (without positions).
func (s *Scenario) Validate() Problems {
	var r report
	s.check(&r)
	return r.problems(nil)
}

// check reports first what each value by itself may not be, then what does not go together.
// Findings have no position yet.
func (s *Scenario) check(r *report) {
	c := checker{r, s}
	c.value(root(), reflect.ValueOf(s).Elem(), nil)
	c.robot()
	c.ring()
	c.timing()
	c.ids()
	c.floor()
	c.places()
	c.logic()
	c.edits()
	c.vary()
	c.size()
}

type checker struct {
	*report
	s *Scenario
}

// say reports a fault that a JSON Schema cannot say.
func (c checker) say(path, format string, args ...any) {
	if !c.full() {
		c.add(path, -1, true, fmt.Sprintf(format, args...))
	}
}

// clash reports that the value at path does not go with the one at other.
func (c checker) clash(path, other, format string, args ...any) {
	if !c.full() {
		c.add(path, -1, true, fmt.Sprintf(format, args...))
		c.list[len(c.list)-1].clash = []string{other}
	}
}

// wrong reports what is wrong with the value at p.
func (c checker) wrong(p *path, beyond bool, format string, args ...any) {
	if !c.full() {
		at := p.String()
		c.add(at, -1, beyond, at+" "+fmt.Sprintf(format, args...))
	}
}

// value checks a value and all that is in it against the rules.
func (c checker) value(s *spec, v reflect.Value, p *path) {
	if len(c.list) > 0 && c.bad[p.String()] {
		return
	}
	switch v.Kind() {
	case reflect.Pointer:
		if !v.IsNil() {
			c.value(s.elem, v.Elem(), p)
		}
	case reflect.Struct:
		form := s.form(v)
		for i := range s.fields {
			if f := &s.fields[i]; f.in(form) {
				c.value(f.spec, v.Field(f.index), &path{up: p, name: f.name})
			}
		}
	case reflect.Slice:
		if n, r := v.Len(), s.rule; float64(n) > r.Max {
			c.wrong(p, false, "may hold at most %v %s; it holds %d", r.Max, r.Label, n)
			return
		} else if float64(n) < r.Min {
			if n == 0 {
				c.wrong(p, false, "must not be empty")
			} else {
				c.wrong(p, false, "must hold at least %v %s; it holds %d", r.Min, r.Label, n)
			}
		}
		fallthrough
	case reflect.Array:
		for i := range v.Len() {
			c.value(s.elem, v.Index(i), &path{up: p, index: i})
		}
	case reflect.Float64:
		if f := v.Float(); !(f >= s.rule.Min && f <= s.rule.Max) {
			c.wrong(p, false, "must be %s; it is %s", between(s.rule), short(f))
		}
	case reflect.Int, reflect.Int64:
		if f := float64(v.Int()); f < s.rule.Min || f > s.rule.Max {
			c.wrong(p, false, "must be %s; it is %d", between(s.rule), v.Int())
		}
	case reflect.String:
		t := v.String()
		switch r := s.rule; {
		case r.Options != nil:
			if !r.allows(t) {
				c.wrong(p, false, "%s", r.mustBe(t))
			}
		case r.nonEmpty && t == "":
			c.wrong(p, false, "must not be empty")
		case utf8.RuneCountInString(t) > r.chars:
			c.wrong(p, false, "may be %d characters long; it is %d", r.chars, utf8.RuneCountInString(t))
		case strings.ContainsFunc(t, unicode.IsControl):
			c.wrong(p, true, "must stand on one line, without control characters")
		case !utf8.ValidString(t): // from Go only: a file is checked as a whole
			c.wrong(p, true, "must be UTF-8 text")
		}
	}
}

// between puts the range of a rule into words: "between 0.02 and 2 m".
func between(r *rule) string {
	unit := r.Unit
	if unit != "" && unit != "°" {
		unit = " " + unit
	}
	if r.Min == r.Max {
		return short(r.Min) + unit
	}
	return "between " + short(r.Min) + " and " + short(r.Max) + unit
}

// short writes a number as briefly as it can be read back.
func short(f float64) string {
	if math.Abs(f) < 1e16 && f == math.Trunc(f) {
		return strconv.FormatFloat(f, 'f', -1, 64)
	}
	return strconv.FormatFloat(f, 'g', -1, 64)
}

func (r *rule) allows(value string) bool {
	for _, o := range r.Options {
		if o.Value == value {
			return true
		}
	}
	return false
}

// mustBe says which values a choice has.
func (r *rule) mustBe(got string) string {
	var names []string
	for _, o := range r.Options {
		if o.Value != "" {
			names = append(names, o.Value)
		}
	}
	hint := ""
	if best := nearest(got, names); best != "" {
		hint = "; did you mean " + best + "?"
	}
	if g := []rune(got); len(g) > 40 {
		got = string(g[:40]) + "…"
	}
	return "must be one of " + strings.Join(names, ", ") + "; it is " + strconv.Quote(got) + hint
}

// size checks that the canonical text can be read again. Only very many walls, solids and edits can make it
// too long, so that it need not be written out to know for all others.
func (c checker) size() {
	if len(c.list) > 0 || len(c.s.Floor.Walls)+len(c.s.Floor.Solids)+len(c.s.Edits) < 10_000 {
		return
	}
	if n := len(c.s.Print()); n > MaxBytes {
		c.say("", "the canonical text of this scenario is %.1f MB long; at most %d MB are allowed", float64(n)/(1<<20), MaxBytes>>20)
	}
}

func (c checker) robot() {
	b := &c.s.Robot
	if c.sound("robot.track_m", "robot.radius_m") && b.Track > 2*b.Radius {
		c.clash("robot.track_m", "robot.radius_m", "robot.track_m (%.2f m) is wider than the hull (%.2f m across)", b.Track, 2*b.Radius)
	}
	if c.sound("ring.mount_m", "robot.radius_m") && c.s.Ring.Mount > b.Radius {
		c.clash("ring.mount_m", "robot.radius_m", "ring.mount_m (%.2f m) is beyond the hull (radius %.2f m)", c.s.Ring.Mount, b.Radius)
	}
}

func (c checker) ring() {
	g := &c.s.Ring
	if c.sound("ring.range_min_m", "ring.range_max_m") && g.RangeMin >= g.RangeMax {
		c.clash("ring.range_min_m", "ring.range_max_m", "ring.range_min_m (%s m) must be below ring.range_max_m (%s m)", short(g.RangeMin), short(g.RangeMax))
	}
	if c.sound("ring.step_m", "ring.range_max_m") && g.Step > g.RangeMax {
		c.clash("ring.step_m", "ring.range_max_m", "ring.step_m (%s m) is longer than the longest range (%s m)", short(g.Step), short(g.RangeMax))
	}
	if c.sound("ring.dropout", "ring.random") && g.Dropout+g.Random > 1 {
		c.clash("ring.random", "ring.dropout", "ring.dropout and ring.random are probabilities that together may not exceed 1; they add up to %s", short(g.Dropout+g.Random))
	}
	if n := len(g.Bearings); n > 0 && c.sound("ring.beams", "ring.bearings_deg") && g.Beams != n {
		c.clash("ring.beams", "ring.bearings_deg", "ring.beams is %d, but ring.bearings_deg lists %d; leave one of them out", g.Beams, n)
	}
	if c.sound("ring.beams", "ring.cone_rays") && g.Beams*g.ConeRays > MaxRays {
		c.clash("ring.cone_rays", "ring.beams", "%d beams of %d rays make %d rays; at most %d are allowed", g.Beams, g.ConeRays, g.Beams*g.ConeRays, MaxRays)
	}
}

// ticks returns how many ticks a time is, and whether it is a whole number of them, at least one.
func ticks(time, tick float64) (int, bool) {
	n := math.Round(time / tick)
	return int(n), n >= 1 && math.Abs(time/tick-n) <= 1e-6
}

func (c checker) timing() {
	tick := c.s.Timing.Tick
	whole := func(path string, time float64) {
		if !c.sound(path, "timing.tick_s") {
			return
		}
		if _, ok := ticks(time, tick); !ok {
			c.clash(path, "timing.tick_s", "%s (%s s) must be a whole multiple of timing.tick_s (%s s)", path, short(time), short(tick))
		}
	}
	whole("timing.decide_every_s", c.s.Timing.DecideEvery)
	whole("ring.period_s", c.s.Ring.Period)
	seen := map[string]bool{}
	for i, name := range c.s.Ideal {
		if seen[name] {
			c.add(fmt.Sprintf("ideal[%d]", i), -1, false, "ideal lists "+name+" twice")
		}
		seen[name] = true
	}
}

// borderPrefix begins the ids of the walls round an enclosed floor.
const borderPrefix = "border-"

func (c checker) ids() {
	first := map[string]string{}
	lists := []struct {
		path string
		n    int
		id   func(int) string
	}{
		{"floor.walls", len(c.s.Floor.Walls), func(i int) string { return c.s.Floor.Walls[i].ID }},
		{"floor.solids", len(c.s.Floor.Solids), func(i int) string { return c.s.Floor.Solids[i].ID }},
		{"floor.movers", len(c.s.Floor.Movers), func(i int) string { return c.s.Floor.Movers[i].ID }},
	}
	for _, l := range lists {
		for i := range l.n {
			id, at := l.id(i), fmt.Sprintf("%s[%d].id", l.path, i)
			if !c.sound(at) {
				continue
			}
			if strings.HasPrefix(id, borderPrefix) {
				c.say(at, "%s: ids that begin with %s are those of the border", at, borderPrefix)
			} else if was, taken := first[id]; taken {
				c.say(at, "%s: the id %q is taken by %s", at, id, was)
			} else {
				first[id] = parent(at)
			}
		}
	}
}

func (c checker) edits() {
	last := int64(0)
	solids := c.s.solidIndexes()
	for i, e := range c.s.Edits {
		at := fmt.Sprintf("edits[%d]", i)
		if !c.sound(at) {
			continue
		}
		if e.Tick < last {
			c.say(at+".tick", "%s.tick (%d) comes before that of the edit above it (%d)", at, e.Tick, last)
		}
		last = e.Tick
		switch e.What {
		case "goal", "robot":
			if c.sound("floor.width_m", "floor.height_m") && !c.s.onFloor(e.To[0], e.To[1]) {
				c.say(at+".to_m", "%s.to_m (%s) is not on the floor", at, c.s.offFloor(e.To[0], e.To[1]))
			}
		case "solid":
			if strings.HasPrefix(e.ID, borderPrefix) {
				c.say(at+".id", "%s.id: the border cannot be moved", at)
			} else if _, ok := solids[e.ID]; !ok {
				c.say(at+".id", "%s.id: there is no wall or solid %q", at, e.ID)
			}
		case "mover":
			if _, ok := c.s.MoverIndex(e.ID); !ok {
				c.say(at+".id", "%s.id: there is no mover %q", at, e.ID)
			}
		case "number":
			r := ruleAt()[e.Name]
			if r == nil || !r.Live {
				var names []string
				for _, f := range rules() {
					if f.Live {
						names = append(names, f.Path)
					}
				}
				c.say(at+".name", "%s.name must be one of %s; it is %q", at, strings.Join(names, ", "), e.Name)
			} else if !(e.Value >= r.Min && e.Value <= r.Max) {
				c.say(at+".value", "%s.value: %s must be %s; it is %s", at, e.Name, between(r), short(e.Value))
			}
		}
	}
}
