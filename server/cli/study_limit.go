package cli

import (
	"errors"
	"fmt"
	"io"
	"strconv"

	"github.com/spf13/cobra"

	"leeway/sim/study"
)

func newLimit() *cobra.Command {
	var o studyFlags
	var number string
	var n, scan int
	var smallest bool
	var success, tolerance float64
	cmd := &cobra.Command{
		Use:   "limit FILE --number PATH=LOW:HIGH",
		Short: "How far a number may go",
		Long: `Find the largest value of a number (the smallest with --smallest) up to which the lower
bound of success still meets the target: how fast may it go, how few beams will do.

A few values over the range are tried first, then the bracket is halved. All values are
tried on the same trials. A value is given up as soon as the trials to come cannot
change the verdict. The curve that was sampled is printed, and it is said when it is not
monotone: then there is more than one limit.

` + variesHelp,
		Example: `  leeway limit shipped:pocket --number robot.speed_m_s=0.2:2
  leeway limit my-floor.json --number ring.beams=4:32 --smallest --success 0.95 --svg beams.svg`,
		Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			s, err := o.begin(cmd, args[0])
			if err != nil {
				return err
			}
			axis, err := s.axis(number, 0)
			if err != nil {
				return err
			}
			p := study.LimitPlan{Axis: axis, Smallest: smallest, Confidence: s.level(), N: n, Scan: scan, Tolerance: tolerance, Budget: o.budget}
			p.Target, _ = s.subject.Success()
			if cmd.Flags().Changed("success") {
				p.Target = success
			}
			if !(p.Target > 0 && p.Target < 1) || n < 1 || scan < 2 || tolerance < 0 {
				return errors.New("--success must lie between 0 and 1, --n must be 1 at least, --scan 2, and --tolerance not negative")
			}
			l, err := study.RunLimit(cmd.Context(), &s.runner, s.subject.Family([]study.Axis{axis}), p)
			if l == nil {
				return err
			}
			return s.finish(s.subject.LimitView(s.head("limit", err), l), func(w io.Writer) { writeLimit(w, s, l) }, []study.Axis{axis},
				func() ([]byte, error) { return s.subject.LimitChart(l), nil }, err)
		},
	}
	o.add(cmd, true)
	f := cmd.Flags()
	f.StringVar(&number, "number", "", "the `number` and its range: PATH=LOW:HIGH")
	f.IntVar(&n, "n", 100, "trials at a value")
	f.IntVar(&scan, "scan", 7, "values tried before the bracket is halved")
	f.BoolVar(&smallest, "smallest", false, "look for the smallest value that will do")
	f.Float64Var(&success, "success", 0, "target, instead of the file's")
	f.Float64Var(&tolerance, "tolerance", 0, "width of the last bracket; 0: a 256th of the range")
	cmd.MarkFlagRequired("number")
	return cmd
}

func writeLimit(w io.Writer, s *session, l *study.Limit) {
	fmt.Fprintf(w, "%s, seed %d: %d values tried, %d trials at each at most.\n\n%s\n\n", s.subject.Scenario.Name, s.subject.Scenario.Seed, len(l.Curve), l.Plan.N, l.Text)
	fmt.Fprintf(w, "  %-12s %-6s %-26s %s\n", "value", "runs", "does what is asked", "meets the target")
	for _, c := range l.Curve {
		fmt.Fprintf(w, "  %-12s %-6d %-26s %s\n", strconv.FormatFloat(c.Value, 'g', 6, 64), c.N, shareWords(c.Successes, c.N, c.Share), map[bool]string{true: "yes", false: "no"}[c.Meets])
	}
}
