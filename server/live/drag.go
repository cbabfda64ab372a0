package live

import (
	"errors"
	"fmt"
	"math"
	"time"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/geom"
)

const (
	goalKind  = sim.MoveGoal
	moverKind = sim.MoveMover
)

// thing is what can be dragged, apart from the start: the goal, the robot, a
// solid or a mover.
type thing struct {
	kind  sim.EditKind
	index int
}

// grip is a thing in somebody's hand.
type grip struct {
	by     *viewer
	origin geom.Vec // where it was taken up
	want   geom.Vec // where it was last seen
	behind bool     // want is not in the run yet
	last   int64    // tick at which it last moved in the run
}

// gripEvery, in seconds of the run's time, is how often a thing in somebody's
// hand moves in the run: the list of edits is part of the file and the link.
const gripEvery = 0.05

// longAgo is before any tick.
const longAgo = math.MinInt64 / 2

// receiveDrag takes one message of a drag.
func (s *Session) receiveDrag(v *viewer, m *message) {
	at := geom.Vec{X: toMillimetre(m.X), Y: toMillimetre(m.Y)}
	if m.What == "start" {
		if m.Done {
			s.moveStart(v, at)
		}
		return
	}
	t, fault := s.thingOf(m)
	if fault != "" {
		s.refuse(v, "drag", errors.New(fault))
		return
	}
	g := s.grips[t]
	if g == nil {
		g = &grip{origin: s.place(t), last: longAgo}
		s.grips[t] = g
	}
	g.by, g.want, g.behind = v, at, true
	s.pull(t, g, m.Done)
	if m.Done {
		s.letGo(v, t, g, at)
	}
}

// toMillimetre keeps files and links short; nobody drags more finely.
func toMillimetre(v float64) float64 { return math.Round(v*1000) / 1000 }

func (s *Session) thingOf(m *message) (t thing, fault string) {
	switch m.What {
	case "goal":
		return thing{kind: sim.MoveGoal}, ""
	case "robot":
		return thing{kind: sim.MoveRobot}, ""
	case "solid":
		i, fixed, ok := s.sc.SolidIndex(m.ID)
		if !ok {
			return t, "there is no such wall or solid on this floor"
		}
		if fixed {
			return t, "the border of the floor stays where it is"
		}
		return thing{sim.MoveSolid, i}, ""
	case "mover":
		i, ok := s.sc.MoverIndex(m.ID)
		if !ok {
			return t, "there is no such mover on this floor"
		}
		return thing{sim.MoveMover, i}, ""
	}
	return t, "that cannot be dragged"
}

// place returns the anchor of a thing as the run has it.
func (s *Session) place(t thing) geom.Vec {
	switch t.kind {
	case sim.MoveGoal:
		return s.robot().Goal()
	case sim.MoveRobot:
		return s.robot().Pose().Pos
	case sim.MoveSolid:
		return s.robot().World().SolidAt(t.index).Points[0]
	}
	edits := s.robot().Edits()
	for i := len(edits) - 1; i >= 0; i-- {
		if e := &edits[i]; e.Kind == sim.MoveMover && e.Index == t.index && e.Tick <= s.tick() {
			return e.Pos
		}
	}
	return s.floor.Movers[t.index].Route[0]
}

// pullGrips brings what is in somebody's hand after the hand.
func (s *Session) pullGrips() {
	for t, g := range s.grips {
		s.pull(t, g, false)
	}
}

// pull moves a thing in the run to where it was last seen, unless it moved only
// just now, or that place is none for it.
func (s *Session) pull(t thing, g *grip, now bool) {
	tick := s.tick()
	soon := float64(tick-g.last)*s.dt < gripEvery
	if !g.behind || soon && tick != g.last && !now {
		return
	}
	g.behind = false
	if s.faultAt(t, g.want) != "" {
		return
	}
	if s.edit(sim.Edit{Kind: t.kind, Index: t.index, Pos: g.want}) == nil {
		g.last = tick
	}
}

