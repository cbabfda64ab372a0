package geom

import "math"

// NearestOnSegment returns the point q of s nearest to p, and the fraction f of
// the way from s.A to s.B at which it lies:
//
//	f = clamp((p − A)·(B − A) / |B − A|², 0, 1)
//
// For a segment of no length it returns A and 0.
func NearestOnSegment(p Vec, s Segment) (q Vec, f float64) {
	e, a := s.B.Sub(s.A), p.Sub(s.A)
	x, n := a.Dot(e), e.Norm2()
	switch {
	case !(x > 0):
		return s.A, 0
	case x >= n:
		return s.B, 1
	}
	f = x / n
	return s.A.AddScaled(f, e), f
}

// FromSegment returns the displacement v to p from the nearest point of s. Beside
// the segment it is worked out as a multiple of the normal,
//
//	v = (e × a / |e|²)·e⊥,   e = B − A, a = p − A
//
// so that its direction is the normal of s to the last bits however close p is; NearestOnSegment
// loses that direction when p comes as near as a coordinate is rounded.
func FromSegment(p Vec, s Segment) (v Vec) {
	e, a := s.B.Sub(s.A), p.Sub(s.A)
	x, n := a.Dot(e), e.Norm2()
	switch {
	case !(x > 0):
		return a
	case x >= n:
		return p.Sub(s.B)
	}
	return e.Perp().Scale(e.Cross(a) / n)
}

// DistanceToSegment returns the distance from p to s.
func DistanceToSegment(p Vec, s Segment) float64 {
	q, _ := NearestOnSegment(p, s)
	return p.Sub(q).Norm()
}

// DistanceToDisc returns the distance from p to the edge of d, negative inside.
func DistanceToDisc(p Vec, d Disc) float64 { return p.Sub(d.Center).Norm() - d.Radius }

// Cross reports whether s and t have a point in common; a touch counts. The
// sides are decided by plain rounded cross products, so the boxes round s and t are
// asked first: for two apart on one slanted line the signs are chance.
func (s Segment) Cross(t Segment) bool {
	if min(s.A.X, s.B.X) > max(t.A.X, t.B.X) || min(t.A.X, t.B.X) > max(s.A.X, s.B.X) ||
		min(s.A.Y, s.B.Y) > max(t.A.Y, t.B.Y) || min(t.A.Y, t.B.Y) > max(s.A.Y, s.B.Y) {
		return false
	}
	se, te := s.B.Sub(s.A), t.B.Sub(t.A)
	a, b := se.Cross(t.A.Sub(s.A)), se.Cross(t.B.Sub(s.A))
	c, d := te.Cross(s.A.Sub(t.A)), te.Cross(s.B.Sub(t.A))
	return (a <= 0 && b >= 0 || a >= 0 && b <= 0) && (c <= 0 && d >= 0 || c >= 0 && d <= 0)
}

// Edge returns the edge from corner i to the next.
func (g Polygon) Edge(i int) Segment {
	if i == len(g)-1 {
		return Segment{g[i], g[0]}
	}
	return Segment{g[i], g[i+1]}
}

// Crosses reports whether the ray from p along +x crosses s, the half-open rule
// of the crossing-number test: a lower end belongs to s, an upper end does not. A
// point is inside a polygon when an odd number of edges say so.
func (s Segment) Crosses(p Vec) bool {
	if (s.A.Y > p.Y) == (s.B.Y > p.Y) {
		return false
	}
	side := s.B.Sub(s.A).Cross(p.Sub(s.A))
	return (side > 0) == (s.B.Y > s.A.Y)
}

// Contains reports whether p lies inside g, by counting crossings (O(n)). A point
// on an edge may fall either way.
func (g Polygon) Contains(p Vec) bool {
	in := false
	for i := range g {
		if g.Edge(i).Crosses(p) {
			in = !in
		}
	}
	return in
}

// Nearest returns the point of the boundary of g nearest to p, the first of equals; the zero
// vector when g has no corners.
func (g Polygon) Nearest(p Vec) Vec {
	best, at := math.Inf(1), Vec{}
	for i := range g {
		q, _ := NearestOnSegment(p, g.Edge(i))
		if d := p.Sub(q).Norm2(); d < best {
			best, at = d, q
		}
	}
	return at
}

// Distance returns the distance from p to the boundary of g, negative inside.
func (g Polygon) Distance(p Vec) float64 {
	d := p.Sub(g.Nearest(p)).Norm()
	if d > 0 && g.Contains(p) {
		return -d
	}
	return d
}

// Area returns the area that g encloses, ½ Σ pᵢ × pᵢ₊₁, positive when the corners run
// counter-clockwise.
func (g Polygon) Area() float64 {
	var sum float64
	for i := range g {
		// From the first corner, so that a polygon far from the origin keeps its digits.
		e := g.Edge(i)
		sum += e.A.Sub(g[0]).Cross(e.B.Sub(g[0]))
	}
	return sum / 2
}

// Simple reports whether g is a polygon that has an inside: three corners or
// more, no edge of zero length, and no two edges with a point in common but the corner that neighbours
// share. Every pair is looked at: n²/2 steps of a few nanoseconds, some 3 ms for 1,000 corners.
func (g Polygon) Simple() bool {
	n := len(g)
	if n < 3 {
		return false
	}
	for i := range g {
		s := g.Edge(i)
		if s.A == s.B {
			return false
		}
		for j := i + 1; j < n; j++ {
			t := g.Edge(j)
			switch {
			case j == i+1:
				if folds(s.A, s.B, t.B) {
					return false
				}
			case i == 0 && j == n-1:
				if folds(t.A, t.B, s.B) {
					return false
				}
			case s.Cross(t):
				return false
			}
		}
	}
	return true
}

// folds reports whether the way a, b, c turns straight back on itself at b.
func folds(a, b, c Vec) bool {
	u, v := b.Sub(a), c.Sub(b)
	return u.Cross(v) == 0 && u.Dot(v) < 0
}
