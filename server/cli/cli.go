// Package cli is the command line of leeway.
//
// Exit codes: 0 when all went well and, for run, the robot arrived; 1 when it did
// not arrive; 2 when something was wrong with what was asked: a bad file, an
// unknown flag, a port that is taken. check has 1 for not met, and 3 for undecided.
package cli

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"syscall"

	"github.com/spf13/cobra"

	"leeway/sim/scenario"
)

// The exit codes.
const (
	ok         = 0
	notArrived = 1
	badInput   = 2
)

// errNotArrived ends a command with notArrived; all has been said.
var errNotArrived = errors.New("the robot did not arrive")

// Main runs the command line until it is done or the process is told to stop, and
// returns the exit code.
func Main(args []string, in io.Reader, out, errs io.Writer) int {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	// A second signal ends the process at once.
	defer context.AfterFunc(ctx, stop)()
	return Execute(ctx, args, in, out, errs)
}

// Execute runs one command line, and returns the exit code.
func Execute(ctx context.Context, args []string, in io.Reader, out, errs io.Writer) int {
	root := newRoot()
	root.SetArgs(args)
	root.SetIn(in)
	root.SetOut(out)
	root.SetErr(errs)
	err := root.ExecuteContext(ctx)
	switch {
	case err == nil:
		return ok
	case errors.Is(err, errNotArrived):
		return notArrived
	}
	var code exitCode
	if errors.As(err, &code) {
		return int(code)
	}
	var faulty *faultyInput
	if errors.As(err, &faulty) {
		io.WriteString(errs, faulty.report())
	} else if errors.Is(err, context.Canceled) {
		fmt.Fprintln(errs, "leeway: stopped before the end")
	} else {
		fmt.Fprintf(errs, "leeway: %v\n", err)
	}
	return badInput
}

func newRoot() *cobra.Command {
	serve := newServe()
	root := &cobra.Command{
		Use:   "leeway",
		Short: "A browser lab for switching navigation designs",
		Long: `Leeway runs a robot with a ring of range sensors and a switching logic across a
floor, and shows how close it scrapes and where a simple model stops telling the
truth.

Without a command it serves the lab for a browser, like "leeway serve".

FILE, wherever it is asked for, is a scenario file, - for standard input, or
shipped:NAME for one of the scenarios that come with Leeway.

Exit status: 0 all well and, for run, the robot arrived; 1 it did not arrive, or,
for check, what is asked is not met; 2 bad input; 3 a check is undecided.`,
		Example: `  leeway
  leeway serve --addr 127.0.0.1:9000
  leeway run shipped:pocket
  leeway audit shipped:sparse
  leeway validate my-floor.json`,
		Args:          cobra.NoArgs,
		RunE:          serve.RunE,
		SilenceErrors: true,
		SilenceUsage:  true,
	}
	root.Flags().AddFlagSet(serve.Flags())
	root.CompletionOptions.HiddenDefaultCmd = true
	root.AddCommand(serve, newRun(), newTrials(), newSweep(), newCompare(), newAudit(), newLimit(), newTune(), newCheck(), newReport(), newReplay(), newValidate(), newLink(), newOpen(), newSchema(), newHealth(), newVersion())
	return root
}

func newSchema() *cobra.Command {
	return &cobra.Command{
		Use:     "schema",
		Short:   "Print the JSON Schema of scenario files",
		Long:    "Print the JSON Schema of scenario files, for editors that check and complete them.",
		Example: "  leeway schema > scenario.schema.json",
		Args:    cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			_, err := cmd.OutOrStdout().Write(scenario.Schema())
			return err
		},
	}
}
