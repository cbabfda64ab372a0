package studies

import (
	"encoding/xml"
	"fmt"
	"strings"

	"leeway/sim/study/stat"
)

// Checked is one file of a check, for JUnit.
type Checked struct {
	File    string
	View    Check
	Seconds float64 // that it took
}

type junitSuites struct {
	XMLName  xml.Name     `xml:"testsuites"`
	Name     string       `xml:"name,attr"`
	Tests    int          `xml:"tests,attr"`
	Failures int          `xml:"failures,attr"`
	Skipped  int          `xml:"skipped,attr"`
	Suites   []junitSuite `xml:"testsuite"`
}

type junitSuite struct {
	Name     string      `xml:"name,attr"`
	Tests    int         `xml:"tests,attr"`
	Failures int         `xml:"failures,attr"`
	Skipped  int         `xml:"skipped,attr"`
	Time     string      `xml:"time,attr"`
	Cases    []junitCase `xml:"testcase"`
}

type junitCase struct {
	Name    string     `xml:"name,attr"`
	Class   string     `xml:"classname,attr"`
	Time    string     `xml:"time,attr"`
	Failure *junitText `xml:"failure,omitempty"`
	Skipped *junitText `xml:"skipped,omitempty"`
	Out     string     `xml:"system-out,omitempty"`
}

type junitText struct {
	Message string `xml:"message,attr"`
	Text    string `xml:",chardata"`
}

// JUnit writes checks as JUnit XML: a suite a file with one case, which is skipped
// when it is undecided.
func JUnit(list []Checked) ([]byte, error) {
	all := junitSuites{Name: "leeway check"}
	for _, c := range list {
		time := fmt.Sprintf("%.3f", c.Seconds)
		t := junitCase{
			Name:  fmt.Sprintf("does what is asked in at least %s of trials", percentText(c.View.Target)),
			Class: c.File, Time: time, Out: c.View.lines(),
		}
		s := junitSuite{Name: c.View.Name, Tests: 1, Time: time}
		switch c.View.Verdict {
		case verdict(stat.Reject):
			t.Failure = &junitText{c.View.sentence(), c.View.lines()}
			s.Failures = 1
		case verdict(stat.Undecided):
			t.Skipped = &junitText{Message: c.View.sentence()}
			s.Skipped = 1
		}
		s.Cases = []junitCase{t}
		all.Tests++
		all.Failures += s.Failures
		all.Skipped += s.Skipped
		all.Suites = append(all.Suites, s)
	}
	b, err := xml.MarshalIndent(all, "", "  ")
	return append([]byte(xml.Header), append(b, '\n')...), err
}

func (c *Check) sentence() string {
	low, high := 0.0, 1.0
	if c.Bounds.Low != nil {
		low = *c.Bounds.Low
	}
	if c.Bounds.High != nil {
		high = *c.Bounds.High
	}
	return fmt.Sprintf("%s: %d of %d runs did what is asked; the share lies between %s and %s, and %s is asked",
		c.Verdict, c.Successes, c.Summary.Runs, percentText(low), percentText(high), percentText(c.Target))
}

// Sentence says the verdict with its numbers.
func (c *Check) Sentence() string { return c.sentence() }

func (c *Check) lines() string {
	var b strings.Builder
	fmt.Fprintln(&b, c.sentence())
	for _, g := range c.Groups {
		fmt.Fprintf(&b, "%d × %s near %.1f, %.1f (trial %d)\n", g.Count, g.Why, g.X, g.Y, g.Example)
	}
	return b.String()
}
