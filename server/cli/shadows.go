package cli

import (
	"fmt"
	"io"
	"math"
	"strings"
	"unicode/utf8"

	"leeway/server/report"
	"leeway/sim/shadow"
)

// models is what --json prints of the robot and its shadows.
type models struct {
	Robot    model `json:"robot"`
	Point    model `json:"point"`
	Unicycle model `json:"unicycle"`
}

type model struct {
	Status     string   `json:"status"`
	Reason     string   `json:"reason"`
	Time       float64  `json:"time_s"`
	Leeway     *float64 `json:"leeway_m"` // null: nothing solid was ever near
	Way        float64  `json:"way_m"`
	Shortest   *float64 `json:"shortest_m"`                // null: there is none
	NoShortest string   `json:"shortest_reason,omitempty"` // why
	Switches   int      `json:"switches"`
	Contacts   int      `json:"contacts"`
	// Of a shadow, from the robot; null of the robot itself.
	DeviationMax   *float64  `json:"deviation_max_m"`
	DeviationMaxAt *float64  `json:"deviation_max_at_s"`
	DeviationRMS   *float64  `json:"deviation_rms_m"`
	Frechet        *float64  `json:"frechet_m"`
	Partings       []parting `json:"partings"`
	Hash           string    `json:"hash"`
}

type parting struct {
	Time   float64 `json:"t_s"`
	Kind   string  `json:"kind"` // "decision" or "drift"
	Reason string  `json:"reason"`
}

type advice struct {
	About string `json:"about"`
	Holds bool   `json:"holds"`
	Text  string `json:"text"`
}

func modelsOf(f *report.Finished) *models {
	of := func(w shadow.Who) model {
		m := &f.Models[w]
		o := &m.Outcome
		out := model{
			Status: o.Status.String(), Reason: o.Reason, Time: o.Time, Leeway: finite(o.Leeway), Way: o.Way,
			NoShortest: m.NoShortest, Switches: o.Switches, Contacts: o.Contacts,
			Partings: []parting{}, Hash: fmt.Sprintf("%016x", o.Hash),
		}
		if m.NoShortest == "" {
			out.Shortest = &m.Shortest
		}
		if w != shadow.Robot {
			d := &m.Deviation
			out.DeviationMax, out.DeviationMaxAt, out.DeviationRMS, out.Frechet = &d.Largest, &d.At, &d.RMS, &m.Frechet
		}
		for _, p := range m.Partings {
			kind := "decision"
			if p.Drifted {
				kind = "drift"
			}
			out.Partings = append(out.Partings, parting{p.Time, kind, p.Text})
		}
		return out
	}
	return &models{Robot: of(shadow.Robot), Point: of(shadow.Point), Unicycle: of(shadow.Unicycle)}
}

func adviceOf(f *report.Finished) []advice {
	var out []advice
	for _, a := range f.Advice {
		out = append(out, advice{a.About, a.Holds, a.Text})
	}
	return out
}

// finite returns v, or nil for what JSON has no number for.
func finite(v float64) *float64 {
	if math.IsInf(v, 0) || math.IsNaN(v) {
		return nil
	}
	return &v
}

// printShadows writes the models side by side, where they part, and the advice.
func printShadows(w io.Writer, f *report.Finished) {
	const label, cell = 25, 11
	fmt.Fprintf(w, "\n%*s", label, "")
	for _, who := range report.Columns {
		fmt.Fprint(w, right(who.String(), cell))
	}
	fmt.Fprintln(w)
	for _, row := range f.Table() {
		fmt.Fprintf(w, "  %-*s", label-2, row.Label)
		for _, c := range row.Cells {
			fmt.Fprint(w, right(c.Text, cell))
		}
		fmt.Fprintln(w)
	}
	fmt.Fprintf(w, "\n%s\n", f.Way())
	for _, who := range []shadow.Who{shadow.Point, shadow.Unicycle} {
		if len(f.Models[who].Partings) == 0 {
			fmt.Fprintf(w, "It never parts from the %s.\n", who)
			continue
		}
		fmt.Fprintf(w, "Parts from the %s: %s\n", who, f.FirstParting(who))
	}
	for i, a := range f.Advice {
		if i == 0 {
			fmt.Fprintln(w, "\nAbout these numbers:")
		}
		mark := "  "
		if !a.Holds {
			mark = "! "
		}
		fmt.Fprintf(w, "%s%s\n", mark, a.Text)
	}
	fmt.Fprintf(w, "\n%s\n", report.Caution)
}

// right pads a text to the left; fmt would count bytes where a reader counts signs.
func right(s string, width int) string {
	return strings.Repeat(" ", max(0, width-utf8.RuneCountInString(s))) + s
}
