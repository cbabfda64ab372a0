package shadow

import (
	"fmt"
	"math"
	"slices"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/steer"
)

// Tape is a Set with its past. It can be brought back to any tick, exactly; going
// on from there shows what happened, bit for bit, and a change made there starts
// another future.
type Tape struct {
	m     *floor.Map
	cfg   sim.Config
	head  *Set // the farthest that has been computed
	view  *Set // where the tape is looked at, when that is not the head
	spare *Set

	marks   []*Set // snapshots of the head, one every markEvery ticks
	every   int64  // ticks between marks
	Record  Record
	lastGap float64
}

// Record is what a tape keeps for lanes, strips and ways, of its whole length.
type Record struct {
	Every   int64 // ticks between rows
	Rows    []Row
	Spans   []Span
	Events  []Event
	Ranges  [][]float32 // of the robot's beams, m, one slice a row
	pending [Models]pending
}

// Row is one sampled moment.
type Row struct {
	Tick    int64
	Models  [Models]RowModel // a shadow that the tape does not have is zero
	Belief  drive.Estimate
	Want    geom.Vec     // u, m/s, in the believed frame
	V, W    float64      // actual speed and turning of the robot, m/s and rad/s
	Wheels  drive.Wheels // actual, rad/s
	Command drive.Wheels // as commanded, rad/s
}

// RowModel is one model at a sampled moment.
type RowModel struct {
	Pose  geom.Pose
	Mode  int8
	Side  logic.Side
	Ended bool
	Gap   float64 // m; GapSight where nothing is nearer
}

// GapSight is how far, in metres, the strip of gaps looks.
const GapSight = 3.0

// Span is a stretch of one mode in a model's lane; it lasts to the next of that model.
type Span struct {
	Who  Who
	Tick int64
	Mode int
	Side logic.Side
}

// EventKind is a kind of mark on the tape.
type EventKind uint8

// The kinds of marks.
const (
	ContactMark EventKind = iota // the hull touched something
	PartingMark                  // a shadow and the robot separated
	ChatterMark                  // many switches in a short time
	CeilingMark                  // more speed was wanted than the look-ahead rule can follow exactly
	EndMark                      // a model ended
)

// String returns the kind's name.
func (k EventKind) String() string {
	return [...]string{"contact", "parting", "chatter", "ceiling", "end"}[k]
}

// Event is a mark on the tape.
type Event struct {
	Kind EventKind
	Who  Who
	Tick int64
	Text string
}

type pending struct {
	mode     int
	side     logic.Side
	status   sim.Status
	contacts int
	switches []int64 // ticks of the latest
	chatters bool
	past     bool // past the ceiling
	partings int
}

const (
	rowEvery  = 0.1 // s between rows
	markEvery = 5   // s between snapshots: stepping that far is a small part of the 100 ms in which a past tick must be shown
	maxMarks  = 512
	maxRows   = 72_000 // two hours at the first spacing
	maxEvents = 2_000
	// Chatter is marked from chatterSwitches switches within chatterWindow seconds (common practice: a mode that
	// does not last half a second has not done anything).
	chatterSwitches, chatterWindow = 5, 2.0
)

// NewTape returns a tape at tick 0.
func NewTape(m *floor.Map, c sim.Config, shadows bool) (*Tape, error) {
	set, err := NewOn(m, c, shadows)
	if err != nil {
		return nil, err
	}
	t := &Tape{m: m, cfg: c, head: set, every: max(1, int64(math.Round(markEvery/c.Tick)))}
	t.Record.Every = max(1, int64(math.Round(rowEvery/c.Tick)))
	for w := range Models {
		t.Record.pending[w].mode = -1
	}
	t.note()
	return t, nil
}

// Now returns the set where the tape is looked at. Read only; it changes with the next call of a method of the tape.
func (t *Tape) Now() *Set {
	if t.view != nil {
		return t.view
	}
	return t.head
}

// Length returns the farthest tick that has been computed.
func (t *Tape) Length() int64 { return t.head.tick }

// AtHead reports whether the tape is looked at where it ends.
func (t *Tape) AtHead() bool { return t.view == nil }

// Done reports whether stepping on would do nothing.
func (t *Tape) Done() bool { return t.view == nil && t.head.Done() }

