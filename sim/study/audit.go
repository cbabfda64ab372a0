package study

import (
	"context"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/study/stat"
)

// An audit asks what a simple model hides. Each idealisation of it is an assumption
// that can be made real on its own; all 2^k combinations are run on the same trials,
// and the loss from the ideal model to the robot is shared out among the
// assumptions.

// Assumption is one idealisation under audit.
type Assumption struct {
	Name string // "sight"
	Real string // what making it real brings: "the sparse ring"
	Bit  sim.Ideal
}

// Assumptions returns the six, in the order in which a person would list them.
func Assumptions() []Assumption {
	return []Assumption{
		{"motion", "having to turn first", sim.PointMotion},
		{"wheel limits", "the limits of the wheels", sim.NoWheelLimits},
		{"delay and lag", "the delay and lag of the wheels", sim.NoLag},
		{"sight", "the ring of beams", sim.AllRoundSight},
		{"range noise", "the noise of the ranges", sim.NoiselessSight},
		{"position", "the reckoned position", sim.TruePosition},
	}
}

// Audit is what the assumptions cost. Values are indexed by set: bit i of the index
// says that assumption i was made real, so that 0 is the ideal model and the last
// the robot.
type Audit struct {
	N           int // trials, each in every combination
	Runs        int // of those, run: combinations that make no difference are run once
	Confidence  float64
	Assumptions []Assumption
	Rates       []float64 // share of success, by set
	Leeways     []float64 // mean leeway (at most 1 m), by set
	Ideal, Real Bounded   // share of success of the ideal model and of the robot, score intervals

	Success Losses // of success, as shares of runs
	Leeway  Losses // of mean leeway, m
	// Examples are, for each assumption, runs of the robot that missed what is asked, in
	// trials that it does as asked when only this assumption is ideal; the first few.
	Examples [][]Result
}

// Losses is how a loss is shared out. Positive is a loss.
type Losses struct {
	Whole  float64
	Shares []Bounded // Shapley values with bootstrap intervals; they add up to Whole
	Alone  []float64 // from making one assumption real and no other
	Rest   float64   // of Whole, what Alone leaves unexplained
	// Pairs[i][j], i > j, is what the two lose together beyond what each loses, on
	// average over what else is real (stat.Interactions).
	Pairs [][]float64
}

// RunAudit runs n trials in all combinations of the six assumptions. The
// idealisations of the source's configs do not matter.
func RunAudit(ctx context.Context, r *Runner, source Source, n int, confidence float64) (*Audit, error) {
	a := &Audit{Confidence: confidence, Assumptions: Assumptions()}
	k := len(a.Assumptions)
	sets := 1 << k
	first, _, err := source.Config(0)
	if err != nil {
		return nil, err
	}
	keys := make([]Ideal, sets)
	distinct := map[Ideal]bool{}
	for s := range keys {
		keys[s] = Ideal(essential(a.ideal(s), &first))
		distinct[keys[s]] = true
	}
	r.Expect(n * len(distinct))

	var all []Result // trial by trial, all sets
	step := max(1, round/k)
	for from := 0; from < n && err == nil; from += step {
		var jobs []job
		var place []int
		for i := from; i < min(n, from+step); i++ {
			at := map[Ideal]int{}
			for _, key := range keys {
				if _, ok := at[key]; !ok {
					at[key] = len(jobs)
					jobs = append(jobs, job{Key{Trial: i, Ideal: key}, source})
				}
				place = append(place, at[key])
			}
		}
		var done []Result
		done, err = r.run(ctx, jobs)
		if err != nil && ctx.Err() == nil {
			return nil, err
		}
		for t := 0; t+sets <= len(place); t += sets {
			for _, p := range place[t : t+sets] {
				if p >= len(done) {
					place = nil
					break
				}
			}
			if place == nil {
				break
			}
			for _, p := range place[t : t+sets] {
				all = append(all, done[p])
			}
		}
	}
	a.N, a.Runs = len(all)/sets, len(all)/sets*len(distinct)
	success, leeway := make([]float64, len(all)), make([]float64, len(all))
	for i := range all {
		if all[i].Success() {
			success[i] = 1
		}
		leeway[i] = all[i].Margin()
	}
	if a.N > 0 {
		a.Rates, a.Success = lossesOf(k, success, confidence)
		a.Leeways, a.Leeway = lossesOf(k, leeway, confidence)
		a.Ideal, a.Real = a.rate(success, 0), a.rate(success, sets-1)
		a.Examples = examples(k, all)
	}
	return a, err
}

// ideal returns the idealisations that are left when a set of assumptions is real.
func (a *Audit) ideal(set int) (bits sim.Ideal) {
	for i := range a.Assumptions {
		if set>>i&1 == 0 {
			bits |= a.Assumptions[i].Bit
		}
	}
	return bits
}

// essential brings combinations that make the same run of a config to one: what has
// no wheels has neither limits nor lag of them, and what the design has not anyway
// need not be taken from it.
func essential(i sim.Ideal, c *sim.Config) sim.Ideal {
	if c.Drive.Model == drive.Point {
		i |= sim.PointMotion
	}
	if i&sim.PointMotion != 0 || c.Drive.Model != drive.TwoWheels {
		i |= sim.NoWheelLimits | sim.NoLag
	}
	if !c.Drive.DeadReckoning {
		i |= sim.TruePosition
	}
	return i
}

// lossesOf shares out the loss of values y, trial by trial over all sets.
func lossesOf(k int, y []float64, confidence float64) (means []float64, l Losses) {
	sets := 1 << k
	n := len(y) / sets
	mean := func(rows []int, v []float64) {
		clear(v)
		for _, r := range rows {
			for s := range v {
				v[s] += y[r*sets+s]
			}
		}
		for s := range v {
			v[s] /= float64(len(rows))
		}
	}
	rows := make([]int, n)
	for i := range rows {
		rows[i] = i
	}
	means = make([]float64, sets)
	mean(rows, means)
	l.Whole = means[0] - means[sets-1]
	phi := stat.Shapley(k, means)
	scratch := make([]float64, sets)
	in := stat.Bootstrap(1, n, k, confidence, func(rows []int, out []float64) {
		mean(rows, scratch)
		for i, x := range stat.Shapley(k, scratch) {
			out[i] = -x
		}
	})
	each, rest := stat.Alone(k, means)
	together := stat.Interactions(k, means)
	l.Rest = 0 - rest
	for i := range k {
		l.Shares = append(l.Shares, Bounded{0 - phi[i], in[i]}) // 0 − x, so that nothing is 0 and not −0
		l.Alone = append(l.Alone, 0-each[i])
		row := make([]float64, i)
		for j := range row {
			row[j] = 0 - together[i][j]
		}
		l.Pairs = append(l.Pairs, row)
	}
	return means, l
}

func (a *Audit) rate(success []float64, set int) Bounded {
	k := 0
	for i := range a.N {
		if success[i<<len(a.Assumptions)+set] == 1 {
			k++
		}
	}
	return Bounded{float64(k) / float64(a.N), stat.Wilson(k, a.N, a.Confidence)}
}

// examples finds trials in which one assumption by itself makes the difference.
func examples(k int, all []Result) [][]Result {
	const few = 4
	sets := 1 << k
	out := make([][]Result, k)
	for i := range out {
		for t := 0; t < len(all) && len(out[i]) < few; t += sets {
			robot, spared := &all[t+sets-1], &all[t+((sets-1)^(1<<i))]
			if spared.Success() && !robot.Success() {
				out[i] = append(out[i], *robot)
			}
		}
	}
	return out
}
