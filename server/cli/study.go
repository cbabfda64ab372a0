package cli

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"leeway/server/studies"
	"leeway/sim/scenario"
	"leeway/sim/study"
	"leeway/sim/study/stat"
)

// exitCode ends a command with this code; all has been said.
type exitCode int

func (e exitCode) Error() string { return fmt.Sprintf("exit status %d", int(e)) }

// The exit codes of a check, beside ok and badInput.
const (
	notMet    exitCode = 1
	undecided exitCode = 3
)

// studyFlags are what all studies can be told.
type studyFlags struct {
	json       bool
	csv, svg   string
	jobs       int
	seed       int64
	budget     int
	confidence float64
}

func (o *studyFlags) add(cmd *cobra.Command, svg bool) {
	f := cmd.Flags()
	f.BoolVar(&o.json, "json", false, "print the result as JSON")
	f.StringVar(&o.csv, "csv", "", "write a table with a row for every run to this `file`")
	if svg {
		f.StringVar(&o.svg, "svg", "", "draw the result into this `file`")
	}
	f.IntVar(&o.jobs, "jobs", 0, "runs at the same time; 0: as many as there are cores")
	f.Int64Var(&o.seed, "seed", 0, "seed that all trials come from, instead of the file's")
	f.IntVar(&o.budget, "budget", 0, "`runs` at most; 0: as many as the study takes")
	f.Float64Var(&o.confidence, "confidence", 0, "confidence of intervals, 0.95 for instance; 0: that of the file, or 0.95")
}

func (o *studyFlags) check() error {
	switch {
	case o.jobs < 0:
		return fmt.Errorf("--jobs must not be negative; it is %d", o.jobs)
	case o.budget < 0:
		return fmt.Errorf("--budget must not be negative; it is %d", o.budget)
	case o.confidence != 0 && !(o.confidence > 0 && o.confidence < 1):
		return fmt.Errorf("--confidence must lie between 0 and 1; it is %g", o.confidence)
	}
	return nil
}

// session is one study that is being run from the command line.
type session struct {
	*studyFlags
	cmd     *cobra.Command
	runner  study.Runner
	rows    studies.Rows
	bar     *progress
	subject *studies.Subject
}

// begin reads a scenario and makes ready to study it.
func (o *studyFlags) begin(cmd *cobra.Command, arg string) (*session, error) {
	if err := o.check(); err != nil {
		return nil, err
	}
	sc, err := readScenarioOrLink(cmd, arg)
	if err != nil {
		return nil, err
	}
	return o.beginWith(cmd, sc)
}

func (o *studyFlags) beginWith(cmd *cobra.Command, sc *scenario.Scenario) (*session, error) {
	if cmd.Flags().Changed("seed") {
		if err := sc.SetNumber("seed", float64(o.seed)); err != nil {
			return nil, fmt.Errorf("--seed: %w", err)
		}
	}
	subject, err := studies.New(sc)
	if err != nil {
		return nil, err
	}
	s := &session{studyFlags: o, cmd: cmd, subject: subject}
	s.bar = newProgress(cmd.ErrOrStderr())
	s.runner.Workers = o.jobs
	s.runner.Progress = s.bar.show
	if o.csv != "" {
		s.runner.Keep = s.rows.Keep
	}
	return s, nil
}

// level is the confidence of intervals.
func (s *session) level() float64 {
	if s.confidence != 0 {
		return s.confidence
	}
	_, c := s.subject.Success()
	return c
}

func (s *session) head(kind string, err error) studies.Head {
	return s.subject.Head(kind, err == nil, s.runner.Done(), s.level())
}

// finish writes what was asked for: the view as JSON or else in words, the table and
// the picture. err is that of a study that was stopped, and is returned at last.
func (s *session) finish(view any, words func(io.Writer), axes []study.Axis, picture func() ([]byte, error), err error) error {
	s.bar.done()
	out := s.cmd.OutOrStdout()
	if s.json {
		b, fault := studies.JSON(view)
		if fault != nil {
			return fault
		}
		if _, fault := out.Write(b); fault != nil {
			return fault
		}
	} else {
		words(out)
	}
	if s.csv != "" {
		var b bytes.Buffer
		if fault := s.rows.WriteCSV(&b, axes); fault != nil {
			return fault
		}
		if fault := writeOut(s.cmd, s.csv, b.Bytes()); fault != nil {
			return fault
		}
	}
	if s.svg != "" {
		b, fault := picture()
		if fault != nil {
			return fault
		}
		if fault := writeOut(s.cmd, s.svg, b); fault != nil {
			return fault
		}
	}
	return err
}

