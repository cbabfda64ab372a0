package logic_test

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"

	"pgregory.net/rapid"
)

// scene is a moment that a test makes up: what the ring reads, and where the robot
// believes it is.
type scene struct {
	scan *ring.Scan
	in   logic.Input
}

func newScene(beams int) *scene {
	s := &scene{scan: &ring.Scan{Bearing: ring.Even(beams), Mount: 0.19, Max: 3}}
	for _, b := range s.scan.Bearing {
		s.scan.Dir = append(s.scan.Dir, geom.Heading(b))
		s.scan.Range = append(s.scan.Range, 3)
		s.scan.Hit = append(s.scan.Hit, false)
		s.scan.Tick = append(s.scan.Tick, 0)
	}
	s.in = logic.Input{Goal: geom.Vec{X: 10}, GoalRadius: 0.15, Scan: s.scan, Hull: 0.21, Speed: 0.45}
	return s
}

func (s *scene) read(i int, r float64) {
	s.scan.Range[i], s.scan.Hit[i], s.scan.Tick[i] = r, r < s.scan.Max, s.in.Tick
}

// next goes on by one control tick, all beams read.
func (s *scene) next() {
	s.in.Tick += 4
	s.in.Time = float64(s.in.Tick) * 0.005
	for i := range s.scan.Tick {
		s.scan.Tick[i] = s.in.Tick
	}
}

// naive is the engine's rule, word for word and from the whole history: a condition
// with a band holds when it held since some tick at which it was within its
// threshold and was never beyond its band after; a transition fires when all its
// conditions have held for its hold time and the mode is old enough; the first in
// the table wins, one a tick.
type naive struct {
	l       *logic.Logic
	mode    int
	entered float64
	times   []float64
	past    [][logic.NumReadings]float64 // since the mode was entered
}

func (n *naive) holds(c *logic.Condition, at int) bool {
	r := &n.past[at]
	bound := c.Threshold
	if c.HasAgainst {
		bound += r[c.Against]
	}
	within := func(b float64) bool {
		if c.Rel == logic.Below {
			return r[c.Reading] < b
		}
		return r[c.Reading] >= b
	}
	if within(bound) {
		return true
	}
	release := bound + c.Band
	if c.Rel == logic.AtLeast {
		release = bound - c.Band
	}
	return c.Band > 0 && at > 0 && within(release) && n.holds(c, at-1)
}

func (n *naive) all(t *logic.Transition, at int) bool {
	for i := range t.When {
		if !n.holds(&t.When[i], at) {
			return false
		}
	}
	return true
}

func (n *naive) fires(time float64) int {
	now := len(n.past) - 1
	for i := range n.l.Transitions {
		t := &n.l.Transitions[i]
		if n.l.Modes[n.mode].Ending != logic.GoesOn || t.From != n.mode && (t.From != logic.AnyMode || t.To == n.mode) {
			continue
		}
		first := now
		if !n.all(t, now) {
			continue
		}
		for first > 0 && n.all(t, first-1) {
			first--
		}
		if time-n.entered >= t.MinTime-1e-9 && time-n.times[first] >= t.Hold-1e-9 {
			return i
		}
	}
	return -1
}

// The engine against the naive rule, on random tables and random walls: order of
// priority, release bands, minimum times, hold times, one transition a tick.
func TestEngineAgainstTheNaiveRule(t *testing.T) {
	looked := []logic.Reading{logic.Nearest, logic.Front, logic.Left, logic.Right, logic.GoalDistance, logic.GoalBearing, logic.TimeInMode, logic.FreeWay}
	fired := 0
	rapid.Check(t, func(t *rapid.T) {
		modes := rapid.IntRange(2, 5).Draw(t, "modes")
		l, lastFrom := &logic.Logic{Sector: 0.6}, modes-1
		for i := range modes {
			m := logic.Mode{Name: fmt.Sprint("mode ", i), Behaviour: logic.Behaviour(rapid.IntRange(0, 3).Draw(t, "behaviour")), StandOff: 0.2}
			if i == modes-1 && rapid.Bool().Draw(t, "ends") {
				m.Ending = logic.EndsGaveUp
				lastFrom = modes - 2 // nothing leaves a mode that ends the run
			}
			l.Modes = append(l.Modes, m)
		}
		for range rapid.IntRange(1, 8).Draw(t, "transitions") {
			x := logic.Transition{
				From: rapid.IntRange(-1, lastFrom).Draw(t, "from"), To: rapid.IntRange(0, modes-1).Draw(t, "to"),
				MinTime: rapid.SampledFrom([]float64{0, 0, 0.1, 0.5}).Draw(t, "min"), Hold: rapid.SampledFrom([]float64{0, 0, 0.06, 0.2}).Draw(t, "hold"),
				Meet: rapid.Bool().Draw(t, "meet"),
			}
			for range rapid.IntRange(1, 3).Draw(t, "conditions") {
				c := logic.Condition{
					Reading: rapid.SampledFrom(looked).Draw(t, "reading"), Rel: logic.Relation(rapid.IntRange(0, 1).Draw(t, "relation")),
					Threshold: rapid.Float64Range(0, 2).Draw(t, "threshold"), Band: rapid.SampledFrom([]float64{0, 0.1, 0.5}).Draw(t, "band"),
				}
				if c.HasAgainst = rapid.IntRange(0, 4).Draw(t, "against?") == 0; c.HasAgainst {
					c.Against = rapid.SampledFrom(looked).Filter(func(r logic.Reading) bool { return r != c.Reading }).Draw(t, "against")
				}
				x.When = append(x.When, c)
			}
			l.Transitions = append(l.Transitions, x)
		}
		if p := l.Check(); len(p) > 0 {
			t.Fatalf("the random table is faulty: %+v", p)
		}
		e, n, s := logic.New(l), &naive{l: l}, newScene(8)
		for k := range 80 {
			if k%rapid.IntRange(1, 9).Draw(t, "change") == 0 {
				for i := range s.scan.Range {
					s.read(i, rapid.Float64Range(0, 3).Draw(t, "range"))
				}
			}
			d := e.Decide(&s.in)
			if k == 0 {
				n.entered = s.in.Time
			}
			n.past, n.times = append(n.past, *e.Readings()), append(n.times, s.in.Time)
			want := n.fires(s.in.Time)
			if d.Fired != want {
				t.Fatalf("tick %d in %q: transition %d fired, by the rule %d", k, l.Modes[n.mode].Name, d.Fired, want)
			}
			if want >= 0 {
				fired++
				n.mode, n.entered, n.past, n.times = l.Transitions[want].To, s.in.Time, nil, nil
			}
			if d.Mode != n.mode || e.Mode() != n.mode {
				t.Fatalf("tick %d: mode %d, by the rule %d", k, d.Mode, n.mode)
			}
			s.in.Belief.X += 0.01
			s.next()
		}
	})
	if fired == 0 {
		t.Error("no transition ever fired: this test tests nothing")
	}
}

