package report

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"leeway/sim"
	"leeway/sim/shadow"
)

// Columns is the order in which models are told of, from the simplest on.
var Columns = [shadow.Models]shadow.Who{shadow.Point, shadow.Unicycle, shadow.Robot}

// Row is one measure of all models, in the order of Columns.
type Row struct {
	Label string
	Cells [shadow.Models]Cell
}

// Cell is one measure of one model.
type Cell struct {
	Text string // "–" for what a model has not
	Bad  bool   // falls short of what is asked, which only the robot can
}

const none = "–"

// Table returns the verdict as a table of the three models.
func (f *Finished) Table() []Row {
	asked := f.Run.Config().Asked
	rows := []Row{
		{Label: "arrives after"}, {Label: "leeway"}, {Label: "way against shortest"}, {Label: "mode switches"},
		{Label: "farthest from the point"}, {Label: "wheels at their limit"}, {Label: "lost track by"},
	}
	for i, w := range Columns {
		m := &f.Models[w]
		o := &m.Outcome
		robot := w == shadow.Robot
		cells := []Cell{
			{o.Status.String(), robot && o.Status != sim.Arrived},
			{none, robot && o.Leeway < asked.Leeway},
			{none, false},
			{strconv.Itoa(o.Switches), robot && asked.Switches >= 0 && o.Switches > asked.Switches},
			{none, false}, {none, false}, {none, false},
		}
		if o.Status == sim.Arrived {
			cells[0].Text = fmt.Sprintf("%.1f s", o.Time)
		}
		if !math.IsInf(o.Leeway, 0) {
			cells[1].Text = metres(o.Leeway)
			if cells[1].Bad {
				cells[1].Text, _ = pair(o.Leeway, asked.Leeway)
			}
		}
		if m.Shortest > 0 && o.Status == sim.Arrived { // a way that does not get there is no detour
			cells[2].Text = fmt.Sprintf("%.2f×", o.Way/m.Shortest)
		}
		if w != shadow.Point {
			cells[4].Text = metres(m.FromPoint)
		}
		if m.Limits {
			cells[5].Text = percent(o.Saturated)
		}
		if m.Reckons {
			cells[6].Text = metres(o.EstimateError)
		}
		for k := range rows {
			rows[k].Cells[i] = cells[k]
		}
	}
	return rows
}

// Headline is the verdict in a number and a few words.
type Headline struct {
	Big   string // "0.05 m"; none where nothing solid was ever near
	Of    string // "of leeway, where 0.10 m is asked."
	Short bool   // falls short of what is asked in any way
	Words string // "This run falls short."
}

// Headline returns the verdict of the robot.
func (f *Finished) Headline() Headline {
	o, asked := f.Run.Outcome(), f.Run.Config().Asked
	h := Headline{Big: none, Short: f.Short(), Words: "This run keeps what is asked."}
	least := metres(asked.Leeway)
	switch {
	case o.Leeway < asked.Leeway:
		h.Big, least = pair(o.Leeway, asked.Leeway)
	case !math.IsInf(o.Leeway, 0):
		h.Big = metres(o.Leeway)
	}
	h.Of = fmt.Sprintf("of leeway, where %s is asked.", least)
	if h.Short {
		h.Words = "This run falls short."
	}
	return h
}

// Shortfalls says what of that which is asked the robot did not keep.
func (f *Finished) Shortfalls() []string {
	var out []string
	o, asked := f.Run.Outcome(), f.Run.Config().Asked
	if o.Status != sim.Arrived {
		out = append(out, fmt.Sprintf("It did not arrive within the %s asked.", seconds(asked.Within)))
	}
	if o.Leeway < asked.Leeway {
		got, least := pair(o.Leeway, asked.Leeway)
		did := "came within " + got + " of"
		if o.Contacts > 0 {
			did = "touched"
		}
		out = append(out, fmt.Sprintf("It %s something at %s, near %.2f, %.2f; it is to keep %s.",
			did, shadow.Clock(o.LeewayAt), o.LeewayPoint.X, o.LeewayPoint.Y, least))
	}
	if asked.Switches >= 0 && o.Switches > asked.Switches {
		out = append(out, fmt.Sprintf("It switched modes %d times, where %d at most is asked.", o.Switches, asked.Switches))
	}
	return out
}

// Asked says what is asked of the robot.
func (f *Finished) Asked() string {
	a := f.Run.Config().Asked
	text := fmt.Sprintf("Asked: to reach the goal within %s, keeping %s of leeway", seconds(a.Within), metres(a.Leeway))
	if a.Switches >= 0 {
		text += fmt.Sprintf(", with at most %d changes of mode", a.Switches)
	}
	return text + "."
}

// Compared says of a shadow how far it and the robot were from one another.
func (f *Finished) Compared(w shadow.Who) string {
	m := &f.Models[w]
	return fmt.Sprintf("The %s and the robot were at most %s apart at the same time, at %s, and %s in the root mean square; as ways alone, time left aside, %s.",
		w, metres(m.Deviation.Largest), shadow.Clock(m.Deviation.At), metres(m.Deviation.RMS), metres(m.Frechet))
}

// FirstParting says in words where a shadow and the robot first parted; a different
// decision tells more than a drift before it.
func (f *Finished) FirstParting(w shadow.Who) string {
	if p, ok := shadow.MostTelling(f.Models[w].Partings); ok {
		return p.Text
	}
	return fmt.Sprintf("It never parted from the %s.", w)
}

// Way says how long the way was and how long it need have been.
func (f *Finished) Way() string {
	m := &f.Models[shadow.Robot]
	if m.NoShortest != "" {
		return fmt.Sprintf("It drove %s. There is no shortest way: %s.", metres(m.Outcome.Way), m.NoShortest)
	}
	return fmt.Sprintf("It drove %s; the shortest way of its hull is %s.", metres(m.Outcome.Way), metres(m.Shortest))
}

func metres(v float64) string { return fixed(v, 2) + " m" }

// pair writes two lengths with as many decimals as it takes to tell them apart.
func pair(a, b float64) (string, string) {
	for d := 2; ; d++ {
		x, y := fixed(a, d), fixed(b, d)
		if x != y || a == b || d == 5 {
			return x + " m", y + " m"
		}
	}
}

// fixed writes a number with a true minus sign, and none before a zero.
func fixed(v float64, decimals int) string {
	s := strconv.FormatFloat(math.Abs(v), 'f', decimals, 64)
	if v < 0 && strings.Trim(s, "0.") != "" {
		return "−" + s
	}
	return s
}

// seconds writes a time as short as it can be.
func seconds(v float64) string { return strconv.FormatFloat(v, 'f', -1, 64) + " s" }

// percent writes a share; something is never written as 0 %.
func percent(share float64) string {
	if share > 0 && share < 0.005 {
		return "<1 %"
	}
	return fmt.Sprintf("%.0f %%", 100*share)
}

// Caution is said wherever a run is judged.
const Caution = "A simulation says nothing about the safety of people. Protective stops, speeds and separation distances are the business of " +
	"standards such as ISO 13855, ISO 3691-4 and ISO 13482, of local codes, and of competent people on site."
