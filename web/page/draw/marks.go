package draw

import "math"

// CoarseFrom is the scale, in drawing units a metre, below which the grid has a line
// every ten metres only.
const CoarseFrom = 24

// ground draws the floor itself and a line every metre, or every ten on a large
// floor.
func (c *canvas) ground(width, height float64) {
	f := c.f
	c.s(`<rect`)
	c.attr("x", margin)
	c.attr("y", margin)
	c.attr("width", width*c.scale)
	c.attr("height", height*c.scale)
	c.paint("fill", c.o.Paint.Ground)
	c.paint("stroke", c.o.Paint.Frame)
	c.s(` stroke-width="1"/>`)

	step := 1.0
	for step*c.scale < CoarseFrom {
		step *= 10
	}
	c.s(`<path d="`)
	for i := math.Floor(f.Min.X/step) + 1; i*step < f.Max.X; i++ {
		c.s(`M`)
		c.n(c.x(i * step))
		c.s(` `)
		c.n(c.y(f.Max.Y))
		c.s(`V`)
		c.n(c.y(f.Min.Y))
	}
	for i := math.Floor(f.Min.Y/step) + 1; i*step < f.Max.Y; i++ {
		c.s(`M`)
		c.n(c.x(f.Min.X))
		c.s(` `)
		c.n(c.y(i * step))
		c.s(`H`)
		c.n(c.x(f.Max.X))
	}
	c.s(`"`)
	c.paint("stroke", c.o.Paint.Grid)
	c.s(` stroke-width="1" fill="none"/>`)
}

func (c *canvas) routes() {
	for _, m := range c.f.Movers {
		if len(m.Route) < 2 {
			continue
		}
		if m.Loop {
			c.s(`<polygon`)
		} else {
			c.s(`<polyline`)
		}
		c.points(m.Route)
		c.s(` fill="none"`)
		c.paint("stroke", c.o.Paint.Mover)
		c.s(` stroke-width="1" stroke-dasharray="2 4" opacity="0.7"/>`)
	}
}

func (c *canvas) solids() {
	c.s(`<g`)
	c.paint("fill", c.o.Paint.Solid)
	c.paint("stroke", c.o.Paint.Solid)
	c.s(` stroke-linecap="round" stroke-linejoin="round" stroke-width="1">`)
	for _, s := range c.f.Solids {
		if len(s.Points) == 0 {
			continue
		}
		switch s.Shape {
		case Disc:
			c.disc(s.Points[0], s.Radius*c.scale)
			c.s(`/>`)
		case Polygon:
			c.s(`<polygon`)
			c.points(s.Points)
			c.s(`/>`)
		default:
			c.s(`<polyline`)
			c.points(s.Points)
			c.s(` fill="none" stroke-width="3"/>`)
		}
	}
	c.s(`</g>`)
}

func (c *canvas) movers() {
	for _, m := range c.f.Movers {
		if len(m.Points) == 0 {
			continue
		}
		if m.Radius > 0 {
			c.disc(m.Points[0], m.Radius*c.scale)
		} else {
			c.s(`<polygon`)
			c.points(m.Points)
		}
		c.paint("fill", c.o.Paint.Mover)
		c.s(`/>`)
	}
}

// disc opens a circle of radius r in drawing units; the caller closes it.
func (c *canvas) disc(p Point, r float64) {
	c.s(`<circle`)
	c.attr("cx", c.x(p.X))
	c.attr("cy", c.y(p.Y))
	c.attr("r", r)
}

const wayWidth = 3 // of the way, in drawing units

// way draws the legs. Colour alone must not tell the modes apart: wall-following
// has hatches across its line, avoidance is a row of dots, goal-seeking is plain.
func (c *canvas) way() {
	if len(c.f.Way) == 0 {
		return
	}
	c.s(`<g fill="none" stroke-linejoin="round" stroke-linecap="round">`)
	for _, l := range c.f.Way {
		l.Points = c.thin(l.Points)
		c.s(`<polyline`)
		c.points(l.Points)
		c.paint("stroke", c.o.Paint.look(l.Look))
		switch l.Look {
		case LookAvoid:
			c.attr("stroke-width", wayWidth+1)
			c.s(` stroke-dasharray="0 6"/>`)
		case LookWall:
			c.attr("stroke-width", wayWidth)
			c.s(`/><polyline`)
			c.points(l.Points)
			c.paint("stroke", c.o.Paint.look(l.Look))
			c.attr("stroke-width", 2*wayWidth+1)
			c.s(` stroke-linecap="butt" stroke-dasharray="1.5 5"/>`)
		default:
			c.attr("stroke-width", wayWidth)
			c.s(`/>`)
		}
	}
	c.s(`</g>`)
}

