package page

import (
	"crypto/sha256"
	_ "embed"
	"encoding/base64"
	"sync"

	"github.com/a-h/templ"

	"leeway/web"
)

// ReportView is a report: one run, told to someone who was not there.
type ReportView struct {
	Name, Purpose string
	Asked         string // what is asked, a sentence

	Big, Of, Words string   // the headline: "0.05 m", "of leeway, where …", "This run falls short."
	Short          bool     // it falls short
	Ending         string   // how it ended, a sentence
	Shortfalls     []string // what was not kept, a sentence each

	Floor, Tape templ.Component // svg
	Modes       []ReportMode
	Grid        string // how large a square of the grid is

	Columns []string // names of the models
	Rows    []ReportRow
	Ways    []string // about the ways, a sentence each

	Partings []ReportParting
	Unparted []string // sentences about models that never part
	More     string   // about partings that are left out; may be empty
	Events   []string // what else happened, a sentence each; may be empty
	Changes  []string // what a person changed meanwhile, likewise

	Brief  []Part
	Traits []ReportRow // what each model has
	Shared []string    // what all models have in common, a sentence each
	Advice []ReportAdvice

	Link    string // opens the scenario; behind words when it is too long to print
	LinkIs  string // what there is to say of it
	File    string // how many characters it has, or the name of the file; may be empty
	Command string // gives the same on a command line
	Seed    string
	Hashes  []ReportHash
	Version string
	Date    string // may be empty
}

// ReportMode explains a look.
type ReportMode struct{ Look, Name string }

// ReportRow is a measure or a trait, with a cell for each column.
type ReportRow struct {
	Label string
	Cells []ReportCell
}

// ReportCell is what one model has of it.
type ReportCell struct {
	Text string
	Bad  bool
}

// ReportParting is a place where the robot and a shadow separated.
type ReportParting struct {
	Mark string // stands for it in the pictures; may be empty
	From string // the shadow: "point"
	Text string
}

// ReportAdvice is one statement about the numbers of a design.
type ReportAdvice struct {
	Text  string
	Holds bool
}

// ReportHash is the state hash of a model's whole run.
type ReportHash struct{ Model, Hash string }

//go:embed report.css
var reportCSS string

// reportSheet is the style of a report. It needs nothing else: a report is kept as a
// file, and printed.
var reportSheet = sync.OnceValue(func() string { return web.Sheet("css/leeway.css") + reportCSS })

// ReportPolicy is the content security policy of a report: its own style, and
// nothing from anywhere. A server that sends one must send this policy with it.
var ReportPolicy = sync.OnceValue(func() string {
	sum := sha256.Sum256([]byte(reportSheet()))
	return "default-src 'none'; style-src 'sha256-" + base64.StdEncoding.EncodeToString(sum[:]) +
		"'; font-src data:; base-uri 'none'; form-action 'none'"
})
