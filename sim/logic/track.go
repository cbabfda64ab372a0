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
	side        Side
	met         bool    // an obstacle has been met on the way to this goal
	parted      bool    // and left again
	partedBest  float64 // d_min then
	deceptions  int     // meetings in a row that brought no progress
	loop        loop
}

const (
	leastProgress = 0.05 // m nearer to the goal than before, for an obstacle to be met in good order
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
		t.parted = false
		e.startMeeting()
	}
	t.best = math.Min(t.best, t.distance)
	if besideWall(e.l.Modes[e.mode].Behaviour) {
		t.loop.follow(pos, step, in.Hull)
	}
}

// startMeeting lets d_min and the meeting point start here.
func (e *Engine) startMeeting() {
	t := &e.track
	t.best, t.metDistance = t.distance, t.distance
	t.loop = loop{from: t.pos}
}

// meet begins to deal with an obstacle in mode m. Every obstacle should be met
// nearer to the goal than the robot has been before: it left the last one because
// its way looked free until beyond that. Where that was wrong, d_min stays, so that
// the same view does not deceive it again; and when it happens over and over, side and
// meeting point stay too, so that in the end the boundary closes.
func (e *Engine) meet(in *Input, m *Mode) {
	t := &e.track
	e.wall.known = false
	best := t.partedBest
	deceived := t.parted && t.distance > best-leastProgress
	t.parted = false
	if deceived {
		t.deceptions++
	} else {
		t.deceptions = 0
	}
	if t.deceptions > maxDeceptions {
		return
	}
	e.startMeeting()
	e.chooseSide(in, m)
	if deceived {
		t.best = best
	}
}

// part ends dealing with an obstacle.
func (e *Engine) part(in *Input) {
	e.track.parted, e.track.partedBest = true, e.track.best
}

// loop finds out whether a boundary has been followed back to where it was met.
// It waits until the robot has settled on the boundary, remembers that place and
// the way it drove there, and looks for coming back to it in the same direction.
// Where the boundary runs back into itself later than that (the way in was a spur),
// the first place is never met again; so a second one is set anew each time the
// way followed has doubled (after Brent's method of finding cycles).
type loop struct {
	way    float64 // followed since the meeting, m
	from   geom.Vec
	marks  [2]mark
	again  float64 // way at which the second mark is set anew
	closed bool
}

type mark struct {
	set, left bool
	at, dir   geom.Vec
	way       float64
}

func (l *loop) follow(pos geom.Vec, step, hull float64) {
	l.way += step
	d := pos.Sub(l.from)
	if d.Norm() < hull/4 {
		return
	}
	dir := d.Unit()
	l.from = pos
	for i := range l.marks {
		m := &l.marks[i]
		if !m.set {
			continue
		}
		off := pos.Sub(m.at).Norm()
		near := hull + math.Min(0.01*(l.way-m.way), hull)
		switch {
		case off > 3*hull+near:
			m.left = true
		case m.left && off < near && dir.Dot(m.dir) > 0.5:
			l.closed = true
		}
	}
	if !l.marks[0].set && l.way >= 3*hull {
		l.marks[0] = mark{set: true, at: pos, dir: dir, way: l.way}
		l.again = 2 * l.way
	}
	if l.marks[0].set && l.way >= l.again {
		l.marks[1] = mark{set: true, at: pos, dir: dir, way: l.way}
		l.again = 2 * l.way
	}
}
