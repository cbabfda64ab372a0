package shadow_test

import (
	"math"
	"strings"
	"testing"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
	"leeway/sim/shadow"
	"leeway/sim/steer"
	"leeway/sim/truth"

	"pgregory.net/rapid"
)

func v(x, y float64) geom.Vec { return geom.Vec{X: x, Y: y} }

// robot is a machine with every imperfection, and a partition in its way.
func robot() sim.Config {
	d := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, MaxWheelSpeed: 12, MaxWheelAccel: 30, Lag: 0.2, DeadTime: 0.03,
		DeadReckoning: true, CountsPerTurn: 1024, RightScale: 1.0003, LeftScale: 1, TrackScale: 1.002, Slip: 1e-6}
	return sim.Config{
		Seed: 3, Tick: 0.005, DecideEvery: 4,
		Floor: floor.Config{Solids: []floor.Solid{
			{Kind: floor.Polygon, Points: []geom.Vec{v(4, 1), v(4.4, 1), v(4.4, 3.6), v(4, 3.6)}},
			{Kind: floor.Disc, Points: []geom.Vec{v(7, 3)}, Radius: 0.4},
			{Kind: floor.Wall, Points: []geom.Vec{v(0, 0), v(12, 0), v(12, 6), v(0, 6), v(0, 0)}},
		}},
		Hull: 0.21, Start: geom.Pose{Pos: v(1, 2.6)},
		Ring:  ring.Config{Bearings: ring.Even(12), Mount: 0.19, Max: 2, NoiseBase: 0.01, Dropout: 0.01, Period: 10, SubRays: 1},
		Drive: d,
		Steer: steer.Config{Rule: steer.HeadingServo, Gain: 3, TurnBeyond: 1, Ahead: 0.1, WheelRadius: 0.05, Track: 0.3, MaxWheelSpeed: 12},
		Logic: logic.Default(logic.DefaultNumbers(0.21, 0.4, 0.15)),
		Speed: 0.4, Goal: v(10.5, 2.8), GoalRadius: 0.2,
		Asked: sim.Asked{Within: 120, Leeway: 0.05, Switches: -1},
	}
}

func newSet(t testing.TB, c sim.Config) *shadow.Set {
	t.Helper()
	s, err := shadow.New(c)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// A robot of a set is the robot alone; its shadows are the same scenario with
// switches thrown.
func TestASetIsItsRuns(t *testing.T) {
	c := robot()
	s := newSet(t, c)
	s.Finish()
	for w := range shadow.Models {
		alone, err := sim.New(shadow.Config(c, w))
		if err != nil {
			t.Fatal(err)
		}
		if a, b := alone.Finish(), s.Run(w).Outcome(); a != b {
			t.Errorf("%v: alone %+v, in the set %+v", w, a, b)
		}
	}
	if p := s.Run(shadow.Point).Outcome(); p.Status != sim.Arrived || p.EstimateError != 0 {
		t.Errorf("the point: %+v", p)
	}
}

// With every idealisation on, the robot is the point's shadow, bit for bit; and so
// is a robot that is a flawless point with ideal sight by its own numbers.
func TestTheIdealRobotIsItsShadow(t *testing.T) {
	c := shadow.Config(robot(), shadow.Point)
	byNumbers := robot()
	byNumbers.Drive = drive.Config{Model: drive.Point, WheelRadius: 0.05, Track: 0.3}
	byNumbers.Steer.MaxWheelSpeed = 0
	byNumbers.Ring.AllRound, byNumbers.Ring.Noiseless = true, true
	for name, c := range map[string]sim.Config{"switches": c, "numbers": byNumbers} {
		s := newSet(t, c)
		for !s.Done() {
			s.Step()
			if d := s.Deviation(shadow.Point).Now; d != 0 {
				t.Fatalf("%s: at tick %d they are %g m apart", name, s.Tick(), d)
			}
		}
		if a, b := s.Run(shadow.Robot).Outcome(), s.Run(shadow.Point).Outcome(); a.Hash != b.Hash {
			t.Errorf("%s: hashes %x and %x", name, a.Hash, b.Hash)
		}
		if n := len(s.Partings(shadow.Point)); n != 0 {
			t.Errorf("%s: %d partings of two that are the same", name, n)
		}
	}
}

// Same-time deviation: P-16 (derived, after the idea of path accuracy in ISO 9283)
// has a reference (0.3t, 0) and a robot half a second late and 0.02 m beside it. A
// robot and its shadow on an empty floor are such a pair: a machine whose only
// flaw is 0.5 s of dead time runs half a second behind the unicycle.
func TestSameTimeDeviation(t *testing.T) {
	want := truth.Values(t, "P-16", "")
	c := robot()
	c.Floor = floor.Config{}
	c.Drive = drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, DeadTime: 0.5}
	c.Steer.MaxWheelSpeed = 0
	c.Speed, c.Goal, c.Asked.Within = 0.3, v(100, 2.6), 10
	s := newSet(t, c)
	s.Finish()
	d := s.Deviation(shadow.Unicycle)
	late := math.Sqrt(want[0]*want[0] - want[1]*want[1]) // the part of P-16 that comes from being late
	truth.Close(t, "largest deviation", d.Largest, late, 1e-9)
	// From rest: 0.3 t for half a second, then 0.15 m for the rest.
	rms := math.Sqrt((0.09*0.5*0.5*0.5/3 + late*late*9.5) / 10)
	truth.Close(t, "RMS deviation", d.RMS, rms, 2e-3)
	if d.At < 0.5-0.006 {
		t.Errorf("the deviation is said to be largest at %g s", d.At)
	}
}

