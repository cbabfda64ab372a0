package shadow

import (
	"cmp"
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
	head  *Set // the farthest that has been computed
	view  *Set // where the tape is looked at, when that is not the head
	spare *Set

	marks  []*Set // snapshots of the head, one every so many ticks
	every  int64  // ticks between marks
	held   int    // by the marks, bytes, about
	pieces int    // of the floor's solids
	Record Record
}

// Record is what a tape keeps for lanes, strips and ways, of its whole length.
type Record struct {
	Every   int64 // ticks between rows
	Rows    []Row
	Spans   []Span
	Events  []Event
	Ranges  [][]float32 // of the robot's beams, m, one slice a row
	Recast  int         // how often what had been recorded was thinned or cut; in between, all lists only grow
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

// Span is a stretch of one mode in a model's lane; it lasts to the next of that model. When there are very many, the
// shortest are left out.
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
	maxHeld   = 192 << 20 // bytes; fewer marks are kept than maxMarks when they are large
	maxRows   = 72_000    // two hours at the first spacing
	maxRanges = 12 << 20  // numbers in Ranges; fewer rows are kept than maxRows when a ring has many beams
	maxSpans  = 20_000
	maxEvents = 2_000 // besides ends and partings, which are few
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
	t := &Tape{head: set, every: max(1, int64(math.Round(markEvery/c.Tick)))}
	for i := range c.Floor.Solids {
		t.pieces += len(c.Floor.Solids[i].Points)
	}
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

// LookAt goes to a tick between 0 and Length. What was changed at that very tick is done already.
func (t *Tape) LookAt(tick int64) {
	tick = min(max(tick, 0), t.head.tick)
	if tick == t.head.tick {
		if t.view != nil {
			t.spare, t.view = t.view, nil
		}
		t.head.settle()
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
	t.view.settle()
}

// settle does the changes that are due at this tick now, rather than with the next step. To enter the last of them
// again does it and those before it, and leaves the list of edits as it is.
func (s *Set) settle() {
	for _, r := range s.runs {
		edits := r.Edits()
		n, _ := slices.BinarySearchFunc(edits, s.tick+1, func(e sim.Edit, tick int64) int { return cmp.Compare(e.Tick, tick) })
		if n > 0 && edits[n-1].Tick == s.tick {
			// It was accepted when it was made, or with the config.
			_ = r.Edit(edits[n-1])
		}
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
// computed beyond, changes included, is forgotten. cut says whether anything was. On an error nothing has changed.
func (t *Tape) Edit(e sim.Edit) (cut bool, err error) {
	if err := t.Now().Edit(e); err != nil {
		return false, err
	}
	if t.view != nil {
		t.cut()
		cut = true
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
	t.keepMarks(func(s *Set) bool { return s.tick <= tick })
	t.Record.cut(t.head)
}

// cut forgets what was recorded of later than the set, and goes on from where it stands.
func (r *Record) cut(s *Set) {
	r.Recast++
	n, _ := slices.BinarySearchFunc(r.Rows, s.tick+1, func(x Row, tick int64) int { return cmp.Compare(x.Tick, tick) })
	r.Rows, r.Ranges = r.Rows[:n], r.Ranges[:n]
	r.Spans = slices.DeleteFunc(r.Spans, func(x Span) bool { return x.Tick > s.tick })
	var partings [Models]int
	r.Events = slices.DeleteFunc(r.Events, func(e Event) bool {
		if e.Kind == PartingMark { // known only some time after its tick
			partings[e.Who]++
			return partings[e.Who] > len(s.Partings(e.Who))
		}
		return e.Tick > s.tick
	})
	for w, run := range s.runs {
		p := &r.pending[w]
		p.mode, p.side, p.status = run.Engine().Mode(), run.Engine().Side(), run.Status()
		p.contacts, p.partings = len(run.Contacts()), len(s.Partings(Who(w)))
		p.switches = p.switches[:0]
		for _, x := range run.Switches() {
			if x.From != x.To {
				p.switches = append(p.switches, x.Tick+1) // seen after the step that made it
			}
		}
		p.prune(s)
		p.chatters = len(p.switches) >= chatterSwitches
		p.past = pastCeiling(run)
	}
}

// DropShadows leaves the robot alone on the tape: it is the same robot. To have shadows again takes another tape.
func (t *Tape) DropShadows() {
	if !t.head.Shadows() {
		return
	}
	for _, s := range t.marks {
		s.dropShadows()
	}
	t.head.dropShadows()
	if t.view != nil {
		t.view.dropShadows()
	}
	t.spare = nil
	r := &t.Record
	r.Recast++
	for i := range r.Rows {
		clear(r.Rows[i].Models[Robot+1:])
	}
	r.Spans = slices.DeleteFunc(r.Spans, func(s Span) bool { return s.Who != Robot })
	r.Events = slices.DeleteFunc(r.Events, func(e Event) bool { return e.Who != Robot })
}

func (s *Set) dropShadows() {
	clear(s.runs[Robot+1:])
	s.runs, s.apart = s.runs[:Robot+1], s.apart[:Robot+1]
}

// note records the head.
func (t *Tape) note() {
	s, r := t.head, &t.Record
	if s.tick%t.every == 0 && (len(t.marks) == 0 || t.marks[len(t.marks)-1].tick < s.tick) {
		t.mark()
	}
	for w := range s.runs {
		r.noteModel(s, Who(w))
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
	t.held += t.size(s)
	for len(t.marks) > maxMarks || t.held > maxHeld && len(t.marks) > 2 {
		t.every *= 2
		t.keepMarks(func(s *Set) bool { return s.tick%t.every == 0 })
	}
}

func (t *Tape) keepMarks(keep func(*Set) bool) {
	t.held = 0
	t.marks = slices.DeleteFunc(t.marks, func(s *Set) bool {
		if !keep(s) {
			return true
		}
		t.held += t.size(s)
		return false
	})
}

// What a snapshot holds, in bytes and about: of each entry of its logs, each ray of its ring, and each piece of a floor
// on which something was moved.
const (
	switchSize, contactSize, editSize = 200, 64, 72
	raySize, pieceSize, restSize      = 200, 64, 8 << 10
)

// size returns how much memory a snapshot holds, about.
func (t *Tape) size(s *Set) int {
	n := 0
	for _, r := range s.runs {
		n += restSize + len(r.Switches())*switchSize + len(r.Contacts())*contactSize + len(r.Edits())*editSize + len(r.Scan().Range)*raySize
		if slices.ContainsFunc(r.Edits(), func(e sim.Edit) bool { return e.Kind == sim.MoveSolid && e.Tick <= s.tick }) {
			n += t.pieces * pieceSize
		}
	}
	return n
}

func (r *Record) noteModel(s *Set, w Who) {
	run, p := s.runs[w], &r.pending[w]
	if mode, side := run.Engine().Mode(), run.Engine().Side(); mode != p.mode || side != p.side {
		if p.mode >= 0 && mode != p.mode {
			r.noteSwitch(s, w)
		}
		p.mode, p.side = mode, side
		r.Spans = append(r.Spans, Span{w, s.tick, mode, side})
		if len(r.Spans) > maxSpans {
			r.thinSpans()
		}
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
	past := pastCeiling(run)
	if past && !p.past {
		r.event(CeilingMark, w, s.tick, fmt.Sprintf("At %s the logic wanted %.2f m/s; up to %.2f m/s no heading asks a wheel for more than it has.",
			Clock(float64(s.tick)*s.dt), run.Wanted().Norm(), run.Config().Steer.Ceiling()))
	}
	p.past = past
}

// pastCeiling reports whether more speed is wanted than the look-ahead rule can follow exactly.
func pastCeiling(r *sim.Run) bool {
	c := r.Config()
	return c.Steer.Rule == steer.LookAhead && c.Drive.Model == drive.TwoWheels && r.Wanted().Norm() > c.Steer.Ceiling()
}

// noteSwitch keeps watch for chatter.
func (r *Record) noteSwitch(s *Set, w Who) {
	p := &r.pending[w]
	p.switches = append(p.switches, s.tick)
	p.prune(s)
	many := len(p.switches) >= chatterSwitches
	if many && !p.chatters {
		r.event(ChatterMark, w, s.tick, fmt.Sprintf("At %s the %s had switched %d times within %.0f s.", Clock(float64(s.tick)*s.dt), w, len(p.switches), chatterWindow))
	}
	p.chatters = many
}

// prune forgets the switches that are too long ago for chatter.
func (p *pending) prune(s *Set) {
	window := int64(chatterWindow / s.dt)
	p.switches = slices.DeleteFunc(p.switches, func(at int64) bool { return at < s.tick-window })
}

func (r *Record) event(k EventKind, w Who, tick int64, text string) {
	if len(r.Events) < maxEvents || k == EndMark || k == PartingMark {
		r.Events = append(r.Events, Event{k, w, tick, text})
	}
}

func (r *Record) noteRow(s *Set) {
	if n := len(r.Rows); n >= maxRows || n*len(s.runs[Robot].Scan().Range) >= maxRanges {
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

// thinSpans leaves out the shortest stays, until half of all spans are left.
func (r *Record) thinSpans() {
	r.Recast++
	for brief := r.Every; len(r.Spans) > maxSpans/2; brief *= 2 {
		var next [Models]int64
		for w := range next {
			next[w] = math.MaxInt64
		}
		for i := len(r.Spans) - 1; i >= 0; i-- {
			if x := &r.Spans[i]; x.Tick > 0 && next[x.Who]-x.Tick < brief {
				x.Mode = leftOut
			} else {
				next[x.Who] = x.Tick
			}
		}
		var last [Models]*Span // the two of one mode on either side of what was left out become one
		r.Spans = slices.DeleteFunc(r.Spans, func(x Span) bool {
			before := last[x.Who]
			if x.Mode == leftOut || before != nil && before.Mode == x.Mode && before.Side == x.Side {
				return true
			}
			last[x.Who] = &x
			return false
		})
	}
}

// leftOut is the mode of a span that is to go.
const leftOut = -1

// thin drops every other row.
func (r *Record) thin() {
	r.Recast++
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
