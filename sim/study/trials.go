package study

import (
	"cmp"
	"context"
	"fmt"
	"slices"

	"leeway/sim/geom"
	"leeway/sim/study/stat"
)

// TrialsPlan says how many trials to run.
type TrialsPlan struct {
	N          int     // at most
	Confidence float64 // of all intervals

	// Width, when above zero, stops as soon as the interval of the share of success
	// is that narrow.
	Width float64
	// Test, when not nil, stops as soon as it has a verdict.
	Test *stat.SPRT
}

// round is how many trials are run between two looks at whether to stop. It is a
// constant, so that the answer does not depend on how many workers there are.
const round = 32

// Trials is what so many runs show.
type Trials struct {
	Results    []Result
	Confidence float64
	Stopped    string       // in words: why there are no more
	Verdict    stat.Verdict // of TrialsPlan.Test
	Summary
	Groups []Group // of the runs that missed, largest first
	Worst  []int   // trials worth a look, the worst first
}

// Summary is what a list of results comes to.
type Summary struct {
	N         int
	Successes int // did all that was asked
	Arrivals  int
	Broken    int // panicked or diverged; neither of the above

	Share    stat.Interval // of successes
	Arrived  stat.Interval // of arrivals
	Leeway   Spread        // m, at most 1, of all runs
	Time     Spread        // s, of those that arrived
	Detour   Spread        // way driven over the straight way, of those that arrived
	Switches Spread
	Contacts Spread
	Error    Spread // m, belief from truth at most

	// Stops is how well those that arrived hit the goal, after ISO 9283, when two at
	// least did; else nil.
	Stops *Stops
}

// Stops is the spread of where runs came to rest about the goal, m.
type Stops struct{ Accuracy, Mean, Deviation, Repeatability float64 }

// Spread is how a number is distributed over runs. Of no runs, everything is NaN.
type Spread struct {
	N                    int
	Mean, Least, Largest float64
	Q05, Q50, Q95        Bounded
}

// Bounded is an estimate with its interval. An end that the runs are too few to
// bound is infinite.
type Bounded struct {
	Value float64
	In    stat.Interval
}

// Group is runs that missed what was asked in the same way at about the same place.
type Group struct {
	Why     string
	At      geom.Vec // their middle
	Count   int
	Example int // a trial
}

// RunTrials runs trials 0, 1, 2, … until the plan is fulfilled.
func RunTrials(ctx context.Context, r *Runner, source Source, p TrialsPlan) (*Trials, error) {
	r.Expect(p.N)
	t := &Trials{Confidence: p.Confidence, Stopped: fmt.Sprintf("%d trials were asked for", p.N)}
	successes := 0
	var err error
	for len(t.Results) < p.N && err == nil {
		var more []Result
		more, err = r.trials(ctx, source, "", len(t.Results), min(len(t.Results)+round, p.N))
		stop := false
		for i := range more {
			t.Results = append(t.Results, more[i])
			if more[i].Success() {
				successes++
			}
			n := len(t.Results)
			if p.Test != nil {
				if t.Verdict = p.Test.Decide(n-successes, n); t.Verdict != stat.Undecided {
					t.Stopped, stop = fmt.Sprintf("the sequential test was decided after %d trials", n), true
					break
				}
			}
		}
		if n := len(t.Results); p.Width > 0 && !stop && n%round == 0 && stat.Wilson(successes, n, p.Confidence).Width() <= p.Width {
			t.Stopped, stop = fmt.Sprintf("the interval is narrower than %g", p.Width), true
		}
		if stop {
			err = nil
			break
		}
	}
	if err != nil {
		t.Stopped = "stopped before the end"
		if ctx.Err() == nil {
			return nil, err
		}
	}
	t.Summary = Summarise(t.Results, p.Confidence)
	t.Groups = group(t.Results)
	t.Worst = worst(t.Results, 10)
	return t, err
}

// Summarise sums results up.
func Summarise(results []Result, confidence float64) Summary {
	s := Summary{N: len(results)}
	var leeway, time, detour, switches, contacts, drift []float64
	var stops [][2]float64
	for i := range results {
		x := &results[i]
		if x.Miss == Broke {
			s.Broken++
			continue
		}
		if x.Success() {
			s.Successes++
		}
		leeway = append(leeway, x.Margin())
		switches, contacts = append(switches, float64(x.Switches)), append(contacts, float64(x.Contacts))
		drift = append(drift, x.Error)
		if x.Miss == NotThere {
			continue
		}
		s.Arrivals++
		time = append(time, x.Time)
		if x.Straight > 0 {
			detour = append(detour, x.Way/x.Straight)
		}
		stops = append(stops, [2]float64{x.End.X - x.Goal.X, x.End.Y - x.Goal.Y})
	}
	s.Share, s.Arrived = stat.Wilson(s.Successes, s.N, confidence), stat.Wilson(s.Arrivals, s.N, confidence)
	s.Leeway, s.Time, s.Detour = spread(leeway, confidence), spread(time, confidence), spread(detour, confidence)
	s.Switches, s.Contacts, s.Error = spread(switches, confidence), spread(contacts, confidence), spread(drift, confidence)
	if len(stops) >= 2 {
		s.Stops = new(Stops)
		s.Stops.Accuracy, s.Stops.Mean, s.Stops.Deviation, s.Stops.Repeatability = stat.Positioning([2]float64{}, stops)
	}
	return s
}

func spread(v []float64, confidence float64) Spread {
	sorted := slices.Sorted(slices.Values(v))
	at := func(q float64) Bounded {
		return Bounded{stat.Quantile(sorted, q), stat.QuantileInterval(sorted, q, confidence)}
	}
	return Spread{
		N: len(v), Mean: stat.Mean(v), Least: stat.Quantile(sorted, 0), Largest: stat.Quantile(sorted, 1),
		Q05: at(0.05), Q50: at(0.5), Q95: at(0.95),
	}
}

// near (m) is how close to the middle of a group a run must have missed to be of it.
const near = 1.0

// group puts runs that missed together, in the order of the trials.
func group(results []Result) []Group {
	var groups []Group
	for i := range results {
		x := &results[i]
		if x.Success() {
			continue
		}
		best, least := -1, near
		for k := range groups {
			if d := groups[k].At.Sub(x.Place()).Norm(); groups[k].Why == x.Why() && d <= least {
				best, least = k, d
			}
		}
		if best < 0 {
			groups = append(groups, Group{Why: x.Why(), At: x.Place(), Count: 1, Example: x.Trial})
			continue
		}
		g := &groups[best]
		g.Count++
		g.At = g.At.AddScaled(1/float64(g.Count), x.Place().Sub(g.At))
	}
	slices.SortStableFunc(groups, func(a, b Group) int { return b.Count - a.Count })
	return groups
}

// worst returns the trials that went worst: those that broke, that did not arrive,
// that came too close, and then whatever had the least leeway; of equals, the longest.
func worst(results []Result, n int) []int {
	order := make([]int, len(results))
	for i := range order {
		order[i] = i
	}
	rank := func(m Miss) int {
		if m == Met {
			return 99
		}
		return int(m)
	}
	slices.SortStableFunc(order, func(a, b int) int {
		x, y := &results[a], &results[b]
		return cmp.Or(cmp.Compare(rank(x.Miss), rank(y.Miss)), cmp.Compare(x.Leeway, y.Leeway), cmp.Compare(y.Time, x.Time))
	})
	order = order[:min(n, len(order))]
	for i := range order {
		order[i] = results[order[i]].Trial
	}
	return order
}
