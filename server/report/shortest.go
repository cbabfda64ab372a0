package report

import (
	"strings"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/reach"
	"leeway/sim/scenario"
	"leeway/sim/steer"
)

// yardstick measures the shortest way that a hull could have gone.
type yardstick struct {
	yard *reach.Yard
	none string // why there is nothing to measure by
	last question
	way  float64
}

// mostPieces bounds what is spent on looking, time and memory, which grow faster than
// the floor: 5,000 pieces of wall take 0.2 s, 20,000 take 2 s.
const mostPieces = 10_000

type question struct {
	from, to geom.Vec
	within   float64
}

func newYardstick(sc *scenario.Scenario, c *sim.Config) *yardstick {
	for _, e := range sc.Edits {
		if e.What == "goal" || e.What == "robot" || e.What == "solid" {
			return &yardstick{none: "the " + thing(&e) + " was moved while it ran"}
		}
	}
	pieces := 0
	for i := range c.Floor.Solids {
		pieces += len(c.Floor.Solids[i].Points)
	}
	if pieces > mostPieces {
		return &yardstick{none: "the floor has too many walls for it to be looked for"}
	}
	yard, err := reach.New(c.Floor, c.Hull)
	if err != nil {
		return &yardstick{none: "it cannot be measured: " + err.Error()}
	}
	return &yardstick{yard: yard}
}

// of returns the shortest way, m, from where a model's hull starts to where it has
// arrived, or why there is none. It has arrived when the point that its plan is for
// is within the goal's radius; under the look-ahead rule that is not the hull's
// centre, which is what goes the way.
func (y *yardstick) of(c *sim.Config, from geom.Vec) (length float64, none string) {
	q := question{from, c.Goal, c.GoalRadius}
	if c.Steer.Rule == steer.LookAhead && c.Drive.Model != drive.Point {
		q.within += c.Steer.Ahead
	}
	if y.yard == nil || q == y.last {
		return y.way, y.none
	}
	y.last, y.way, y.none = q, 0, ""
	switch r, err := y.yard.Shortest(q.from, q.to, q.within); {
	case err != nil:
		y.none = "it cannot be measured: " + err.Error()
	case !r.Reachable:
		y.none = strings.TrimPrefix(r.Reason, "no way: ")
	default:
		y.way = r.Length
	}
	return y.way, y.none
}
