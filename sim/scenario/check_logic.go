package scenario

import (
	"fmt"
	"strings"

	"leeway/sim/logic"
)

// anyMode stands for every mode that does not end the run.
const anyMode = "any"

// logic checks that a table makes sense by names, then lets the core judge it.
func (c checker) logic() {
	l := &c.s.Logic
	if !c.sound("logic.kind") {
		return
	}
	if l.Kind == "table" {
		c.names()
	}
	if !c.sound("logic", "robot.radius_m", "robot.speed_m_s", "goal.radius_m") {
		return
	}
	for _, p := range c.s.logic().Check() {
		path := "logic"
		if l.Kind == "table" && p.Path != "" {
			path += "." + p.Path
		}
		c.say(path, "%s: %s", path, strings.TrimSuffix(p.Text, "."))
	}
}

func (c checker) names() {
	l := &c.s.Logic
	first := map[string]int{}
	for i, m := range l.Modes {
		at := fmt.Sprintf("logic.modes[%d].name", i)
		if !c.sound(at) {
			return // nothing can be said of names that refer to modes
		}
		switch was, taken := first[m.Name]; {
		case m.Name == anyMode:
			c.say(at, "%s: %q stands for every mode; call it something else", at, anyMode)
		case taken:
			c.say(at, "%s: the name %q is taken by logic.modes[%d]", at, m.Name, was)
		default:
			first[m.Name] = i
		}
	}
	known := func(at, name string) {
		if c.sound(at) && l.mode(name) < 0 {
			var names []string
			for _, m := range l.Modes {
				names = append(names, m.Name)
			}
			hint := ""
			if best := nearest(name, names); best != "" {
				hint = "; did you mean " + best + "?"
			}
			c.say(at, "%s: there is no mode %q%s", at, name, hint)
		}
	}
	known("logic.start", l.Start)
	for i, t := range l.Transitions {
		at := fmt.Sprintf("logic.transitions[%d]", i)
		if t.From != anyMode {
			known(at+".from", t.From)
		}
		known(at+".to", t.To)
	}
}

// behaviours and readings name what the core offers, in the order of its constants.
func behaviours() (out []Option) {
	for b := logic.Behaviour(0); ; b++ {
		if _, ok := logic.BehaviourNamed(b.String()); !ok {
			return out
		}
		out = append(out, Option{b.String(), b.String()})
	}
}

func readings() (out []Option) {
	for r := range logic.NumReadings {
		out = append(out, Option{r.String(), r.String()})
	}
	return out
}
