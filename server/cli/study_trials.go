package cli

import (
	"fmt"
	"io"

	"github.com/spf13/cobra"

	"leeway/sim/study"
	"leeway/sim/study/stat"
)

const variesHelp = `What differs from trial to trial stands in the scenario's "vary": start and goal
regions, the start heading, numbers, shifted solids, the phase of movers; without any,
every trial has a seed of its own. Trials are the same ones whenever they are asked for.`

func newTrials() *cobra.Command {
	var o studyFlags
	var n, one int
	var width float64
	var sequential bool
	cmd := &cobra.Command{
		Use:   "trials FILE|LINK",
		Short: "Run a scenario many times and say how often it does what is asked",
		Long: `Run many trials of a scenario and say how often it does what is asked, how it fails and
where, and which trials are worth a look.

` + variesHelp + `

A trial does what is asked when it arrives in time with the leeway and the switches of
"asked". Intervals are Wilson's for shares, and between order statistics for medians.
The leeway counts at most 1 m.

--width stops as soon as the interval of the share is that narrow. --sequential stops by
Wald's test of the share that is asked ("success" and "confidence" of "asked"; 0.9 and
0.95 without) against one that fails twice as often.

--csv writes a row for every trial; --svg draws where they went.`,
		Example: `  leeway trials my-floor.json
  leeway trials shipped:pocket --n 1000 --csv trials.csv --svg ways.svg
  leeway trials my-floor.json --width 0.05
  leeway trials my-floor.json --trial 17 > trial17.json`,
		Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			s, err := o.begin(cmd, args[0])
			if err != nil {
				return err
			}
			if cmd.Flags().Changed("trial") {
				if one < 0 {
					return fmt.Errorf("--trial must not be negative; it is %d", one)
				}
				sc, err := s.subject.Trials.Trial(one)
				if err != nil {
					return err
				}
				_, err = cmd.OutOrStdout().Write(sc.Print())
				return err
			}
			if n < 1 {
				return fmt.Errorf("--n must be 1 at least; it is %d", n)
			}
			p := study.TrialsPlan{N: n, Confidence: s.level(), Width: width}
			if (width > 0 || sequential) && !cmd.Flags().Changed("n") {
				p.N = 10_000
			}
			if o.budget > 0 {
				p.N = min(p.N, o.budget)
			}
			share, confidence := s.subject.Success()
			if sequential {
				p.Test = &stat.SPRT{P0: 1 - share, P1: min(2*(1-share), (1+1-share)/2), Alpha: 1 - confidence, Beta: 1 - confidence}
			}
			if o.svg != "" {
				s.runner.Grid = s.subject.Grid()
			}
			t, err := study.RunTrials(cmd.Context(), &s.runner, s.subject.Trials, p)
			if t == nil {
				return err
			}
			words := func(w io.Writer) {
				fmt.Fprintf(w, "%s, seed %d: %d trials; %s.\n\n", s.subject.Scenario.Name, s.subject.Scenario.Seed, t.N, t.Stopped)
				writeSummary(w, &t.Summary)
				if p.Test != nil {
					fmt.Fprintf(w, "  success of %g       %s\n", share, map[stat.Verdict]string{stat.Accept: "met", stat.Reject: "not met", stat.Undecided: "undecided"}[t.Verdict])
				}
				writeGroups(w, t.Groups)
				writeWorst(w, t)
			}
			return s.finish(s.subject.TrialsView(s.head("trials", err), t), words, nil,
				func() ([]byte, error) { return s.subject.TrialsChart(t, s.runner.Grid) }, err)
		},
	}
	o.add(cmd, true)
	f := cmd.Flags()
	f.IntVar(&n, "n", 200, "trials")
	f.Float64Var(&width, "width", 0, "stop when the interval of the share is that narrow, 0.1 for instance")
	f.BoolVar(&sequential, "sequential", false, "stop when it is decided whether the share that is asked is met")
	f.IntVar(&one, "trial", 0, "print this trial as a scenario, and run nothing")
	return cmd
}
