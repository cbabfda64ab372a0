package live

import (
	"strconv"

	"leeway/sim/shadow"
)

// maxRowsTold bounds the rows of a tape that viewers are told, and with them the
// largest message: seven minutes at the tape's own spacing, and a long tape more
// coarsely.
const maxRowsTold = 4000

// told is what viewers know of the tape's record. Rows are numbered as they are
// told: number i is of tick i·every.
type told struct {
	recast int   // Record.Recast then
	every  int64 // ticks between rows told
	rows   int
	spans  int
	marks  int
}

// known returns all that there is to tell of the tape now.
func (s *Session) known() told {
	r := &s.tape.Record
	k := told{recast: r.Recast, every: r.Every, spans: len(r.Spans), marks: len(r.Events)}
	last := r.Rows[len(r.Rows)-1].Tick
	for last/k.every >= maxRowsTold {
		k.every *= 2
	}
	k.rows = int(last/k.every) + 1
	return k
}

// continues reports whether what is known now only adds to what was told before.
func (k told) continues(before told) bool {
	return k.recast == before.recast && k.every == before.every
}

// additions is what a record holds beyond what has been told.
type additions struct {
	From      int
	Rows      []shadow.Row
	Models    int // how many a row is written of
	SpansFrom int
	Spans     []shadow.Span
	MarksFrom int
	Marks     []shadow.Event
}

// since makes a say what of all is not in before.
func (a *additions) since(before, all told, r *shadow.Record, models int) {
	a.From, a.Models = before.rows, models
	a.Rows = a.Rows[:0]
	for i := before.rows; i < all.rows; i++ {
		a.Rows = append(a.Rows, r.Rows[int64(i)*all.every/r.Every])
	}
	a.SpansFrom, a.Spans = before.spans, r.Spans[before.spans:all.spans]
	a.MarksFrom, a.Marks = before.marks, r.Events[before.marks:all.marks]
}

// append writes what a frame carries.
func (a *additions) append(b []byte) []byte {
	b = append(b, `{"from":`...)
	b = strconv.AppendInt(b, int64(a.From), 10)
	b = append(b, `,"rows":`...)
	b = appendRows(b, a.Rows, a.Models)
	b = appendCount(b, "spans_from", a.SpansFrom)
	b = append(b, `,"spans":`...)
	b = appendSpans(b, a.Spans)
	b = appendCount(b, "marks_from", a.MarksFrom)
	b = append(b, `,"marks":`...)
	b = appendMarks(b, a.Marks)
	return append(b, '}')
}

// appendWhole writes what a hello carries: a is everything from the beginning.
func (a *additions) appendWhole(b []byte, every, length int64) []byte {
	b = append(b, `{"every":`...)
	b = strconv.AppendInt(b, every, 10)
	b = append(b, `,"length":`...)
	b = strconv.AppendInt(b, length, 10)
	b = append(b, `,"rows":`...)
	b = appendRows(b, a.Rows, a.Models)
	b = append(b, `,"spans":`...)
	b = appendSpans(b, a.Spans)
	b = append(b, `,"marks":`...)
	b = appendMarks(b, a.Marks)
	return append(b, '}')
}

func appendRows(b []byte, rows []shadow.Row, models int) []byte {
	b = append(b, '[')
	for i := range rows {
		if i > 0 {
			b = append(b, ',')
		}
		b = appendRow(b, &rows[i], models)
	}
	return append(b, ']')
}

// appendRow writes the row of the robot and then of its shadows, in one flat list.
func appendRow(b []byte, r *shadow.Row, models int) []byte {
	b = append(b, '[')
	b = strconv.AppendInt(b, r.Tick, 10)
	b = appendModel(b, &r.Models[shadow.Robot])
	for _, v := range [...]float64{
		r.Belief.X, r.Belief.Y, r.Belief.Theta, r.Want.X, r.Want.Y, r.V, r.W,
		r.Wheels.Left, r.Wheels.Right, r.Command.Left, r.Command.Right,
	} {
		b = append(b, ',')
		b = appendNumber(b, v)
	}
	for w := 1; w < models; w++ {
		m := &r.Models[w]
		b = appendModel(b, m)
		if m.Ended {
			b = append(b, ",1"...)
		} else {
			b = append(b, ",0"...)
		}
	}
	return append(b, ']')
}

// appendModel writes x, y, θ, mode, side and gap, with a comma before each.
func appendModel(b []byte, m *shadow.RowModel) []byte {
	for _, v := range [...]float64{m.Pose.Pos.X, m.Pose.Pos.Y, m.Pose.Theta} {
		b = append(b, ',')
		b = appendNumber(b, v)
	}
	b = append(b, ',')
	b = strconv.AppendInt(b, int64(m.Mode), 10)
	b = append(b, ',')
	b = strconv.AppendInt(b, int64(m.Side), 10)
	b = append(b, ',')
	return appendNumber(b, m.Gap)
}

func appendSpans(b []byte, spans []shadow.Span) []byte {
	b = append(b, '[')
	for i := range spans {
		x := &spans[i]
		if i > 0 {
			b = append(b, ',')
		}
		b = append(b, '[')
		for k, v := range [...]int64{int64(x.Who), x.Tick, int64(x.Mode), int64(x.Side)} {
			if k > 0 {
				b = append(b, ',')
			}
			b = strconv.AppendInt(b, v, 10)
		}
		b = append(b, ']')
	}
	return append(b, ']')
}

func appendMarks(b []byte, marks []shadow.Event) []byte {
	b = append(b, '[')
	for i := range marks {
		x := &marks[i]
		if i > 0 {
			b = append(b, ',')
		}
		b = append(b, `{"kind":`...)
		b = appendText(b, x.Kind.String())
		b = appendCount(b, "who", int(x.Who))
		b = append(b, `,"tick":`...)
		b = strconv.AppendInt(b, x.Tick, 10)
		b = append(b, `,"text":`...)
		b = appendText(b, x.Text)
		b = append(b, '}')
	}
	return append(b, ']')
}
