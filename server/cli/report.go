package cli

import (
	"bytes"
	"os"
	"time"

	"github.com/spf13/cobra"

	"leeway/server/app"
	"leeway/server/report"
)

func newReport() *cobra.Command {
	var out, base string
	cmd := &cobra.Command{
		Use:   "report FILE|LINK -o report.html",
		Short: "Write a printable page about a run",
		Long: `Run a scenario to its end and write a page about it: what is asked, the floor with
the ways of robot and shadows, the verdict, where they part and why, what each model
has and lacks, cautions, and what it takes to see the same again.

The page is one HTML file that needs nothing else. Print it from a browser, on A4 or
Letter.`,
		Example: `  leeway report my-floor.json -o report.html
  leeway report shipped:pocket --base http://lab.example:8321 -o pocket.html`,
		Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			sc, err := readScenarioOrLink(cmd, args[0])
			if err != nil {
				return err
			}
			v, err := report.Build(cmd.Context(), sc, report.Options{Base: trimmed(base), Version: version(), Date: time.Now()})
			if err != nil {
				return err
			}
			var b bytes.Buffer
			if err := report.Page(&b, v); err != nil {
				return err
			}
			return writeOut(cmd, out, b.Bytes())
		},
	}
	outFlags(cmd, &out, &base)
	return cmd
}

func outFlags(cmd *cobra.Command, out, base *string) {
	cmd.Flags().StringVarP(out, "output", "o", "", "`file` to write, - for standard output")
	cmd.Flags().StringVar(base, "base", "http://"+app.DefaultAddr, "address of the Leeway that its link should open on")
	cmd.MarkFlagRequired("output")
}

func writeOut(cmd *cobra.Command, name string, data []byte) error {
	if name == "-" {
		_, err := cmd.OutOrStdout().Write(data)
		return err
	}
	return os.WriteFile(name, data, 0o666)
}
