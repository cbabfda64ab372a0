package reach

import (
	"math"

	"leeway/sim/floor"
	"leeway/sim/geom"
)

// prim is what every solid is taken apart into: a segment with a thickness.
// Walls and the sides of polygons have none; a disc is a segment of no length
// with its radius for a thickness.
type prim struct {
	a, b  geom.Vec
	thick float64
	solid int32 // whose it is
}

// covers reports whether p lies inside the prim grown by r.
func (q *prim) covers(p geom.Vec, r float64) bool {
	return pointGap2(p, q.a, q.b) < square(q.thick+r)
}

// fill is the inside of a polygon.
type fill struct {
	corners  geom.Polygon
	min, max geom.Vec
	solid    int32
}

func (f *fill) contains(p geom.Vec) bool {
	return p.X >= f.min.X && p.X <= f.max.X && p.Y >= f.min.Y && p.Y <= f.max.Y && f.corners.Contains(p)
}

// build takes the solids apart.
func (y *Yard) build(c floor.Config) error {
	for i := range c.Solids {
		s := &c.Solids[i]
		y.ids = append(y.ids, s.ID)
		if err := floor.CheckSolid(*s); err != nil {
			if faults, ok := err.(floor.Faults); ok {
				for k := range faults {
					faults[k].Ref.Index = i
				}
			}
			return err
		}
		switch s.Kind {
		case floor.Disc:
			y.prims = append(y.prims, prim{s.Points[0], s.Points[0], s.Radius, int32(i)})
		case floor.Polygon:
			f := fill{corners: s.Points, min: s.Points[0], max: s.Points[0], solid: int32(i)}
			for k := range f.corners {
				e := f.corners.Edge(k)
				y.prims = append(y.prims, prim{e.A, e.B, 0, int32(i)})
				f.min = geom.Vec{X: math.Min(f.min.X, e.A.X), Y: math.Min(f.min.Y, e.A.Y)}
				f.max = geom.Vec{X: math.Max(f.max.X, e.A.X), Y: math.Max(f.max.Y, e.A.Y)}
			}
			y.fills = append(y.fills, f)
		case floor.Wall:
			for k := 1; k < len(s.Points); k++ {
				y.prims = append(y.prims, prim{s.Points[k-1], s.Points[k], 0, int32(i)})
			}
		}
	}
	return nil
}

func square(x float64) float64 { return float64(x * x) }

// pointGap2 returns the squared distance of p to the segment from a to b.
func pointGap2(p, a, b geom.Vec) float64 {
	ab, ap := b.Sub(a), p.Sub(a)
	along, n := ap.Dot(ab), ab.Norm2()
	switch {
	case along <= 0 || n == 0:
		return ap.Norm2()
	case along >= n:
		return p.Sub(b).Norm2()
	}
	c := ap.Cross(ab)
	return c * c / n
}

// beam is a straight piece of a way, made ready for being tested against many prims.
type beam struct {
	p, q, u geom.Vec // ends and unit direction; u is zero when the ends coincide
}

func newBeam(p, q geom.Vec) beam { return beam{p, q, q.Sub(p).Unit()} }

// meets reports whether the beam comes nearer than r to the segment of q, its thickness counted in.
func (l *beam) meets(q *prim, r float64) bool {
	r += q.thick
	pa, pb := q.a.Sub(l.p), q.b.Sub(l.p)
	sa, sb := l.u.Cross(pa), l.u.Cross(pb) // signed distances from the beam's line
	if (sa >= r && sb >= r) || (sa <= -r && sb <= -r) {
		return l.u == geom.Vec{} && pointGap2(l.p, q.a, q.b) < r*r
	}
	r2 := r * r
	if pointGap2(q.a, l.p, l.q) < r2 || pointGap2(q.b, l.p, l.q) < r2 ||
		pointGap2(l.p, q.a, q.b) < r2 || pointGap2(l.q, q.a, q.b) < r2 {
		return true
	}
	if (sa > 0) == (sb > 0) {
		return false
	}
	ab := q.b.Sub(q.a)
	return (ab.Cross(l.p.Sub(q.a)) > 0) != (ab.Cross(l.q.Sub(q.a)) > 0)
}
