package scenario

import (
	"fmt"
	"math"
	"reflect"
	"strings"
)

// vary checks that what varies exists and stays within what it may be.
func (c checker) vary() {
	v := &c.s.Vary
	c.regions("vary.start", v.Start)
	c.regions("vary.goal", v.Goal)
	seen := map[string]bool{}
	for i := range v.Numbers {
		at := fmt.Sprintf("vary.numbers[%d]", i)
		n := &v.Numbers[i]
		if !c.sound(at) {
			continue
		}
		if seen[n.Path] {
			c.say(at+".path", "%s.path: %s is drawn twice", at, n.Path)
			continue
		}
		seen[n.Path] = true
		c.varied(at, n)
	}
	solids, seen := c.s.solidIndexes(), map[string]bool{}
	for i, o := range v.Solids {
		at := fmt.Sprintf("vary.solids[%d].id", i)
		if !c.sound(at) {
			continue
		}
		if strings.HasPrefix(o.ID, borderPrefix) {
			c.say(at, "%s: the border cannot be moved", at)
		} else if _, ok := solids[o.ID]; !ok {
			c.say(at, "%s: there is no wall or solid %q", at, o.ID)
		} else if seen[o.ID] {
			c.say(at, "%s: %q is named twice", at, o.ID)
		}
		seen[o.ID] = true
	}
	seen = map[string]bool{}
	for i, m := range v.Movers {
		at := fmt.Sprintf("vary.movers[%d].id", i)
		if !c.sound(at) {
			continue
		}
		if _, ok := c.s.MoverIndex(m.ID); !ok {
			c.say(at, "%s: there is no mover %q", at, m.ID)
		} else if seen[m.ID] {
			c.say(at, "%s: %q is named twice", at, m.ID)
		}
		seen[m.ID] = true
	}
}

func (c checker) regions(path string, list []Region) {
	for i, r := range list {
		at := fmt.Sprintf("%s[%d]", path, i)
		if !c.sound(at) {
			continue
		}
		if r.form() == "disc" {
			c.onFloor(at, []Point{r.Center}, r.Radius)
		} else {
			c.onFloor(at, []Point{r.From, r.To}, 0)
		}
	}
}

// mostSteps bounds how many values a range in steps may have.
const mostSteps = 100_000

func (c checker) varied(at string, n *Varied) {
	r, v, err := c.s.varying(n.Path)
	if err != nil {
		c.say(at+".path", "%s.path: %v", at, err)
		return
	}
	value := func(name string, x float64) {
		if !(x >= r.Min && x <= r.Max) {
			c.say(at+"."+name, "%s.%s: %s must be %s; it is %s", at, name, n.Path, between(r), short(x))
		} else if v.CanInt() && x != math.Trunc(x) {
			c.say(at+"."+name, "%s.%s: %s must be a whole number; it is %s", at, name, n.Path, short(x))
		}
	}
	switch n.Kind {
	case "uniform", "steps":
		value("low", n.Low)
		value("high", n.High)
		if n.Low > n.High {
			c.say(at+".low", "%s.low (%s) is above its high end (%s)", at, short(n.Low), short(n.High))
		} else if n.Kind == "steps" {
			if v.CanInt() && n.Step != math.Trunc(n.Step) {
				c.say(at+".step", "%s.step: %s must be a whole number; it is %s", at, n.Path, short(n.Step))
			}
			if (n.High-n.Low)/n.Step > mostSteps {
				c.say(at+".step", "%s.step (%s) makes more than %d values", at, short(n.Step), mostSteps)
			}
		}
	case "normal":
		value("mean", n.Mean)
	case "list":
		for k, x := range n.Values {
			value(fmt.Sprintf("values[%d]", k), x)
		}
	}
}

// varying finds the rule and the place of a number that may differ from trial to
// trial: one that a person can change by itself, but for those that have a way of
// their own to vary and those that would make it another floor.
func (s *Scenario) varying(path string) (*rule, reflect.Value, error) {
	switch {
	case path == "seed" || strings.HasPrefix(path, "floor.") || strings.HasPrefix(path, "timing."):
		return nil, reflect.Value{}, fmt.Errorf("%s cannot differ from trial to trial", path)
	case path == "start.x_m" || path == "start.y_m" || path == "goal.x_m" || path == "goal.y_m":
		return nil, reflect.Value{}, fmt.Errorf("%s is drawn from regions: vary.%s", path, parent(path))
	}
	return s.at(path, false)
}