// letGo ends a drag. A place that is none for the thing puts it back to where it
// was taken up.
func (s *Session) letGo(v *viewer, t thing, g *grip, at geom.Vec) {
	delete(s.grips, t)
	fault := s.faultAt(t, at)
	if fault == "" {
		fault = s.faultOfFloor(t)
	}
	if fault == "" && s.place(t) != at && s.fullOfEdits() {
		fault = fullOfEdits
	}
	if fault != "" {
		v.putNote(problem("drag", fault))
		if s.place(t) != g.origin && t.kind != sim.MoveRobot {
			s.edit(sim.Edit{Kind: t.kind, Index: t.index, Pos: g.origin})
		}
	}
	s.anew = true
	s.saveBy(time.Now())
}

// dropGrips leaves what a viewer held where it is: the viewer has gone.
func (s *Session) dropGrips(v *viewer) {
	for t, g := range s.grips {
		if g.by == v {
			delete(s.grips, t)
			s.anew = true
		}
	}
}

// faultAt says why a thing cannot be at a place, or nothing. It asks only what can
// be answered at every movement of a hand.
func (s *Session) faultAt(t thing, at geom.Vec) string {
	w := s.robot().World()
	switch t.kind {
	case sim.MoveGoal:
		if !s.onFloor(at, at) {
			return "the goal must be on the floor"
		}
		if n, ok := w.Nearest(at, 0.001); ok && n.Distance < 0 && !n.Ref.Mover {
			return "the goal cannot be inside " + s.solidName(n.Ref.Index)
		}
	case sim.MoveRobot:
		if !s.onFloor(at, at) {
			return "the robot must be on the floor"
		}
		hull := s.robot().Config().Hull
		if n, ok := w.Nearest(at, hull); ok && n.Distance < hull-1e-6 {
			name := "a mover"
			if !n.Ref.Mover {
				name = s.solidName(n.Ref.Index)
			}
			return fmt.Sprintf("the robot has no room there: its hull would reach %.2f m into %s", hull-n.Distance, name)
		}
	case sim.MoveSolid:
		solid := w.SolidAt(t.index)
		if !s.reachesFloor(solid.Points, at, solid.Radius) {
			return s.solidName(t.index) + " must be on the floor, at least in part"
		}
	case sim.MoveMover:
		m := &s.floor.Movers[t.index]
		if !s.reachesFloor(m.Route, at, 0) {
			return fmt.Sprintf("the route of %q must be on the floor, at least in part", m.ID)
		}
	}
	return ""
}

// onFloor reports whether any part of the box from low to high is on the floor.
func (s *Session) onFloor(low, high geom.Vec) bool {
	return high.X >= 0 && high.Y >= 0 && low.X <= s.sc.Floor.Width && low.Y <= s.sc.Floor.Height
}

// reachesFloor reports whether the box round ps, with the first of them at the
// given place, has a part on the floor.
func (s *Session) reachesFloor(ps []geom.Vec, at geom.Vec, margin float64) bool {
	low, high := ps[0], ps[0]
	for _, p := range ps {
		low.X, low.Y = min(low.X, p.X), min(low.Y, p.Y)
		high.X, high.Y = max(high.X, p.X), max(high.Y, p.Y)
	}
	shift := at.Sub(ps[0])
	out := geom.Vec{X: margin, Y: margin}
	return s.onFloor(low.Add(shift).Sub(out), high.Add(shift).Add(out))
}

func (s *Session) solidName(i int) string {
	solid := &s.floor.Solids[i]
	if solid.Kind == floor.Wall {
		return fmt.Sprintf("wall %q", solid.ID)
	}
	return fmt.Sprintf("solid %q", solid.ID)
}

// faultOfFloor says why the floor, with the thing where it has just been put, is
// none that a run could start on, or nothing. Where the robot was carried to does
// not enter the file.
func (s *Session) faultOfFloor(t thing) string {
	if t.kind == sim.MoveRobot {
		return ""
	}
	n, ok := s.robot().World().Nearest(s.robot().Goal(), 0.001)
	if t.kind == sim.MoveSolid && ok && n.Distance < 0 && n.Ref == (floor.Ref{Index: t.index}) {
		return "the goal would be inside " + s.solidName(t.index)
	}
	if problems := s.standing().Validate(); len(problems) > 0 {
		return problems[0].Text
	}
	return ""
}
