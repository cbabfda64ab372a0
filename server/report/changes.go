package report

import (
	"fmt"
	"strconv"

	"leeway/sim/scenario"
	"leeway/sim/shadow"
)

// Change is something that a person did while the robot ran.
type Change struct {
	Tick, Until int64 // equal unless something was dragged
	Text        string
}

// dragPause is how long, in seconds, a hand that drags something may rest before
// what follows counts as another drag.
const dragPause = 1.0

// Changes tells the edits of a scenario: those of one drag, of which there are
// many, as one.
func Changes(sc *scenario.Scenario) []Change {
	dt := sc.Timing.Tick
	var out []Change
	last := map[string]int{} // of each thing, the place of its last change in out
	for i := range sc.Edits {
		e := &sc.Edits[i]
		name := thing(e)
		at, seen := last[name]
		if !seen || float64(e.Tick-out[at].Until)*dt > dragPause {
			at = len(out)
			last[name] = at
			out = append(out, Change{Tick: e.Tick})
		}
		c := &out[at]
		c.Until = e.Tick
		when, verb := "At "+shadow.Clock(float64(c.Tick)*dt), "moved"
		if c.Until > c.Tick {
			when = fmt.Sprintf("From %s to %s", shadow.Clock(float64(c.Tick)*dt), shadow.Clock(float64(c.Until)*dt))
			verb = "dragged"
		}
		switch e.What {
		case "number":
			unit := ""
			if f, ok := scenario.FieldAt(e.Name); ok && f.Unit != "" {
				unit = " " + f.Unit
			}
			c.Text = fmt.Sprintf("%s the %s was set to %s%s.", when, name, strconv.FormatFloat(e.Value, 'f', -1, 64), unit)
		case "robot":
			c.Text = fmt.Sprintf("%s the robot was carried to %.2f, %.2f.", when, e.To[0], e.To[1])
		default:
			c.Text = fmt.Sprintf("%s the %s was %s to %.2f, %.2f.", when, name, verb, e.To[0], e.To[1])
		}
	}
	return out
}

// thing is what an edit changes, in words.
func thing(e *scenario.Edit) string {
	switch e.What {
	case "solid", "mover":
		return fmt.Sprintf("%s %q", e.What, e.ID)
	case "number":
		if f, ok := scenario.FieldAt(e.Name); ok {
			return f.Label
		}
		return e.Name
	}
	return e.What
}
