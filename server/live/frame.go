package live

import (
	"math"
	"strconv"
	"unicode/utf8"
)

// frame is what has changed: the message that is sent about thirty times a second.
type frame struct {
	Tick      int64 // where the tape is looked at, as all that follows
	Time      float64
	Playing   bool
	Speed     float64
	Viewers   int
	Pose      [3]float64
	Belief    [3]float64
	Mode      int
	Side      int
	Since     float64
	Why       string
	Ranges    []float64
	Hits      []bool
	Gap       float64 // NaN or infinite: nothing is there, written null
	Leeway    float64 // likewise
	Closest   [5]float64
	Way       float64
	Switches  int
	Contacts  int
	Saturated float64
	Estimate  float64
	Movers    [][2]float64
	Goal      [2]float64
	Moved     []movedSolid
	Status    string
	Reason    string
	Hash      uint64
	Length    int64
	AtHead    bool
	Shadows   []shadowNow // none when they are off
	Exits     []exitNow
	Verdict   verdict
	Tape      additions
}

type movedSolid struct {
	ID   string
	X, Y float64
}

// append writes the frame as JSON. It is written by hand because it is written
// so often: encoding/json takes several times as long.
func (f *frame) append(b []byte) []byte {
	b = append(b, `{"kind":"frame","tick":`...)
	b = strconv.AppendInt(b, f.Tick, 10)
	b = appendField(b, "time", f.Time)
	b = append(b, `,"playing":`...)
	b = strconv.AppendBool(b, f.Playing)
	b = append(b, `,"speed":`...)
	b = strconv.AppendFloat(b, f.Speed, 'f', -1, 64)
	b = appendCount(b, "viewers", f.Viewers)
	b = append(b, `,"pose":`...)
	b = appendList(b, f.Pose[:])
	b = append(b, `,"belief":`...)
	b = appendList(b, f.Belief[:])
	b = appendCount(b, "mode", f.Mode)
	b = appendCount(b, "side", f.Side)
	b = appendField(b, "since", f.Since)
	b = append(b, `,"why":`...)
	b = appendText(b, f.Why)
	b = append(b, `,"ranges":`...)
	b = appendList(b, f.Ranges)
	b = append(b, `,"hits":"`...)
	for _, h := range f.Hits {
		if h {
			b = append(b, '1')
		} else {
			b = append(b, '0')
		}
	}
	b = append(b, '"')
	b = appendField(b, "gap", f.Gap)
	b = appendField(b, "leeway", f.Leeway)
	b = append(b, `,"closest":`...)
	if finite(f.Leeway) {
		b = appendList(b, f.Closest[:])
	} else {
		b = append(b, `null`...)
	}
	b = appendField(b, "way", f.Way)
	b = appendCount(b, "switches", f.Switches)
	b = appendCount(b, "contacts", f.Contacts)
	b = appendField(b, "saturated", f.Saturated)
	b = appendField(b, "estimate_error", f.Estimate)
	b = append(b, `,"movers":[`...)
	for i := range f.Movers {
		if i > 0 {
			b = append(b, ',')
		}
		b = appendList(b, f.Movers[i][:])
	}
	b = append(b, `],"goal":`...)
	b = appendList(b, f.Goal[:])
	b = append(b, `,"moved":[`...)
	for i, m := range f.Moved {
		if i > 0 {
			b = append(b, ',')
		}
		b = append(b, '[')
		b = appendText(b, m.ID)
		b = append(b, ',')
		b = appendNumber(b, m.X)
		b = append(b, ',')
		b = appendNumber(b, m.Y)
		b = append(b, ']')
	}
	b = append(b, `],"status":`...)
	b = appendText(b, f.Status)
	b = append(b, `,"reason":`...)
	b = appendText(b, f.Reason)
	b = append(b, `,"hash":"`...)
	b = appendHash(b, f.Hash)
	b = append(b, `","length":`...)
	b = strconv.AppendInt(b, f.Length, 10)
	b = append(b, `,"at_head":`...)
	b = strconv.AppendBool(b, f.AtHead)
	if len(f.Shadows) > 0 {
		b = append(b, `,"shadows":`...)
		b = appendShadows(b, f.Shadows)
	}
	b = append(b, `,"exits":`...)
	b = appendExits(b, f.Exits)
	b = append(b, `,"verdict":`...)
	b = f.Verdict.append(b)
	b = append(b, `,"tape":`...)
	b = f.Tape.append(b)
	return append(b, '}')
}

func appendField(b []byte, name string, v float64) []byte {
	b = append(b, `,"`...)
	b = append(b, name...)
	b = append(b, `":`...)
	return appendNumber(b, v)
}

func appendCount(b []byte, name string, n int) []byte {
	b = append(b, `,"`...)
	b = append(b, name...)
	b = append(b, `":`...)
	return strconv.AppendInt(b, int64(n), 10)
}

func appendList(b []byte, vs []float64) []byte {
	b = append(b, '[')
	for i, v := range vs {
		if i > 0 {
			b = append(b, ',')
		}
		b = appendNumber(b, v)
	}
	return append(b, ']')
}

// places is how finely a frame is written: to a tenth of a millimetre, of a
// millisecond, of a milliradian.
const places = 1e4

// appendNumber writes v to four decimals, and null where there is no number. What
// no floor has is cut off.
func appendNumber(b []byte, v float64) []byte {
	if !finite(v) {
		return append(b, `null`...)
	}
	n := int64(math.Round(math.Max(-1e12, math.Min(1e12, v)) * places))
	if n < 0 {
		b = append(b, '-')
		n = -n
	}
	b = strconv.AppendInt(b, n/places, 10)
	rest := n % places
	if rest == 0 {
		return b
	}
	b = append(b, '.', byte('0'+rest/1000), byte('0'+rest/100%10), byte('0'+rest/10%10), byte('0'+rest%10))
	for b[len(b)-1] == '0' {
		b = b[:len(b)-1]
	}
	return b
}

func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }

const hexDigits = "0123456789abcdef"

func appendHash(b []byte, h uint64) []byte {
	for shift := 60; shift >= 0; shift -= 4 {
		b = append(b, hexDigits[h>>shift&15])
	}
	return b
}

// appendText writes a JSON string; what is not UTF-8 becomes U+FFFD.
func appendText(b []byte, s string) []byte {
	b = append(b, '"')
	for i := 0; i < len(s); {
		c := s[i]
		if c < utf8.RuneSelf {
			switch {
			case c == '"' || c == '\\':
				b = append(b, '\\', c)
			case c < ' ':
				b = append(b, '\\', 'u', '0', '0', hexDigits[c>>4], hexDigits[c&15])
			default:
				b = append(b, c)
			}
			i++
			continue
		}
		r, n := utf8.DecodeRuneInString(s[i:])
		b = utf8.AppendRune(b, r)
		i += n
	}
	return append(b, '"')
}
