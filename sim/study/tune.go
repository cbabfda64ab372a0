package study

import (
	"context"
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/optimize"

	"leeway/sim/chance"
)

// Reward is what counts after success.
type Reward uint8

// The rewards.
const (
	MoreLeeway Reward = iota // the mean leeway
	LessTime                 // the mean time of arrival
)

// TunePlan says what to tune.
type TunePlan struct {
	Axes       []Axis
	Reward     Reward
	N          int // trials that every setting is tried on
	Fresh      int // further trials that the first and the best setting are confirmed on
	Settings   int // at most, without the two confirmations
	Seed       uint64
	Confidence float64
	Within     float64 // s asked; scales LessTime
}

// Tune is the best setting found, and whether it holds on trials it was not chosen on.
type Tune struct {
	Plan  TunePlan
	Tried []Try // in order
	Best  int   // of Tried
	// Before and After are the start setting and the best one on the fresh trials,
	// nil when it was stopped before.
	Before, After *Summary
	Fresh         *Pair // start setting against the best, on the fresh trials
}

// Try is one setting on the trials of the tuning.
type Try struct {
	Values []float64
	Score  float64 // higher is better: success first, then the reward as a fraction of one success
	Summary
}

// RunTune looks for the setting with the best score by CMA-ES (N. Hansen; the
// variant of O. Krause, D. R. Arbonès and C. Igel, 2016, of gonum/optimize), which asks
// for nothing but an order among settings. All settings are tried on the same trials,
// from start on; what would lie outside the axes is mirrored at their ends. Choosing the best of many makes it look better than it is: the
// confirmation on fresh trials says how good it is.
func RunTune(ctx context.Context, r *Runner, family Family, start []float64, p TunePlan) (*Tune, error) {
	if len(p.Axes) == 0 || len(start) != len(p.Axes) {
		return nil, errors.New("tuning needs numbers to tune, and where to start")
	}
	u0 := make([]float64, len(start))
	for i := range p.Axes {
		if err := p.Axes[i].check(); err != nil {
			return nil, err
		}
		u0[i] = min(1, max(0, (start[i]-p.Axes[i].Low)/(p.Axes[i].High-p.Axes[i].Low)))
	}
	r.Expect(p.Settings*p.N + 2*p.Fresh)
	t := &Tune{Plan: p}
	var failed error
	known := map[string]int{}
	try := func(values []float64) float64 {
		if failed != nil {
			return math.Inf(1)
		}
		name := setting(p.Axes, values)
		if k, ok := known[name]; ok {
			return -t.Tried[k].Score
		}
		source, err := family(values)
		var results []Result
		if err == nil {
			results, err = r.trials(ctx, source, name, 0, p.N)
		}
		if err != nil {
			failed = err
			return math.Inf(1)
		}
		x := Try{Values: values, Summary: Summarise(results, p.Confidence)}
		x.Score = p.score(&x.Summary)
		known[name] = len(t.Tried)
		if t.Tried = append(t.Tried, x); x.Score > t.Tried[t.Best].Score {
			t.Best = len(t.Tried) - 1
		}
		return -x.Score
	}
	try(append([]float64(nil), start...))

	stream := chance.New(p.Seed, "tune", 0)
	population := 6 + int(3*math.Log(float64(len(start))))
	problem := optimize.Problem{
		Func: func(u []float64) float64 {
			values := make([]float64, len(u))
			for i := range u {
				values[i] = p.Axes[i].at(mirrored(u[i]))
			}
			return try(values)
		},
		Status: func() (optimize.Status, error) {
			if failed != nil || len(t.Tried) >= p.Settings {
				return optimize.FunctionEvaluationLimit, nil
			}
			return optimize.NotTerminated, nil
		},
	}
	settings := &optimize.Settings{FuncEvaluations: max(1, p.Settings-1), Concurrent: 1, Converger: optimize.NeverTerminate{}}
	method := &optimize.CmaEsChol{InitStepSize: 0.25, Population: population, Src: &stream}
	if failed == nil && p.Settings > 1 {
		if _, err := optimize.Minimize(problem, u0, settings, method); err != nil && failed == nil {
			return nil, fmt.Errorf("tuning: %w", err)
		}
	}
	if failed == nil {
		failed = t.confirm(ctx, r, family)
	}
	if failed != nil && ctx.Err() == nil {
		return nil, failed
	}
	return t, failed
}

// mirrored brings u into [0, 1] by mirrors at both ends.
func mirrored(u float64) float64 {
	u = math.Mod(math.Abs(u), 2)
	return min(u, 2-u)
}

// score puts success first: the reward, between 0 and 1, weighs less than one more
// success does.
func (p *TunePlan) score(s *Summary) float64 {
	reward := 0.0
	switch {
	case p.Reward == MoreLeeway && s.Leeway.N > 0:
		reward = (min(mostLeeway, max(-mostLeeway, s.Leeway.Mean)) + mostLeeway) / (2 * mostLeeway)
	case p.Reward == LessTime && s.Time.N > 0 && p.Within > 0:
		reward = 1 - min(1, s.Time.Mean/p.Within)
	}
	return float64(s.Successes) + 0.999*reward
}

// confirm runs the first and the best setting on trials that had no part in the choice.
func (t *Tune) confirm(ctx context.Context, r *Runner, family Family) error {
	p := &t.Plan
	if p.Fresh == 0 || len(t.Tried) == 0 {
		return nil
	}
	var both [2][]Result
	for k, x := range []Try{t.Tried[0], t.Tried[t.Best]} {
		source, err := family(x.Values)
		if err != nil {
			return err
		}
		if both[k], err = r.trials(ctx, source, setting(p.Axes, x.Values), p.N, p.N+p.Fresh); err != nil {
			return err
		}
	}
	before, after := Summarise(both[0], p.Confidence), Summarise(both[1], p.Confidence)
	fresh := pair(both[0], both[1], 1, p.Confidence)
	t.Before, t.After, t.Fresh = &before, &after, &fresh
	return nil
}
