package draw

import (
	"fmt"
	"io"
	"math"
)

// Tape is a run over time: a lane of modes for each model, and below them how near
// the hulls came to anything solid.
type Tape struct {
	Title  string
	Length float64 // s
	Lanes  []Lane
	Gaps   []Curve
	Asked  float64 // the leeway that is asked, m
	Top    float64 // the largest gap that is shown, m
	Marks  []Mark
}

// Lane is one model's modes, in order.
type Lane struct {
	Name    string
	Spans   []Span
	End     float64 // s
	Ending  string  // "0:35 arrived"
	EndLook Look
}

// Span is a stretch of one mode.
type Span struct {
	From, To float64 // s
	Look     Look
	Word     string // written into it where there is room
}

// Curve is a gap (Y, m) over time (X, s).
type Curve struct {
	Pattern Pattern
	Points  []Point
}

// Mark is something that happened: a note of its text, or without one a touch.
type Mark struct {
	At   float64 // s
	Text string
}

// The layout of a tape, in drawing units.
const (
	tapeLeft  = 78.0  // room for the names
	tapeRight = 118.0 // room for the endings
	tapeMarks = 20.0  // the row of marks
	laneHigh  = 18.0
	laneStep  = 23.0
	gapHigh   = 64.0
	gapAbove  = 8.0
	axisHigh  = 18.0
	charWide  = 6.6 // of a letter of 12 units, generously
)

// TapeSVG writes the drawing of a tape of the given width in drawing units, for
// inside a page. It has ids of its own: one tape a page.
func TapeSVG(w io.Writer, t *Tape, width float64, p Paint) error {
	c := &tapeCanvas{canvas: canvas{f: &Floor{}, o: Options{Paint: p}}, t: t, wide: width - tapeLeft - tapeRight}
	if !(t.Length > 0) {
		c.wide = 0
	}
	c.draw(width)
	_, err := w.Write(c.out)
	return err
}

type tapeCanvas struct {
	canvas
	t    *Tape
	wide float64 // of the lanes
}

func (c *tapeCanvas) at(s float64) float64 {
	if c.wide == 0 {
		return tapeLeft
	}
	return tapeLeft + c.wide*math.Max(0, math.Min(1, s/c.t.Length))
}

func (c *tapeCanvas) draw(width float64) {
	lanes := tapeMarks + laneStep*float64(len(c.t.Lanes))
	strip := lanes + gapAbove
	c.s(`<svg viewBox="0 0 `)
	c.n(width)
	c.s(` `)
	c.n(strip + gapHigh + axisHigh)
	c.s(`" role="img"><title>`)
	c.text(c.t.Title)
	c.s(`</title>`)
	c.patterns()
	for i := range c.t.Lanes {
		c.lane(&c.t.Lanes[i], tapeMarks+laneStep*float64(i))
	}
	c.gaps(strip)
	c.axis(strip + gapHigh)
	c.marks(strip + gapHigh)
	c.s(`</svg>`)
}

// patterns tell modes apart without colour: hatched wall-following, dotted avoidance.
func (c *tapeCanvas) patterns() {
	p := &c.o.Paint
	c.s(`<defs><pattern id="tape-hatch" width="7" height="7" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><rect width="7" height="7"`)
	c.paint("fill", p.Wall)
	c.s(`/><rect width="1.8" height="7" opacity="0.45"`)
	c.paint("fill", p.Halo)
	c.s(`/></pattern><pattern id="tape-dots" width="6" height="6" patternUnits="userSpaceOnUse"><rect width="6" height="6"`)
	c.paint("fill", p.Avoid)
	c.s(`/><circle cx="3" cy="3" r="1.2" opacity="0.8"`)
	c.paint("fill", p.Halo)
	c.s(`/></pattern></defs>`)
}

func (c *tapeCanvas) fill(l Look) string {
	switch l {
	case LookWall:
		return "url(#tape-hatch)"
	case LookAvoid:
		return "url(#tape-dots)"
	}
	return c.o.Paint.look(l)
}

func (c *tapeCanvas) lane(l *Lane, y float64) {
	c.words(0, y+laneHigh-5, "start", c.o.Paint.Text, 600, l.Name)
	for _, s := range l.Spans {
		x, wide := c.at(s.From), c.at(s.To)-c.at(s.From)
		c.box(x, y, math.Max(wide-0.8, 0.6), laneHigh, 2, c.fill(s.Look))
		if float64(len([]rune(s.Word)))*charWide+12 < wide {
			if s.Look == LookWall || s.Look == LookAvoid { // words are not read on a pattern
				c.box(x+3, y+3, float64(len([]rune(s.Word)))*charWide, laneHigh-6, 2, c.o.Paint.look(s.Look))
			}
			c.words(x+6, y+laneHigh-5, "start", c.o.Paint.Halo, 600, s.Word)
		}
	}
	if l.Ending != "" {
		x, wide := c.at(l.End)+5, float64(len([]rune(l.Ending)))*charWide+8
		c.box(x, y+1, wide, laneHigh-2, laneHigh/2, c.o.Paint.look(l.EndLook))
		c.words(x+wide/2, y+laneHigh-5, "middle", c.o.Paint.Halo, 650, l.Ending)
	}
}

