package reach

import (
	"cmp"
	"math"
	"slices"

	"leeway/sim/geom"
)

// side is an arc with a way to travel it.
type side struct {
	listed      bool
	first, last int32 // its edges are Yard.edges[first:last], in the order in which a traveller passes them
}

// edge is a bitangent: it leaves the arc of one side and arrives on another.
type edge struct {
	leave  float64 // rad along the side it leaves
	arrive float64 // rad along the side it arrives on
	length float64 // m
	from   int32   // side
	to     int32   // side
	sight  sight
}

// sight says whether somebody has looked along an edge yet, and what was there.
type sight uint8

const (
	unseen sight = iota
	open
	blocked
)

// signOf returns +1 for a side that goes counter-clockwise round its circle, −1 for one that goes clockwise.
func signOf(s int32) float64 {
	if s&1 == 0 {
		return 1
	}
	return -1
}

// tangent returns the unit direction and the length of the line that leaves the
// circle of radius r1 about c1, travelled with sign s1, and joins the circle of
// radius r2 about c2, travelled with sign s2, without a kink. A point is a circle
// of radius 0. With n the left normal of u, the line leaves at c1 − s1·r1·n and
// arrives at c2 − s2·r2·n; from w = c2 − c1 = t·u + k·n with k = s2·r2 − s1·r1
// follow t = √(|w|² − k²) and u = (t·w − k·w⊥)/|w|².
//
// ok is false when one circle lies inside the other, or when they overlap and
// the line would cross from one side to the other.
func tangent(c1 geom.Vec, k1 float64, c2 geom.Vec, k2 float64) (u geom.Vec, t float64, ok bool) {
	w := c2.Sub(c1)
	k := k2 - k1
	d2 := w.Norm2()
	t2 := d2 - float64(k*k)
	if t2 < 0 || d2 == 0 {
		return geom.Vec{}, 0, false
	}
	t = math.Sqrt(t2)
	return w.Scale(t/d2).AddScaled(-k/d2, w.Perp()), t, true
}

// join is tangent between a point and a circle: to the circle, or from it to the
// point when leaving. The point may lie on the circle or, by rounding or by Skin,
// a little inside: then the line has no length.
func join(p, center geom.Vec, k float64, leaving bool) (u geom.Vec, t float64, ok bool) {
	w := p.Sub(center)
	if d := w.Norm(); d <= math.Abs(k) {
		if d == 0 || math.Abs(k)-d > 2*Skin {
			return geom.Vec{}, 0, false
		}
		if k < 0 {
			d = -d
		}
		return w.Perp().Scale(1 / d), 0, true
	}
	if leaving {
		return tangent(center, k, p, 0)
	}
	return tangent(p, 0, center, k)
}

// list finds the bitangents that leave a side and arrive on a free arc.
func (y *Yard) list(s int32) {
	if y.sides[s].listed {
		return
	}
	first := len(y.edges)
	a := &y.arcs[s/2]
	s1 := signOf(s)
	for _, i := range y.look(a, s1) {
		b := &y.arcs[i]
		for to := 2 * i; to <= 2*i+1; to++ {
			s2 := signOf(to)
			u, t, ok := tangent(a.center, s1*a.radius, b.center, s2*b.radius)
			if !ok {
				continue
			}
			n := u.Perp()
			n1, n2 := n.Scale(-s1), n.Scale(-s2)
			if !a.has(n1) || !b.has(n2) || y.horizon.hidden(n1, t) {
				continue
			}
			y.edges = append(y.edges, edge{leave: a.along(n1, s1), arrive: b.along(n2, s2), length: t, from: s, to: to})
		}
	}
	slices.SortFunc(y.edges[first:], func(e, f edge) int {
		return cmp.Or(cmp.Compare(e.leave, f.leave), cmp.Compare(e.length, f.length), cmp.Compare(e.to, f.to))
	})
	y.sides[s] = side{listed: true, first: int32(first), last: int32(len(y.edges))}
}

// isOpen looks along an edge, once.
func (y *Yard) isOpen(i int32) bool {
	e := &y.edges[i]
	if e.sight == unseen {
		e.sight = blocked
		if y.clear(y.arcs[e.from/2].point(e.leave, signOf(e.from)), y.arcs[e.to/2].point(e.arrive, signOf(e.to))) {
			e.sight = open
		}
	}
	return e.sight == open
}
