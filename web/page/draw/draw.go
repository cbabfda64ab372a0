// Package draw draws a floor as SVG: what stands on it, the way a robot went
// with the mode it was in at every place, the start, the goal, and the closest
// place pinned with its number. The start page's cards and the picture that a
// finished run leaves behind are the same drawing.
//
// It knows nothing of the simulation: a [Floor] is a view model of its own, in
// metres with y up, and [SVG] is a pure function of it. Colours are custom
// properties of the page with fallbacks ([Paper]), so that a drawing in a page
// follows light and dark; a drawing that stands alone ([Ink]) has them written
// out, because drawing programs do not read custom properties.
//
// Modes are told apart by colour and by pattern: a plain line, a line with
// cross hatching, a row of dots.
package draw

import (
	"io"
	"math"
	"strconv"
)

// Point is a place on the floor, m.
type Point struct{ X, Y float64 }

// Look says how a mode is painted.
type Look string

// The looks.
const (
	LookGoal  Look = "goal"
	LookWall  Look = "wall"
	LookAvoid Look = "avoid"
	LookDone  Look = "done"
	LookFail  Look = "fail"
	LookOther Look = "other"
)

// Shape says what a solid is made of.
type Shape string

// The shapes.
const (
	Wall    Shape = "wall"    // an open line through Points
	Polygon Shape = "polygon" // the filled area inside Points
	Disc    Shape = "disc"    // Points[0] is the centre
)

// Solid is one thing that stands on the floor.
type Solid struct {
	Shape  Shape
	Points []Point
	Radius float64 // of a disc, m
}

// Mover is one thing that follows a route. Points are the corners of a box where
// it stands, or the centre of a disc of the given Radius.
type Mover struct {
	Points []Point
	Radius float64
	Route  []Point
	Loop   bool
}

// Leg is a stretch of the way in one look. A leg begins where the one before
// it ended.
type Leg struct {
	Look   Look
	Points []Point
}

// Pattern tells the lines of models apart.
type Pattern uint8

// The patterns.
const (
	Plain Pattern = iota
	Dotted
	Dashed
)

// Trace is the way of a shadow. It lies below the robot's, and has a small hull
// where it ends.
type Trace struct {
	Pattern Pattern
	Points  []Point
}

// Note is a letter or number in a small circle, which stands for words elsewhere.
type Note struct {
	At   Point
	Text string
}

// Pin marks the closest place: the hull's centre, the place on the solid, and
// what is written there.
type Pin struct {
	Hull, Solid Point
	Text        string
	Bad         bool // falls short of what is asked
}

// Floor is all that is drawn.
type Floor struct {
	Title string // said by screen readers; shown as a tool tip
	Note  string // a longer description, may be empty

	Min, Max Point // what is shown
	Solids   []Solid
	Movers   []Mover
	Start    Point
	Heading  float64 // at the start, rad
	Goal     Point
	Reach    float64 // radius of the goal, m
	Hull     float64 // radius of the hull, m
	Traces   []Trace
	Way      []Leg
	Notes    []Note
	Pin      *Pin
}

// Paint is a set of colours, as SVG paint values.
type Paint struct {
	Ground, Frame, Grid, Solid, Mover, Text, Soft, Halo string
	Goal, Wall, Avoid, Done, Fail, Other                string
}

// Paper is for drawings inside a page: its custom properties, with fallbacks.
var Paper = Paint{
	Ground: "var(--floor,#fffef9)", Frame: "var(--ink,#1d2430)", Grid: "var(--grid,#ece8dc)",
	Solid: "var(--solid,#2d3542)", Mover: "var(--mover,#5d6675)", Text: "var(--ink,#1d2430)", Soft: "var(--soft,#596370)", Halo: "var(--floor,#fffef9)",
	Goal: "var(--goal-seeking,#2c5bd4)", Wall: "var(--wall-following,#b96d00)", Avoid: "var(--avoidance,#a5195c)",
	Done: "var(--arrived,#17735a)", Fail: "var(--failure,#b3261e)", Other: "var(--other-mode,#5d6675)",
}

// Ink is for drawings that stand alone.
var Ink = Paint{
	Ground: "#fffef9", Frame: "#1d2430", Grid: "#ece8dc", Solid: "#2d3542", Mover: "#5d6675", Text: "#1d2430", Soft: "#596370", Halo: "#fffef9",
	Goal: "#2c5bd4", Wall: "#b96d00", Avoid: "#a5195c", Done: "#17735a", Fail: "#b3261e", Other: "#5d6675",
}