// Step goes on by one tick from where the tape is looked at: through what is known, and beyond its end by
// computing more.
func (t *Tape) Step() {
	if t.view != nil {
		t.view.Step()
		if t.view.tick >= t.head.tick {
			t.spare, t.view = t.view, nil
		}
		return
	}
	if t.head.Done() {
		return
	}
	t.head.Step()
	t.note()
}

// LookAt goes to a tick between 0 and Length.
func (t *Tape) LookAt(tick int64) {
	tick = min(max(tick, 0), t.head.tick)
	if tick == t.head.tick {
		if t.view != nil {
			t.spare, t.view = t.view, nil
		}
		return
	}
	if t.view == nil {
		if t.spare == nil {
			t.spare = new(Set)
		}
		t.view, t.spare = t.spare, nil
		t.view.tick = math.MaxInt64
	}
	if i := t.markBefore(tick); t.view.tick > tick || t.marks[i].tick > t.view.tick {
		t.view.CopyFrom(t.marks[i])
		for w, r := range t.view.runs {
			r.Foresee(t.head.runs[w])
		}
	}
	for t.view.tick < tick {
		t.view.Step()
	}
}

// markBefore returns the place of the last snapshot at or before tick. There is always one at tick 0.
func (t *Tape) markBefore(tick int64) int {
	i, found := slices.BinarySearchFunc(t.marks, tick, func(s *Set, tick int64) int {
		switch {
		case s.tick < tick:
			return -1
		case s.tick > tick:
			return 1
		}
		return 0
	})
	if !found {
		i--
	}
	return i
}

// Edit does a person's change where the tape is looked at. In the past that cuts the tape there: what had been
// computed beyond, changes included, is forgotten. cut says whether anything was.
func (t *Tape) Edit(e sim.Edit) (cut bool, err error) {
	if t.view != nil {
		t.cut()
		cut = true
	}
	if err := t.head.Edit(e); err != nil {
		return cut, err
	}
	t.note()
	return cut, nil
}

// cut makes where the tape is looked at its end.
func (t *Tape) cut() {
	tick := t.view.tick
	t.head, t.spare, t.view = t.view, t.head, nil
	for _, r := range t.head.runs {
		r.Forget()
	}
	t.marks = t.marks[:t.markBefore(tick)+1]
	r := &t.Record
	n, _ := slices.BinarySearchFunc(r.Rows, tick, func(x Row, tick int64) int { return int(x.Tick - tick) })
	for n < len(r.Rows) && r.Rows[n].Tick <= tick {
		n++
	}
	r.Rows, r.Ranges = r.Rows[:n], r.Ranges[:n]
	r.Spans = slices.DeleteFunc(r.Spans, func(s Span) bool { return s.Tick > tick })
	r.Events = slices.DeleteFunc(r.Events, func(e Event) bool { return e.Tick > tick })
	for w := range t.head.runs {
		run, p := t.head.runs[w], &r.pending[w]
		p.mode, p.side, p.status = run.Engine().Mode(), run.Engine().Side(), run.Status()
		p.contacts, p.partings = run.Outcome().Contacts, len(t.head.Partings(Who(w)))
		p.switches = slices.DeleteFunc(p.switches, func(at int64) bool { return at > tick })
		p.chatters, p.past = false, false
	}
}

// note records the head.
func (t *Tape) note() {
	s, r := t.head, &t.Record
	if s.tick%t.every == 0 && (len(t.marks) == 0 || t.marks[len(t.marks)-1].tick < s.tick) {
		t.mark()
	}
	for w := range s.runs {
		r.noteModel(s, Who(w), &t.cfg)
	}
	if s.tick%r.Every == 0 && (len(r.Rows) == 0 || r.Rows[len(r.Rows)-1].Tick < s.tick) {
		r.noteRow(s)
	}
}

// mark takes a snapshot of the head; when there are many, every other one goes.
func (t *Tape) mark() {
	s := new(Set)
	s.CopyFrom(t.head)
	t.marks = append(t.marks, s)
	if len(t.marks) > maxMarks {
		t.every *= 2
		t.marks = slices.DeleteFunc(t.marks, func(s *Set) bool { return s.tick%t.every != 0 })
	}
}

