package logic

import (
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"

	"leeway/sim/geom"
	"leeway/sim/ring"
)

func xy(x, y float64) geom.Vec { return geom.Vec{X: x, Y: y} }

// seen is one control tick of the naive model: the time and what was read.
type seen struct {
	time     float64
	readings [NumReadings]float64
}

// naive answers the engine's question by going through everything read since the
// mode was entered, keeping no state but that.
type naive struct {
	l       *Logic
	mode    int
	entered float64
	history []seen
}

// heldAt replays one condition up to tick n of the history.
func (m *naive) heldAt(c *Condition, n int) bool {
	held := false
	for _, s := range m.history[:n+1] {
		x, b := s.readings[c.Reading], c.Threshold
		if c.HasAgainst {
			b = s.readings[c.Against] + c.Threshold
		}
		switch {
		case c.Rel == Below && x < b, c.Rel == AtLeast && x >= b:
			held = true
		case c.Rel == Below && x >= b+c.Band, c.Rel == AtLeast && x < b-c.Band:
			held = false
		}
	}
	return held
}

func (m *naive) wholeAt(t *Transition, n int) bool {
	for i := range t.When {
		if !m.heldAt(&t.When[i], n) {
			return false
		}
	}
	return true
}

// step returns the transition that fires, or −1.
func (m *naive) step(s seen) int {
	m.history = append(m.history, s)
	last := len(m.history) - 1
	for i := range m.l.Transitions {
		t := &m.l.Transitions[i]
		leaves := t.From == m.mode || t.From == AnyMode && t.To != m.mode
		if !leaves || m.l.Modes[m.mode].Ending != GoesOn || s.time-m.entered < t.MinTime-slack {
			continue
		}
		since := last
		for since >= 0 && m.wholeAt(t, since) {
			since--
		}
		if since == last || s.time-m.history[since+1].time < t.Hold-slack {
			continue
		}
		m.mode, m.entered, m.history = t.To, s.time, nil
		return i
	}
	return -1
}

// The engine against the naive model, on random tables and random readings:
// priority, one transition a tick, release bands, minimum time, holding, any mode, endings.
func TestGuardsAgainstNaiveModel(t *testing.T) {
	fired := 0
	rapid.Check(t, func(t *rapid.T) {
		l := randomLogic(t)
		if p := l.Check(); len(p) > 0 {
			t.Fatalf("the random table is not valid: %v", p)
		}
		e, m := New(l), &naive{l: l, mode: l.Start}
		now := rapid.Float64Range(0, 5).Draw(t, "start")
		e.since, m.entered = now, now
		in := &Input{Hull: 0.2}
		for range rapid.IntRange(1, 60).Draw(t, "ticks") {
			in.Time = now
			for r := range e.readings {
				// Few values, so that thresholds are met exactly now and then.
				e.readings[r] = float64(rapid.IntRange(-3, 3).Draw(t, "reading")) / 2
			}
			got := e.guard(in)
			if got >= 0 {
				fired++
				e.enter(in, got)
			}
			want := m.step(seen{now, e.readings})
			if got != want || e.mode != m.mode {
				t.Fatalf("at %.2f s: transition %d to mode %d, the model says %d to %d", now, got, e.mode, want, m.mode)
			}
			if got >= 0 {
				s, ok := e.LastSwitch()
				if !ok || s.Transition != got || s.To != m.mode || s.Time != now || s.Readings != e.readings {
					t.Fatalf("the record of the switch is %+v", s)
				}
			}
			now += 0.02 * float64(rapid.IntRange(1, 3).Draw(t, "step"))
		}
	})
	if fired < 100 {
		t.Errorf("only %d transitions fired: this tests little", fired)
	}
}

