package cli

import (
	"bytes"
	"time"

	"github.com/spf13/cobra"

	"leeway/server/report"
)

func newReplay() *cobra.Command {
	var out, base string
	cmd := &cobra.Command{
		Use:   "replay FILE|LINK -o replay.html",
		Short: "Write a file that plays a run in any browser",
		Long: `Run a scenario to its end and write one HTML file that plays it: the floor with robot
and shadows, the tape to drag along, why the robot did what, and where the simple
models part from it.

The file needs no server and no network, and has at most 1 MB: send it to whoever is
to see the run.`,
		Example: `  leeway replay my-floor.json -o replay.html
  leeway replay shipped:pocket --base http://lab.example:8321 -o pocket.html`,
		Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			sc, err := readScenarioOrLink(cmd, args[0])
			if err != nil {
				return err
			}
			film, err := report.BuildFilm(cmd.Context(), sc, report.Options{Base: trimmed(base), Version: version(), Date: time.Now()})
			if err != nil {
				return err
			}
			var b bytes.Buffer
			if err := report.Replay(&b, film); err != nil {
				return err
			}
			return writeOut(cmd, out, b.Bytes())
		},
	}
	outFlags(cmd, &out, &base)
	return cmd
}