// Whatever the ring reads and wherever the robot believes to be, what the default
// logic wants is finite and no faster than v0.
func FuzzDefaultNeverWantsTheImpossible(f *testing.F) {
	f.Add(uint64(1), uint8(16), 0.3, 0.1)
	f.Add(uint64(7), uint8(1), 0.0, -3.0)
	f.Add(uint64(9), uint8(180), 2.9, 100.0)
	f.Fuzz(func(t *testing.T, seed uint64, beams uint8, bias, theta float64) {
		if math.IsNaN(bias) || math.IsInf(bias, 0) || math.Abs(theta) > 1e6 || math.IsNaN(theta) {
			return
		}
		s := newScene(int(beams)%200 + 1)
		e := logic.New(logic.Default(logic.DefaultNumbers(0.21, 0.45, 0.15)))
		x := seed
		rnd := func() float64 { // any cheap sequence will do: no statistics are asked of it
			x = x*6364136223846793005 + 1442695040888963407
			return float64(x>>11) / (1 << 53)
		}
		s.in.Belief.Theta = theta
		for range 60 {
			for i := range s.scan.Range {
				s.read(i, min(max(3*rnd()+bias, 0), 3))
			}
			d := e.Decide(&s.in)
			if !d.U.Finite() || d.U.Norm() > s.in.Speed*(1+1e-9) {
				t.Fatalf("wanted velocity %v, at most %g m/s are allowed", d.U, s.in.Speed)
			}
			for r, v := range e.Readings() {
				if math.IsNaN(v) {
					t.Fatalf("reading %v is not a number", logic.Reading(r))
				}
			}
			s.in.Belief.X += d.U.X * 0.02
			s.in.Belief.Y += d.U.Y * 0.02
			s.in.Belief.Theta += rnd() - 0.5
			s.next()
		}
	})
}

// The default logic: what each of its exits looks at, on made-up walls.
func TestDefaultModes(t *testing.T) {
	l := logic.Default(logic.DefaultNumbers(0.21, 0.45, 0.15))
	if p := l.Check(); len(p) > 0 {
		t.Fatalf("%+v", p)
	}
	name := func(e *logic.Engine) string { return l.Modes[e.Mode()].Name }

	e, s := logic.New(l), newScene(24)
	d := e.Decide(&s.in)
	if name(e) != "goal-seeking" || d.U.X < 0.44 || math.Abs(d.U.Y) > 1e-9 {
		t.Errorf("with nothing in sight: %s, wants %v", name(e), d.U)
	}
	// A wall across the way, 0.25 m beyond the hull: nearer than what it takes notice of.
	ahead := 0.25 + 0.21 - 0.19
	for i, b := range s.scan.Bearing {
		if c := math.Cos(b); c > 0.1 {
			s.read(i, min((0.19+ahead)/c-0.19, 3))
		}
	}
	for range 3 {
		s.next()
		d = e.Decide(&s.in)
	}
	if name(e) != "wall-following" || e.Side() == logic.NoSide {
		t.Fatalf("before a wall: %s, side %d", name(e), e.Side())
	}
	sw, ok := e.LastSwitch()
	if !ok || sw.Readings[logic.Ahead] > 0.26 || !strings.Contains(l.Why(sw), "0.25 m away on the way to the goal") {
		t.Errorf("%+v: %s", sw, l.Why(sw))
	}
	// Something comes nearer than safe, at the side.
	s.read(6, 0.05)
	s.next()
	d = e.Decide(&s.in)
	if name(e) != "obstacle avoidance" || d.U.Dot(s.scan.Dir[6]) > 0 {
		t.Errorf("too near: %s, wants %v toward what is near", name(e), d.U)
	}
	// There.
	s.in.Belief = drive.Estimate{X: 9.99}
	for range 60 {
		s.next()
		d = e.Decide(&s.in)
	}
	if name(e) != "arrived" || d.U != (geom.Vec{}) {
		t.Errorf("at the goal: %s, wants %v", name(e), d.U)
	}
}
