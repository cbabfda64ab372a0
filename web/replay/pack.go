package replay

import (
	"bytes"
	"compress/flate"
	"encoding/base64"
	"encoding/binary"
	"encoding/json"
	"fmt"
	"math"
	"slices"
)

// A film is packed as text that any HTML can hold: base64 of deflate (RFC 1951) of
//
//	length of the head (varint), the head (JSON: a Film, and "columns"), the columns,
//	the points of the solids
//
// A column is one number of every frame, in steps of its quantum: the first as it
// is and the others as differences, all of them varints in zigzag (as in Protocol
// Buffers' sint64). "columns" lists name, quantum and how many there are in a row:
// the columns of the movers, two each, and of the beams. Points are x and y in turn,
// in millimetres, each as the difference from the one before.

// column is a group of columns of one kind.
type column struct {
	Name    string  `json:"name"`
	Quantum float64 `json:"quantum"`
	Count   int     `json:"count"`
	value   func(f *Frame, i int) float64
}

const (
	millimetre  = 0.001
	milliradian = 0.001
	centimetre  = 0.01
)

// columns are what is kept of a frame, with beams or without.
func columns(f *Film, beams bool) []column {
	of := func(who int, field func(*Body) float64) func(*Frame, int) float64 {
		return func(f *Frame, _ int) float64 { return field(&f.Models[who]) }
	}
	cs := []column{{"tick", 1, 1, func(f *Frame, _ int) float64 { return float64(f.Tick) }}}
	for who, name := range [Models]string{"robot", "point", "unicycle"} {
		cs = append(cs,
			column{name + ".x", millimetre, 1, of(who, func(b *Body) float64 { return b.X })},
			column{name + ".y", millimetre, 1, of(who, func(b *Body) float64 { return b.Y })},
			column{name + ".heading", milliradian, 1, of(who, func(b *Body) float64 { return b.Heading })},
			column{name + ".gap", millimetre, 1, of(who, func(b *Body) float64 { return b.Gap })},
		)
	}
	cs = append(cs, column{"belief", millimetre, 3, func(f *Frame, i int) float64 { return f.Belief[i] }})
	if n := len(f.Movers); n > 0 {
		cs = append(cs, column{"movers", millimetre, 2 * n, func(f *Frame, i int) float64 { return f.Movers[i/2][i%2] }})
	}
	if n := len(f.Bearings); n > 0 && beams {
		cs = append(cs, column{"beams", centimetre, n, func(f *Frame, i int) float64 { return float64(f.Ranges[i]) }})
	}
	return cs
}

// pack packs a film with every so-manieth frame, the first and the last included.
func pack(f *Film, every int, beams bool) (string, error) {
	cs := columns(f, beams)
	frames := kept(f.Frames, every)
	head, err := json.Marshal(struct {
		*Film
		Columns []column `json:"columns"`
		Frames  int      `json:"frames"`
	}{f, cs, len(frames)})
	if err != nil {
		return "", err
	}
	raw := binary.AppendUvarint(nil, uint64(len(head)))
	raw = append(raw, head...)
	for _, c := range cs {
		for i := range c.Count {
			last := int64(0)
			for _, k := range frames {
				v := int64(math.Round(bounded(c.value(&f.Frames[k], i)) / c.Quantum))
				raw = binary.AppendVarint(raw, v-last)
				last = v
			}
		}
	}
	var last [2]int64
	for i := range f.Solids {
		for _, p := range f.Solids[i].Points {
			for k := range last {
				v := int64(math.Round(bounded(p[k]) / millimetre))
				raw = binary.AppendVarint(raw, v-last[k])
				last[k] = v
			}
		}
	}
	var b bytes.Buffer
	w, err := flate.NewWriter(&b, flate.DefaultCompression)
	if err != nil {
		return "", err
	}
	if _, err := w.Write(raw); err != nil {
		return "", err
	}
	if err := w.Close(); err != nil {
		return "", err
	}
	return base64.StdEncoding.EncodeToString(b.Bytes()), nil
}

// kept returns the places of the frames that are packed.
func kept(frames []Frame, every int) []int {
	var out []int
	for i := range frames {
		if i%every == 0 || i == len(frames)-1 {
			out = append(out, i)
		}
	}
	return out
}

// bounded keeps what is no number out of a film, and what no floor has.
func bounded(v float64) float64 {
	if math.IsNaN(v) {
		return 0
	}
	return math.Max(-1e6, math.Min(1e6, v))
}

// coarser are the ways to pack, from the finest on.
var coarser = []struct {
	every int
	beams bool
}{{1, true}, {2, true}, {2, false}, {3, false}, {5, false}, {8, false}, {12, false}, {20, false}, {40, false}, {80, false}}

// fit packs a film into at most room bytes: with fewer frames, and without the
// beams, when that is what it takes.
func fit(f *Film, room int) (string, error) {
	if err := f.check(); err != nil {
		return "", err
	}
	for _, c := range coarser {
		text, err := pack(f, c.every, c.beams)
		if err != nil || len(text) <= room {
			return text, err
		}
	}
	return "", fmt.Errorf("the floor is too large for a replay of %d kB", MaxBytes/1000)
}

// check finds what would make a page that stops half way.
func (f *Film) check() error {
	if len(f.Frames) == 0 || len(f.Modes) == 0 || len(f.Models) != Models {
		return fmt.Errorf("a film needs frames, modes and %d models; it has %d, %d and %d", Models, len(f.Frames), len(f.Modes), len(f.Models))
	}
	for i := range f.Frames {
		k := &f.Frames[i]
		if len(k.Movers) != len(f.Movers) || len(k.Ranges) != len(f.Bearings) {
			return fmt.Errorf("frame %d has %d movers and %d ranges for %d movers and %d beams", i, len(k.Movers), len(k.Ranges), len(f.Movers), len(f.Bearings))
		}
	}
	if !slices.IsSortedFunc(f.Frames, func(a, b Frame) int { return int(a.Tick - b.Tick) }) {
		return fmt.Errorf("the frames are not in order")
	}
	return nil
}
