package cli

import (
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"leeway/sim/study"
)

func newAudit() *cobra.Command {
	var o studyFlags
	var n int
	cmd := &cobra.Command{
		Use:   "audit FILE|LINK",
		Short: "What each simplification of the model hides",
		Long: `Run the same trials on every combination of six assumptions, from the ideal point that
goes wherever it is told, sees all round and knows where it is, to the robot of the
file, and share out what is lost on the way: motion, wheel limits, delay and lag, sight,
range noise, position.

Shares are Shapley values: each assumption's mean loss over all orders of making them
real one after the other. They add up exactly to the whole loss. Beside them stands what
making an assumption real alone would have shown, and what those single looks leave
unexplained. Intervals are by bootstrap over the trials.

What the file idealises itself ("ideal") does not matter. Combinations that cannot
differ, such as the wheel limits of a point, are run once.

` + variesHelp,
		Example: `  leeway audit shipped:sparse
  leeway audit my-floor.json --n 200 --svg audit.svg --json > audit.json`,
		Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			s, err := o.begin(cmd, args[0])
			if err != nil {
				return err
			}
			if n < 1 {
				return fmt.Errorf("--n must be 1 at least; it is %d", n)
			}
			if o.budget > 0 {
				if n = min(n, o.budget/64); n < 1 {
					return fmt.Errorf("--budget of %d is too small for 64 combinations", o.budget)
				}
			}
			a, err := study.RunAudit(cmd.Context(), &s.runner, s.subject.Trials, n, s.level())
			if a == nil {
				return err
			}
			return s.finish(s.subject.AuditView(s.head("audit", err), a), func(w io.Writer) { writeAudit(w, s, a) }, nil,
				func() ([]byte, error) { return s.subject.AuditChart(a), nil }, err)
		},
	}
	o.add(cmd, true)
	cmd.Flags().IntVar(&n, "n", 50, "trials, each in 64 combinations")
	return cmd
}

func writeAudit(w io.Writer, s *session, a *study.Audit) {
	fmt.Fprintf(w, "%s, seed %d: %d trials in %d combinations, %d runs.\n\n%s\n", s.subject.Scenario.Name, s.subject.Scenario.Seed, a.N, 1<<len(a.Assumptions), a.Runs, a.Sentence())
	if a.N == 0 {
		return
	}
	table := func(title string, l *study.Losses, scale float64, format string) {
		num := func(v float64) string { return fmt.Sprintf(format, scale*v) }
		fmt.Fprintf(w, "\n%-24s %-30s %s\n", title, "share", "alone")
		for i, x := range a.Assumptions {
			b := l.Shares[i]
			fmt.Fprintf(w, "  %-22s %-30s %s\n", x.Name, fmt.Sprintf("%s (%s to %s)", num(b.Value), num(b.In.Low), num(b.In.High)), num(l.Alone[i]))
		}
		fmt.Fprintf(w, "  %-22s %-30s %s unexplained\n", "in all", num(l.Whole), num(l.Rest))
	}
	table("Points of success lost", &a.Success, 100, "%.1f")
	table("Mean leeway lost, m", &a.Leeway, 1, "%.3f")
	for i, list := range a.Examples {
		if len(list) > 0 {
			r := &list[0]
			fmt.Fprintf(w, "\nTrial %d would have done what is asked but for %s: %s: %s", r.Trial, a.Assumptions[i].Real, r.Why(), r.Reason)
		}
	}
	fmt.Fprintln(w)
}
