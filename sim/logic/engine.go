package logic

import (
	"math"

	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/ring"
)

// Input is all that a logic may look at.
type Input struct {
	Tick       int64
	Time       float64 // s
	Belief     drive.Estimate
	Goal       geom.Vec
	GoalRadius float64
	Scan       *ring.Scan
	Hull       float64 // hull radius, m
	Ahead      float64 // distance from the hull's centre to the plan point along the heading (0, or ℓ of the look-ahead rule), m
	Speed      float64 // v0, m/s
}

// Decision is the outcome of one control tick.
type Decision struct {
	U     geom.Vec // wanted velocity of the plan point, in the frame of the belief, |U| ≤ v0
	Mode  int
	Side  Side
	Fired int // transition that fired at this tick, −1: none
}

// Switch records one firing with everything that was looked at.
type Switch struct {
	Tick       int64
	Time       float64
	From, To   int
	Transition int
	Side       Side // after
	Readings   [NumReadings]float64
}

// Engine runs one logic. It knows nothing of any particular one.
type Engine struct {
	l       *Logic
	started bool
	mode    int
	since   float64 // s, when the mode was entered
	sinceAt float64 // way driven when the mode was entered, m

	held  []bool    // of every condition, all transitions in a row
	whole []float64 // of every transition: since when all its conditions hold, s; NaN: they do not

	readings [NumReadings]float64
	last     Switch
	switched bool

	see   sight
	track track
	wall  wall
}

// slack keeps sums of control ticks from missing a whole number of seconds by a rounding error, s.
const slack = 1e-9

// New returns an engine in the logic's start mode. The logic must be valid (see
// Check) and must not change while the engine runs.
func New(l *Logic) *Engine {
	e := &Engine{}
	e.Reset(l)
	return e
}

// Reset is New keeping the memory.
func (e *Engine) Reset(l *Logic) {
	n := 0
	for i := range l.Transitions {
		n += len(l.Transitions[i].When)
	}
	held, whole, see := resize(e.held, n), resize(e.whole, len(l.Transitions)), e.see
	*e = Engine{l: l, mode: l.Start, held: held, whole: whole, see: see}
	e.see.forget()
	e.forgetConditions()
}

// CopyFrom makes e the same as src, keeping the memory of e.
func (e *Engine) CopyFrom(src *Engine) {
	held, whole, see := e.held, e.whole, e.see
	*e = *src
	e.held = append(held[:0], src.held...)
	e.whole = append(whole[:0], src.whole...)
	e.see = see
	e.see.copyFrom(&src.see)
}

func resize[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}

// Decide runs one control tick: readings, guards (at most one transition),
// behaviour. It does not allocate once the ring's size is known. A goal that has
// moved since the last call starts d_min and the meeting point afresh; so does
// a robot whose believed place has jumped, because somebody carried it.
func (e *Engine) Decide(in *Input) Decision {
	e.look(in)
	e.keepTrack(in)
	if !e.started {
		e.started, e.since = true, in.Time
		if m := &e.l.Modes[e.mode]; m.Behaviour == WallFollowing {
			e.chooseSide(in, m)
		}
	}
	e.read(in)
	fired := e.guard(in)
	if fired >= 0 {
		e.enter(in, fired)
	}
	return Decision{U: e.behave(in), Mode: e.mode, Side: e.Side(), Fired: fired}
}

// guard looks at every transition that leaves the mode, so that each condition
// remembers, and returns the first that may fire, or −1.
func (e *Engine) guard(in *Input) int {
	fired, k := -1, 0
	age := in.Time - e.since
	for i := range e.l.Transitions {
		t := &e.l.Transitions[i]
		if !e.l.leaves(t, e.mode) {
			k += len(t.When)
			continue
		}
		all := true
		for j := range t.When {
			e.held[k] = t.When[j].holds(&e.readings, e.held[k])
			all = all && e.held[k]
			k++
		}
		if !all {
			e.whole[i] = math.NaN()
			continue
		}
		if math.IsNaN(e.whole[i]) {
			e.whole[i] = in.Time
		}
		if fired < 0 && age >= t.MinTime-slack && in.Time-e.whole[i] >= t.Hold-slack {
			fired = i
		}
	}
	return fired
}

// enter makes transition i happen.
func (e *Engine) enter(in *Input, i int) {
	t := &e.l.Transitions[i]
	to := &e.l.Modes[t.To]
	e.last = Switch{Tick: in.Tick, Time: in.Time, From: e.mode, To: t.To, Transition: i, Readings: e.readings}
	e.switched = true
	e.mode, e.since, e.sinceAt = t.To, in.Time, e.track.way
	e.forgetConditions()
	switch {
	case t.Meet:
		e.meet(in, to)
	case to.Behaviour == WallFollowing && (e.track.side == NoSide || to.Side != BetterSide):
		e.chooseSide(in, to)
	case to.Behaviour == GoalSeeking && e.track.side != NoSide:
		e.part()
	}
	e.last.Side = e.Side()
}

// forgetConditions starts the memory of all conditions afresh.
func (e *Engine) forgetConditions() {
	clear(e.held)
	for i := range e.whole {
		e.whole[i] = math.NaN()
	}
}

// besideWall reports whether a behaviour may have a wall on a side.
func besideWall(b Behaviour) bool { return b == WallFollowing || b == Avoidance }

// Readings returns the readings of the last Decide; the same memory at every call.
func (e *Engine) Readings() *[NumReadings]float64 { return &e.readings }

// LastSwitch returns the last firing; ok is false before the first. The same
// memory at every call.
func (e *Engine) LastSwitch() (s *Switch, ok bool) { return &e.last, e.switched }

// Mode returns the current mode.
func (e *Engine) Mode() int { return e.mode }

// Side returns where the wall is in a mode that goes along one, else NoSide.
func (e *Engine) Side() Side {
	if besideWall(e.l.Modes[e.mode].Behaviour) {
		return e.track.side
	}
	return NoSide
}

// Since returns the time at which the current mode was entered, s.
func (e *Engine) Since() float64 { return e.since }
