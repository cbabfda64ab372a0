package cli

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"leeway/scenarios"
	"leeway/sim/scenario"
)

// faultyInput is a file or link with problems.
type faultyInput struct {
	name     string
	problems scenario.Problems
}

func (f *faultyInput) Error() string { return f.name + ": " + f.problems.Error() }

// report is every problem on a line of its own, as compilers write them:
// file:line:column: path: text.
func (f *faultyInput) report() string {
	var b strings.Builder
	for _, p := range f.problems {
		b.WriteString(f.name)
		if p.Line > 0 {
			fmt.Fprintf(&b, ":%d:%d", p.Line, p.Column)
		}
		b.WriteString(": ")
		text := p.Text
		if p.Path != "" {
			b.WriteString(p.Path + ": ")
			text = strings.TrimPrefix(text, p.Path+" ")
		}
		b.WriteString(text + "\n")
	}
	return b.String()
}

const shippedPrefix = "shipped:"

// readFile returns the text of a FILE argument.
func readFile(cmd *cobra.Command, arg string) ([]byte, error) {
	var from io.Reader
	switch {
	case arg == "-":
		from = cmd.InOrStdin()
	case strings.HasPrefix(arg, shippedPrefix):
		e, ok := scenarios.Find(strings.TrimPrefix(arg, shippedPrefix))
		if !ok {
			return nil, fmt.Errorf("there is no scenario %s; there are %s", arg, strings.Join(shippedNames(), ", "))
		}
		return e.Data, nil
	default:
		f, err := os.Open(arg)
		if errors.Is(err, fs.ErrNotExist) {
			return nil, fmt.Errorf("there is no file %s", arg)
		}
		if err != nil {
			return nil, err
		}
		defer f.Close()
		from = f
	}
	// One byte more than allowed, so that Parse sees that it is too large.
	return io.ReadAll(io.LimitReader(from, scenario.MaxBytes+1))
}

func shippedNames() []string {
	var names []string
	for _, e := range scenarios.All() {
		names = append(names, shippedPrefix+e.Slug)
	}
	return names
}

// readScenario reads a FILE argument.
func readScenario(cmd *cobra.Command, arg string) (*scenario.Scenario, error) {
	data, err := readFile(cmd, arg)
	if err != nil {
		return nil, err
	}
	sc, err := scenario.Parse(data)
	return sc, withName(arg, err)
}

// withName says which input had the problems.
func withName(arg string, err error) error {
	var problems scenario.Problems
	if !errors.As(err, &problems) {
		return err
	}
	if arg == "-" {
		arg = "standard input"
	}
	return &faultyInput{arg, slices.Clone(problems)}
}

// readScenarioOrLink reads a FILE|LINK argument. A file of that name wins.
func readScenarioOrLink(cmd *cobra.Command, arg string) (*scenario.Scenario, error) {
	if arg != "-" && !strings.HasPrefix(arg, shippedPrefix) {
		if _, err := os.Stat(arg); err != nil && looksLikeLink(arg) {
			return readLink(arg)
		}
	}
	return readScenario(cmd, arg)
}

// shortestLink is shorter than the data of any scenario, longer than most names.
const shortestLink = 60

func looksLikeLink(arg string) bool {
	return strings.Contains(arg, "#") || strings.Contains(arg, "://") ||
		len(arg) >= shortestLink && !strings.ContainsAny(arg, `/\. `)
}

func readLink(arg string) (*scenario.Scenario, error) {
	sc, err := scenario.Decode(arg)
	return sc, withName("link", err)
}
