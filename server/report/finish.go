package report

import (
	"context"

	"leeway/server/watch"
	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
	"leeway/web/page/draw"
)

// Finished is a run that has ended, with its shadows beside it and its past.
type Finished struct {
	watch.Finished // the robot's run and trail
	Tape           *shadow.Tape
	Models         [shadow.Models]Model // by shadow.Who
	Advice         []shadow.Advice
	floor          *floor.Map
}

// Model is what became of one model.
type Model struct {
	Who     shadow.Who
	Outcome sim.Outcome
	// The shortest way that its hull could have gone. NoShortest says in a clause
	// why there is none; it is empty when there is one.
	Shortest   float64 // m
	NoShortest string
	// Of a shadow: how far it and the robot were from one another.
	Deviation shadow.Deviation
	Frechet   float64 // m, of the ways alone
	Partings  []shadow.Parting
	// FromPoint is how far it was from the point, at most, at the same time, m; 0
	// for the point itself.
	FromPoint float64
	// What it has that can fail it: limits of its wheels, and a position that it
	// reckons instead of knowing it.
	Limits, Reckons bool
}

// polled is how many ticks pass between two looks at whether anyone still waits.
const polled = 1024

// wayPoints is how many points of a way are compared for the Fréchet distance: a
// hundredth of a way's length in between, and 10⁶ steps of work.
const wayPoints = 1000

// Finish runs a valid scenario to its end, or until ctx ends: then the error is
// that of ctx. each, when not nil, is called with the robot's run at tick 0 and
// after every tick that it was under way.
func Finish(ctx context.Context, sc *scenario.Scenario, each func(*sim.Run)) (*Finished, error) {
	c, err := sc.Config()
	if err != nil {
		return nil, err
	}
	m, err := floor.NewMap(c.Floor, c.Ring.Mount+c.Ring.Max)
	if err != nil {
		return nil, err
	}
	tape, err := shadow.NewTape(m, c, true)
	if err != nil {
		return nil, err
	}
	set := tape.Now()
	robot, point, unicycle := set.Run(shadow.Robot), set.Run(shadow.Point), set.Run(shadow.Unicycle)
	starts := [shadow.Models]geom.Vec{robot.Pose().Pos, point.Pose().Pos, unicycle.Pose().Pos}
	f := &Finished{Finished: watch.Finished{Scenario: sc, Run: robot}, Tape: tape, Advice: shadow.Advise(c), floor: m}
	apart := 0.0 // of unicycle and point
	for n, going := 0, true; ; n++ {
		if n%polled == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
		if going {
			f.Trail.Note(robot)
			if each != nil {
				each(robot)
			}
		}
		if unicycle.Status() == sim.Running && point.Status() == sim.Running {
			apart = max(apart, unicycle.Pose().Pos.Sub(point.Pose().Pos).Norm())
		}
		if tape.Done() {
			break
		}
		going = robot.Going()
		tape.Step()
	}
	shortest := newYardstick(sc, &c)
	for w := range shadow.Models {
		run := set.Run(w)
		rc := run.Config()
		mo := Model{
			Who: w, Outcome: run.Outcome(),
			Deviation: set.Deviation(w), Partings: set.Partings(w),
			Limits:  limited(rc),
			Reckons: rc.Drive.DeadReckoning,
		}
		mo.Shortest, mo.NoShortest = shortest.of(rc, starts[w])
		if w != shadow.Robot {
			mo.Frechet = shadow.Frechet(f.way(shadow.Robot), f.way(w))
		}
		f.Models[w] = mo
	}
	f.Models[shadow.Robot].FromPoint = f.Models[shadow.Point].Deviation.Largest
	f.Models[shadow.Unicycle].FromPoint = apart
	return f, nil
}

// way is the way of a model as it is compared.
func (f *Finished) way(w shadow.Who) []geom.Vec {
	return shadow.Resample(f.Tape.Record.Way(w), wayPoints)
}

// Picture returns the floor as it stands at the end, with the ways of all three.
func (f *Finished) Picture() *draw.Floor {
	p := f.Finished.Picture()
	for _, t := range []struct {
		who     shadow.Who
		pattern draw.Pattern
	}{{shadow.Point, draw.Dotted}, {shadow.Unicycle, draw.Dashed}} {
		trace := draw.Trace{Pattern: t.pattern}
		for _, v := range f.Tape.Record.Way(t.who) {
			trace.Points = append(trace.Points, draw.Point{X: v.X, Y: v.Y})
		}
		p.Traces = append(p.Traces, trace)
	}
	return p
}
