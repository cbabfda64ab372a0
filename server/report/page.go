package report

import (
	"bytes"
	"context"
	"fmt"
	"io"
	"slices"
	"time"

	"github.com/a-h/templ"

	"leeway/server/brief"
	"leeway/server/watch"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
	"leeway/web/page"
	"leeway/web/page/draw"
)

// Options are what a page or a replay says that does not follow from the scenario.
type Options struct {
	Base    string    // address of a Leeway that the link opens on: "http://127.0.0.1:8321"
	Version string    // of this program
	Date    time.Time // of the page; zero: it bears none
}

// View is all that a page says.
type View = page.ReportView

// Policy returns the content security policy that a server must send with a page.
func Policy() string { return page.ReportPolicy() }

// Build runs a valid scenario to its end, or until ctx ends, and tells of it.
func Build(ctx context.Context, sc *scenario.Scenario, o Options) (View, error) {
	f, err := Finish(ctx, sc, nil)
	if err != nil {
		return View{}, err
	}
	return f.View(o)
}

// Page writes the page. The same view gives the same bytes.
func Page(w io.Writer, v View) error {
	return page.Report(v).Render(context.Background(), w)
}

const (
	// A4 at 96 pixels to the inch, within its margins.
	pageWide = 700
	// mostTold is how many partings, events and changes a page tells: what comes
	// after has nothing new.
	mostTold = 12
)

// View tells of the run.
func (f *Finished) View(o Options) (View, error) {
	sc := f.Scenario
	head := f.Headline()
	v := View{
		Name: sc.Name, Purpose: sc.Purpose, Asked: f.Asked(),
		Big: head.Big, Of: head.Of, Words: head.Words, Short: head.Short,
		Ending: f.Run.Outcome().Reason, Shortfalls: f.Shortfalls(),
		Ways:    []string{f.Way(), f.Compared(shadow.Point), f.Compared(shadow.Unicycle)},
		Events:  f.events(),
		Brief:   parts(brief.Of(sc)),
		Shared:  f.shared(),
		Seed:    fmt.Sprint(sc.Seed),
		Version: o.Version,
	}
	if !o.Date.IsZero() {
		v.Date = o.Date.Format(dateLayout)
	}
	for _, w := range Columns {
		v.Columns = append(v.Columns, w.String())
		v.Hashes = append(v.Hashes, page.ReportHash{Model: w.String(), Hash: fmt.Sprintf("%016x", f.Models[w].Outcome.Hash)})
	}
	for _, r := range f.Table() {
		row := page.ReportRow{Label: r.Label}
		for _, c := range r.Cells {
			row.Cells = append(row.Cells, page.ReportCell(c))
		}
		v.Rows = append(v.Rows, row)
	}
	traits, err := f.traits()
	if err != nil {
		return View{}, err
	}
	v.Traits = traits
	for _, a := range f.Advice {
		v.Advice = append(v.Advice, page.ReportAdvice{Text: a.Text, Holds: a.Holds})
	}
	changes := Changes(sc)
	for _, c := range changes[:min(len(changes), mostTold)] {
		v.Changes = append(v.Changes, c.Text)
	}
	if n := len(changes) - mostTold; n > 0 {
		v.Changes = append(v.Changes, fmt.Sprintf("And %d more; the scenario file has them all.", n))
	}
	f.tellPartings(&v)
	f.tellHow(&v, o)
	tie(&v)
	if err := f.draw(&v); err != nil {
		return View{}, err
	}
	return v, nil
}

// partings returns those of both shadows in the order of time.
func (f *Finished) partings() []shadow.Parting {
	all := slices.Concat(f.Models[shadow.Point].Partings, f.Models[shadow.Unicycle].Partings)
	slices.SortStableFunc(all, func(a, b shadow.Parting) int { return int(a.Tick - b.Tick) })
	return all
}

func (f *Finished) tellPartings(v *View) {
	all := f.partings()
	for i, p := range all[:min(len(all), mostTold)] {
		v.Partings = append(v.Partings, page.ReportParting{Mark: fmt.Sprint(i + 1), From: p.Shadow.String(), Text: p.Text})
	}
	for _, w := range []shadow.Who{shadow.Point, shadow.Unicycle} {
		if len(f.Models[w].Partings) == 0 {
			v.Unparted = append(v.Unparted, f.FirstParting(w))
		}
	}
	if n := len(all) - mostTold; n > 0 {
		v.More = fmt.Sprintf("They part %d times more; run --json lists all.", n)
	}
}

