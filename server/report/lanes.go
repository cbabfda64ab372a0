package report

import (
	"fmt"

	"leeway/server/watch"
	"leeway/sim"
	"leeway/sim/logic"
	"leeway/sim/shadow"
	"leeway/web/page/draw"
)

// Lanes returns the tape of the run as a drawing: the lanes of the three models and
// how near they came to anything solid.
func (f *Finished) Lanes() *draw.Tape {
	r, c := &f.Tape.Record, f.Run.Config()
	dt := c.Tick
	t := &draw.Tape{
		Title:  fmt.Sprintf("Modes and leeway of %s over time", f.Scenario.Name),
		Length: float64(f.Tape.Length()) * dt,
		Asked:  c.Asked.Leeway,
	}
	for _, w := range Columns {
		o := &f.Models[w].Outcome
		lane := draw.Lane{Name: w.String(), End: o.Time, Ending: fmt.Sprintf("%s %s", watch.Clock(o.Time), o.Status), EndLook: endLook(o.Status)}
		for _, s := range r.Spans {
			if s.Who != w {
				continue
			}
			from := float64(s.Tick) * dt
			if n := len(lane.Spans); n > 0 {
				lane.Spans[n-1].To = from
			}
			mode := &c.Logic.Modes[s.Mode]
			lane.Spans = append(lane.Spans, draw.Span{From: from, To: o.Time, Look: watch.Look(mode), Word: word(mode, s.Side)})
		}
		t.Lanes = append(t.Lanes, lane)
		pattern := [shadow.Models]draw.Pattern{shadow.Robot: draw.Plain, shadow.Point: draw.Dotted, shadow.Unicycle: draw.Dashed}[w]
		t.Gaps = append(t.Gaps, draw.Curve{Pattern: pattern, Points: f.gaps(w)})
	}
	t.Top = top(t)
	n := 0
	for i, p := range f.partings() {
		if i == mostTold {
			break
		}
		t.Marks = append(t.Marks, draw.Mark{At: p.Time, Text: fmt.Sprint(i + 1)})
	}
	for _, e := range r.Events {
		if e.Kind == shadow.ContactMark && e.Who == shadow.Robot {
			if n++; n > 200 {
				break
			}
			t.Marks = append(t.Marks, draw.Mark{At: float64(e.Tick) * dt})
		}
	}
	return t
}

// word is what is written into a lane.
func word(m *logic.Mode, s logic.Side) string {
	if m.Behaviour == logic.WallFollowing && s != logic.NoSide {
		return m.Name + ", " + s.String()
	}
	return m.Name
}

func endLook(s sim.Status) draw.Look {
	if s == sim.Arrived {
		return draw.LookDone
	}
	return draw.LookFail
}

// gaps is how near a model came to anything solid over time, to its end. The robot's
// least gap, which may fall between two rows, is put in.
func (f *Finished) gaps(w shadow.Who) []draw.Point {
	dt := f.Run.Config().Tick
	o := &f.Models[w].Outcome
	var out []draw.Point
	put := false
	for _, row := range f.Tape.Record.Rows {
		t := float64(row.Tick) * dt
		if !put && t >= o.LeewayAt && o.Leeway < shadow.GapSight {
			out = append(out, draw.Point{X: o.LeewayAt, Y: o.Leeway})
			put = true
		}
		out = append(out, draw.Point{X: t, Y: row.Models[w].Gap})
		if row.Models[w].Ended {
			break
		}
	}
	return out
}

// top is the largest gap worth showing: what happens near things counts.
func top(t *draw.Tape) float64 {
	most := 0.0
	for _, c := range t.Gaps {
		for _, p := range c.Points {
			most = max(most, p.Y)
		}
	}
	return min(max(most, 2*t.Asked), max(1, 4*t.Asked))
}