// traces draws the ways of the shadows.
func (c *canvas) traces() {
	if len(c.f.Traces) == 0 {
		return
	}
	c.s(`<g fill="none"`)
	c.paint("stroke", c.o.Paint.Soft)
	c.s(` stroke-linejoin="round" stroke-linecap="round">`)
	for _, t := range c.f.Traces {
		if len(t.Points) == 0 {
			continue
		}
		dash := ` stroke-width="2.2" stroke-dasharray="0 4.6"`
		if t.Pattern == Dashed {
			dash = ` stroke-width="1.7" stroke-dasharray="7 5"`
		}
		c.s(`<polyline`)
		c.points(c.thin(t.Points))
		c.s(dash + `/>`)
		c.disc(t.Points[len(t.Points)-1], math.Max(c.f.Hull*c.scale, 3))
		c.s(dash + `/>`)
	}
	c.s(`</g>`)
}

// thin leaves out the points that lie within a hair's breadth of the straight line
// between those that stay (Ramer 1972; Douglas & Peucker 1973): a way has thousands.
func (c *canvas) thin(ps []Point) []Point {
	const hair = 0.4 // drawing units
	if len(ps) < 3 {
		return ps
	}
	keep := make([]bool, len(ps))
	keep[0], keep[len(ps)-1] = true, true
	spans := [][2]int{{0, len(ps) - 1}}
	for len(spans) > 0 {
		a, b := spans[len(spans)-1][0], spans[len(spans)-1][1]
		spans = spans[:len(spans)-1]
		far, at := hair/c.scale, -1
		for i := a + 1; i < b; i++ {
			if d := distance(ps[i], ps[a], ps[b]); d > far {
				far, at = d, i
			}
		}
		if at >= 0 {
			keep[at] = true
			spans = append(spans, [2]int{a, at}, [2]int{at, b})
		}
	}
	var kept []Point
	for i, p := range ps {
		if keep[i] {
			kept = append(kept, p)
		}
	}
	return kept
}

// distance returns how far p is from the straight piece between a and b.
func distance(p, a, b Point) float64 {
	dx, dy := b.X-a.X, b.Y-a.Y
	t := 0.0
	if l := dx*dx + dy*dy; l > 0 {
		t = math.Max(0, math.Min(1, ((p.X-a.X)*dx+(p.Y-a.Y)*dy)/l))
	}
	return math.Hypot(p.X-a.X-t*dx, p.Y-a.Y-t*dy)
}

// ends draws the start, as a hull with its heading, and the goal.
func (c *canvas) ends() {
	f, p := c.f, &c.o.Paint
	r := math.Max(f.Hull*c.scale, 4)
	c.disc(f.Start, r)
	c.paint("fill", p.Ground)
	c.paint("stroke", p.Frame)
	c.s(` stroke-width="1.5"/><line`)
	x, y := c.x(f.Start.X), c.y(f.Start.Y)
	c.attr("x1", x)
	c.attr("y1", y)
	c.attr("x2", x+r*math.Cos(f.Heading))
	c.attr("y2", y-r*math.Sin(f.Heading))
	c.paint("stroke", p.Frame)
	c.s(` stroke-width="1.5"/>`)

	g := math.Max(f.Reach*c.scale, 5)
	c.disc(f.Goal, g)
	c.paint("fill", p.Ground)
	c.paint("stroke", p.Done)
	c.s(` stroke-width="2"/>`)
	c.disc(f.Goal, math.Max(g/3, 2))
	c.paint("fill", p.Done)
	c.s(`/>`)
	if c.o.Words {
		c.label(x, y-r-5, "middle", p.Text, "start")
		c.label(c.x(f.Goal.X), c.y(f.Goal.Y)-g-5, "middle", p.Text, "goal")
	}
}

