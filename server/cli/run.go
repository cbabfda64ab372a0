package cli

import (
	"bufio"
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"os"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"leeway/server/report"
	"leeway/server/watch"
	"leeway/sim"
	"leeway/sim/scenario"
	"leeway/web/page/draw"
)

func newRun() *cobra.Command {
	var o runOptions
	cmd := &cobra.Command{
		Use:   "run FILE|LINK",
		Short: "Run a scenario to its end and say how it went",
		Long: `Run a scenario to its end, as fast as it goes, and say how it went.

Exit status: 0 the robot arrived; 1 it did not; 2 bad input.

Beside the robot run its shadows, the same design on simpler models: the point,
which goes wherever it is told, and the unicycle, which must turn before it goes.
What is printed says how each fares, where the robot parts from it, and what the
numbers of the design allow. --no-shadows leaves them out.

--json prints one object: status, reason, time_s, leeway_m (null when nothing solid
was ever near), way_m, switches, contacts, estimate_error_m, saturated (share of the
time that a wheel was at a limit), hash (of the whole run: the same scenario gives
the same on every machine), seed, name, all of the robot. "models" holds robot, point
and unicycle, each with status, reason, time_s, leeway_m, way_m, shortest_m (of the
hull; null, with shortest_reason, where there is none), switches, contacts, hash, and
for the shadows deviation_max_m, deviation_max_at_s and deviation_rms_m (between it and
the robot at the same time), frechet_m (between their ways alone) and partings, a list of
{t_s, kind, reason} with kind "decision" or "drift". "advice" lists {about, holds, text}.

--csv writes a row for every control tick, with units in the column names.

--svg draws the floor with the way in the modes' colours and the closest place, and
the ways of the shadows: the point's dotted, the unicycle's dashed.`,
		Example: `  leeway run my-floor.json
  leeway run shipped:pocket --seed 7 --json
  leeway run shipped:pocket --csv way.csv --svg way.svg
  leeway run 'http://127.0.0.1:8321/open#…'`,
		Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			o.seeded = cmd.Flags().Changed("seed")
			return run(cmd, args[0], &o)
		},
	}
	f := cmd.Flags()
	f.Int64Var(&o.seed, "seed", 0, "seed of everything random, instead of the file's")
	f.BoolVar(&o.json, "json", false, "print the outcome as JSON")
	f.StringVar(&o.csv, "csv", "", "write a row for every control tick to this `file`")
	f.BoolVar(&o.alone, "no-shadows", false, "run the robot alone")
	f.StringVar(&o.svg, "svg", "", "draw the floor and the way into this `file`")
	return cmd
}

type runOptions struct {
	seed     int64
	seeded   bool
	json     bool
	csv, svg string
	alone    bool // without shadows
}

func run(cmd *cobra.Command, arg string, o *runOptions) error {
	sc, err := readScenarioOrLink(cmd, arg)
	if err != nil {
		return err
	}
	if o.seeded {
		if err := sc.SetNumber("seed", float64(o.seed)); err != nil {
			return fmt.Errorf("--seed: %w", err)
		}
	}
	var each func(*sim.Run)
	closeCSV := func() error { return nil }
	if o.csv != "" {
		file, err := os.Create(o.csv)
		if err != nil {
			return err
		}
		buffer := bufio.NewWriterSize(file, 1<<16)
		table := newTable(buffer)
		each = table.row
		closeCSV = func() error {
			if err := buffer.Flush(); err != nil {
				file.Close()
				return err
			}
			return file.Close()
		}
	}
	f, shadows, err := finish(cmd.Context(), sc, o.alone, each)
	if err != nil {
		closeCSV()
		return err
	}
	if err := closeCSV(); err != nil {
		return err
	}
	if o.svg != "" {
		var b bytes.Buffer
		picture := f.Picture
		if shadows != nil {
			picture = shadows.Picture
		}
		if err := draw.SVG(&b, picture(), draw.Options{Longest: 1000, Paint: draw.Ink, Alone: true}); err != nil {
			return err
		}
		if err := os.WriteFile(o.svg, b.Bytes(), 0o666); err != nil {
			return err
		}
	}
	if o.json {
		err = printJSON(cmd.OutOrStdout(), f, shadows)
	} else if err = printWords(cmd.OutOrStdout(), f); err == nil && shadows != nil {
		printShadows(cmd.OutOrStdout(), shadows)
	}
	if err == nil && f.Run.Outcome().Status != sim.Arrived {
		err = errNotArrived
	}
	return err
}

