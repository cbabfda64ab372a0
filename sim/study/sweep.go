package study

import (
	"context"
	"errors"
	"fmt"

	"leeway/sim/study/stat"
)

// Layout says how the settings of a sweep lie.
type Layout uint8

// The layouts.
const (
	OnGrid         Layout = iota // all combinations of the axes' steps; one or two axes
	LatinHypercube               // Points settings, evenly over every axis
	SobolIndices                 // Points·(axes+2) settings that sensitivity indices are estimated from
)

// String returns the layout in words.
func (l Layout) String() string {
	return [...]string{"grid", "Latin hypercube", "Sobol' points"}[l]
}

// SweepPlan says what to sweep.
type SweepPlan struct {
	Axes       []Axis
	Layout     Layout
	Points     int // settings of a hypercube; rows of a Sobol' design, best a power of two
	N          int // trials at every setting, the same at all
	Confidence float64
	Seed       uint64 // of a hypercube and of bootstraps
}

// Sweep is what the settings come to.
type Sweep struct {
	Plan    SweepPlan
	Cells   []Cell        // of the settings that are complete, in order
	Whole   bool          // all are
	Success *stat.Indices // of a Sobol' layout that is complete
	Leeway  *stat.Indices
}

// Cell is one setting.
type Cell struct {
	Values []float64
	Summary
}

// settings returns the values of all settings.
func (p *SweepPlan) settings() ([][]float64, *stat.Design, error) {
	if len(p.Axes) == 0 {
		return nil, nil, errors.New("a sweep needs a number to sweep")
	}
	for i := range p.Axes {
		if err := p.Axes[i].check(); err != nil {
			return nil, nil, err
		}
	}
	scaled := func(points [][]float64) [][]float64 {
		out := make([][]float64, len(points))
		for i, u := range points {
			out[i] = make([]float64, len(u))
			for k := range u {
				out[i][k] = p.Axes[k].at(u[k])
			}
		}
		return out
	}
	switch p.Layout {
	case OnGrid:
		if len(p.Axes) > 2 {
			return nil, nil, fmt.Errorf("a grid has one or two numbers, not %d; more need a hypercube or Sobol' points", len(p.Axes))
		}
		out := [][]float64{nil}
		for k := range p.Axes {
			var next [][]float64
			for _, head := range out {
				for _, x := range p.Axes[k].grid() {
					next = append(next, append(append([]float64(nil), head...), x))
				}
			}
			out = next
		}
		return out, nil, nil
	case LatinHypercube:
		return scaled(stat.LatinHypercube(p.Seed, len(p.Axes), p.Points)), nil, nil
	}
	if len(p.Axes) > stat.MaxDims/2 {
		return nil, nil, fmt.Errorf("at most %d numbers can be swept for their indices", stat.MaxDims/2)
	}
	d := stat.NewDesign(len(p.Axes), p.Points)
	return scaled(d.Points), &d, nil
}

// RunSweep runs the same trials at every setting.
func RunSweep(ctx context.Context, r *Runner, family Family, p SweepPlan) (*Sweep, error) {
	settings, design, err := p.settings()
	if err != nil {
		return nil, err
	}
	if p.N < 1 || len(settings) == 0 {
		return nil, errors.New("a sweep needs settings and trials")
	}
	r.Expect(len(settings) * p.N)
	s := &Sweep{Plan: p}
	for _, v := range settings {
		source, err := family(v)
		if err != nil {
			return nil, err
		}
		results, err := r.trials(ctx, source, setting(p.Axes, v), 0, p.N)
		if err != nil {
			if ctx.Err() == nil {
				return nil, fmt.Errorf("%s: %w", setting(p.Axes, v), err)
			}
			return s, err
		}
		s.Cells = append(s.Cells, Cell{v, Summarise(results, p.Confidence)})
	}
	s.Whole = true
	if design != nil {
		success, leeway := make([]float64, len(s.Cells)), make([]float64, len(s.Cells))
		for i := range s.Cells {
			success[i] = float64(s.Cells[i].Successes) / float64(p.N)
			if m := s.Cells[i].Leeway; m.N > 0 {
				leeway[i] = m.Mean
			}
		}
		a, b := design.Estimate(success, p.Seed, p.Confidence), design.Estimate(leeway, p.Seed, p.Confidence)
		s.Success, s.Leeway = &a, &b
	}
	return s, nil
}

// Settings returns how many settings the plan has, 0 for one that cannot be.
func (p *SweepPlan) Settings() int {
	list, _, err := p.settings()
	if err != nil {
		return 0
	}
	return len(list)
}