func (p *Paint) look(l Look) string {
	switch l {
	case LookGoal:
		return p.Goal
	case LookWall:
		return p.Wall
	case LookAvoid:
		return p.Avoid
	case LookDone:
		return p.Done
	case LookFail:
		return p.Fail
	}
	return p.Other
}

// Options say how large and for what place a drawing is.
type Options struct {
	// Longest is the longer side of the floor in the drawing's own units; lines
	// and letters have fixed sizes in those units, so it should be near the size
	// in pixels at which the drawing is shown. 0 means 800.
	Longest float64
	Paint   Paint
	// Words adds the words start and goal.
	Words bool
	// Alone adds what a file of its own needs: the XML namespace, a size, Words, and
	// a scale bar.
	Alone bool
}

const margin = 6 // round the floor, in drawing units

// SVG writes the drawing. The bytes depend on the arguments alone.
func SVG(w io.Writer, f *Floor, o Options) error {
	if o.Longest <= 0 {
		o.Longest = 800
	}
	o.Words = o.Words || o.Alone
	c := &canvas{f: f, o: o, out: make([]byte, 0, 8<<10)}
	c.draw()
	_, err := w.Write(c.out)
	return err
}

// canvas builds one drawing.
type canvas struct {
	f     *Floor
	o     Options
	out   []byte
	scale float64 // drawing units a metre
}

func (c *canvas) draw() {
	f := c.f
	width, height := f.Max.X-f.Min.X, f.Max.Y-f.Min.Y
	if !(width > 0) || !(height > 0) {
		width, height = 1, 1
	}
	c.scale = c.o.Longest / math.Max(width, height)
	w, h := width*c.scale+2*margin, height*c.scale+2*margin

	c.s(`<svg`)
	if c.o.Alone {
		c.s(` xmlns="http://www.w3.org/2000/svg"`)
		c.attr("width", w)
		c.attr("height", h)
	}
	c.s(` viewBox="0 0 `)
	c.n(w)
	c.s(` `)
	c.n(h)
	c.s(`" role="img">`)
	if f.Title != "" {
		c.s(`<title>`)
		c.text(f.Title)
		c.s(`</title>`)
	}
	if f.Note != "" {
		c.s(`<desc>`)
		c.text(f.Note)
		c.s(`</desc>`)
	}
	c.ground(width, height)
	c.routes()
	c.solids()
	c.movers()
	c.traces()
	c.way()
	c.ends()
	c.notes()
	c.pin(w)
	if c.o.Alone {
		c.scaleBar(h)
	}
	c.s(`</svg>`)
	if c.o.Alone {
		c.s("\n")
	}
}

func (c *canvas) x(x float64) float64 { return margin + (x-c.f.Min.X)*c.scale }
func (c *canvas) y(y float64) float64 { return margin + (c.f.Max.Y-y)*c.scale }

func (c *canvas) s(s string) { c.out = append(c.out, s...) }

// n writes a number with at most one decimal: a tenth of a unit is below what
// can be seen, and short numbers keep pages small.
func (c *canvas) n(v float64) {
	v = math.Round(v*10) / 10
	if v == 0 || math.IsNaN(v) || math.IsInf(v, 0) {
		v = 0
	}
	c.out = strconv.AppendFloat(c.out, v, 'f', -1, 64)
}

func (c *canvas) attr(name string, v float64) {
	c.s(` `)
	c.s(name)
	c.s(`="`)
	c.n(v)
	c.s(`"`)
}

func (c *canvas) paint(name, value string) {
	c.s(` `)
	c.s(name)
	c.s(`="`)
	c.s(value)
	c.s(`"`)
}

func (c *canvas) points(ps []Point) {
	c.s(` points="`)
	for i, p := range ps {
		if i > 0 {
			c.s(` `)
		}
		c.n(c.x(p.X))
		c.s(`,`)
		c.n(c.y(p.Y))
	}
	c.s(`"`)
}

// text writes character data with what is special in XML escaped, and what XML
// cannot hold left out.
func (c *canvas) text(s string) {
	for _, r := range s {
		switch {
		case r == '&':
			c.s("&amp;")
		case r == '<':
			c.s("&lt;")
		case r == '>':
			c.s("&gt;")
		case r == '"':
			c.s("&quot;")
		case r < ' ' && r != '\t' && r != '\n' && r != '\r', r == 0xFFFE, r == 0xFFFF, r == 0xFFFD:
		default:
			c.out = append(c.out, string(r)...)
		}
	}
}