func (r *Record) noteModel(s *Set, w Who, c *sim.Config) {
	run, p := s.runs[w], &r.pending[w]
	if mode, side := run.Engine().Mode(), run.Engine().Side(); mode != p.mode || side != p.side {
		if p.mode >= 0 && mode != p.mode {
			r.noteSwitch(s, w)
		}
		p.mode, p.side = mode, side
		r.Spans = append(r.Spans, Span{w, s.tick, mode, side})
	}
	o := run.Status()
	if o != p.status {
		if o != sim.Running {
			r.event(EndMark, w, s.tick, run.Outcome().Reason)
		}
		p.status = o
	}
	if n := len(run.Contacts()); n > p.contacts {
		at := run.Contacts()[n-1].Point
		r.event(ContactMark, w, s.tick, fmt.Sprintf("At %s the hull of the %s touched something at %.2f, %.2f.", Clock(float64(s.tick)*s.dt), w, at.X, at.Y))
		p.contacts = n
	}
	if w != Robot {
		for _, x := range s.Partings(w)[p.partings:] {
			r.event(PartingMark, w, x.Tick, x.Text)
		}
		p.partings = len(s.Partings(w))
		return
	}
	if c.Steer.Rule == steer.LookAhead && run.Config().Drive.Model == drive.TwoWheels {
		past := run.Wanted().Norm() > c.Steer.Ceiling()
		if past && !p.past {
			r.event(CeilingMark, w, s.tick, fmt.Sprintf("At %s the logic wanted %.2f m/s; up to %.2f m/s no heading asks a wheel for more than it has.",
				Clock(float64(s.tick)*s.dt), run.Wanted().Norm(), c.Steer.Ceiling()))
		}
		p.past = past
	}
}

// noteSwitch keeps watch for chatter.
func (r *Record) noteSwitch(s *Set, w Who) {
	p := &r.pending[w]
	window := int64(chatterWindow / s.dt)
	p.switches = slices.DeleteFunc(append(p.switches, s.tick), func(at int64) bool { return at < s.tick-window })
	many := len(p.switches) >= chatterSwitches
	if many && !p.chatters {
		r.event(ChatterMark, w, s.tick, fmt.Sprintf("At %s the %s had switched %d times within %.0f s.", Clock(float64(s.tick)*s.dt), w, len(p.switches), chatterWindow))
	}
	p.chatters = many
}

func (r *Record) event(k EventKind, w Who, tick int64, text string) {
	if len(r.Events) < maxEvents {
		r.Events = append(r.Events, Event{k, w, tick, text})
	}
}

func (r *Record) noteRow(s *Set) {
	if len(r.Rows) >= maxRows {
		r.thin()
		if s.tick%r.Every != 0 {
			return
		}
	}
	robot := s.runs[Robot]
	row := Row{Tick: s.tick, Belief: robot.Belief(), Want: robot.Wanted(), Wheels: robot.Drive().Turning(), Command: robot.Command()}
	row.V, row.W = robot.Twist()
	for w, run := range s.runs {
		m := RowModel{Pose: run.Pose(), Mode: int8(run.Engine().Mode()), Side: run.Engine().Side(), Ended: run.Status() != sim.Running, Gap: GapSight}
		if n, ok := run.World().Nearest(m.Pose.Pos, GapSight+run.Config().Hull); ok {
			m.Gap = n.Distance - run.Config().Hull
		}
		row.Models[w] = m
	}
	scan := robot.Scan()
	ranges := make([]float32, len(scan.Range))
	for i, x := range scan.Range {
		ranges[i] = float32(x)
	}
	r.Rows, r.Ranges = append(r.Rows, row), append(r.Ranges, ranges)
}

// thin drops every other row.
func (r *Record) thin() {
	r.Every *= 2
	n := 0
	for i, x := range r.Rows {
		if x.Tick%r.Every == 0 {
			r.Rows[n], r.Ranges[n] = x, r.Ranges[i]
			n++
		}
	}
	r.Rows, r.Ranges = r.Rows[:n], r.Ranges[:n]
}

// Way returns the way of a model so far, as recorded.
func (r *Record) Way(w Who) []geom.Vec {
	way := make([]geom.Vec, 0, len(r.Rows))
	for i := range r.Rows {
		m := &r.Rows[i].Models[w]
		way = append(way, m.Pose.Pos)
		if m.Ended {
			break
		}
	}
	return way
}
