package logic

import (
	"math"

	"leeway/sim/geom"
)

// track is what the engine keeps of the way so far, all of it by the estimate.
type track struct {
	begun  bool
	time   float64
	pos    geom.Vec // hull's centre
	plan   geom.Vec // plan point
	way    float64  // driven, m
	origin geom.Vec // plan point when the goal was set

	goal        geom.Vec
	distance    float64  // plan point to goal, m
	goalDir     geom.Vec // from the hull's centre to the goal
	goalFarness float64  // from the hull's centre to the goal, m

	best        float64 // d_min
	metDistance float64 // goal distance at the meeting
	metAt       float64 // s
	side        Side    // NoSide while no obstacle is dealt with
	parted      bool    // an obstacle on the way to this goal has been left
	partedBest  float64 // d_min then
	partedSide  Side    // side then
	deceptions  int     // meetings in a row that brought no progress
	loop        loop
}

const (
	leastProgress = 0.24 // hull radii nearer to the goal than before, for an obstacle to be met in good order
	maxDeceptions = 2    // in a row, before side and meeting point stay
)

// keepTrack brings the track up to this tick.
func (e *Engine) keepTrack(in *Input) {
	t := &e.track
	pos := e.see.pos
	step := pos.Sub(t.pos).Norm()
	// Position fixes move the belief too; only a jump of more than a hull radius
	// beyond what can have been driven means that somebody carried the robot.
	carried := t.begun && step > in.Hull+float64(4*in.Speed*(in.Time-t.time))
	if carried || !t.begun {
		step = 0
	}
	t.way += step
	t.time, t.pos = in.Time, pos
	t.plan = pos.AddScaled(in.Ahead, e.see.head)
	t.distance = in.Goal.Sub(t.plan).Norm()
	toGoal := in.Goal.Sub(pos)
	t.goalFarness = toGoal.Norm()
	t.goalDir = e.see.head
	if t.goalFarness > 0 {
		t.goalDir = toGoal.Scale(1 / t.goalFarness)
	}
	if carried {
		e.see.forgetPlaces()
		e.wall.known = false
	}
	if carried || !t.begun || in.Goal != t.goal {
		t.begun = true
		t.goal, t.origin = in.Goal, t.plan
		t.parted, t.deceptions = false, 0
		e.startMeeting()
	}
	t.best = math.Min(t.best, t.distance)
	if besideWall(e.l.Modes[e.mode].Behaviour) {
		t.loop.follow(pos, e.wall.at, step, in.Hull)
	}
}

// startMeeting lets d_min and the meeting point start here.
func (e *Engine) startMeeting() {
	t := &e.track
	t.best, t.metDistance, t.metAt = t.distance, t.distance, t.time
	t.loop = loop{from: t.pos}
}

// meet begins to deal with an obstacle in mode m. Every obstacle should be met
// nearer to the goal than the robot has been before: it left the last one because
// its way looked free until beyond that. Where that was wrong, d_min stays, so that
// the same view does not deceive it again, and the obstacle is gone round the other
// way; and when it happens over and over, side and meeting point stay too, so that in
// the end the boundary closes.
func (e *Engine) meet(in *Input, m *Mode) {
	t := &e.track
	deceived := t.parted && t.distance > t.partedBest-float64(leastProgress*in.Hull)
	t.parted = false
	e.wall.known = false
	if !deceived {
		t.deceptions = 0
		e.startMeeting()
		e.chooseSide(in, m)
		return
	}
	t.deceptions++
	t.side = t.partedSide
	if t.deceptions > maxDeceptions {
		return
	}
	e.startMeeting()
	t.best = t.partedBest
	if m.Side == BetterSide {
		t.side = -t.side
	} else {
		e.chooseSide(in, m)
	}
}

// part ends dealing with an obstacle.
func (e *Engine) part() {
	t := &e.track
	t.parted, t.partedBest, t.partedSide = true, t.best, t.side
	t.side = NoSide
}

// loop finds out whether a boundary has been followed back to where it has been
// followed before. It remembers places along the way and the direction driven
// there, and looks for coming back to one of them in the same direction with the
// same piece of wall beside it (in a doorway the two jambs are passed in turn). The first
// place is where the robot has settled on the boundary after the meeting. But the way
// in may have been a spur that the boundary, followed round, never comes back to;
// so further places are marked as the way grows, each time by half (as Brent's
// method finds a cycle whose beginning is not known), and the oldest but the first
// is given up for the new one.
type loop struct {
	way    float64  // followed since the meeting, m
	from   geom.Vec // a place now and then, hull/4 apart
	since  float64  // way at that place
	marks  [6]mark
	next   int
	again  float64 // way at which the next mark is due
	closed bool
}

// mark is a place on the way. left says that the robot has been well away from it.
type mark struct {
	set, left bool
	at, dir   geom.Vec
	wall      geom.Vec // the place on the wall beside it
	way       float64
}

// A robot that has no room to go round counts as having done so: after as much way,
// in hull radii, on the spot, or without getting well away from a place.
const (
	pinned  = 4
	cramped = 25
)

func (l *loop) follow(pos, wall geom.Vec, step, hull float64) {
	l.way += step
	d := pos.Sub(l.from)
	if d.Norm() < hull/4 {
		l.closed = l.closed || l.way-l.since > pinned*hull
		return
	}
	dir := d.Unit()
	l.from, l.since = pos, l.way
	for i := range l.marks {
		m := &l.marks[i]
		if !m.set {
			continue
		}
		since := l.way - m.way
		off := pos.Sub(m.at).Norm()
		near := hull + math.Min(float64(0.01*since), hull) // the estimate drifts
		switch {
		case off > float64(3*hull)+near:
			m.left = true
		case m.left && off < near && dir.Dot(m.dir) > 0.5 && wall.Sub(m.wall).Norm() < near+hull,
			!m.left && since > cramped*hull:
			l.closed = true
		}
	}
	if l.way >= math.Max(l.again, 3*hull) {
		l.marks[l.next] = mark{set: true, at: pos, dir: dir, wall: wall, way: l.way}
		if l.next++; l.next == len(l.marks) {
			l.next = 1
		}
		l.again = 1.5 * l.way
	}
}
