package cli

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"leeway/server/app"
	"leeway/sim/scenario"
)

func newValidate() *cobra.Command {
	return &cobra.Command{
		Use:   "validate FILE...",
		Short: "Check scenario files and report every problem",
		Long: `Check scenario files and report every problem at once, one a line:

  file:line:column: path: what is wrong

Exit status: 0 all are valid; 2 otherwise.`,
		Example: `  leeway validate my-floor.json
  leeway validate floors/*.json
  generate-floor | leeway validate -`,
		Args: cobra.MinimumNArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			var last error
			for _, arg := range args {
				sc, err := readScenario(cmd, arg)
				if err == nil {
					fmt.Fprintf(cmd.OutOrStdout(), "%s: valid: %s\n", arg, sc.Name)
					continue
				}
				if f, ok := last.(*faultyInput); ok { // the last is reported by whoever gets it
					io.WriteString(cmd.ErrOrStderr(), f.report())
				} else if last != nil {
					fmt.Fprintf(cmd.ErrOrStderr(), "leeway: %v\n", last)
				}
				last = err
			}
			return last
		},
	}
}

func newLink() *cobra.Command {
	base := ""
	cmd := &cobra.Command{
		Use:   "link FILE",
		Short: "Print a link that holds a whole scenario",
		Long: `Print a link that holds a whole scenario, edits included, in its part after the #.
It opens on any Leeway: with --base say whose. Nothing is uploaded anywhere.`,
		Example: `  leeway link my-floor.json
  leeway link shipped:pocket --base http://lab.example:8321`,
		Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			sc, err := readScenario(cmd, args[0])
			if err != nil {
				return err
			}
			link := trimmed(base) + "/open#" + sc.Encode()
			fmt.Fprintln(cmd.OutOrStdout(), link)
			if len(link) > scenario.LongLink {
				fmt.Fprintf(cmd.ErrOrStderr(), "leeway: the link has %d characters; many chat tools cut links off after %d: send the file instead\n",
					len(link), scenario.LongLink)
			}
			return nil
		},
	}
	cmd.Flags().StringVar(&base, "base", "http://"+app.DefaultAddr, "address of the Leeway that the link should open on")
	return cmd
}

// trimmed is an address without the slash that a path begins with.
func trimmed(base string) string { return strings.TrimSuffix(base, "/") }

func newOpen() *cobra.Command {
	return &cobra.Command{
		Use:   "open LINK",
		Short: "Print the scenario file that a link holds",
		Long: `Print the scenario file that a link holds. LINK is the whole link, what stands
after its #, or - to read either from standard input. Quote it: shells treat # and
& specially.`,
		Example: `  leeway open 'http://127.0.0.1:8321/open#…' > floor.json
  leeway link shipped:pocket | leeway open -`,
		Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			link := args[0]
			if link == "-" {
				data, err := io.ReadAll(io.LimitReader(cmd.InOrStdin(), scenario.MaxLinkChars+1000))
				if err != nil {
					return err
				}
				link = string(data)
			}
			sc, err := readLink(link)
			if err != nil {
				return err
			}
			_, err = cmd.OutOrStdout().Write(sc.Print())
			return err
		},
	}
}
