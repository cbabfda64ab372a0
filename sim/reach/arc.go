package reach

import (
	"math"
	"slices"

	"leeway/sim/geom"
)

const turn = 2 * math.Pi

// sliver is the arc (rad) below which two crossings of a circle count as one.
const sliver = 1e-12

// arc is a stretch of a circle on which the hull's centre is free. Circles have
// their centre at a corner, an end of a wall or the centre of a disc, and a
// radius of the hull's plus the disc's.
type arc struct {
	center geom.Vec
	radius float64
	start  float64  // angle at which the arc starts, going counter-clockwise
	span   float64  // angle it covers; turn for a whole circle
	lo, hi geom.Vec // unit vectors of start and start + span
}

// whole reports whether the arc is the whole circle.
func (a *arc) whole() bool { return a.span == turn }

// has reports whether the direction n from the centre points into the arc.
func (a *arc) has(n geom.Vec) bool {
	switch {
	case a.whole():
		return true
	case a.span <= math.Pi:
		return a.lo.Cross(n) >= 0 && n.Cross(a.hi) >= 0
	}
	return a.lo.Cross(n) >= 0 || n.Cross(a.hi) >= 0
}

// along returns how far (rad) the direction n lies along the arc for one who
// travels it counter-clockwise (sign +1) or clockwise (−1).
func (a *arc) along(n geom.Vec, sign float64) float64 {
	x := fold(n.Angle() - a.start)
	if x > a.span { // by rounding, just before the start or just beyond the end
		if x-a.span < turn-x {
			x = a.span
		} else {
			x = 0
		}
	}
	if sign < 0 {
		x = a.span - x
	}
	return x
}

// point returns the place x rad along the arc for one who travels it with the given sign.
func (a *arc) point(x, sign float64) geom.Vec {
	if sign < 0 {
		x = a.span - x
	}
	return a.center.AddScaled(a.radius, geom.Heading(a.start+x))
}

// fold brings an angle into [0, turn).
func fold(x float64) float64 {
	x -= float64(turn * math.Floor(x/turn))
	if x < 0 || x >= turn {
		return 0
	}
	return x
}

// findArcs lists the free arcs of all circles.
func (y *Yard) findArcs() {
	type circle struct {
		center geom.Vec
		radius float64
	}
	var circles []circle
	seen := make(map[circle]bool)
	add := func(center geom.Vec, thick float64) {
		k := circle{center, thick + y.hull}
		if !seen[k] {
			seen[k] = true
			circles = append(circles, k)
		}
	}
	for i := range y.prims {
		add(y.prims[i].a, y.prims[i].thick)
		add(y.prims[i].b, y.prims[i].thick)
	}
	w := newCircler(y)
	for _, c := range circles {
		for _, f := range w.free(c.center, c.radius, y.hull-Skin) {
			y.arcs = append(y.arcs, arc{
				center: c.center, radius: c.radius, start: f.start, span: f.span,
				lo: geom.Heading(f.start), hi: geom.Heading(f.start + f.span),
			})
		}
	}
	y.sides = make([]side, 2*len(y.arcs))
	y.grid.place(y.arcs)
}

// stretch is a range of angles, counter-clockwise from start.
type stretch struct{ start, span float64 }

// circler finds the free stretches of circles. Its memory serves one circle after another.
type circler struct {
	y        *Yard
	seen     []bool
	near     []int32
	crossing []float64
	out      []stretch
}

func newCircler(y *Yard) *circler { return &circler{y: y, seen: make([]bool, len(y.prims))} }

// free returns the stretches of the circle on which the hull's centre is free.
// They end where the circle crosses the boundary of a prim grown by grow, which
// may differ from the hull's radius by Skin. The result is good until the next call.
func (w *circler) free(center geom.Vec, radius, grow float64) []stretch {
	w.near = w.y.grid.near(center, radius, w.seen, w.near[:0])
	w.crossing = w.crossing[:0]
	for _, i := range w.near {
		w.cross(&w.y.prims[i], center, radius, grow)
	}
	slices.Sort(w.crossing)
	w.out = w.out[:0]
	if len(w.crossing) == 0 {
		if w.isFree(center, radius, 0) {
			w.out = append(w.out, stretch{0, turn})
		}
		return w.out
	}
	// Between two neighbouring crossings nothing changes, so the middle speaks for all.
	n := len(w.crossing)
	open := false // the last stretch may go on
	for k, from := range w.crossing {
		to := w.crossing[0] + turn
		if k+1 < n {
			to = w.crossing[k+1]
		}
		if to-from < sliver {
			continue
		}
		free := w.isFree(center, radius, from+float64((to-from)/2))
		switch {
		case free && open:
			w.out[len(w.out)-1].span = to - w.out[len(w.out)-1].start
		case free:
			w.out = append(w.out, stretch{from, to - from})
		}
		open = free
	}
	// Join the last stretch with the first across the angle 0.
	if m := len(w.out); open && m > 0 && w.out[0].start-w.crossing[0] < sliver {
		switch {
		case m > 1:
			w.out[0] = stretch{w.out[m-1].start, w.out[m-1].span + w.out[0].span}
			w.out = w.out[:m-1]
		case w.out[0].span >= turn-sliver:
			w.out[0] = stretch{0, turn}
		}
	}
	return w.out
}

func (w *circler) isFree(center geom.Vec, radius, angle float64) bool {
	p := center.AddScaled(radius, geom.Heading(angle))
	for _, i := range w.near {
		if w.y.prims[i].covers(p, w.y.hull-Skin) {
			return false
		}
	}
	return true
}

// cross adds the angles at which the circle crosses the boundary of the prim
// grown by grow: that of two circles about its ends, and two lines along it.
func (w *circler) cross(q *prim, center geom.Vec, radius, grow float64) {
	r := q.thick + grow
	w.crossCircle(q.a, center, radius, r)
	ab := q.b.Sub(q.a)
	if ab == (geom.Vec{}) {
		return
	}
	w.crossCircle(q.b, center, radius, r)
	length := ab.Norm()
	u := ab.Scale(1 / length)
	n := u.Perp()
	rel := center.Sub(q.a)
	along, off := rel.Dot(u), rel.Dot(n)
	for _, side := range [2]float64{r, -r} {
		h := side - off // from the centre to the line, along n
		if math.Abs(h) > radius {
			continue
		}
		half := math.Sqrt((radius - h) * (radius + h))
		for _, x := range [2]float64{half, -half} {
			// The margin lets a crossing at the very end of the line count; a
			// crossing too many does no harm.
			if at := along + x; at > -Skin && at < length+Skin {
				w.add(u.Scale(x).AddScaled(h, n))
			}
		}
	}
}

// crossCircle adds the angles at which the circle crosses another.
func (w *circler) crossCircle(other, center geom.Vec, radius, r float64) {
	d := other.Sub(center)
	d2 := d.Norm2()
	if d2 == 0 {
		return
	}
	x := (d2 + float64((radius-r)*(radius+r))) / 2 // distance to the common chord, times |d|
	h2 := float64(d2*radius*radius) - float64(x*x)
	if h2 < 0 {
		return
	}
	h := math.Sqrt(h2)
	w.add(d.Scale(x).AddScaled(h, d.Perp()))
	w.add(d.Scale(x).AddScaled(-h, d.Perp()))
}

func (w *circler) add(direction geom.Vec) {
	w.crossing = append(w.crossing, fold(direction.Angle()))
}