// gaps draws the curves above the line of what is asked, cut off at the top.
func (c *tapeCanvas) gaps(y float64) {
	p, top := &c.o.Paint, c.t.Top
	if !(top > 0) {
		top = 1
	}
	high := func(m float64) float64 { return y + gapHigh*(1-math.Max(0, math.Min(1, m/top))) }
	c.words(0, y+gapHigh/2+4, "start", p.Text, 600, "leeway, m")
	c.s(`<rect`)
	c.attr("x", tapeLeft)
	c.attr("y", high(c.t.Asked))
	c.attr("width", c.wide)
	c.attr("height", y+gapHigh-high(c.t.Asked))
	c.paint("fill", p.Fail)
	c.s(` opacity="0.1"/>`)
	c.line(tapeLeft, y+gapHigh, tapeLeft+c.wide, y+gapHigh, p.Soft, ` stroke-width="1"`)
	c.line(tapeLeft, high(c.t.Asked), tapeLeft+c.wide, high(c.t.Asked), p.Fail, ` stroke-width="1" stroke-dasharray="4 3"`)
	c.words(tapeLeft+c.wide+5, math.Min(high(c.t.Asked)+4, y+gapHigh-1), "start", p.Fail, 600, fmt.Sprintf("%.2f asked", c.t.Asked))
	c.words(tapeLeft-6, y+9, "end", p.Soft, 400, fmt.Sprintf("%.1f", top))
	c.s(`<g fill="none" stroke-linejoin="round" stroke-linecap="round">`)
	for _, k := range c.t.Gaps {
		paint, style := p.Text, ` stroke-width="1.5"`
		switch k.Pattern {
		case Dotted:
			paint, style = p.Soft, ` stroke-width="1.5" stroke-dasharray="0 3.2"`
		case Dashed:
			paint, style = p.Soft, ` stroke-width="1.2" stroke-dasharray="5 3.5"`
		}
		c.s(`<path d="`)
		c.curve(k.Points, high)
		c.s(`"`)
		c.paint("stroke", paint)
		c.s(style + `/>`)
	}
	c.s(`</g>`)
}

// curve writes path data with a point a drawing unit, the nearest approach in it:
// that is what a strip of gaps must not lose.
func (c *tapeCanvas) curve(ps []Point, high func(float64) float64) {
	verb, column, least := "M", math.Inf(-1), math.Inf(1)
	put := func() {
		if !math.IsInf(least, 1) {
			c.s(verb)
			c.n(column)
			c.s(` `)
			c.n(high(least))
			verb = "L"
		}
	}
	for _, p := range ps {
		if x := math.Round(c.at(p.X)); x != column {
			put()
			column, least = x, math.Inf(1)
		}
		least = math.Min(least, p.Y)
	}
	put()
}

// axis writes times below, at round distances.
func (c *tapeCanvas) axis(y float64) {
	step := 1.0
	for _, s := range [...]float64{1, 2, 5, 10, 20, 30, 60, 120, 300, 600, 1200, 1800, 3600} {
		if step = s; c.t.Length/s <= 12 {
			break
		}
	}
	for t := 0.0; t <= c.t.Length && c.wide > 0; t += step {
		c.line(c.at(t), y, c.at(t), y+4, c.o.Paint.Soft, ` stroke-width="1"`)
		n := int(t)
		c.words(c.at(t), y+15, "middle", c.o.Paint.Soft, 400, fmt.Sprintf("%d:%02d", n/60, n%60))
	}
}

func (c *tapeCanvas) marks(bottom float64) {
	free := 0.0 // from here on no badge stands
	for _, m := range c.t.Marks {
		x := c.at(m.At)
		if m.Text != "" {
			c.line(x, 14, x, bottom, c.o.Paint.Text, ` stroke-width="1" stroke-dasharray="1 2.5"`)
			c.badge(math.Max(x, free), 9, m.Text)
			free = math.Max(x, free) + badgeWide
			continue
		}
		c.s(`<path d="M`)
		c.n(x - 3.5)
		c.s(` `)
		c.n(bottom - 3.5)
		c.s(`l7 7m0-7l-7 7" stroke-width="1.8" fill="none"`)
		c.paint("stroke", c.o.Paint.Fail)
		c.s(`/>`)
	}
}

func (c *tapeCanvas) box(x, y, w, h, round float64, fill string) {
	c.s(`<rect`)
	c.attr("x", x)
	c.attr("y", y)
	c.attr("width", w)
	c.attr("height", h)
	c.attr("rx", round)
	c.paint("fill", fill)
	c.s(`/>`)
}

func (c *tapeCanvas) line(x1, y1, x2, y2 float64, paint, style string) {
	c.s(`<line`)
	c.attr("x1", x1)
	c.attr("y1", y1)
	c.attr("x2", x2)
	c.attr("y2", y2)
	c.paint("stroke", paint)
	c.s(style + `/>`)
}

func (c *tapeCanvas) words(x, y float64, anchor, paint string, weight float64, s string) {
	c.s(`<text`)
	c.attr("x", x)
	c.attr("y", y)
	c.s(` text-anchor="` + anchor + `" font-size="12" font-family="` + faces + `"`)
	c.attr("font-weight", weight)
	c.paint("fill", paint)
	c.s(`>`)
	c.text(s)
	c.s(`</text>`)
}
