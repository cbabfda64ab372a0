package study_test

import (
	"context"
	"math"
	"reflect"
	"slices"
	"strings"
	"sync"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"leeway/sim"
	"leeway/sim/floor"
	. "leeway/sim/study"
	"leeway/sim/study/stat"
)

// equal compares results bit for bit; NaN equals NaN.
func equal(t *testing.T, what string, got, want any) {
	t.Helper()
	if d := cmp.Diff(want, got, cmpopts.EquateNaNs()); d != "" {
		t.Errorf("%s differs:\n%s", what, d)
	}
}

// studies are all studies on small plans, by name.
func studies(t testing.TB) map[string]func(context.Context, *Runner) (any, error) {
	s := posts(t)
	speeds := func(v []float64) (Source, error) {
		n := *s
		n.c.Speed = v[0]
		if len(v) > 1 {
			n.c.Drive.Lag = v[1]
		}
		return &n, nil
	}
	axis := Axis{Path: "speed", Low: 0.3, High: 1.2, Steps: 3}
	lag := Axis{Path: "lag", Low: 0, High: 0.3, Steps: 2}
	grid := NewGrid(6, 4, 24)
	return map[string]func(context.Context, *Runner) (any, error){
		"trials": func(ctx context.Context, r *Runner) (any, error) {
			r.Grid = grid
			return RunTrials(ctx, r, s, TrialsPlan{N: 40, Confidence: 0.95})
		},
		"sequential": func(ctx context.Context, r *Runner) (any, error) {
			return RunTrials(ctx, r, s, TrialsPlan{N: 60, Confidence: 0.95, Test: &stat.SPRT{P0: 0.4, P1: 0.6, Alpha: 0.05, Beta: 0.05}})
		},
		"sweep": func(ctx context.Context, r *Runner) (any, error) {
			return RunSweep(ctx, r, speeds, SweepPlan{Axes: []Axis{axis, lag}, N: 4, Confidence: 0.95})
		},
		"indices": func(ctx context.Context, r *Runner) (any, error) {
			return RunSweep(ctx, r, speeds, SweepPlan{Axes: []Axis{axis, lag}, Layout: SobolIndices, Points: 4, N: 3, Confidence: 0.95})
		},
		"compare": func(ctx context.Context, r *Runner) (any, error) {
			fast, _ := speeds([]float64{1})
			return RunCompare(ctx, r, []string{"slow", "fast"}, []Source{s, fast}, 20, 0.95)
		},
		"audit": func(ctx context.Context, r *Runner) (any, error) { return RunAudit(ctx, r, s, 3, 0.95) },
		"limit": func(ctx context.Context, r *Runner) (any, error) {
			return RunLimit(ctx, r, speeds, LimitPlan{Axis: axis, Target: 0.4, Confidence: 0.9, N: 12, Scan: 3, Tolerance: 0.2})
		},
		"tune": func(ctx context.Context, r *Runner) (any, error) {
			return RunTune(ctx, r, speeds, []float64{0.45, 0.1}, TunePlan{Axes: []Axis{axis, lag}, N: 4, Fresh: 6, Settings: 7, Seed: 1, Confidence: 0.95})
		},
		"check": func(ctx context.Context, r *Runner) (any, error) {
			return RunCheck(ctx, r, s, CheckPlan{Target: 0.5, Confidence: 0.9, Budget: 60})
		},
	}
}

// One worker or many, in one go or from results kept earlier: the same in every bit.
func TestSameHoweverItIsRun(t *testing.T) {
	for name, run := range studies(t) {
		kept := map[Key]Result{}
		var once sync.Mutex
		want, err := run(ctx, &Runner{Workers: 1, Keep: func(k Key, r Result) {
			if !once.TryLock() {
				t.Error("Keep is called by two at once")
			}
			kept[k] = r
			once.Unlock()
		}})
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		got, err := run(ctx, &Runner{Workers: 5})
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		equal(t, name+" by five workers", got, want)

		// A part of the results is known, as after a restart; none of them is run again.
		part, n := map[Key]Result{}, 0
		for k, r := range kept {
			if n++; n%3 != 0 {
				part[k] = r
			}
		}
		again := 0
		got, err = run(ctx, &Runner{Workers: 2, Known: part, Keep: func(k Key, _ Result) {
			again++
			if _, ok := part[k]; ok {
				t.Errorf("%s: %v was known and has been run again", name, k)
			}
		}})
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		equal(t, name+" taken up again", got, want)
		if want := len(kept) - len(part); again != want && name != "sequential" {
			t.Errorf("%s: %d runs after being taken up, want %d", name, again, want)
		}
	}
}

