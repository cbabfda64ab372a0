package report

import (
	"context"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"

	"leeway/server/brief"
	"leeway/server/watch"
	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
	"leeway/web/replay"
)

// Film is all that a replay shows.
type Film = replay.Film

// ReplayPolicy returns the content security policy that a server must send with a
// replay.
func ReplayPolicy() string { return replay.Policy() }

// BuildFilm runs a valid scenario to its end, or until ctx ends, and keeps all of it.
func BuildFilm(ctx context.Context, sc *scenario.Scenario, o Options) (*Film, error) {
	f, err := Finish(ctx, sc, nil)
	if err != nil {
		return nil, err
	}
	return f.Film(o), nil
}

// Replay writes a film as a page that plays it. The same film gives the same bytes.
func Replay(w io.Writer, f *Film) error { return replay.Write(w, f) }

// Film keeps the run for a replay.
func (f *Finished) Film(o Options) *Film {
	sc, c, head := f.Scenario, f.Run.Config(), f.Headline()
	lanes := f.Lanes()
	out := &Film{
		Name: sc.Name, Purpose: sc.Purpose, Asked: f.Asked(),
		Big: head.Big, Of: head.Of, Words: head.Words, Short: head.Short,
		Ending: f.Run.Outcome().Reason, Failures: f.Shortfalls(),
		Ways:    []string{f.Way(), f.Compared(shadow.Point), f.Compared(shadow.Unicycle)},
		Brief:   brief.Text(brief.Of(sc)),
		Caution: Caution,
		Seed:    fmt.Sprint(sc.Seed), Hash: fmt.Sprintf("%016x", f.Run.Outcome().Hash), Version: o.Version,
		Tick: c.Tick, Length: f.Tape.Length(),
		Bounds: [4]float64{0, 0, sc.Floor.Width, sc.Floor.Height},
		Start:  [3]float64{c.Start.Pos.X, c.Start.Pos.Y, c.Start.Theta},
		Goal:   [3]float64{c.Goal.X, c.Goal.Y, c.GoalRadius},
		Hull:   c.Hull, Mount: c.Ring.Mount, RangeMax: c.Ring.Max, Least: c.Asked.Leeway, Top: lanes.Top,
	}
	if link := o.Base + "/open#" + sc.Encode(); len(link) <= scenario.LongLink {
		out.Link = link
	}
	if !o.Date.IsZero() {
		out.Date = o.Date.Format(dateLayout)
	}
	if c.Drive.Model == drive.TwoWheels {
		out.Track, out.Wheel = c.Drive.Track, c.Drive.WheelRadius
	}
	for _, a := range f.Advice {
		out.Advice = append(out.Advice, replay.Advice{Text: a.Text, Holds: a.Holds})
	}
	for _, b := range f.beams() {
		out.Bearings = append(out.Bearings, places(b, 4))
	}
	for i := range c.Logic.Modes {
		m := &c.Logic.Modes[i]
		out.Modes = append(out.Modes, replay.Mode{Name: m.Name, Look: string(watch.Look(m))})
	}
	for w := range shadow.Models {
		m := &f.Models[w]
		out.Models = append(out.Models, replay.Model{
			Name: w.String(), End: m.Outcome.Ticks, Ending: m.Outcome.Status.String(), Good: m.Outcome.Status == sim.Arrived,
		})
	}
	for _, r := range f.Table() {
		row := replay.Row{Label: r.Label}
		for _, c := range r.Cells {
			row.Cells = append(row.Cells, replay.Cell(c))
		}
		out.Table = append(out.Table, row)
	}
	for _, s := range f.Tape.Record.Spans {
		out.Spans = append(out.Spans, replay.Span{Who: int(s.Who), Tick: s.Tick, Mode: s.Mode, Side: int(s.Side)})
	}
	if o := f.Run.Outcome(); !math.IsInf(o.Leeway, 0) {
		out.Pin = &replay.Pin{
			Hull: pair2(o.LeewayPose.Pos), Solid: pair2(o.LeewayPoint), Tick: int64(math.Round(o.LeewayAt / c.Tick)),
			Text: head.Big, More: "closest, at " + shadow.Clock(o.LeewayAt),
		}
	}
	f.filmFloor(out)
	f.filmWords(out)
	f.filmFrames(out)
	return out
}

const dateLayout = "2 January 2006"

// beams are the bearings of the robot's beams. An ideal ring has so many that they
// would hide what there is to see: then there are none.
func (f *Finished) beams() []float64 {
	if f.Run.Config().Ring.AllRound {
		return nil
	}
	return f.Run.Scan().Bearing
}

