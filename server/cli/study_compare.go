package cli

import (
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"leeway/server/studies"
	"leeway/sim/scenario"
	"leeway/sim/study"
)

func newCompare() *cobra.Command {
	var o studyFlags
	var n int
	var kind string
	cmd := &cobra.Command{
		Use:   "compare FILE FILE...",
		Short: "Run several designs on the same seeds and say which does better",
		Long: `Run two or more scenarios on the same seeds and compare each with the first: several
robots, rings or logics on one floor, for instance.

All take the seed of the first. One that says nothing about what varies takes that of
the first too, so that starts, goals and all else that is drawn are the same.

With --floors the designs are compared on generated floors instead of their own, a new
one for every trial, the same for all designs: scattered, rooms, pockets or mazes. All of
them have a way for the largest hull.

The comparison is by pairs of trials: how many only the one does as asked and how many
only the other, with the exact test of McNemar, and the difference in success (with
an interval after Newcombe) and in mean leeway (by bootstrap).

` + variesHelp,
		Example: `  leeway compare ten-beams.json twenty-beams.json
  leeway compare now.json idea.json --floors rooms --n 100
  leeway compare now.json idea1.json idea2.json --n 500 --csv compare.csv`,
		Args: cobra.MinimumNArgs(2),
		RunE: func(cmd *cobra.Command, args []string) error {
			if n < 1 {
				return fmt.Errorf("--n must be 1 at least; it is %d", n)
			}
			s, err := o.begin(cmd, args[0])
			if err != nil {
				return err
			}
			names, sources := designNames(args), []study.Source{s.subject.Trials}
			designs := []*scenario.Scenario{s.subject.Scenario}
			for _, arg := range args[1:] {
				sc, err := readScenarioOrLink(cmd, arg)
				if err != nil {
					return err
				}
				sc.Seed = s.subject.Scenario.Seed
				if sc.Vary.Empty() {
					sc.Vary = s.subject.Scenario.Clone().Vary
				}
				t, err := sc.Trials()
				if err != nil {
					return withName(arg, err)
				}
				sources, designs = append(sources, t), append(designs, sc)
			}
			if kind != "" {
				floors, err := studies.NewFloors(kind, uint64(s.subject.Scenario.Seed), designs...)
				if err != nil {
					return err
				}
				for i := range designs {
					sources[i] = floors.On(designs[i])
				}
			}
			if o.budget > 0 {
				n = min(n, max(1, o.budget/len(sources)))
			}
			c, err := study.RunCompare(cmd.Context(), &s.runner, names, sources, n, s.level())
			if c == nil {
				return err
			}
			return s.finish(s.subject.CompareView(s.head("compare", err), names, c), func(w io.Writer) { writeCompare(w, s, names, c) }, nil, nil, err)
		},
	}
	o.add(cmd, false)
	cmd.Flags().IntVar(&n, "n", 200, "trials of every design")
	cmd.Flags().StringVar(&kind, "floors", "", "compare on generated floors of this `kind`: scattered, rooms, pockets or mazes")
	return cmd
}

// designNames names designs by their files, apart from one another.
func designNames(args []string) []string {
	names, seen := make([]string, len(args)), map[string]int{}
	for i, a := range args {
		if names[i] = a; !strings.Contains(a, "#") {
			names[i] = strings.TrimSuffix(filepath.Base(a), ".json")
		} else {
			names[i] = fmt.Sprintf("link %d", i+1)
		}
		seen[names[i]]++
		if k := seen[names[i]]; k > 1 {
			names[i] = fmt.Sprintf("%s (%d)", names[i], k)
		}
	}
	return names
}

func writeCompare(w io.Writer, s *session, names []string, c *study.Compare) {
	fmt.Fprintf(w, "Seed %d: %d trials of each design.\n", s.subject.Scenario.Seed, c.N)
	for i := range c.Designs {
		fmt.Fprintf(w, "\n%s\n", names[i])
		writeSummary(w, &c.Designs[i].Summary)
	}
	for _, p := range c.Pairs {
		fmt.Fprintf(w, "\n%s against %s\n", names[p.Other], names[0])
		fmt.Fprintf(w, "  only %s: %d trials; only %s: %d; p = %.4g (McNemar, exact)\n", names[p.Other], p.OnlyOther, names[0], p.OnlyFirst, p.P)
		d := p.Difference
		fmt.Fprintf(w, "  success   %+.1f points (%+.1f to %+.1f)\n", 100*d.Value, 100*d.In.Low, 100*d.In.High)
		fmt.Fprintf(w, "  leeway    %+.3f m (%+.3f to %+.3f) in the mean\n", p.Leeway.Value, p.Leeway.In.Low, p.Leeway.In.High)
	}
}
