package cli

import (
	"errors"
	"fmt"
	"io"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"leeway/sim/study"
)

func newSweep() *cobra.Command {
	var o studyFlags
	var over []string
	var n, points int
	var layout string
	cmd := &cobra.Command{
		Use:   "sweep FILE --over PATH=LOW:HIGH:STEPS",
		Short: "Run the same trials at many settings of one or more numbers",
		Long: `Run the same trials at many settings of one or more numbers of a scenario: what differs
between settings is the numbers alone (common random numbers).

With one or two --over the settings lie on a grid, and --svg draws a curve or a map. With
more, or with --layout sobol, they are Sobol' points from which the share of each number
in the variance of success is estimated, by itself (first order) and with all that it acts
together with (total order), as of Saltelli 2010 and Jansen 1999. --layout hypercube
spreads --points settings evenly over all numbers.

` + variesHelp,
		Example: `  leeway sweep shipped:pocket --over robot.speed_m_s=0.2:1:9 --svg speed.svg
  leeway sweep my-floor.json --over ring.beams=6:24:4 --over robot.wheel_lag_s=0:0.3:4
  leeway sweep my-floor.json --over robot.speed_m_s=0.2:1 --over ring.noise_m=0:0.05 --over robot.wheel_lag_s=0:0.3`,
		Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			s, err := o.begin(cmd, args[0])
			if err != nil {
				return err
			}
			steps := 7
			if len(over) > 1 {
				steps = 5
			}
			axes, err := s.axes(over, steps)
			if err != nil {
				return err
			}
			p := study.SweepPlan{Axes: axes, Points: points, N: n, Confidence: s.level(), Seed: uint64(s.subject.Scenario.Seed)}
			switch layout {
			case "":
				if len(axes) > 2 {
					p.Layout = study.SobolIndices
				}
			case "grid":
			case "hypercube":
				p.Layout = study.LatinHypercube
			case "sobol":
				p.Layout = study.SobolIndices
			default:
				return fmt.Errorf("--layout must be grid, hypercube or sobol; it is %q", layout)
			}
			if p.N < 1 || p.Points < 1 {
				return errors.New("--n and --points must be 1 at least")
			}
			if o.budget > 0 {
				settings := p.Settings()
				if p.N = min(p.N, o.budget/max(settings, 1)); p.N < 1 {
					return fmt.Errorf("--budget of %d is too small for %d settings", o.budget, settings)
				}
			}
			x, err := study.RunSweep(cmd.Context(), &s.runner, s.subject.Family(axes), p)
			if x == nil {
				return err
			}
			return s.finish(s.subject.SweepView(s.head("sweep", err), x), func(w io.Writer) { writeSweep(w, s, x) }, axes,
				func() ([]byte, error) { return s.subject.SweepChart(x), nil }, err)
		},
	}
	o.add(cmd, true)
	f := cmd.Flags()
	f.StringArrayVar(&over, "over", nil, "`number` to sweep and how far: PATH=LOW:HIGH or PATH=LOW:HIGH:STEPS")
	f.IntVar(&n, "n", 40, "trials at every setting")
	f.IntVar(&points, "points", 32, "settings of a hypercube, or rows of Sobol' points (with k numbers each row is k+2 settings)")
	f.StringVar(&layout, "layout", "", "grid, hypercube or sobol")
	cmd.MarkFlagRequired("over")
	return cmd
}

func writeSweep(w io.Writer, s *session, x *study.Sweep) {
	fmt.Fprintf(w, "%s, seed %d: %d settings, %s, %d trials at each.\n\n", s.subject.Scenario.Name, s.subject.Scenario.Seed, len(x.Cells), x.Plan.Layout, x.Plan.N)
	if x.Success != nil {
		fmt.Fprintf(w, "  %-28s %-28s %-28s\n", "share of the variance of", "success: first, total", "leeway: first, total")
		for i, a := range x.Plan.Axes {
			two := func(first, total float64) string { return fmt.Sprintf("%6.2f, %6.2f", first, total) }
			fmt.Fprintf(w, "  %-28s %-28s %-28s\n", a.Path, two(x.Success.First[i], x.Success.Total[i]), two(x.Leeway.First[i], x.Leeway.Total[i]))
		}
		if x.Success.Variance == 0 {
			fmt.Fprintln(w, "  success is the same at all settings")
		}
		fmt.Fprintf(w, "\nIntervals are in --json and --svg: estimates from %d rows are rough.\n", x.Plan.Points)
		return
	}
	width := 10
	for _, a := range x.Plan.Axes {
		width = max(width, len(a.Path))
	}
	for _, a := range x.Plan.Axes {
		fmt.Fprintf(w, "  %-*s", width, a.Path)
	}
	fmt.Fprintf(w, "  %-24s %s\n", "does what is asked, %", "median leeway, m")
	for i := range x.Cells {
		c := &x.Cells[i]
		for _, v := range c.Values {
			fmt.Fprintf(w, "  %-*s", width, strconv.FormatFloat(v, 'g', 6, 64))
		}
		fmt.Fprintf(w, "  %-24s %s\n", strings.ReplaceAll(shareWords(c.Successes, c.N, c.Share), " %", ""), boundedWords(c.Leeway.Q50, 3))
	}
}
