package study_test

import (
	"math"
	"strings"
	"testing"

	"leeway/sim"
	. "leeway/sim/study"
	"leeway/sim/study/stat"
	"leeway/sim/truth"
)

// The shares add up to the whole loss, an assumption that makes no difference has none,
// and combinations that are not run are the same runs indeed.
func TestAudit(t *testing.T) {
	s := posts(t)
	a, err := RunAudit(ctx, &Runner{}, s, 12, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	if a.N != 12 || a.Runs != 12*40 {
		t.Errorf("%d trials, %d runs", a.N, a.Runs)
	}
	for name, l := range map[string]Losses{"success": a.Success, "leeway": a.Leeway} {
		sum, alone := 0.0, l.Rest
		for i := range l.Shares {
			sum += l.Shares[i].Value
			alone += l.Alone[i]
			if in := l.Shares[i].In; in.Low > l.Shares[i].Value+1e-12 || in.High < l.Shares[i].Value-1e-12 {
				t.Errorf("%s: the share of %s is %v", name, a.Assumptions[i].Name, l.Shares[i])
			}
		}
		if math.Abs(sum-l.Whole) > 1e-12 || math.Abs(alone-l.Whole) > 1e-12 {
			t.Errorf("%s: the shares add up to %v, one at a time and the rest to %v, the whole is %v", name, sum, alone, l.Whole)
		}
	}
	if a.Success.Whole != a.Rates[0]-a.Rates[63] || a.Ideal.Value != a.Rates[0] || a.Success.Whole <= 0.1 {
		t.Errorf("lost %v of %v", a.Success.Whole, a.Ideal)
	}

	// A robot without dead reckoning: position is a dummy. Its runs are not made twice,
	// so make them here, in full.
	n := *s
	n.c.Drive.DeadReckoning = false
	b, err := RunAudit(ctx, &Runner{}, &n, 3, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	const position = 5
	if b.Runs != 3*20 || b.Success.Shares[position] != (Bounded{}) || b.Leeway.Shares[position] != (Bounded{}) {
		t.Errorf("position: %v, %v, with %d runs", b.Success.Shares[position], b.Leeway.Shares[position], b.Runs)
	}
	run := func(s *source, i sim.Ideal) sim.Outcome {
		c, m, _ := s.Config(2)
		c.Ideal = i
		r, err := sim.NewOn(m, c)
		if err != nil {
			t.Fatal(err)
		}
		return r.Finish()
	}
	for _, i := range []sim.Ideal{0, sim.PointMotion, sim.AllRoundSight | sim.NoLag} {
		if run(&n, i) != run(&n, i|sim.TruePosition) {
			t.Errorf("%b: knowing the position makes a difference to who knows it", i)
		}
		if run(s, i|sim.PointMotion) != run(s, i|sim.PointMotion|sim.NoLag|sim.NoWheelLimits) {
			t.Errorf("%b: wheels make a difference to a point", i)
		}
	}
	if text := a.Sentence(); !strings.Contains(text, "on the robot, in") || !strings.Contains(text, "lost") {
		t.Error(text)
	}
}

// An audit of made-up rates says what the rates say. P-10: K, L and S as motion, lag
// and sight; the rest makes no difference.
func TestSentence(t *testing.T) {
	fail := []float64{0.02, 0.10, 0.05, 0.30, 0.08, 0.16, 0.12, 0.55} // ∅ K L KL S KS LS KLS
	a := Audit{N: 100, Assumptions: Assumptions(), Rates: make([]float64, 64)}
	for s := range a.Rates {
		k, l, sight := s&1, s>>2&1, s>>3&1
		a.Rates[s] = 1 - fail[k|l<<1|sight<<2]
	}
	a.Ideal.Value, a.Real.Value = a.Rates[0], a.Rates[63]
	a.Success.Whole = a.Rates[0] - a.Rates[63]
	for i, x := range stat.Shapley(6, a.Rates) {
		a.Success.Shares = append(a.Success.Shares, Bounded{-x, stat.Interval{Low: -x - 0.01, High: -x + 0.01}})
		want := map[int]int{0: 0, 2: 1, 3: 2}
		if p, ok := want[i]; ok {
			truth.Close(t, a.Assumptions[i].Name, -x, truth.Values(t, "P-10", "φ")[p], 1e-6)
		} else if math.Abs(x) > 1e-12 {
			t.Errorf("%s, which makes no difference, has a share of %v", a.Assumptions[i].Name, x)
		}
	}
	want := "On the ideal model this design does what is asked in 98 % of runs; on the robot, in 45 %. Of the 53 points lost, 23 come from having to turn first, " +
		"14 of them only together with the delay and lag of the wheels; 18 from the delay and lag of the wheels and 12 from the ring of beams."
	if got := a.Sentence(); got != want {
		t.Errorf("%s\nwant\n%s", got, want)
	}
	for i := range a.Rates {
		a.Rates[i] = 0.9
	}
	a.Ideal.Value, a.Real.Value, a.Success.Whole = 0.9, 0.9, 0
	a.Success.Shares = make([]Bounded, 6)
	if got := a.Sentence(); !strings.Contains(got, "Nothing is lost: ") {
		t.Error(got)
	}
	a.Success.Whole = -0.2
	if got := a.Sentence(); !strings.Contains(got, "better by 20 points") {
		t.Error(got)
	}
}