// randomLogic draws a valid table.
func randomLogic(t *rapid.T) *Logic {
	modes := rapid.IntRange(1, 5).Draw(t, "modes")
	l := &Logic{
		Name:   "random",
		Start:  0,
		Sector: rapid.Float64Range(0, math.Pi).Draw(t, "sector"),
		Margin: rapid.Float64Range(0, 0.3).Draw(t, "margin"),
	}
	for i := range modes {
		m := Mode{
			Name:      fmt.Sprint("mode ", i),
			Behaviour: Behaviour(rapid.IntRange(0, int(numBehaviours)-1).Draw(t, "behaviour")),
			Side:      SideRule(rapid.IntRange(0, int(numSideRules)-1).Draw(t, "side")),
			StandOff:  rapid.Float64Range(0, 1).Draw(t, "stand-off"),
			GoalGain:  rapid.Float64Range(0, 5).Draw(t, "gain"),
			Speed:     rapid.Float64Range(0, 1).Draw(t, "speed"),
		}
		if i > 0 && rapid.IntRange(0, 5).Draw(t, "ends") == 0 {
			m.Ending = Ending(rapid.IntRange(1, int(numEndings)-1).Draw(t, "ending"))
		}
		l.Modes = append(l.Modes, m)
	}
	for range rapid.IntRange(2, 9).Draw(t, "transitions") {
		tr := Transition{
			From:    rapid.IntRange(AnyMode, modes-1).Draw(t, "from"),
			To:      rapid.IntRange(0, modes-1).Draw(t, "to"),
			MinTime: float64(rapid.IntRange(0, 3).Draw(t, "minimum time")) * 0.1,
			Hold:    float64(rapid.IntRange(0, 3).Draw(t, "hold")) * 0.05,
			Meet:    rapid.Bool().Draw(t, "meet"),
		}
		if tr.From != AnyMode && l.Modes[tr.From].Ending != GoesOn {
			tr.From = AnyMode
		}
		for range rapid.IntRange(1, 2).Draw(t, "conditions") {
			c := Condition{
				Reading:   Reading(rapid.IntRange(0, int(NumReadings)-1).Draw(t, "reading")),
				Rel:       Relation(rapid.IntRange(0, int(numRelations)-1).Draw(t, "relation")),
				Threshold: float64(rapid.IntRange(-2, 2).Draw(t, "threshold")) / 2,
				Band:      float64(rapid.IntRange(0, 2).Draw(t, "band")) / 2,
			}
			if rapid.IntRange(0, 3).Draw(t, "against another") == 0 {
				c.HasAgainst = true
				c.Against = (c.Reading + 1 + Reading(rapid.IntRange(0, int(NumReadings)-2).Draw(t, "against"))) % NumReadings
			}
			tr.When = append(tr.When, c)
		}
		l.Transitions = append(l.Transitions, tr)
	}
	return l
}

// A condition with a band goes on holding until the reading has gone the band
// beyond its threshold, and forgets when a mode is entered.
func TestReleaseBand(t *testing.T) {
	c := Condition{Reading: Nearest, Rel: Below, Threshold: 0.3, Band: 0.1}
	r := &[NumReadings]float64{}
	held := false
	for i, step := range []struct {
		gap  float64
		want bool
	}{{0.35, false}, {0.3, false}, {0.29, true}, {0.39, true}, {0.4, false}, {0.35, false}, {0.2, true}} {
		r[Nearest] = step.gap
		if held = c.holds(r, held); held != step.want {
			t.Errorf("step %d, gap %.2f: holds = %v", i, step.gap, held)
		}
	}
}

