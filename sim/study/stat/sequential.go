package stat

import "math"

// Verdict is what a sequential test says.
type Verdict int8

// The verdicts.
const (
	Undecided Verdict = iota
	Accept
	Reject
)

// SPRT is the sequential probability ratio test on failures: that the failure rate
// is P0 or less is accepted wrongly with probability Beta at P1, and rejected wrongly
// with probability Alpha at P0 (A. Wald, Sequential Analysis, 1947, ch. 5).
type SPRT struct{ P0, P1, Alpha, Beta float64 }

// Lines returns the parallel lines that bound the failures d after n runs: reject
// at d ≥ s·n + h1, accept at d ≤ s·n − h0.
func (t SPRT) Lines() (s, h1, h0 float64) {
	g := math.Log(t.P1/t.P0) - math.Log((1-t.P1)/(1-t.P0))
	return -math.Log((1-t.P1)/(1-t.P0)) / g, math.Log((1-t.Beta)/t.Alpha) / g, math.Log((1-t.Alpha)/t.Beta) / g
}

// Decide returns the verdict after n runs with so many failures.
func (t SPRT) Decide(failures, n int) Verdict {
	s, h1, h0 := t.Lines()
	switch d := float64(failures); {
	case d >= s*float64(n)+h1:
		return Reject
	case d <= s*float64(n)-h0:
		return Accept
	}
	return Undecided
}

// Fewest returns how many runs without a failure it takes to accept.
func (t SPRT) Fewest() int {
	s, _, h0 := t.Lines()
	return int(math.Ceil(h0/s - 1e-9))
}

// Looks is a test of a share against a target that looks at the data a few times:
// at First runs, then at twice as many, and so on, and at Most. The error that is
// allowed is split evenly over the looks (Bonferroni), and each uses the exact
// bound, so that all looks together err with probability 1 − Confidence at most on
// either side, whatever the truth.
type Looks struct {
	Target, Confidence float64
	First, Most        int
}

// Times returns the numbers of runs at which it looks, ascending.
func (l Looks) Times() []int {
	var out []int
	for n := max(l.First, 1); n < l.Most; n *= 2 {
		out = append(out, n)
	}
	return append(out, l.Most)
}

// Bounds returns the bounds of the share that a look uses.
func (l Looks) Bounds(successes, n int) Interval {
	each := 1 - (1-l.Confidence)/float64(len(l.Times()))
	return Interval{ExactLower(successes, n, each), ExactUpper(successes, n, each)}
}

// Decide returns the verdict of the look at n runs: Accept when the share is at
// least the target, Reject when it is below.
func (l Looks) Decide(successes, n int) Verdict {
	switch b := l.Bounds(successes, n); {
	case b.Low >= l.Target:
		return Accept
	case b.High < l.Target:
		return Reject
	}
	return Undecided
}
