package logic

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"leeway/sim/geom"
	"leeway/sim/ring"
)

// Random valid tables on random scans, poses, goals and times: no panic, no u that
// is not finite or is faster than v0, and a mode and side that exist.
func TestRandomTablesOnRandomScans(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := randomLogic(t)
		r := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		torture(t, l, r, 80)
	})
}

// FuzzDecide does the same from raw bytes with the default logic, whose modes depend on each other most.
func FuzzDecide(f *testing.F) {
	f.Add(uint64(1), 0.21, 0.45)
	f.Add(uint64(2), 0.0, 0.0)
	f.Add(uint64(3), 1e-6, 10.0)
	f.Add(uint64(4), 5.0, 1e300)
	f.Fuzz(func(t *testing.T, seed uint64, hull, speed float64) {
		hull, speed = math.Abs(math.Mod(hull, 100)), math.Abs(math.Mod(speed, 1e6))
		if math.IsNaN(hull) || math.IsNaN(speed) {
			hull, speed = 0.21, 0.45
		}
		r := rand.New(rand.NewPCG(seed, 2))
		l := Default(DefaultNumbers(hull, speed, 0.15))
		if p := l.Check(); len(p) > 0 {
			t.Fatal(p)
		}
		torture(t, l, r, 200)
	})
}

type failer interface {
	Fatalf(format string, args ...any)
}

func torture(t failer, l *Logic, r *rand.Rand, ticks int) {
	n := r.IntN(40)
	s := &ring.Scan{Mount: r.Float64() * 0.3, Max: 0.1 + 4*r.Float64(), Dir: make([]geom.Vec, n), Range: make([]float64, n), Hit: make([]bool, n), Tick: make([]int64, n)}
	for i := range n {
		s.Dir[i] = geom.Heading(7*r.Float64() - 3.5)
		s.Tick[i] = -1
	}
	in := &Input{Goal: xy(4*r.Float64(), 4*r.Float64()), GoalRadius: r.Float64(), Scan: s, Hull: 0.4 * r.Float64(), Speed: 2 * r.Float64(), Ahead: 0.2 * r.Float64()}
	if r.IntN(8) == 0 {
		in.Speed = 0
	}
	if r.IntN(8) == 0 {
		in.Hull = 0
	}
	e := New(l)
	for k := range ticks {
		in.Tick = int64(k)
		in.Time += 0.1 * r.Float64()
		in.Belief.X += 0.1 * (r.Float64() - 0.5)
		in.Belief.Y += 0.1 * (r.Float64() - 0.5)
		in.Belief.Theta += r.Float64() - 0.5
		for i := range n {
			if r.IntN(3) > 0 {
				s.Tick[i] = int64(k)
				s.Range[i] = s.Max * r.Float64()
				s.Hit[i] = r.IntN(4) > 0
			}
			if r.IntN(500) == 0 {
				s.Range[i] = []float64{0, -s.Mount, math.Inf(1), math.NaN()}[r.IntN(4)]
			}
		}
		s.Exact = r.IntN(3) == 0
		s.Gap, s.Toward = s.Max*r.Float64(), geom.Heading(6*r.Float64())
		switch r.IntN(60) {
		case 0:
			in.Goal = xy(4*r.Float64(), 4*r.Float64())
		case 1:
			in.Goal = xy(in.Belief.X, in.Belief.Y) // exactly at the goal
		case 2:
			in.Belief.X += 3 // carried
		}
		d := e.Decide(in)
		if x := d.U.Norm(); !(x <= in.Speed) {
			t.Fatalf("tick %d: |u| = %v with v0 = %v in mode %d (%v)", k, x, in.Speed, d.Mode, l.Modes[d.Mode].Behaviour)
		}
		if d.Mode < 0 || d.Mode >= len(l.Modes) || d.Fired < -1 || d.Fired >= len(l.Transitions) || d.Side < RightSide || d.Side > LeftSide {
			t.Fatalf("tick %d: %+v", k, d)
		}
		for i, x := range e.readings {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				t.Fatalf("tick %d: %v is %v", k, Reading(i), x)
			}
		}
		if w, ok := e.LastSwitch(); ok && d.Fired >= 0 {
			if text := l.Why(w); len(text) < 10 || text[len(text)-1] != '.' {
				t.Fatalf("tick %d: the sentence is %q", k, text)
			}
		}
	}
}