// events tells what is marked on the tape besides partings and endings.
func (f *Finished) events() []string {
	var out []string
	n := 0
	for _, e := range f.Tape.Record.Events {
		if e.Kind == shadow.PartingMark || e.Kind == shadow.EndMark {
			continue
		}
		if n++; n <= mostTold {
			out = append(out, e.Text)
		}
	}
	if n > mostTold {
		out = append(out, fmt.Sprintf("And %d more of this kind.", n-mostTold))
	}
	return out
}

// longestPrinted is how many characters a link may have to be of use on paper.
const longestPrinted = 1600

func (f *Finished) tellHow(v *View, o Options) {
	link := o.Base + "/open#" + f.Scenario.Encode()
	v.Link = link
	v.LinkIs = fmt.Sprintf("The whole scenario, edits included, is in a link of %d characters; nothing is uploaded anywhere.", len(link))
	switch {
	case len(link) > scenario.LongLink:
		v.Link = ""
		v.LinkIs = fmt.Sprintf("A link with the whole scenario would have %d characters, more than many programs take: pass the scenario file on.", len(link))
	case len(link) <= longestPrinted:
		v.File = link
	}
	v.Command = "leeway run LINK --json"
	if v.Link == "" {
		v.Command = "leeway run FILE --json"
	}
}

// parts is the brief as a page shows it.
func parts(of []brief.Part) []page.Part {
	var out []page.Part
	for _, p := range of {
		switch {
		case p.Number != "":
			out = append(out, page.Part{Number: p.Shown(), Unit: p.Unit})
		case p.Choice != "":
			out = append(out, page.Part{Choice: p.Shown()})
		default:
			out = append(out, page.Part{Text: p.Text})
		}
	}
	return out
}

func (f *Finished) draw(v *View) error {
	for _, m := range f.modes() {
		v.Modes = append(v.Modes, page.ReportMode{Look: string(m.Look), Name: m.Word})
	}
	var floor, tape bytes.Buffer
	picture := f.Picture()
	v.Grid = "a square of the grid is 1 m"
	if pageWide < draw.CoarseFrom*max(picture.Max.X, picture.Max.Y) {
		v.Grid = "a square of the grid is 10 m"
	}
	for i, p := range f.partings() {
		if i == mostTold {
			break
		}
		at := f.at(p.Tick).Models[shadow.Robot].Pose.Pos
		picture.Notes = append(picture.Notes, draw.Note{At: draw.Point{X: at.X, Y: at.Y}, Text: fmt.Sprint(i + 1)})
	}
	if err := draw.SVG(&floor, picture, draw.Options{Longest: pageWide, Paint: draw.Paper, Words: true}); err != nil {
		return err
	}
	if err := draw.TapeSVG(&tape, f.Lanes(), 1.12*pageWide, draw.Paper); err != nil {
		return err
	}
	v.Floor, v.Tape = raw(floor.Bytes()), raw(tape.Bytes())
	return nil
}

func raw(svg []byte) templ.Component {
	return templ.ComponentFunc(func(_ context.Context, w io.Writer) error {
		_, err := w.Write(svg)
		return err
	})
}

// at returns the recorded row at or before a tick.
func (f *Finished) at(tick int64) *shadow.Row {
	rows := f.Tape.Record.Rows
	i, found := slices.BinarySearchFunc(rows, tick, func(r shadow.Row, t int64) int { return int(r.Tick - t) })
	if !found {
		i--
	}
	return &rows[max(i, 0)]
}

// modes returns the modes that any model was in, in the order of the logic.
func (f *Finished) modes() []draw.Span {
	all := f.Run.Config().Logic.Modes
	met := make([]bool, len(all))
	for _, s := range f.Tape.Record.Spans {
		met[s.Mode] = true
	}
	var out []draw.Span
	for i := range all {
		if met[i] && all[i].Ending == 0 {
			out = append(out, draw.Span{Look: watch.Look(&all[i]), Word: all[i].Name})
		}
	}
	return out
}
