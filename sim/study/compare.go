package study

import (
	"context"

	"leeway/sim/study/stat"
)

// Compare is several designs on the same trials.
type Compare struct {
	N          int // trials that all designs have run
	Confidence float64
	Designs    []Trials
	Pairs      []Pair // the first design against each other one
}

// Pair compares design Other with the first.
type Pair struct {
	Other      int
	OnlyFirst  int     // trials that only the first does as asked
	OnlyOther  int     // trials that only the other does
	P          float64 // exact McNemar: how likely such an imbalance is between equals
	Difference Bounded // in the share of success, other − first; stat.NewcombePaired
	Leeway     Bounded // mean difference of leeways, other − first, m; bootstrap over trials
}

// RunCompare runs trials 0 to n−1 of every source.
func RunCompare(ctx context.Context, r *Runner, names []string, sources []Source, n int, confidence float64) (*Compare, error) {
	r.Expect(n * len(sources))
	// Trial by trial, so that what is known when it is stopped is about all designs.
	jobs := make([]job, 0, n*len(sources))
	for i := range n {
		for k, s := range sources {
			jobs = append(jobs, job{Key{Setting: names[k], Trial: i, Ideal: AsIs}, s})
		}
	}
	all, err := r.run(ctx, jobs)
	if err != nil && ctx.Err() == nil {
		return nil, err
	}
	c := &Compare{N: len(all) / len(sources), Confidence: confidence, Designs: make([]Trials, len(sources))}
	for k := range sources {
		d := &c.Designs[k]
		for i := range c.N {
			d.Results = append(d.Results, all[i*len(sources)+k])
		}
		d.Confidence, d.Summary = confidence, Summarise(d.Results, confidence)
		d.Groups, d.Worst = group(d.Results), worst(d.Results, 10)
	}
	for k := 1; k < len(sources) && c.N > 0; k++ {
		c.Pairs = append(c.Pairs, pair(c.Designs[0].Results, c.Designs[k].Results, k, confidence))
	}
	return c, err
}

func pair(a, b []Result, other int, confidence float64) Pair {
	p := Pair{Other: other}
	leeway, both := make([]float64, len(a)), 0
	for i := range a {
		switch x, y := a[i].Success(), b[i].Success(); {
		case x && !y:
			p.OnlyFirst++
		case y && !x:
			p.OnlyOther++
		case x:
			both++
		}
		leeway[i] = b[i].Margin() - a[i].Margin()
	}
	p.P = stat.McNemar(p.OnlyFirst, p.OnlyOther)
	in := stat.Bootstrap(uint64(other), len(a), 1, confidence, func(rows []int, out []float64) {
		out[0] = 0
		for _, r := range rows {
			out[0] += leeway[r] / float64(len(rows))
		}
	})
	p.Difference = Bounded{
		float64(p.OnlyOther-p.OnlyFirst) / float64(len(a)),
		stat.NewcombePaired(both, p.OnlyOther, p.OnlyFirst, len(a)-both-p.OnlyFirst-p.OnlyOther, confidence),
	}
	p.Leeway = Bounded{stat.Mean(leeway), in[0]}
	return p
}