// badgeWide is the least distance of two badges, in drawing units.
const badgeWide = 17.0

// notes draws badges, one beside the other where they would cover each other.
func (c *canvas) notes() {
	var taken []Point
	for _, n := range c.f.Notes {
		at := Point{c.x(n.At.X), c.y(n.At.Y)}
		for i := 0; i < len(taken); i++ {
			if math.Hypot(at.X-taken[i].X, at.Y-taken[i].Y) < badgeWide-0.5 {
				at.X, i = taken[i].X+badgeWide, -1
			}
		}
		taken = append(taken, at)
		c.badge(at.X, at.Y, n.Text)
	}
}

// badge writes a letter or two into a small circle.
func (c *canvas) badge(x, y float64, text string) {
	c.s(`<circle`)
	c.attr("cx", x)
	c.attr("cy", y)
	c.s(` r="7.5"`)
	c.paint("fill", c.o.Paint.Ground)
	c.paint("stroke", c.o.Paint.Text)
	c.s(` stroke-width="1.3"/><text`)
	c.attr("x", x)
	c.attr("y", y+3.6)
	c.s(` text-anchor="middle" font-size="10.5" font-weight="700" font-family="` + faces + `"`)
	c.paint("fill", c.o.Paint.Text)
	c.s(`>`)
	c.text(text)
	c.s(`</text>`)
}

// pin marks the closest place by a dashed hull and a line to the number.
func (c *canvas) pin(width float64) {
	k := c.f.Pin
	if k == nil {
		return
	}
	paint := c.o.Paint.Text
	if k.Bad {
		paint = c.o.Paint.Fail
	}
	c.disc(k.Hull, math.Max(c.f.Hull*c.scale, 3))
	c.s(` fill="none"`)
	c.paint("stroke", paint)
	c.s(` stroke-width="1.5" stroke-dasharray="3 2"/>`)
	c.disc(k.Solid, 2.5)
	c.paint("fill", paint)
	c.s(`/>`)
	if k.Text == "" {
		return
	}
	// The text stands on the side that has more room.
	x, y := c.x(k.Solid.X), c.y(k.Solid.Y)
	dx, dy, anchor := 18.0, -14.0, "start"
	if x > width/2 {
		dx, anchor = -18, "end"
	}
	if y < 40 {
		dy = 20
	}
	c.s(`<line`)
	c.attr("x1", x)
	c.attr("y1", y)
	c.attr("x2", x+dx)
	c.attr("y2", y+dy)
	c.paint("stroke", paint)
	c.s(` stroke-width="1"/>`)
	c.label(x+dx*1.2, y+dy+4, anchor, paint, k.Text)
}

const faces = "Leeway Next, Atkinson Hyperlegible Next, Verdana, DejaVu Sans, sans-serif"

func (c *canvas) label(x, y float64, anchor, paint, s string) {
	c.s(`<text`)
	c.attr("x", x)
	c.attr("y", y)
	c.s(` text-anchor="` + anchor + `" font-size="13" font-weight="600" font-family="` + faces + `"`)
	c.paint("fill", paint)
	c.paint("stroke", c.o.Paint.Halo)
	c.s(` stroke-width="3" stroke-linejoin="round" paint-order="stroke">`)
	c.text(s)
	c.s(`</text>`)
}

// scaleBar draws one metre, or ten on a large floor.
func (c *canvas) scaleBar(height float64) {
	length, words := 1.0, "1 m"
	if c.scale < CoarseFrom {
		length, words = 10, "10 m"
	}
	x, y, l := margin+14.0, height-margin-14, length*c.scale
	c.s(`<path d="M`)
	c.n(x)
	c.s(` `)
	c.n(y - 4)
	c.s(`v8m0 -4h`)
	c.n(l)
	c.s(`m0 -4v8" fill="none"`)
	c.paint("stroke", c.o.Paint.Text)
	c.s(` stroke-width="1.5"/>`)
	c.label(x+l+6, y+4, "start", c.o.Paint.Text, words)
}
