package study

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"slices"

	"leeway/sim/study/stat"
)

// LimitPlan says which limit to look for.
type LimitPlan struct {
	Axis       Axis
	Smallest   bool // the smallest value that still does it, not the largest
	Target     float64
	Confidence float64 // of the lower bound of success
	N          int     // trials at a value
	Scan       int     // values, ends included, that are tried before the bracket is narrowed
	Tolerance  float64 // width of the last bracket, in the unit of the number; 0: a 256th of the range
	Budget     int     // runs at most; 0: no bound
}

// Limit is how far a number may go.
type Limit struct {
	Plan  LimitPlan
	Found bool
	// Value is the last value tried, from the good end, up to which all values tried
	// meet the target; Beyond is the first that does not. Without a Beyond (NaN) the
	// whole range meets it.
	Value, Beyond float64
	Curve         []Sample // all values tried, ascending
	Monotone      bool     // the values that meet the target lie all on one side
	Text          string   // what was found, in a sentence or two
}

// Sample is one value tried.
type Sample struct {
	Value     float64
	N         int // trials run; fewer than planned when no further ones could change the verdict
	Successes int
	Share     stat.Interval // two-sided, of the trials run
	Meets     bool          // the lower bound of success meets the target
}

// needed returns how many successes in n trials bring the lower bound to the target,
// n+1 when not even n do.
func (p *LimitPlan) needed() int {
	for k := range p.N + 1 {
		if stat.WilsonLower(k, p.N, p.Confidence) >= p.Target {
			return k
		}
	}
	return p.N + 1
}

// RunLimit looks for the largest (or smallest) value for which the lower bound of
// success meets the target. It tries a few values over the range, then halves the
// bracket between the last that meets it, counted from the good end, and the first
// that does not. All values are tried on the same trials, which takes the noise
// of the trials out of the comparison of neighbouring values. A value is given up as
// soon as it has failed too often, and accepted as soon as it has done so often
// enough that the trials to come cannot change the verdict (curtailed sampling): the
// verdict is exactly that of all trials.
func RunLimit(ctx context.Context, r *Runner, family Family, p LimitPlan) (*Limit, error) {
	if err := p.Axis.check(); err != nil {
		return nil, err
	}
	if p.needed() > p.N {
		return nil, fmt.Errorf("%d trials cannot show a success of %g at %g confidence: %d without a failure are needed",
			p.N, p.Target, p.Confidence, fewest(p.Target, p.Confidence))
	}
	p.Scan = max(p.Scan, 2)
	if p.Tolerance <= 0 {
		p.Tolerance = (p.Axis.High - p.Axis.Low) / 256
	}
	if p.Axis.Whole {
		p.Tolerance = max(1, p.Tolerance)
	}
	halvings := int(math.Ceil(math.Log2((p.Axis.High - p.Axis.Low) / float64(p.Scan-1) / p.Tolerance)))
	r.Expect((p.Scan + max(halvings, 0)) * p.N)
	l := &Limit{Plan: p, Value: math.NaN(), Beyond: math.NaN()}
	axis := p.Axis
	axis.Steps = p.Scan
	var err error
	for _, v := range axis.grid() {
		if err = l.try(ctx, r, family, v); err != nil {
			break
		}
	}
	for err == nil {
		good, bad, ok := l.bracket()
		if !ok || math.Abs(bad-good) <= p.Tolerance*(1+1e-9) {
			break
		}
		mid := digits((good + bad) / 2)
		if axis.Whole {
			mid = math.Floor((good + bad) / 2)
		}
		if mid == good || mid == bad || p.Budget > 0 && r.Done()+p.N > p.Budget {
			break
		}
		err = l.try(ctx, r, family, mid)
	}
	if err != nil && ctx.Err() == nil {
		return nil, err
	}
	l.conclude()
	return l, err
}

// fewest returns how many trials without a failure the lower bound takes.
func fewest(target, confidence float64) int {
	for n := 1; ; n++ {
		if stat.WilsonLower(n, n, confidence) >= target {
			return n
		}
	}
}

// try adds the sample of a value, if it can be known.
func (l *Limit) try(ctx context.Context, r *Runner, family Family, value float64) error {
	p := &l.Plan
	source, err := family([]float64{value})
	if err != nil {
		return err
	}
	need := p.needed()
	s := Sample{Value: value}
	for s.N < p.N && s.Successes < need && s.N-s.Successes <= p.N-need {
		more, err := r.trials(ctx, source, setting([]Axis{p.Axis}, []float64{value}), s.N, min(s.N+round, p.N))
		if err != nil {
			return err
		}
		for i := range more {
			s.N++
			if more[i].Success() {
				s.Successes++
			}
		}
	}
	s.Meets = s.Successes >= need
	s.Share = stat.Wilson(s.Successes, s.N, p.Confidence)
	l.Curve = append(l.Curve, s)
	slices.SortFunc(l.Curve, func(a, b Sample) int { return cmp.Compare(a.Value, b.Value) })
	return nil
}

// fromGood returns the curve beginning at the good end.
func (l *Limit) fromGood() []Sample {
	c := slices.Clone(l.Curve)
	if l.Plan.Smallest {
		slices.Reverse(c)
	}
	return c
}

// bracket returns the last value up to which all meet the target, and the next.
func (l *Limit) bracket() (good, bad float64, ok bool) {
	c := l.fromGood()
	for i := range c {
		if !c[i].Meets {
			if i == 0 {
				return 0, 0, false
			}
			return c[i-1].Value, c[i].Value, true
		}
	}
	return 0, 0, false
}

func (l *Limit) conclude() {
	c, p := l.fromGood(), &l.Plan
	word, to, end := "largest", "up", "low"
	if p.Smallest {
		word, to, end = "smallest", "down", "high"
	}
	n := slices.IndexFunc(c, func(s Sample) bool { return !s.Meets })
	again := -1.0
	l.Monotone = true
	for i := range c {
		if n >= 0 && i > n && c[i].Meets {
			l.Monotone, again = false, c[i].Value
		}
	}
	goal := fmt.Sprintf("success is at least %s with %s confidence", percent(p.Target), percent(p.Confidence))
	switch {
	case len(c) == 0:
		l.Text = "Nothing is known yet."
	case n == 0:
		l.Text = fmt.Sprintf("Already at the %s end, %s = %g, it cannot be shown that %s.", end, p.Axis.Path, c[0].Value, goal)
	case n < 0:
		l.Found, l.Value = true, c[len(c)-1].Value
		l.Text = fmt.Sprintf("At every value tried from %g to %g of %s, %s.", l.Curve[0].Value, l.Curve[len(l.Curve)-1].Value, p.Axis.Path, goal)
	default:
		l.Found, l.Value, l.Beyond = true, c[n-1].Value, c[n].Value
		l.Text = fmt.Sprintf("%s = %g is the %s value %s to which %s; at %g it is not shown.", p.Axis.Path, l.Value, word, to, goal, l.Beyond)
	}
	if !l.Monotone {
		l.Text += fmt.Sprintf(" The curve is not monotone: beyond that, %g meets it again. Look at the curve before you trust one number.", again)
	}
}
