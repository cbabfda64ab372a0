package cli

import (
	"errors"
	"fmt"
	"os"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"leeway/server/studies"
	"leeway/sim/study"
	"leeway/sim/study/stat"
)

func newCheck() *cobra.Command {
	var o studyFlags
	var junit string
	var success float64
	cmd := &cobra.Command{
		Use:   "check FILE...",
		Short: "A verdict on what is asked, for scripts and build servers",
		Long: `Run trials of every FILE until it is known whether it does what is asked often enough,
and print a line a file.

What is asked stands in "asked" of the scenario: to arrive within_s, with at least
leeway_m, in at most so many switches, in at least the share "success" of trials (0.9
without), shown with "confidence" (0.95 without). --success and --confidence take their
place.

` + variesHelp + `

The trials are looked at a few times only, with exact bounds whose errors add up to what
the confidence allows: the chance of a wrong verdict is no larger, whatever the truth.

Exit status: 0 all are met; 1 one is not met; 3 none is not met, but one is undecided
within the budget; 2 bad input. With several files, bad input comes first.`,
		Example: `  leeway check my-floor.json
  leeway check floors/*.json --budget 2000 --junit check.xml
  leeway check my-floor.json --success 0.99 --json`,
		Args: cobra.MinimumNArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			if cmd.Flags().Changed("success") && !(success > 0 && success < 1) {
				return fmt.Errorf("--success must lie between 0 and 1; it is %g", success)
			}
			if o.budget == 0 {
				o.budget = 1000
			}
			return check(cmd, args, &o, success, junit)
		},
	}
	o.add(cmd, false)
	cmd.Flags().Lookup("budget").Usage = "`runs` a file at most; 0: 1000"
	cmd.Flags().Float64Var(&success, "success", 0, "share of trials that must do what is asked, instead of the file's")
	cmd.Flags().StringVar(&junit, "junit", "", "write JUnit XML to this `file`")
	return cmd
}

func check(cmd *cobra.Command, args []string, o *studyFlags, success float64, junit string) error {
	// Every file is read before any is run: bad input should not take an hour to show.
	sessions := make([]*session, len(args))
	for i, arg := range args {
		s, err := o.begin(cmd, arg)
		if err != nil {
			return err
		}
		sessions[i] = s
	}
	var list []studies.Checked
	var all studies.Rows
	worst := stat.Accept
	var halted error
	width := 0
	for _, a := range args {
		width = max(width, len([]rune(a)))
	}
	for i, s := range sessions {
		if o.csv != "" {
			s.runner.Keep = func(k study.Key, r study.Result) { k.Setting = args[i]; all.Keep(k, r) }
		}
		share, _ := s.subject.Success()
		if success > 0 {
			share = success
		}
		began := time.Now()
		c, err := study.RunCheck(cmd.Context(), &s.runner, s.subject.Trials, study.CheckPlan{Target: share, Confidence: s.level(), Budget: o.budget})
		if c == nil {
			return err
		}
		s.bar.done()
		view := s.subject.CheckView(s.head("check", err), c)
		list = append(list, studies.Checked{File: args[i], View: view, Seconds: time.Since(began).Seconds()})
		if c.Verdict == stat.Reject || worst == stat.Accept {
			worst = c.Verdict
		}
		if !o.json {
			fmt.Fprintf(cmd.OutOrStdout(), "%s%s  %s\n", args[i], strings.Repeat(" ", width-len([]rune(args[i]))), view.Sentence())
			if c.Verdict != stat.Accept {
				for k, g := range c.Trials.Groups {
					if k == 3 {
						break
					}
					fmt.Fprintf(cmd.OutOrStdout(), "    %d × %s near %.1f, %.1f (trial %d)\n", g.Count, g.Why, g.At.X, g.At.Y, g.Example)
				}
			}
		}
		if err != nil {
			halted = err
			break
		}
	}
	if o.json {
		views := make([]studies.Check, len(list))
		for i := range list {
			views[i] = list[i].View
		}
		b, err := studies.JSON(views)
		if err != nil {
			return err
		}
		if _, err := cmd.OutOrStdout().Write(b); err != nil {
			return err
		}
	}
	if junit != "" {
		b, err := studies.JUnit(list)
		if err != nil {
			return err
		}
		if err := writeOut(cmd, junit, b); err != nil {
			return err
		}
	}
	if o.csv != "" {
		f, err := os.Create(o.csv)
		if err != nil {
			return err
		}
		if err := errors.Join(all.WriteCSV(f, nil), f.Close()); err != nil {
			return err
		}
	}
	switch {
	case worst == stat.Reject:
		return notMet
	case halted != nil || worst == stat.Undecided:
		return undecided
	}
	return nil
}
