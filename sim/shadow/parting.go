package shadow

import (
	"fmt"
	"math"
	"strings"

	"leeway/sim"
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

// watch looks for partings of one shadow.
type watch struct {
	differs bool  // mode or side differ now
	since   int64 // from this tick on
	parted  bool  // a parting has been reported, and they have not come together since
	drifted bool  // they are a hull radius apart
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

	if !w.drifted && d > s.hull {
		w.drifted = true
		if !w.parted {
			w.parted = true
			return s.parting(who, s.tick, true, d), true
		}
	}
	dwell := max(leastDwell, slowestExit(robot), slowestExit(shadow))
	if !w.parted && differs && float64(s.tick-w.since)*s.dt > dwell {
		w.parted = true
		return s.parting(who, w.since, false, d), true
	}
	if !differs && d < s.hull/2 {
		w.parted, w.drifted = false, false
	}
	return Parting{}, false
}

// slowestExit returns the longest minimum time among the exits of the run's mode:
// the mode cannot be expected to be left before.
func slowestExit(r *sim.Run) float64 {
	l, mode, t := r.Config().Logic, r.Engine().Mode(), 0.0
	for i := range l.Transitions {
		if x := &l.Transitions[i]; x.From == mode {
			t = max(t, x.MinTime)
		}
	}
	return t
}

// parting describes how the two separated at the given tick.
func (s *Set) parting(who Who, tick int64, drifted bool, d float64) Parting {
	p := Parting{Shadow: who, Tick: tick, Time: float64(tick) * s.dt, Drifted: drifted}
	robot, shadow := s.did(Robot), s.did(who)
	if drifted {
		p.Text = fmt.Sprintf("At %s the robot had come %.2f m from the %s, more than the hull's radius: %s; %s.",
			Clock(p.Time), d, who, robot, shadow)
	} else {
		p.Text = fmt.Sprintf("At %s they decided differently: %s; %s.", Clock(p.Time), robot, shadow)
	}
	return p
}

// did says what a model last decided, when, and what it had read: "the robot had
// turned to wall-following with the wall on the left at 0:19.2, because something
// stood 0.31 m away on the way to the goal, nearer than 0.35 m".
func (s *Set) did(w Who) string {
	r := s.runs[w]
	mode := r.Config().Logic.Modes[r.Engine().Mode()].Name
	switch r.Engine().Side() {
	case logic.LeftSide:
		mode += " with the wall on the left"
	case logic.RightSide:
		mode += " with the wall on the right"
	}
	sw, ok := r.Engine().LastSwitch()
	if !ok {
		return fmt.Sprintf("the %s was still in %s", w, mode)
	}
	why := r.Config().Logic.Why(sw)
	why = strings.TrimSuffix(strings.ToLower(why[:1])+why[1:], ".")
	return fmt.Sprintf("the %s was in %s since %s, because %s", w, mode, Clock(sw.Time), why)
}

// Partings returns the places where the shadow and the robot separated, in order.
func (s *Set) Partings(w Who) []Parting {
	if int(w) >= len(s.apart) {
		return nil
	}
	return s.apart[w].partings
}

// Clock writes a time of a run as minutes and seconds: 0:19.2.
func Clock(t float64) string {
	tenths := int64(math.Round(t * 10))
	return fmt.Sprintf("%d:%02d.%d", tenths/600, tenths/10%60, tenths%10)
}