// The loop is closed by coming back, in the same direction, with the same wall beside; not by the other ways of passing the place.
func TestLoopCloses(t *testing.T) {
	const hull = 0.2
	// A way round a square of side a, its wall on the inside, n times; from is where on it to begin.
	square := func(l *loop, a, way float64) {
		for s := 0.0; s < way; s += 0.01 {
			k, x := int(s/a)%4, math.Mod(s, a)
			c := [...][2]float64{{x, 0}, {a, x}, {a - x, a}, {0, a - x}}[k]
			wall := [...][2]float64{{x, 0.4}, {a - 0.4, x}, {a - x, a - 0.4}, {0.4, a - x}}[k]
			l.follow(xy(c[0], c[1]), xy(wall[0], wall[1]), 0.01, hull)
		}
	}
	t.Run("once round", func(t *testing.T) {
		l := &loop{}
		square(l, 3, 11.9)
		if l.closed {
			t.Fatal("closed before it has come round")
		}
		l = &loop{}
		square(l, 3, 13)
		if !l.closed {
			t.Fatal("not closed after it has come round")
		}
	})
	t.Run("after a spur", func(t *testing.T) {
		// 10 m of a way that is never met again, then a square round and round.
		l := &loop{from: xy(-10, -10)}
		for s := 0.0; s < 10; s += 0.01 {
			l.follow(xy(-10+s, -10+s), xy(-10+s, -9+s), 0.0141, hull)
		}
		square(l, 4, 16*1.9)
		if !l.closed {
			t.Error("not closed within two rounds")
		}
	})
	t.Run("there and back", func(t *testing.T) {
		// A dead end is driven out of by the way it was driven in: other direction, other wall.
		l := &loop{}
		for s := 0.0; s < 5; s += 0.01 {
			l.follow(xy(s, 0), xy(s, 0.3), 0.01, hull)
		}
		for s := 5.0; s > -5; s -= 0.01 {
			l.follow(xy(s, 0), xy(s, -0.3), 0.01, hull)
		}
		if l.closed {
			t.Error("closed by driving out of a dead end")
		}
	})
	t.Run("back along the same wall", func(t *testing.T) {
		l := &loop{}
		for s := 0.0; s < 5; s += 0.01 {
			l.follow(xy(s, 0), xy(s, 0.3), 0.01, hull)
		}
		for s := 5.0; s > -5; s -= 0.01 {
			l.follow(xy(s, 0), xy(s, 0.3), 0.01, hull)
		}
		if l.closed {
			t.Error("closed by turning back")
		}
	})
	t.Run("the other jamb of a doorway", func(t *testing.T) {
		l := &loop{}
		drive := func(x0, y0, x1, y1, wx, wy float64) {
			n := int(math.Hypot(x1-x0, y1-y0) / 0.01)
			for i := range n {
				f := float64(i) / float64(n)
				l.follow(xy(x0+f*(x1-x0), y0+f*(y1-y0)), xy(wx, wy), 0.01, hull)
			}
		}
		drive(-2, 0, 2, 0, 0, 0.6) // through the door along one jamb,
		drive(2, 0, 2, 3, 3, 1)    // round,
		drive(2, 3, -2, 3, 0, 3.5)
		drive(-2, 3, -2, 0, -3, 1)
		drive(-1.2, 0, 1.2, 0, 0, -0.6) // and through along the other.
		if l.closed {
			t.Error("closed at the other jamb")
		}
	})
	t.Run("boxed in", func(t *testing.T) {
		l := &loop{}
		square(l, 0.2, 20)
		if !l.closed {
			t.Error("going round on the spot does not count as closed")
		}
	})
}

// Meetings that bring no progress: d_min stays and the other side is tried; after two in
// a row the side and the meeting point stay as well. Progress ends that.
func TestMeetingsWithoutProgress(t *testing.T) {
	e := New(Default(DefaultNumbers(0.21, 0.45, 0.15)))
	in := &Input{Hull: 0.21, Speed: 0.45, Goal: xy(9, 0), Scan: &ring.Scan{Max: 3}}
	m := &e.l.Modes[1]
	e.Decide(in)
	meet := func(distance float64) { e.track.distance = distance; e.meet(in, m) }
	part := func(best float64) { e.track.best = best; e.part() }
	expect := func(what string, side Side, best float64, fresh bool) {
		t.Helper()
		if e.track.side != side || e.track.best != best || (e.track.loop.way == 0) != fresh {
			t.Errorf("%s: side %v, d_min %g, loop of %g m", what, e.track.side, e.track.best, e.track.loop.way)
		}
		e.track.loop.way = 7
	}
	meet(5)
	expect("the first", LeftSide, 5, true)
	part(4.5)
	if e.Side() != NoSide {
		t.Error("an obstacle that was left still has a side")
	}
	meet(4.2)
	expect("one nearer to the goal", LeftSide, 4.2, true)
	part(4)
	meet(4.1)
	expect("one farther away", RightSide, 4, true)
	part(4)
	meet(3.99)
	expect("one hardly nearer", LeftSide, 4, true)
	part(4)
	meet(4.3)
	expect("a third in a row", LeftSide, 4, false)
	part(3.8)
	meet(3.5)
	expect("progress at last", LeftSide, 3.5, true)
	part(3.5)
	meet(3.6)
	expect("and again none", RightSide, 3.5, true)
}