// axis reads PATH=LOW:HIGH or PATH=LOW:HIGH:STEPS.
func (s *session) axis(text string, steps int) (study.Axis, error) {
	bad := fmt.Errorf("%q is not PATH=LOW:HIGH or PATH=LOW:HIGH:STEPS, as in robot.speed_m_s=0.2:0.6:5", text)
	path, rest, found := strings.Cut(text, "=")
	parts := strings.Split(rest, ":")
	if !found || len(parts) < 2 || len(parts) > 3 {
		return study.Axis{}, bad
	}
	low, err1 := strconv.ParseFloat(parts[0], 64)
	high, err2 := strconv.ParseFloat(parts[1], 64)
	if err1 != nil || err2 != nil {
		return study.Axis{}, bad
	}
	if len(parts) == 3 {
		n, err := strconv.Atoi(parts[2])
		if err != nil || n < 1 || n > 1000 {
			return study.Axis{}, bad
		}
		steps = n
	}
	return s.subject.Axis(path, low, high, steps)
}

// axes reads several.
func (s *session) axes(texts []string, steps int) ([]study.Axis, error) {
	var out []study.Axis
	for _, t := range texts {
		a, err := s.axis(t, steps)
		if err != nil {
			return nil, err
		}
		for _, b := range out {
			if a.Path == b.Path {
				return nil, fmt.Errorf("%s is named twice", a.Path)
			}
		}
		out = append(out, a)
	}
	return out, nil
}

// share is a share in words, with its interval.
func shareWords(k, n int, in stat.Interval) string {
	if n == 0 {
		return "–"
	}
	return fmt.Sprintf("%.1f %% (%.1f to %.1f)", 100*float64(k)/float64(n), 100*in.Low, 100*in.High)
}

// boundedWords is an estimate in words, with its interval where there is one.
func boundedWords(b study.Bounded, decimals int) string {
	n := func(v float64) string { return strconv.FormatFloat(v, 'f', decimals, 64) }
	switch {
	case math.IsNaN(b.Value):
		return "–"
	case math.IsInf(b.In.Low, 0) && math.IsInf(b.In.High, 0):
		return n(b.Value)
	case math.IsInf(b.In.Low, 0):
		return fmt.Sprintf("%s (up to %s)", n(b.Value), n(b.In.High))
	case math.IsInf(b.In.High, 0):
		return fmt.Sprintf("%s (from %s)", n(b.Value), n(b.In.Low))
	}
	return fmt.Sprintf("%s (%s to %s)", n(b.Value), n(b.In.Low), n(b.In.High))
}

// writeSummary writes what a list of runs comes to.
func writeSummary(w io.Writer, s *study.Summary) {
	fmt.Fprintf(w, "  does what is asked   %s, %d of %d\n", shareWords(s.Successes, s.N, s.Share), s.Successes, s.N)
	fmt.Fprintf(w, "  arrives              %s\n", shareWords(s.Arrivals, s.N, s.Arrived))
	line := func(name string, x study.Spread, unit string, decimals int) {
		if x.N > 0 {
			fmt.Fprintf(w, "  %-20s median %s %s, one in twenty below %s, above %s\n", name, boundedWords(x.Q50, decimals), unit, boundedWords(x.Q05, decimals), boundedWords(x.Q95, decimals))
		}
	}
	line("leeway", s.Leeway, "m", 3)
	line("time to arrive", s.Time, "s", 1)
	line("way over straight", s.Detour, "", 2)
	line("switches", s.Switches, "", 0)
	line("estimate off by", s.Error, "m", 3)
	if s.Stops != nil {
		fmt.Fprintf(w, "  %-20s %.3f m off in the mean, repeatable to %.3f m\n", "stops", s.Stops.Accuracy, s.Stops.Repeatability)
	}
	if s.Broken > 0 {
		fmt.Fprintf(w, "  broke                %d runs panicked or diverged; they count as misses\n", s.Broken)
	}
}

func writeGroups(w io.Writer, list []study.Group) {
	if len(list) == 0 {
		return
	}
	fmt.Fprintln(w, "\nWhat was missed, and where:")
	for i, g := range list {
		if i == 10 {
			fmt.Fprintf(w, "  and %d more places\n", len(list)-i)
			break
		}
		fmt.Fprintf(w, "  %4d × %s near %.1f, %.1f (trial %d)\n", g.Count, g.Why, g.At.X, g.At.Y, g.Example)
	}
}

func writeWorst(w io.Writer, t *study.Trials) {
	if len(t.Worst) == 0 {
		return
	}
	fmt.Fprintln(w, "\nWorth a look (leeway trials FILE --trial N prints one as a scenario):")
	for _, k := range t.Worst {
		r := &t.Results[k]
		reason := r.Reason
		if r.Fault != "" {
			reason = r.Fault
		}
		fmt.Fprintf(w, "  trial %-5d seed %-16d leeway %s m  %s: %s\n", r.Trial, r.Seed, strconv.FormatFloat(r.Leeway, 'f', 3, 64), r.Why(), reason)
	}
}
