package scenario

import (
	"bytes"
	"math"
	"reflect"
	"strconv"
	"strings"
	"unicode/utf8"
)

// lineWidth is how long (characters) a line may get before what is on it is spread over several.
const lineWidth = 100

// Print returns the canonical text: byte-stable, ends in a newline. Every field is
// written, in the order of the structs, except numbers of the default logic that were left out.
// Numbers are written as briefly as they can be read back.
// What fits on a line stays on one; long lists of numbers and points are filled line by line.
func (s *Scenario) Print() []byte {
	p := printer{}
	p.value(root(), reflect.ValueOf(s).Elem(), 0, 0)
	return append(p.buf, '\n')
}

type printer struct {
	buf  []byte
	flat []byte // scratch
}

// value writes v, indented by depth levels, on a line that already holds used characters.
func (p *printer) value(s *spec, v reflect.Value, depth, used int) {
	p.flat = appendFlat(p.flat[:0], s, v, lineWidth-used)
	if whole := p.flat; depth > 0 && used+utf8.RuneCount(whole) <= lineWidth || s.fields == nil && s.elem == nil {
		p.buf = append(p.buf, whole...)
		return
	}
	switch v.Kind() {
	case reflect.Pointer:
		p.value(s.elem, v.Elem(), depth, used)
	case reflect.Struct:
		p.buf = append(p.buf, '{')
		first := true
		eachField(s, v, func(f *fieldSpec, w reflect.Value) {
			if !first {
				p.buf = append(p.buf, ',')
			}
			first = false
			p.line(depth + 1)
			p.buf = append(strconv.AppendQuote(p.buf, f.name), ": "...)
			p.value(f.spec, w, depth+1, 2*(depth+1)+len(f.name)+5)
		})
		p.line(depth)
		p.buf = append(p.buf, '}')
	default:
		p.buf = append(p.buf, '[')
		if s.elem.fields != nil {
			for i := range v.Len() {
				if i > 0 {
					p.buf = append(p.buf, ',')
				}
				p.line(depth + 1)
				p.value(s.elem, v.Index(i), depth+1, 2*(depth+1)+1)
			}
		} else {
			p.fill(s.elem, v, depth+1)
		}
		p.line(depth)
		p.buf = append(p.buf, ']')
	}
}

// fill writes elements that are numbers, texts or points, as many to a line as fit.
func (p *printer) fill(elem *spec, v reflect.Value, depth int) {
	used := lineWidth
	for i := range v.Len() {
		p.flat = appendFlat(p.flat[:0], elem, v.Index(i), math.MaxInt)
		n := utf8.RuneCount(p.flat) + 2
		if i > 0 {
			p.buf = append(p.buf, ',')
		}
		if used+n > lineWidth {
			p.line(depth)
			used = 2 * depth
		} else {
			p.buf = append(p.buf, ' ')
		}
		p.buf = append(p.buf, p.flat...)
		used += n
	}
}

func (p *printer) line(depth int) {
	p.buf = append(p.buf, '\n')
	p.buf = append(p.buf, bytes.Repeat([]byte("  "), depth)...)
}

// eachField visits the fields of a struct that are printed.
func eachField(s *spec, v reflect.Value, visit func(*fieldSpec, reflect.Value)) {
	form := s.form(v)
	for i := range s.fields {
		f := &s.fields[i]
		if w := v.Field(f.index); f.in(form) && !(f.omit && w.IsZero()) {
			visit(f, w)
		}
	}
}

// appendFlat appends v as one line. It may stop early once more than room bytes were added, for then it will not be used.
func appendFlat(b []byte, s *spec, v reflect.Value, room int) []byte {
	limit := len(b) + 4*max(0, min(room, lineWidth))
	if room == math.MaxInt {
		limit = room
	}
	switch v.Kind() {
	case reflect.Pointer:
		return appendFlat(b, s.elem, v.Elem(), room)
	case reflect.Struct:
		b = append(b, '{')
		first := true
		eachField(s, v, func(f *fieldSpec, w reflect.Value) {
			if len(b) > limit {
				return
			}
			if !first {
				b = append(b, ", "...)
			}
			first = false
			b = append(strconv.AppendQuote(b, f.name), ": "...)
			b = appendFlat(b, f.spec, w, room)
		})
		return append(b, '}')
	case reflect.Slice, reflect.Array:
		b = append(b, '[')
		for i := 0; i < v.Len() && len(b) <= limit; i++ {
			if i > 0 {
				b = append(b, ", "...)
			}
			b = appendFlat(b, s.elem, v.Index(i), room)
		}
		return append(b, ']')
	case reflect.String:
		return appendText(b, v.String())
	case reflect.Bool:
		return strconv.AppendBool(b, v.Bool())
	case reflect.Float64:
		return appendNumber(b, v.Float())
	}
	return strconv.AppendInt(b, v.Int(), 10)
}

// appendNumber appends the shortest decimal that reads back as f.
func appendNumber(b []byte, f float64) []byte {
	if f == 0 {
		return append(b, '0') // −0 too
	}
	if a := math.Abs(f); a < 1e-6 || a >= 1e15 {
		return strconv.AppendFloat(b, f, 'e', -1, 64)
	}
	return strconv.AppendFloat(b, f, 'f', -1, 64)
}

// appendText appends a JSON text in which only what must be is escaped.
func appendText(b []byte, t string) []byte {
	b = append(b, '"')
	for _, r := range t {
		switch i := strings.IndexRune("\"\\\b\f\n\r\t", r); {
		case i >= 0:
			b = append(b, '\\', `"\bfnrt`[i])
		case r < ' ':
			b = append(b, `\u00`...)
			b = append(b, "0123456789abcdef"[r>>4], "0123456789abcdef"[r&15])
		default:
			b = utf8.AppendRune(b, r)
		}
	}
	return append(b, '"')
}
