package study

import (
	"context"
	"fmt"
	"runtime"
	"sync"
	"sync/atomic"

	"leeway/sim"
)

// Runner runs trials on several workers. The zero value uses all cores.
type Runner struct {
	Workers int // 0: as many as there are cores

	// Known are results that need not be run again; nil for none. Read only.
	Known map[Key]Result
	// Keep, when not nil, gets every result that has been run, from one goroutine
	// at a time, in no particular order.
	Keep func(Key, Result)
	// Progress, when not nil, is told after every run how many of the study's runs
	// are done, and how many there will be as far as is known. One goroutine at a time.
	Progress func(done, total int)
	// Grid, when not nil, has every run note which of its cells it went through.
	Grid *Grid

	mutex       sync.Mutex // guards what follows, and Keep and Progress
	done, total int
	seen        map[Key]Result // of this study
}

// job is one run to do.
type job struct {
	key    Key
	source Source
}

// Expect says how many runs the study will take in all, as far as is known.
func (r *Runner) Expect(total int) {
	r.mutex.Lock()
	defer r.mutex.Unlock()
	r.total = max(total, r.done)
}

// Done returns how many runs have been done or were known.
func (r *Runner) Done() int {
	r.mutex.Lock()
	defer r.mutex.Unlock()
	return r.done
}

// run does jobs and returns their results in the order of the jobs. When ctx ends it
// returns the longest run of results from the first on that is complete, and the
// error of ctx. The error of a trial that cannot be drawn is that of the first one.
func (r *Runner) run(ctx context.Context, jobs []job) ([]Result, error) {
	out := make([]Result, len(jobs))
	have := make([]bool, len(jobs))
	errs := make([]error, len(jobs))
	r.mutex.Lock()
	if r.seen == nil {
		r.seen = map[Key]Result{}
	}
	todo := make([]int, 0, len(jobs))
	for i, j := range jobs {
		if x, ok := r.seen[j.key]; ok { // this study has it already
			out[i], have[i] = x, true
		} else if x, ok := r.Known[j.key]; ok {
			out[i], have[i] = x, true
			r.seen[j.key] = x
			r.done++
		} else {
			todo = append(todo, i)
		}
	}
	r.total = max(r.total, r.done+len(todo))
	r.mutex.Unlock()

	workers := r.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	var next atomic.Int64
	var failed atomic.Bool
	var wait sync.WaitGroup
	for range min(workers, len(todo)) {
		wait.Go(func() {
			w := worker{grid: r.Grid}
			for ctx.Err() == nil && !failed.Load() {
				n := int(next.Add(1)) - 1
				if n >= len(todo) {
					return
				}
				i := todo[n]
				x, ok, err := w.do(ctx, jobs[i])
				if err != nil {
					errs[i] = err
					failed.Store(true)
					return
				}
				if !ok {
					return
				}
				out[i], have[i] = x, true
				r.note(jobs[i].key, x)
			}
		})
	}
	wait.Wait()
	for i := range jobs {
		if errs[i] != nil {
			return out[:i], errs[i]
		}
		if !have[i] {
			// Not run because a later one could not be drawn, or because ctx ended.
			for _, err := range errs[i:] {
				if err != nil {
					return out[:i], err
				}
			}
			return out[:i], ctx.Err()
		}
	}
	return out, nil
}

func (r *Runner) note(k Key, x Result) {
	r.mutex.Lock()
	defer r.mutex.Unlock()
	r.done++
	r.seen[k] = x
	if r.Keep != nil {
		r.Keep(k, x)
	}
	if r.Progress != nil {
		r.Progress(r.done, r.total)
	}
}

// trials runs trials from to to of one setting.
func (r *Runner) trials(ctx context.Context, source Source, setting string, from, to int) ([]Result, error) {
	jobs := make([]job, to-from)
	for i := range jobs {
		jobs[i] = job{Key{Setting: setting, Trial: from + i, Ideal: AsIs}, source}
	}
	return r.run(ctx, jobs)
}

// worker runs one trial after the other in the memory of one run.
type worker struct {
	run  *sim.Run
	grid *Grid
	mark marker
}

// looked is how many ticks pass between two looks at whether anyone still waits.
const looked = 4096

// do runs one job to its end; ok is false when ctx ended first.
func (w *worker) do(ctx context.Context, j job) (x Result, ok bool, err error) {
	var c sim.Config
	defer func() {
		if p := recover(); p != nil {
			w.run = nil // whatever it was in the middle of
			x = Result{Trial: j.key.Trial, Seed: c.Seed, Miss: Broke, Fault: fmt.Sprint("panic: ", p),
				Start: c.Start.Pos, End: c.Start.Pos, Goal: c.Goal}
			ok, err = true, nil
		}
	}()
	c, m, err := j.source.Config(j.key.Trial)
	if err != nil {
		return x, false, err
	}
	if j.key.Ideal != AsIs {
		c.Ideal = sim.Ideal(j.key.Ideal)
	}
	if w.run == nil {
		w.run = new(sim.Run)
	}
	if err := w.run.Reset(m, c); err != nil {
		return x, false, fmt.Errorf("trial %d: %w", j.key.Trial, err)
	}
	if w.grid != nil {
		w.mark.begin(w.grid)
	}
	for n := 1; w.run.Going(); n++ {
		if n%looked == 0 && ctx.Err() != nil {
			return x, false, nil
		}
		w.run.Step()
		if w.grid != nil {
			w.mark.note(w.grid, w.run.Pose().Pos)
		}
	}
	x = resultOf(j.key.Trial, w.run)
	if w.grid != nil {
		x.Cells = w.mark.cells()
	}
	return x, true, nil
}