// filmFloor keeps the floor as it stands when the run begins, and what was moved.
func (f *Finished) filmFloor(out *Film) {
	c := f.Run.Config()
	for i := range c.Floor.Solids {
		s := &c.Floor.Solids[i]
		solid := replay.Solid{Shape: string(watch.Shape(s.Kind)), Radius: places(s.Radius, 4)}
		for _, p := range s.Points {
			solid.Points = append(solid.Points, pair2(p))
		}
		out.Solids = append(out.Solids, solid)
	}
	for i := range c.Floor.Movers {
		m := &c.Floor.Movers[i]
		out.Movers = append(out.Movers, replay.Mover{Radius: m.Radius, Half: pair2(m.Half), Heading: places(m.Heading, 4)})
	}
	for _, e := range f.Run.Edits() {
		what, ok := map[sim.EditKind]string{sim.MoveGoal: "goal", sim.MoveRobot: "robot", sim.MoveSolid: "solid", sim.MoveMover: "mover"}[e.Kind]
		if ok {
			out.Edits = append(out.Edits, replay.Edit{Tick: e.Tick, What: what, Index: e.Index, X: places(e.Pos.X, 4), Y: places(e.Pos.Y, 4)})
		}
	}
}

// filmWords keeps why the models switched, and what happened when.
func (f *Finished) filmWords(out *Film) {
	l := f.Run.Config().Logic
	dt := f.Run.Config().Tick
	set := f.Tape.Now()
	for w := range shadow.Models {
		switches := set.Run(w).Switches()
		for i := range switches {
			s := &switches[i]
			// Decided at a tick, seen at its end.
			out.Whys = append(out.Whys, replay.Why{Who: int(w), Tick: int64(math.Round(s.Time/dt)) + 1, Mode: l.Transitions[s.Transition].To, Text: l.Why(s)})
		}
	}
	slices.SortStableFunc(out.Whys, func(a, b replay.Why) int { return int(a.Tick - b.Tick) })
	for _, e := range f.Tape.Record.Events {
		text := e.Text
		if e.Kind == shadow.EndMark { // a run speaks of itself as the robot
			text = strings.ReplaceAll(text, "robot", e.Who.String())
		}
		out.Marks = append(out.Marks, replay.Mark{Kind: e.Kind.String(), Who: int(e.Who), Tick: e.Tick, Text: text})
	}
	for _, c := range Changes(f.Scenario) {
		out.Marks = append(out.Marks, replay.Mark{Kind: "change", Tick: c.Tick, Text: c.Text})
	}
	slices.SortStableFunc(out.Marks, func(a, b replay.Mark) int { return int(a.Tick - b.Tick) })
}

// filmFrames keeps the rows of the tape, and the very end, which falls between two.
func (f *Finished) filmFrames(out *Film) {
	rec := &f.Tape.Record
	movers := f.newTimetable()
	beams := len(out.Bearings)
	for i := range rec.Rows {
		row := &rec.Rows[i]
		k := replay.Frame{Tick: row.Tick, Belief: [3]float64{row.Belief.X, row.Belief.Y, row.Belief.Theta}, Movers: movers.at(row.Tick)}
		for w := range row.Models {
			m := &row.Models[w]
			k.Models[w] = replay.Body{X: m.Pose.Pos.X, Y: m.Pose.Pos.Y, Heading: m.Pose.Theta, Gap: m.Gap}
		}
		if beams > 0 {
			k.Ranges = rec.Ranges[i]
		}
		out.Frames = append(out.Frames, k)
	}
	last := &rec.Rows[len(rec.Rows)-1]
	if last.Tick == out.Length {
		return
	}
	belief := f.Run.Belief()
	k := replay.Frame{Tick: out.Length, Belief: [3]float64{belief.X, belief.Y, belief.Theta}, Movers: movers.at(out.Length)}
	for w := range shadow.Models {
		run := f.Tape.Now().Run(w)
		p := run.Pose()
		k.Models[w] = replay.Body{X: p.Pos.X, Y: p.Pos.Y, Heading: p.Theta, Gap: min(run.Gap(), shadow.GapSight)}
	}
	if beams > 0 {
		for _, r := range f.Run.Scan().Range {
			k.Ranges = append(k.Ranges, float32(r))
		}
	}
	out.Frames = append(out.Frames, k)
}

// timetable tells where the movers were, which is a function of time and edits alone.
type timetable struct {
	world *floor.World
	dt    float64
	edits []sim.Edit
	n     int // movers
}

func (f *Finished) newTimetable() *timetable {
	c := f.Run.Config()
	return &timetable{world: f.floor.NewWorld(), dt: c.Tick, edits: f.Run.Edits(), n: len(c.Floor.Movers)}
}

// at returns where they were at a tick; ticks must not decrease from call to call.
func (t *timetable) at(tick int64) [][2]float64 {
	if t.n == 0 {
		return nil
	}
	for len(t.edits) > 0 && t.edits[0].Tick < tick {
		if e := &t.edits[0]; e.Kind == sim.MoveMover {
			t.world.Advance(float64(e.Tick) * t.dt)
			t.world.MoveMover(e.Index, e.Pos)
		}
		t.edits = t.edits[1:]
	}
	t.world.Advance(float64(tick) * t.dt)
	out := make([][2]float64, t.n)
	for i := range out {
		out[i] = pair2(t.world.MoverAt(i))
	}
	return out
}

func pair2(v geom.Vec) [2]float64 { return [2]float64{places(v.X, 4), places(v.Y, 4)} }

// places rounds to so many decimals: film heads are text.
func places(v float64, decimals int) float64 {
	k := math.Pow(10, float64(decimals))
	return math.Round(v*k)/k + 0
}
