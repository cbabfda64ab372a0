package floor

import (
	"math"

	"leeway/sim/geom"
)

// Cast writes to out[i] the distance along rays[i] to the first solid or mover,
// or +Inf where nothing is met within max. A ray that starts inside a filled
// solid reads 0, also on its edge. len(out) ≥ len(rays). No allocation after the first call.
//
// The range is the least of [geom.SegmentRange] and [geom.RayDisc] over all primitives.
func (w *World) Cast(rays []Ray, max float64, out []float64) {
	w.near = w.near[:0]
	if len(w.bodies) > 0 {
		w.bodiesNear(rays, max)
	}
	for i := range rays {
		r := &rays[i]
		t := w.castMap(r.Origin, r.Dir, max)
		for _, k := range w.near {
			t = min(t, w.bodies[k].cast(r.Origin, r.Dir))
		}
		if !(t <= max) {
			t = math.Inf(1)
		}
		out[i] = t
	}
}

// bodiesNear lists the bodies that some ray may reach.
func (w *World) bodiesNear(rays []Ray, reach float64) {
	lo := geom.Vec{X: math.Inf(1), Y: math.Inf(1)}
	hi := geom.Vec{X: math.Inf(-1), Y: math.Inf(-1)}
	for i := range rays {
		o := rays[i].Origin
		lo.X, hi.X = min(lo.X, o.X), max(hi.X, o.X)
		lo.Y, hi.Y = min(lo.Y, o.Y), max(hi.Y, o.Y)
	}
	for k := range w.bodies {
		b := &w.bodies[k]
		r := b.bound + reach
		if b.mid.X >= lo.X-r && b.mid.X <= hi.X+r && b.mid.Y >= lo.Y-r && b.mid.Y <= hi.Y+r {
			w.near = append(w.near, int32(k))
		}
	}
}

// cast returns the range of one body, +Inf when the ray misses it.
func (b *body) cast(o, d geom.Vec) float64 {
	v := b.mid.Sub(o)
	side := v.Cross(d)
	if out := v.Norm2() - float64(b.bound*b.bound); out > 0 &&
		(float64(side*side) > float64(b.bound*b.bound) || v.Dot(d) < 0) {
		return math.Inf(1)
	}
	if b.kind == Disc {
		if t, ok := geom.RayDisc(o, d, b.disc); ok {
			return t
		}
		return math.Inf(1)
	}
	if b.contains(o) {
		return 0
	}
	best := math.Inf(1)
	for i := range b.segs {
		if t, ok := geom.SegmentRange(o, d, b.segs[i]); ok && t < best {
			best = t
		}
	}
	return best
}

// castMap returns the range of what stands in the map, +Inf or some number above reach when
// there is nothing within reach: first what can be seen from here, then, if that does
// not go far enough, what lies on the way.
func (w *World) castMap(o, d geom.Vec, reach float64) float64 {
	s := &w.m.sight
	if s.reach == 0 || !s.holds(o) {
		return w.walk(o, d, 0, reach)
	}
	cell := s.row(o.Y)*s.nx + s.column(o.X)
	at := s.spots[cell]
	if at.fills > 0 {
		for _, i := range s.fills.of(cell) {
			if w.inside(i, o) {
				return 0
			}
		}
	}
	if t := w.look(at, o, d, min(reach, s.reach)); t <= s.reach || reach <= s.reach {
		return t
	}
	return w.walk(o, d, s.reach, reach)
}

// walk returns the range of what stands in the map along the ray between t0 and t1; beyond
// that it may find or miss. It goes from cell to cell until it has met something nearer
// than the cells still ahead.
func (w *World) walk(o, d geom.Vec, t0, t1 float64) float64 {
	g := &w.m.grid
	best := math.Inf(1)
	// Where the ray is in the rectangle of the grid.
	ix, iy := 1/d.X, 1/d.Y
	if d.X != 0 {
		a, b := (g.min.X-o.X)*ix, (g.max.X-o.X)*ix
		t0, t1 = max(t0, min(a, b)), min(t1, max(a, b))
	} else if !(o.X >= g.min.X && o.X <= g.max.X) {
		return best
	}
	if d.Y != 0 {
		a, b := (g.min.Y-o.Y)*iy, (g.max.Y-o.Y)*iy
		t0, t1 = max(t0, min(a, b)), min(t1, max(a, b))
	} else if !(o.Y >= g.min.Y && o.Y <= g.max.Y) {
		return best
	}
	if !(t0 <= t1) {
		return best
	}
	p := o.AddScaled(t0, d)
	x, y := g.column(p.X), g.row(p.Y)
	dx, dy := 1, 1 // which way the cells go, and which border of a cell comes next
	bx, by := 1, 1
	if d.X < 0 {
		dx, bx = -1, 0
	}
	if d.Y < 0 {
		dy, by = -1, 0
	}
	tx, ty := math.Inf(1), math.Inf(1) // where the next border of each direction is
	for {
		best = w.castCell(y*g.nx+x, o, d, best)
		if d.X != 0 {
			tx = (g.min.X + float64(float64(x+bx)*g.size) - o.X) * ix
		}
		if d.Y != 0 {
			ty = (g.min.Y + float64(float64(y+by)*g.size) - o.Y) * iy
		}
		if best <= min(tx, ty) || !(min(tx, ty) <= t1) {
			return best
		}
		if tx < ty {
			if x += dx; x < 0 || x >= g.nx {
				return best
			}
		} else if y += dy; y < 0 || y >= g.ny {
			return best
		}
	}
}

// castCell returns the lesser of best and the range of what is listed in a cell.
func (w *World) castCell(cell int, o, d geom.Vec, best float64) float64 {
	for _, k := range w.m.grid.items.of(cell) {
		if k >= 0 {
			if t, ok := geom.SegmentRange(o, d, w.segs[k]); ok && t < best {
				best = t
			}
		} else if t, ok := geom.RayDisc(o, d, w.discs[-1-k]); ok && t < best {
			best = t
		}
	}
	return best
}

// inside reports whether p is inside polygon i of the map. A lifted polygon has no inside here.
func (w *World) inside(i int32, p geom.Vec) bool {
	return insideOf(w.segs[w.m.firstSeg[i]:w.m.firstSeg[i+1]], p)
}
