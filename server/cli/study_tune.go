package cli

import (
	"fmt"
	"io"
	"strconv"

	"github.com/spf13/cobra"

	"leeway/server/studies"
	"leeway/sim/study"
)

func newTune() *cobra.Command {
	var o studyFlags
	var numbers []string
	var n, fresh, settings int
	var reward, out string
	cmd := &cobra.Command{
		Use:   "tune FILE --number PATH=LOW:HIGH",
		Short: "Find numbers that suit best, and confirm them on fresh trials",
		Long: `Look for the setting of some numbers that does what is asked most often, and among
equals has the most leeway, or with --reward time the least time, by CMA-ES. All settings
are tried on the same trials, beginning with that of the file.

The best of many looks better than it is. So the first and the best setting are run again
on fresh trials, and reported apart: believe those.

` + variesHelp,
		Example: `  leeway tune my-floor.json --number logic.stand_off_m=0.05:0.5 --number robot.speed_m_s=0.2:1
  leeway tune my-floor.json --number robot.speed_m_s=0.2:2 --reward time -o tuned.json`,
		Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			s, err := o.begin(cmd, args[0])
			if err != nil {
				return err
			}
			axes, err := s.axes(numbers, 0)
			if err != nil {
				return err
			}
			p := study.TunePlan{
				Axes: axes, N: n, Fresh: fresh, Settings: settings, Seed: uint64(s.subject.Scenario.Seed), Confidence: s.level(),
				Within: s.subject.Scenario.Asked.Within,
			}
			switch reward {
			case "leeway":
			case "time":
				p.Reward = study.LessTime
			default:
				return fmt.Errorf("--reward must be leeway or time; it is %q", reward)
			}
			if n < 1 || fresh < 0 || settings < 1 {
				return fmt.Errorf("--n and --settings must be 1 at least, and --fresh not negative")
			}
			if o.budget > 0 {
				if p.Settings = min(settings, (o.budget-2*fresh)/n); p.Settings < 1 {
					return fmt.Errorf("--budget of %d is too small for %d trials of one setting and twice %d fresh ones", o.budget, n, fresh)
				}
			}
			start := make([]float64, len(axes))
			for i, a := range axes {
				if _, start[i], _, err = s.subject.Scenario.Number(a.Path); err != nil {
					return err
				}
				if start[i] < a.Low || start[i] > a.High {
					return fmt.Errorf("%s is %g in the file, outside of what it is to be tuned in", a.Path, start[i])
				}
			}
			t, err := study.RunTune(cmd.Context(), &s.runner, s.subject.Family(axes), start, p)
			if t == nil {
				return err
			}
			if out != "" && len(t.Tried) > 0 {
				best, fault := tuned(s.subject, axes, t.Tried[t.Best].Values)
				if fault != nil {
					return fault
				}
				if fault := writeOut(cmd, out, best); fault != nil {
					return fault
				}
			}
			return s.finish(s.subject.TuneView(s.head("tune", err), t), func(w io.Writer) { writeTune(w, s, t) }, axes, nil, err)
		},
	}
	o.add(cmd, false)
	f := cmd.Flags()
	f.StringArrayVar(&numbers, "number", nil, "a `number` to tune and its range: PATH=LOW:HIGH")
	f.IntVar(&n, "n", 40, "trials that every setting is tried on")
	f.IntVar(&fresh, "fresh", 200, "fresh trials for the confirmation")
	f.IntVar(&settings, "settings", 100, "settings tried at most")
	f.StringVar(&reward, "reward", "leeway", "what counts after success: leeway or time")
	f.StringVarP(&out, "output", "o", "", "write the scenario with the best setting to this `file`")
	cmd.MarkFlagRequired("number")
	return cmd
}

// tuned returns the scenario with the best setting.
func tuned(s *studies.Subject, axes []study.Axis, values []float64) ([]byte, error) {
	sc := s.Scenario.Clone()
	for i, a := range axes {
		if err := sc.SetNumber(a.Path, values[i]); err != nil {
			return nil, err
		}
	}
	return sc.Print(), nil
}

func writeTune(w io.Writer, s *session, t *study.Tune) {
	fmt.Fprintf(w, "%s, seed %d: %d settings tried on %d trials each.\n\n", s.subject.Scenario.Name, s.subject.Scenario.Seed, len(t.Tried), t.Plan.N)
	if len(t.Tried) == 0 {
		return
	}
	first, best := &t.Tried[0], &t.Tried[t.Best]
	fmt.Fprintf(w, "  %-28s %-12s %s\n", "", "file", "best")
	for i, a := range t.Plan.Axes {
		g := func(v float64) string { return strconv.FormatFloat(v, 'g', 6, 64) }
		fmt.Fprintf(w, "  %-28s %-12s %s\n", a.Path, g(first.Values[i]), g(best.Values[i]))
	}
	fmt.Fprintf(w, "  %-28s %-12d %d of %d, on the trials it was chosen on\n", "does what is asked", first.Successes, best.Successes, t.Plan.N)
	if t.Before == nil {
		fmt.Fprintln(w, "\nNot confirmed on fresh trials.")
		return
	}
	fmt.Fprintf(w, "\nOn %d fresh trials, the file's setting\n", t.Before.N)
	writeSummary(w, t.Before)
	fmt.Fprintln(w, "and the best one")
	writeSummary(w, t.After)
	d := t.Fresh.Difference
	fmt.Fprintf(w, "\nThe best is %+.1f points (%+.1f to %+.1f) from the file's in success, p = %.4g; %+.3f m (%+.3f to %+.3f) in mean leeway.\n",
		100*d.Value, 100*d.In.Low, 100*d.In.High, t.Fresh.P, t.Fresh.Leeway.Value, t.Fresh.Leeway.In.Low, t.Fresh.Leeway.In.High)
}
