package live

import (
	"context"
	"strconv"

	"leeway/sim/shadow"
)

// Beams is what the robot's ring saw over a stretch of the tape.
type Beams struct {
	Ticks  []int64
	Ranges [][]float32 // m, a list of all beams for each tick
}

const (
	// An answer about beams holds at most so many moments, and numbers in all; of a
	// longer stretch every second moment is left out, or three of four, and so on.
	maxMoments     = 4_000
	maxBeamNumbers = 400_000
)

// Beams returns what was seen from one tick to another, as far as the tape goes.
func (l *Lab) Beams(ctx context.Context, id string, from, to int64) (b Beams, err error) {
	err = l.ask(ctx, id, func(s *Session) { b = beamsOf(&s.tape.Record, from, to) })
	return b, err
}

func beamsOf(r *shadow.Record, from, to int64) (b Beams) {
	// Row i is of tick i·Every.
	first := (max(from, 0) + r.Every - 1) / r.Every
	end := min(to/r.Every+1, int64(len(r.Rows)))
	if to < 0 || first >= end {
		return b
	}
	most := min(maxMoments, max(1, int64(maxBeamNumbers/max(1, len(r.Ranges[0])))))
	step := int64(1)
	for (end-first-1)/step >= most {
		step *= 2
	}
	// Only multiples of the step, so that one stretch after another shows the same moments.
	for i := (first + step - 1) / step * step; i < end; i += step {
		b.Ticks = append(b.Ticks, r.Rows[i].Tick)
		b.Ranges = append(b.Ranges, r.Ranges[i]) // what has been recorded does not change
	}
	return b
}

// JSON returns {"ticks": […], "ranges": [[…] …]}, the ranges to four decimals.
func (b *Beams) JSON() []byte {
	out := append([]byte(nil), `{"ticks":[`...)
	for i, t := range b.Ticks {
		if i > 0 {
			out = append(out, ',')
		}
		out = strconv.AppendInt(out, t, 10)
	}
	out = append(out, `],"ranges":[`...)
	for i, scan := range b.Ranges {
		if i > 0 {
			out = append(out, ',')
		}
		out = append(out, '[')
		for k, x := range scan {
			if k > 0 {
				out = append(out, ',')
			}
			out = appendNumber(out, float64(x))
		}
		out = append(out, ']')
	}
	return append(out, "]}"...)
}
