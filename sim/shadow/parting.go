package shadow

import (
	"fmt"
	"math"
	"strings"

	"leeway/sim"
	"leeway/sim/geom"
	"leeway/sim/logic"
)

// Parting is a place where a shadow and the robot separated.
type Parting struct {
	Shadow  Who
	Tick    int64
	Time    float64 // s
	Drifted bool    // they drifted a hull radius apart; else they decided differently
	Text    string  // one sentence: what each saw and did
}

const (
	// maxPartings bounds the list: past it the two have nothing in common any more.
	maxPartings = 64
	// leastDwell is how long, in seconds, two models must be in different modes at
	// the least before that is a parting: robot and shadow come to the same place at
	// slightly different times, and a decision taken a moment later is no other one.
	leastDwell = 0.5
)

// watch looks for partings of one shadow. The two kinds are watched apart: a robot
// that only lags behind has drifted, and may still come to decide otherwise.
type watch struct {
	differs bool  // mode or side differ now
	since   int64 // from this tick on
	decided bool  // that has been reported
	drifted bool  // they are a hull radius apart, and that has been reported
}

// look compares the two after a tick at which they were d apart, and reports a
// parting when there is one: the mode or the side has differed for longer than
// the slower one's dwell, or d has just exceeded a hull radius.
func (w *watch) look(s *Set, who Who, d float64) (Parting, bool) {
	robot, shadow := s.runs[Robot], s.runs[who]
	a, b := robot.Engine(), shadow.Engine()
	differs := a.Mode() != b.Mode() || a.Side() != b.Side()
	if differs && !w.differs {
		w.since = s.tick
	}
	w.differs = differs
	if !differs {
		w.decided = false
	}
	if d < s.hull/2 {
		w.drifted = false
	}
	if least := max(leastDwell, dwell(robot), dwell(shadow)); differs && !w.decided && float64(s.tick-w.since)*s.dt > least {
		w.decided = true
		return s.parting(who, w.since, false, d), true
	}
	if d > s.hull && !w.drifted {
		w.drifted = true
		return s.parting(who, s.tick, true, d), true
	}
	return Parting{}, false
}

// dwell returns the least time that the run's mode lasts once entered: the shortest
// minimum time among its exits.
func dwell(r *sim.Run) float64 {
	l, mode, t := r.Config().Logic, r.Engine().Mode(), math.Inf(1)
	for i := range l.Transitions {
		if x := &l.Transitions[i]; x.From == mode || x.From == logic.AnyMode {
			t = min(t, x.MinTime)
		}
	}
	if math.IsInf(t, 1) {
		return 0
	}
	return t
}

// parting describes how the two separated at the given tick.
func (s *Set) parting(who Who, tick int64, drifted bool, d float64) Parting {
	p := Parting{Shadow: who, Tick: tick, Time: float64(tick) * s.dt, Drifted: drifted}
	what := s.did(Robot) + "; " + s.did(who)
	if a, b := s.runs[Robot].Engine(), s.runs[who].Engine(); a.Mode() == b.Mode() && a.Side() == b.Side() {
		what = "both were in " + s.mode(who)
	}
	if drifted {
		p.Text = fmt.Sprintf("At %s the robot had come %.2f m from the %s, more than the hull's radius: %s; %s.", Clock(p.Time), d, who, s.lies(who), what)
	} else {
		p.Text = fmt.Sprintf("From %s on they decided differently: %s.", Clock(p.Time), what)
	}
	return p
}

// lies says where the robot is, seen along the shadow's way: "it was 0.20 m behind and 0.05 m to the left".
func (s *Set) lies(who Who) string {
	shadow := s.runs[who]
	along := shadow.Wanted().Unit() // a shadow knows its pose, so its frame is the world's
	off := s.runs[Robot].Pose().Pos.Sub(shadow.Pose().Pos)
	x, y := off.Dot(along), along.Cross(off)
	if along == (geom.Vec{}) {
		return fmt.Sprintf("the %s was standing", who)
	}
	lengthwise, aside := "ahead", "to the left"
	if x < 0 {
		lengthwise = "behind"
	}
	if y < 0 {
		aside = "to the right"
	}
	return fmt.Sprintf("it was %.2f m %s and %.2f m %s of it", math.Abs(x), lengthwise, math.Abs(y), aside)
}

// mode names the mode that a model is in, with its side.
func (s *Set) mode(w Who) string {
	r := s.runs[w]
	name := r.Config().Logic.Modes[r.Engine().Mode()].Name
	switch r.Engine().Side() {
	case logic.LeftSide:
		name += " with the wall on the left"
	case logic.RightSide:
		name += " with the wall on the right"
	}
	return name
}

// did says what a model last decided, when, and what it had read: "the robot was in wall-following with the wall on
// the left since 0:19.2, because something stood 0.31 m away on the way to the goal, nearer than 0.35 m".
func (s *Set) did(w Who) string {
	r := s.runs[w]
	sw, ok := r.Engine().LastSwitch()
	if !ok {
		return fmt.Sprintf("the %s was still in %s", w, s.mode(w))
	}
	why := r.Config().Logic.Why(sw)
	why = strings.TrimSuffix(strings.ToLower(why[:1])+why[1:], ".")
	return fmt.Sprintf("the %s was in %s since %s, because %s", w, s.mode(w), Clock(sw.Time), why)
}

// Partings returns the places where the shadow and the robot separated, in the order
// in which they were noticed: a different decision is one only when it has lasted.
func (s *Set) Partings(w Who) []Parting {
	if int(w) >= len(s.apart) {
		return nil
	}
	return s.apart[w].partings
}

// MostTelling returns, of a shadow's partings, the one that tells most: the first
// different decision, or, where there is none, the first time they drifted apart. ok is
// false when there is no parting.
func MostTelling(all []Parting) (p Parting, ok bool) {
	for _, p := range all {
		if !p.Drifted {
			return p, true
		}
	}
	if len(all) > 0 {
		return all[0], true
	}
	return Parting{}, false
}

// Clock writes a time of a run as minutes and seconds: 0:19.2.
func Clock(t float64) string {
	tenths := int64(math.Round(t * 10))
	return fmt.Sprintf("%d:%02d.%d", tenths/600, tenths/10%60, tenths%10)
}