// P-13 and P-14 (Eiter & Mannila 1994).
func TestFrechet(t *testing.T) {
	straight := []geom.Vec{v(0, 0), v(1, 0), v(2, 0), v(3, 0), v(4, 0)}
	back := []geom.Vec{v(0, 0), v(1, 0), v(2, 0), v(3, 0), v(2, 0), v(1, 0), v(2, 0), v(3, 0), v(4, 0)}
	truth.Close(t, "P-13", shadow.Frechet(straight, back), truth.Values(t, "P-13", "")[1], 1e-6)
	p := []geom.Vec{v(0, 0), v(2, 1), v(4, 0), v(6, 1)}
	q := []geom.Vec{v(0, .5), v(3, -.4), v(2, .2), v(4.5, .6), v(1.8, 1.4), v(6, .5)}
	truth.Close(t, "P-14", shadow.Frechet(p, q), truth.Values(t, "P-14", "")[1], 1e-6)
	if d := shadow.Frechet(nil, p); d != 0 {
		t.Errorf("from nothing: %g", d)
	}
}

// leash is the definition, without dynamic programming: the least over all
// couplings of the largest distance in one.
func leash(p, q []geom.Vec, i, j int) float64 {
	d := p[i].Sub(q[j]).Norm()
	switch {
	case i == 0 && j == 0:
		return d
	case i == 0:
		return max(leash(p, q, 0, j-1), d)
	case j == 0:
		return max(leash(p, q, i-1, 0), d)
	}
	return max(min(leash(p, q, i-1, j), leash(p, q, i-1, j-1), leash(p, q, i, j-1)), d)
}

func TestFrechetAgainstItsDefinition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		way := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) geom.Vec {
			return v(rapid.Float64Range(-5, 5).Draw(t, "x"), rapid.Float64Range(-5, 5).Draw(t, "y"))
		}), 1, 6)
		p, q := way.Draw(t, "p"), way.Draw(t, "q")
		got, want := shadow.Frechet(p, q), leash(p, q, len(p)-1, len(q)-1)
		if got != want || shadow.Frechet(q, p) != got {
			t.Fatalf("%g, by definition %g, the other way round %g", got, want, shadow.Frechet(q, p))
		}
		if shadow.Frechet(p, p) != 0 {
			t.Fatal("a way is not at distance 0 from itself")
		}
	})
}

func TestResample(t *testing.T) {
	way := []geom.Vec{v(0, 0), v(1, 0), v(1, 0), v(1, 2), v(4, 2)}
	got := shadow.Resample(way, 13) // 6 m in 12 steps
	if len(got) != 13 || got[0] != way[0] || got[12] != way[4] {
		t.Fatalf("%v", got)
	}
	for i, p := range got {
		s := 0.5 * float64(i)
		want := v(min(s, 1), max(0, min(s-1, 2)))
		if s > 3 {
			want = v(s-2, 2)
		}
		if p.Sub(want).Norm() > 1e-12 {
			t.Errorf("point %d is %v, want %v", i, p, want)
		}
	}
	for _, w := range [][]geom.Vec{nil, {v(1, 1)}, {v(1, 1), v(1, 1)}} {
		if out := shadow.Resample(w, 5); len(out) != len(w) {
			t.Errorf("%v became %v", w, out)
		}
	}
}