// A study that is stopped returns what is known, and the error of its context; taken
// up from what it kept it ends as if nothing had been.
func TestStopAndGoOn(t *testing.T) {
	for name, run := range studies(t) {
		want, err := run(ctx, &Runner{})
		if err != nil {
			t.Fatal(err)
		}
		stopping, stop := context.WithCancel(ctx)
		kept := map[Key]Result{}
		part, err := run(stopping, &Runner{Workers: 2, Keep: func(k Key, r Result) {
			if kept[k] = r; len(kept) == 9 {
				stop()
			}
		}})
		stop()
		if err != context.Canceled || reflect.ValueOf(part).IsNil() {
			t.Errorf("%s: stopped with %v and %v", name, part, err)
		}
		if len(kept) > 11 {
			t.Errorf("%s: %d runs were finished after it was stopped", name, len(kept)-9)
		}
		got, err := run(ctx, &Runner{Known: kept})
		if err != nil {
			t.Fatal(err)
		}
		equal(t, name, got, want)
	}
}

func TestTrialsStop(t *testing.T) {
	s := posts(t)
	wide, err := RunTrials(ctx, &Runner{}, s, TrialsPlan{N: 500, Confidence: 0.95, Width: 0.3})
	if err != nil {
		t.Fatal(err)
	}
	if wide.N >= 500 || wide.N%32 != 0 || wide.Share.Width() > 0.3 || !strings.Contains(wide.Stopped, "narrower") {
		t.Errorf("%d trials, %v: %s", wide.N, wide.Share, wide.Stopped)
	}
	if wide.Successes == 0 || wide.Successes == wide.N {
		t.Errorf("%d of %d: the test design should be neither hopeless nor perfect", wide.Successes, wide.N)
	}
	missed := 0
	for _, g := range wide.Groups {
		missed += g.Count
	}
	if missed != wide.N-wide.Successes {
		t.Errorf("the groups hold %d, %d have missed", missed, wide.N-wide.Successes)
	}
	if x := wide.Results[wide.Worst[0]]; x.Success() {
		t.Errorf("the worst is %+v", x)
	}
	test := stat.SPRT{P0: 0.01, P1: 0.05, Alpha: 0.05, Beta: 0.05}
	seq, err := RunTrials(ctx, &Runner{}, s, TrialsPlan{N: 500, Confidence: 0.95, Test: &test})
	if err != nil {
		t.Fatal(err)
	}
	if seq.Verdict != stat.Reject || seq.N >= 100 || test.Decide(seq.N-seq.Successes, seq.N) != stat.Reject {
		t.Errorf("%v after %d trials", seq.Verdict, seq.N)
	}
}

// A trial that panics or diverges is reported with its seed; the others go on.
func TestBrokenTrialsDoNotSinkAStudy(t *testing.T) {
	s := posts(t)
	n := *s
	n.of = func(i int, c *sim.Config) {
		s.of(i, c)
		if i%10 == 3 {
			c.Logic = nil // Check refuses it: but see below
			panic("out of order")
		}
	}
	got, err := RunTrials(ctx, &Runner{Workers: 3}, &n, TrialsPlan{N: 30, Confidence: 0.95})
	if err != nil {
		t.Fatal(err)
	}
	if got.Broken != 3 || got.N != 30 || got.Results[13].Fault != "panic: out of order" || got.Results[13].Success() || got.Worst[0] != 3 {
		t.Errorf("%d broken; %+v", got.Broken, got.Results[13])
	}
	whole, _ := RunTrials(ctx, &Runner{}, s, TrialsPlan{N: 30, Confidence: 0.95})
	equal(t, "the trial after", got.Results[14], whole.Results[14])

	// On a map that is missing, the run itself panics, with its config in hand.
	got, err = RunTrials(ctx, &Runner{Workers: 2}, unmapped{s}, TrialsPlan{N: 8, Confidence: 0.95})
	if err != nil || got.Broken != 1 || got.Results[5].Seed != 1005 || !strings.Contains(got.Results[5].Fault, "panic") {
		t.Errorf("%v: %d broken, %+v", err, got.Broken, got.Results[5])
	}

	// A trial that cannot be is another matter.
	n.of = func(i int, c *sim.Config) {
		if i == 4 {
			c.Hull = -1
		}
	}
	if _, err := RunTrials(ctx, &Runner{}, &n, TrialsPlan{N: 30, Confidence: 0.95}); err == nil || !strings.Contains(err.Error(), "trial 4: Hull") {
		t.Errorf("a hull of −1: %v", err)
	}
}

