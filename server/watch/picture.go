package watch

import (
	"context"
	"fmt"
	"math"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/scenario"
	"leeway/web/page/draw"
)

// Finished is a run that has ended, and what it left.
type Finished struct {
	Scenario *scenario.Scenario
	Run      *sim.Run
	Trail    Trail
}

// Finish runs a valid scenario to its end, or until ctx ends: then the error is
// that of ctx. each, when not nil, is called at tick 0 and after every tick.
func Finish(ctx context.Context, s *scenario.Scenario, each func(*sim.Run)) (*Finished, error) {
	c, err := s.Config()
	if err != nil {
		return nil, err
	}
	r, err := sim.New(c)
	if err != nil {
		return nil, err
	}
	f := &Finished{Scenario: s, Run: r}
	for n := 0; ; n++ {
		if n%1024 == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
		f.Trail.Note(r)
		if each != nil {
			each(r)
		}
		if !r.Going() {
			return f, nil
		}
		r.Step()
	}
}

// Look returns how a mode is painted.
func Look(m *logic.Mode) draw.Look {
	switch {
	case m.Ending == logic.EndsArrived:
		return draw.LookDone
	case m.Ending == logic.EndsGaveUp:
		return draw.LookFail
	case m.Behaviour == logic.GoalSeeking:
		return draw.LookGoal
	case m.Behaviour == logic.WallFollowing:
		return draw.LookWall
	case m.Behaviour == logic.Avoidance:
		return draw.LookAvoid
	}
	return draw.LookOther
}

// Shape returns the word for what a solid is made of.
func Shape(k floor.Kind) draw.Shape {
	switch k {
	case floor.Polygon:
		return draw.Polygon
	case floor.Disc:
		return draw.Disc
	}
	return draw.Wall
}

// Picture returns the floor as it stands at the end, with the way.
func (f *Finished) Picture() *draw.Floor {
	r, c := f.Run, f.Run.Config()
	goal := r.Goal()
	p := &draw.Floor{
		Title: f.Scenario.Name, Note: f.Verdict(),
		Max:   draw.Point{X: f.Scenario.Floor.Width, Y: f.Scenario.Floor.Height},
		Start: point(c.Start.Pos), Heading: c.Start.Theta,
		Goal: point(goal), Reach: c.GoalRadius, Hull: c.Hull,
	}
	for i := range c.Floor.Solids {
		s := r.World().SolidAt(i)
		p.Solids = append(p.Solids, draw.Solid{Shape: Shape(s.Kind), Points: points(s.Points), Radius: s.Radius})
	}
	for i := range c.Floor.Movers {
		p.Movers = append(p.Movers, mover(&c.Floor.Movers[i], r.World().MoverAt(i)))
	}
	modes := r.Config().Logic.Modes
	for i, s := range f.Trail.Spots() {
		at := draw.Point{X: s.X, Y: s.Y}
		look := Look(&modes[s.Mode])
		n := len(p.Way)
		if n == 0 || p.Way[n-1].Look != look {
			leg := draw.Leg{Look: look}
			if i > 0 { // a spot's mode is that of the stretch that leads to it
				before := f.Trail.Spots()[i-1]
				leg.Points = append(leg.Points, draw.Point{X: before.X, Y: before.Y})
			}
			p.Way = append(p.Way, leg)
			n++
		}
		p.Way[n-1].Points = append(p.Way[n-1].Points, at)
	}
	if o := r.Outcome(); !math.IsInf(o.Leeway, 0) {
		p.Pin = &draw.Pin{
			Hull: point(o.LeewayPose.Pos), Solid: point(o.LeewayPoint),
			Text: fmt.Sprintf("%.2f m", o.Leeway), Bad: o.Leeway < c.Asked.Leeway,
		}
	}
	return p
}

func point(v geom.Vec) draw.Point { return draw.Point{X: v.X, Y: v.Y} }

func points(vs []geom.Vec) []draw.Point {
	ps := make([]draw.Point, len(vs))
	for i, v := range vs {
		ps[i] = point(v)
	}
	return ps
}

func mover(m *floor.Mover, at geom.Vec) draw.Mover {
	d := draw.Mover{Radius: m.Radius, Route: points(m.Route), Loop: m.Loop}
	if m.Radius > 0 {
		d.Points = []draw.Point{point(at)}
		return d
	}
	s, c := geom.Sincos(m.Heading)
	for _, k := range [...]geom.Vec{{X: 1, Y: 1}, {X: -1, Y: 1}, {X: -1, Y: -1}, {X: 1, Y: -1}} {
		corner := geom.Vec{X: k.X * m.Half.X, Y: k.Y * m.Half.Y}
		d.Points = append(d.Points, point(at.Add(corner.Rotate(s, c))))
	}
	return d
}

// Short reports whether the run fell short of what is asked of it.
func (f *Finished) Short() bool {
	o, c := f.Run.Outcome(), f.Run.Config()
	return o.Status != sim.Arrived || o.Leeway < c.Asked.Leeway ||
		c.Asked.Switches >= 0 && o.Switches > c.Asked.Switches
}

// Verdict is the outcome in a few words: "arrived after 0:41, 0.07 m of leeway".
func (f *Finished) Verdict() string {
	o := f.Run.Outcome()
	words := fmt.Sprintf("%s after %s", o.Status, Clock(o.Time))
	if math.IsInf(o.Leeway, 0) {
		return words
	}
	return fmt.Sprintf("%s, %.2f m of leeway", words, o.Leeway)
}

// Clock writes seconds as minutes and seconds: "1:05".
func Clock(s float64) string {
	n := int64(math.Round(s))
	return fmt.Sprintf("%d:%02d", n/60, n%60)
}