// The look-ahead rule, unsaturated: the robot's point ahead moves exactly as the
// point robot does, so the axle is always the look-ahead distance from the shadow
// (after C-03,
// derived). On an empty floor, until they arrive.
func TestLookAheadKeepsItsDistance(t *testing.T) {
	for _, theta := range []float64{0, 1.2, -2.8} {
		c := robot()
		c.Floor = floor.Config{}
		c.Drive = drive.Config{Model: drive.Unicycle, WheelRadius: 0.05, Track: 0.3}
		c.Steer.Rule, c.Steer.MaxWheelSpeed = steer.LookAhead, 0
		c.Ideal = sim.TruePosition
		c.Start.Theta = theta
		s := newSet(t, c)
		worst := 0.0
		for s.Run(shadow.Robot).Engine().Mode() == c.Logic.Start {
			s.Step()
			d := s.Run(shadow.Robot).Pose().Pos.Sub(s.Run(shadow.Point).Pose().Pos).Norm()
			worst = max(worst, math.Abs(d-c.Steer.Ahead))
		}
		if worst > 1e-6 || s.Tick() < 1000 {
			t.Errorf("start %g rad: within %d ticks axle and point come %g m from the look-ahead distance", theta, s.Tick(), worst)
		}
	}
}

// A robot that sees less than its shadow parts from it, and says what each read.
func TestPartings(t *testing.T) {
	c := robot()
	c.Ring.Bearings, c.Ring.Max = ring.Even(5), 0.8
	s := newSet(t, c)
	s.Finish()
	p := s.Partings(shadow.Point)
	if len(p) == 0 {
		t.Fatal("five short beams and never a parting")
	}
	last := map[bool]float64{true: -1, false: -1}
	for _, x := range p {
		if x.Time <= last[x.Drifted] || x.Shadow != shadow.Point {
			t.Errorf("out of order: %+v", x)
		}
		last[x.Drifted] = x.Time
		words := []string{shadow.Clock(x.Time), "differently"}
		if x.Drifted {
			words = []string{shadow.Clock(x.Time), "robot", "point", "of it"}
		}
		for _, word := range words {
			if !strings.Contains(x.Text, word) {
				t.Errorf("%q does not say %q", x.Text, word)
			}
		}
	}
	first, ok := shadow.MostTelling(p)
	if !ok || first.Drifted {
		t.Errorf("the first parting that tells most: %+v", first)
	}
	for _, x := range p {
		t.Log(x.Text)
	}
}

// Edits fall at the same time for all, also for those that have already ended.
func TestEditsFallTogether(t *testing.T) {
	c := robot()
	s := newSet(t, c)
	for s.Run(shadow.Point).Status() == sim.Running {
		s.Step()
	}
	for range 100 {
		s.Step()
	}
	at := s.Tick()
	if err := s.Edit(sim.Edit{Kind: sim.MoveGoal, Pos: v(1.5, 5)}); err != nil {
		t.Fatal(err)
	}
	s.Finish()
	for w := range shadow.Models {
		e := s.Run(w).Edits()
		if len(e) != 1 || e[0].Tick != at {
			t.Errorf("%v: edits %+v, want one at tick %d", w, e, at)
		}
	}
	c.Edits = s.Run(shadow.Robot).Edits()
	again := newSet(t, c)
	again.Finish()
	for w := range shadow.Models {
		if a, b := s.Run(w).Outcome(), again.Run(w).Outcome(); a != b {
			t.Errorf("%v: %+v at first, %+v from the edit list", w, a, b)
		}
	}
}

// A set brought back goes on the same.
func TestACopyGoesOnTheSame(t *testing.T) {
	s := newSet(t, robot())
	for range 1500 {
		s.Step()
	}
	var mark shadow.Set
	mark.CopyFrom(s)
	s.Finish()
	mark.Finish()
	for w := range shadow.Models {
		if a, b := s.Run(w).Outcome(), mark.Run(w).Outcome(); a != b {
			t.Errorf("%v: %+v and %+v", w, a, b)
		}
		if w != shadow.Robot && (s.Deviation(w) != mark.Deviation(w) || len(s.Partings(w)) != len(mark.Partings(w))) {
			t.Errorf("%v: deviations %+v and %+v", w, s.Deviation(w), mark.Deviation(w))
		}
	}
}

func TestClock(t *testing.T) {
	for x, want := range map[float64]string{0: "0:00.0", 19.24: "0:19.2", 59.96: "1:00.0", 754.3: "12:34.3"} {
		if got := shadow.Clock(x); got != want {
			t.Errorf("%g s is written %q, want %q", x, got, want)
		}
	}
}

func BenchmarkSet(b *testing.B) {
	s := newSet(b, robot())
	b.ReportAllocs()
	for b.Loop() {
		if s.Done() {
			s = newSet(b, robot())
		}
		s.Step()
	}
}