type unmapped struct{ *source }

func (u unmapped) Config(i int) (sim.Config, *floor.Map, error) {
	c, m, err := u.source.Config(i)
	if i == 5 {
		m = nil
	}
	return c, m, err
}

// Density counts every run once in every cell it went through.
func TestDensity(t *testing.T) {
	s, g := posts(t), NewGrid(6, 4, 24)
	x, err := RunTrials(ctx, &Runner{Grid: g}, s, TrialsPlan{N: 20, Confidence: 0.95})
	if err != nil {
		t.Fatal(err)
	}
	d := g.Density(x.Results)
	most := slices.Max(d)
	if most > 20 || most < 3 || len(d) != g.NX*g.NY || g.NX != 24 || g.NY != 16 {
		t.Errorf("%d by %d cells, at most %d in one", g.NX, g.NY, most)
	}
	// The middle of the box is where no run can be.
	if n := d[int(1.9/g.Cell)*g.NX+int(2.45/g.Cell)]; n != 0 {
		t.Errorf("%d runs went through the box", n)
	}
}

func TestCompare(t *testing.T) {
	s := posts(t)
	blind := *s
	blind.c.Ring.Bearings = blind.c.Ring.Bearings[:2]
	c, err := RunCompare(ctx, &Runner{}, []string{"ten beams", "same", "two beams"}, []Source{s, s, &blind}, 60, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	same, other := c.Pairs[0], c.Pairs[1]
	if same.OnlyFirst+same.OnlyOther != 0 || same.P != 1 || same.Leeway != (Bounded{}) {
		t.Errorf("a design against itself: %+v", same)
	}
	a, b := c.Designs[0], c.Designs[2]
	if other.OnlyFirst-other.OnlyOther != a.Successes-b.Successes || other.Difference.Value >= 0 || other.P > 0.05 || !other.Difference.In.Holds(other.Difference.Value) {
		t.Errorf("ten beams %d, two beams %d of 60: %+v", a.Successes, b.Successes, other)
	}
}

func TestSweep(t *testing.T) {
	s := posts(t)
	family := func(v []float64) (Source, error) {
		n := *s
		n.c.Ring.Bearings = n.c.Ring.Bearings[:int(v[0])]
		return &n, nil
	}
	x, err := RunSweep(ctx, &Runner{}, family, SweepPlan{Axes: []Axis{{Path: "beams", Low: 1, High: 10, Steps: 4, Whole: true}}, N: 16, Confidence: 0.95})
	if err != nil {
		t.Fatal(err)
	}
	var at []float64
	for _, c := range x.Cells {
		at = append(at, c.Values[0])
	}
	if !x.Whole || !slices.Equal(at, []float64{1, 4, 7, 10}) || x.Cells[0].Successes >= x.Cells[3].Successes {
		t.Errorf("at %v: %d and %d of 16", at, x.Cells[0].Successes, x.Cells[3].Successes)
	}
	bad := []SweepPlan{
		{},
		{Axes: []Axis{{Path: "a", Low: 2, High: 1, Steps: 2}}, N: 1},
		{Axes: []Axis{{Path: "a", High: math.Inf(1), Steps: 2}}, N: 1},
		{Axes: []Axis{{Path: "a", High: 1.5, Whole: true}}, N: 1},
		{Axes: make([]Axis, 3), N: 1},
		{Axes: slices.Repeat([]Axis{{Path: "a", High: 1}}, 11), Layout: SobolIndices, Points: 2, N: 1},
	}
	for _, p := range bad {
		if _, err := RunSweep(ctx, &Runner{}, family, p); err == nil {
			t.Errorf("%+v was swept", p)
		}
	}
}

// The indices of a sweep point at what matters: how fast it drives, not a number that
// nothing depends on.
func TestSweepIndices(t *testing.T) {
	family := braking(t)
	two := func(v []float64) (Source, error) { return family(v[:1]) }
	axes := []Axis{{Path: "speed", Low: 0.5, High: 2.5}, {Path: "nothing", Low: 0, High: 1}}
	x, err := RunSweep(ctx, &Runner{}, two, SweepPlan{Axes: axes, Layout: SobolIndices, Points: 32, N: 1, Confidence: 0.95})
	if err != nil {
		t.Fatal(err)
	}
	if s := x.Success; math.Abs(s.First[0]-1) > 0.15 || s.Total[1] != 0 || s.First[1] != 0 {
		t.Errorf("%+v", s)
	}
}