// finish runs a scenario to its end; shadows is nil when the robot runs alone.
func finish(ctx context.Context, sc *scenario.Scenario, alone bool, each func(*sim.Run)) (f *watch.Finished, shadows *report.Finished, err error) {
	if alone {
		f, err = watch.Finish(ctx, sc, each)
		return f, nil, err
	}
	shadows, err = report.Finish(ctx, sc, each)
	if err != nil {
		return nil, nil, err
	}
	return &shadows.Finished, shadows, nil
}

// outcome is what --json prints.
type outcome struct {
	Name          string   `json:"name"`
	Seed          int64    `json:"seed"`
	Status        string   `json:"status"`
	Reason        string   `json:"reason"`
	Time          float64  `json:"time_s"`
	Leeway        *float64 `json:"leeway_m"` // null: nothing solid was ever near
	Way           float64  `json:"way_m"`
	Switches      int      `json:"switches"`
	Contacts      int      `json:"contacts"`
	EstimateError float64  `json:"estimate_error_m"`
	Saturated     float64  `json:"saturated"`
	Hash          string   `json:"hash"`
	Models        *models  `json:"models,omitempty"`
	Advice        []advice `json:"advice,omitempty"`
}

func printJSON(w io.Writer, f *watch.Finished, shadows *report.Finished) error {
	o := f.Run.Outcome()
	out := outcome{
		Name: f.Scenario.Name, Seed: f.Scenario.Seed, Status: o.Status.String(), Reason: o.Reason,
		Time: o.Time, Way: o.Way, Switches: o.Switches, Contacts: o.Contacts,
		EstimateError: o.EstimateError, Saturated: o.Saturated, Hash: fmt.Sprintf("%016x", o.Hash),
	}
	out.Leeway = finite(o.Leeway)
	if shadows != nil {
		out.Models, out.Advice = modelsOf(shadows), adviceOf(shadows)
	}
	b, err := json.MarshalIndent(out, "", "  ")
	if err != nil {
		return err
	}
	_, err = w.Write(append(b, '\n'))
	return err
}

func printWords(w io.Writer, f *watch.Finished) error {
	o, asked := f.Run.Outcome(), f.Scenario.Asked
	fmt.Fprintf(w, "%s, seed %d: %s.\n%s\n\n", f.Scenario.Name, f.Scenario.Seed, o.Status, o.Reason)
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	line := func(name, value, remark string) { fmt.Fprintf(t, "  %s\t%s\t%s\n", name, value, remark) }
	if math.IsInf(o.Leeway, 0) {
		line("leeway", "–", "nothing solid was ever near")
	} else {
		verdict := "enough"
		if o.Leeway < asked.Leeway {
			verdict = "falls short"
		}
		line("leeway", fmt.Sprintf("%.3f m", o.Leeway), fmt.Sprintf("%g m is asked: %s; closest at %s, near %.2f, %.2f",
			asked.Leeway, verdict, watch.Clock(o.LeewayAt), o.LeewayPoint.X, o.LeewayPoint.Y))
	}
	line("time", fmt.Sprintf("%.2f s", o.Time), fmt.Sprintf("%g s is asked", asked.Within))
	line("way driven", fmt.Sprintf("%.2f m", o.Way), "")
	switches := ""
	if asked.Switches >= 0 {
		switches = fmt.Sprintf("%d at most is asked", asked.Switches)
	}
	line("mode switches", fmt.Sprint(o.Switches), switches)
	line("contacts", fmt.Sprint(o.Contacts), "")
	line("wheels at a limit", fmt.Sprintf("%.1f %%", 100*o.Saturated), "of the time")
	line("estimate off by", fmt.Sprintf("%.3f m", o.EstimateError), "at most")
	line("hash", fmt.Sprintf("%016x", o.Hash), "the same run has the same on every machine")
	return t.Flush()
}
