package studies

import (
	"fmt"
	"html"
	"math"
	"strconv"
	"strings"
)

// Colours of the pictures: those of paper and ink.
const (
	paperColour = "#fffef9"
	inkColour   = "#1d2430"
	softColour  = "#596370"
	gridColour  = "#ddd8ca"
	redColour   = "#b3261e"
	pineColour  = "#17735a"
	blueColour  = "#2c5bd4"
)

const fonts = "'Atkinson Hyperlegible','Liberation Sans',Arial,sans-serif"

// pen writes an SVG picture.
type pen struct {
	b strings.Builder
}

// newPen begins a picture of that size with a title for those who cannot see it.
func newPen(w, h float64, title string) *pen {
	p := new(pen)
	fmt.Fprintf(&p.b, `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 %s %s" width="%s" height="%s" role="img" font-family="%s">`+"\n",
		r1(w), r1(h), r1(w), r1(h), fonts)
	fmt.Fprintf(&p.b, "<title>%s</title>\n", html.EscapeString(title))
	p.rect(0, 0, w, h, paperColour, "")
	return p
}

func (p *pen) bytes() []byte { return []byte(p.b.String() + "</svg>\n") }

func (p *pen) rect(x, y, w, h float64, fill, more string) {
	fmt.Fprintf(&p.b, `<rect x="%s" y="%s" width="%s" height="%s" fill="%s"%s/>`+"\n", r1(x), r1(y), r1(w), r1(h), fill, space(more))
}

func (p *pen) line(x1, y1, x2, y2 float64, stroke string, width float64, more string) {
	fmt.Fprintf(&p.b, `<path d="M%s %sL%s %s" stroke="%s" stroke-width="%s" fill="none"%s/>`+"\n", r1(x1), r1(y1), r1(x2), r1(y2), stroke, r1(width), space(more))
}

func (p *pen) path(d, fill, stroke string, width float64, more string) {
	fmt.Fprintf(&p.b, `<path d="%s" fill="%s" stroke="%s" stroke-width="%s"%s/>`+"\n", d, fill, stroke, r1(width), space(more))
}

func (p *pen) dot(x, y, r float64, fill string) {
	fmt.Fprintf(&p.b, `<circle cx="%s" cy="%s" r="%s" fill="%s"/>`+"\n", r1(x), r1(y), r1(r), fill)
}

// text writes words; anchor is start, middle or end, weight 400 or 700.
func (p *pen) text(x, y, size float64, anchor string, weight int, fill, words string) {
	fmt.Fprintf(&p.b, `<text x="%s" y="%s" font-size="%s" text-anchor="%s" font-weight="%d" fill="%s">%s</text>`+"\n",
		r1(x), r1(y), r1(size), anchor, weight, fill, html.EscapeString(words))
}

// wrapped writes words over several lines of so many characters, and returns the y
// below the last.
func (p *pen) wrapped(x, y, size, leading float64, chars, weight int, fill, words string) float64 {
	line := ""
	for _, w := range strings.Fields(words) {
		if line != "" && len([]rune(line))+1+len([]rune(w)) > chars {
			p.text(x, y, size, "start", weight, fill, line)
			y, line = y+leading, ""
		}
		line = strings.TrimSpace(line + " " + w)
	}
	p.text(x, y, size, "start", weight, fill, line)
	return y + leading
}

// whisker draws an interval across.
func (p *pen) whisker(x1, x2, y float64) {
	d := fmt.Sprintf("M%s %sV%sM%s %sH%sM%s %sV%s", r1(x1), r1(y-5), r1(y+5), r1(x1), r1(y), r1(x2), r1(x2), r1(y-5), r1(y+5))
	p.path(d, "none", redColour, 1.8, "")
}

// upright draws an interval upright.
func (p *pen) upright(x, y1, y2 float64) {
	d := fmt.Sprintf("M%s %sH%sM%s %sV%sM%s %sH%s", r1(x-4), r1(y1), r1(x+4), r1(x), r1(y1), r1(y2), r1(x-4), r1(y2), r1(x+4))
	p.path(d, "none", redColour, 1.6, "")
}

func space(s string) string {
	if s == "" {
		return ""
	}
	return " " + s
}

// r1 writes a coordinate to a tenth.
func r1(v float64) string { return trimmed(v, 1) }

// trimmed writes a number with so many decimals at most.
func trimmed(v float64, decimals int) string {
	f := math.Pow(10, float64(decimals))
	return strconv.FormatFloat(math.Round(v*f)/f+0, 'f', -1, 64)
}

// ticks returns round numbers from low to high, about n of them.
func ticks(low, high float64, n int) []float64 {
	if !(high > low) {
		return []float64{low}
	}
	raw := (high - low) / float64(max(n, 1))
	step := math.Pow(10, math.Floor(math.Log10(raw)))
	for _, f := range []float64{1, 2, 5, 10} {
		if step*f >= raw {
			step *= f
			break
		}
	}
	var out []float64
	for k := math.Ceil(low/step - 1e-9); k*step <= high+1e-9*step; k++ {
		v, _ := strconv.ParseFloat(strconv.FormatFloat(k*step, 'g', 10, 64), 64)
		out = append(out, v)
	}
	return out
}

// shade is ink of a strength from 0 to 1 on paper.
func shade(u float64) string {
	u = math.Max(0, math.Min(1, u))
	mix := func(a, b float64) int { return int(math.Round(a + u*(b-a))) }
	return fmt.Sprintf("#%02x%02x%02x", mix(0xff, 0x1d), mix(0xfe, 0x24), mix(0xf9, 0x30))
}
