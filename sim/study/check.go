package study

import (
	"context"

	"leeway/sim/study/stat"
)

// CheckPlan is a share of trials that must do what is asked.
type CheckPlan struct {
	Target     float64 // share
	Confidence float64
	Budget     int // runs at most
}

// firstLook is how many runs the first look of a check takes.
const firstLook = 50

// Check is a verdict: Accept for met, Reject for not met, Undecided when the budget
// did not suffice.
type Check struct {
	Verdict stat.Verdict
	Plan    CheckPlan
	Bounds  stat.Interval // of the share, each at the confidence that the looks leave
	Trials  *Trials
}

// RunCheck runs trials until the share of success is known to be at least the
// target, or known to be below it, or the budget is spent. It looks a few times only
// ([stat.Looks]), so that the verdict holds at the confidence asked for all looks
// together.
func RunCheck(ctx context.Context, r *Runner, source Source, p CheckPlan) (*Check, error) {
	r.Expect(p.Budget)
	looks := stat.Looks{Target: p.Target, Confidence: p.Confidence, First: firstLook, Most: p.Budget}
	c := &Check{Plan: p, Bounds: stat.Interval{Low: 0, High: 1}}
	var results []Result
	var err error
	for _, n := range looks.Times() {
		var more []Result
		more, err = r.trials(ctx, source, "", len(results), n)
		results = append(results, more...)
		if err != nil {
			if ctx.Err() == nil {
				return nil, err
			}
			break
		}
		successes := 0
		for i := range results {
			if results[i].Success() {
				successes++
			}
		}
		c.Bounds, c.Verdict = looks.Bounds(successes, n), looks.Decide(successes, n)
		if c.Verdict != stat.Undecided {
			break
		}
	}
	c.Trials = &Trials{
		Results: results, Confidence: p.Confidence, Summary: Summarise(results, p.Confidence),
		Groups: group(results), Worst: worst(results, 10),
	}
	return c, err
}
