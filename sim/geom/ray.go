package geom

import "math"

// A straight motion is written origin + t·d. Where d is a unit vector t is a
// length in metres (a ray); where d is the displacement of a step t is the
// fraction of it (a moving disc).

// OnLine is how far behind the origin of a ray a surface may lie, in metres,
// and still count as touched at range 0: a ray that starts on a surface must not
// slip through it by a rounding error.
const OnLine = 1e-12

// Narrow is the apparent width of a segment, seen from the origin of a ray and
// measured across it in metres, below which its range is kept between those of its ends:
// edge-on the quotient below is one of rounding errors.
const Narrow = 1e-3

// SegmentRange returns the range t ≥ 0, in units of |d|, at which the ray from o
// along d first meets s. With a = A − o, b = B − o:
//
//	t = (a × b) / (d × b − d × a)
//
// Both ends belong to the segment, and two segments that share an end leave no gap between them.
// A ray along the segment meets its nearer end, or range 0 if it starts on it. A segment seen
// edge-on is never reported nearer or farther than it is. ok is
// false, and t 0, when they do not meet or something is not a number. The range is the same
// bits when A and B are exchanged and when everything is mirrored in an axis.
//
// d must be a unit vector for t to be a range in metres.
func SegmentRange(o, d Vec, s Segment) (t float64, ok bool) {
	a, b := s.A.Sub(o), s.B.Sub(o)
	ca, cb := d.Cross(a), d.Cross(b)
	if !(ca <= 0 && cb >= 0 || ca >= 0 && cb <= 0) {
		return 0, false
	}
	den := cb - ca
	if math.Abs(den) < Narrow {
		return edgeOn(a, b, d, den)
	}
	t = a.Cross(b) / den
	if t > 0 {
		return t, true
	}
	return 0, t >= -OnLine
}

// edgeOn is SegmentRange for a segment that is narrow or lies along the ray.
func edgeOn(a, b, d Vec, den float64) (float64, bool) {
	da, db := d.Dot(a), d.Dot(b)
	t, hi := min(da, db), max(da, db)
	switch {
	case den != 0:
		t = min(max(a.Cross(b)/den, t), hi)
	case hi >= -OnLine: // along the ray, and not all of it behind
		t = max(t, 0)
	}
	if !(t >= -OnLine) {
		return 0, false
	}
	return max(t, 0), true
}

// RaySegment is SegmentRange that also tells the place: the fraction f in [0, 1] of the way from s.A to
// s.B, f = −(d × a) / (d × b − d × a).
func RaySegment(o, d Vec, s Segment) (t, f float64, ok bool) {
	if t, ok = SegmentRange(o, d, s); !ok {
		return 0, 0, false
	}
	a, e := s.A.Sub(o), s.B.Sub(s.A)
	f = -d.Cross(a) / (d.Cross(s.B.Sub(o)) - d.Cross(a))
	if math.IsNaN(f) { // along the ray
		if along := d.Dot(e); along != 0 {
			f = (t - d.Dot(a)) / along
		} else {
			f = 0
		}
	}
	return t, min(max(f, 0), 1), true
}

// RayCircle returns both places where the line through o along the unit vector d
// meets the circle round c, as ranges t (near ≤ far, negative when behind o):
//
//	t = c·d ∓ √(R² − (c × d)²),   c from o to the centre
//
// A tangent line gives the same range twice. ok is false when the line misses.
func RayCircle(o, d Vec, c Disc) (near, far float64, ok bool) {
	v := c.Center.Sub(o)
	side := math.Abs(v.Cross(d))
	h2 := float64((c.Radius - side) * (c.Radius + side))
	if !(h2 >= 0) {
		return 0, 0, false
	}
	mid, h := v.Dot(d), math.Sqrt(h2)
	return mid - h, mid + h, true
}

// RayDisc returns the range at which the ray from o along the unit vector d
// enters the filled disc c: 0 when it starts in it or on its edge.
func RayDisc(o, d Vec, c Disc) (t float64, ok bool) {
	v := c.Center.Sub(o)
	if v.Norm2() <= float64(c.Radius*c.Radius) {
		return 0, true
	}
	near, _, ok := RayCircle(o, d, c)
	if !ok || !(v.Dot(d) > 0) {
		return 0, false
	}
	return max(near, 0), true
}

// DiscTouchesPoint returns the fraction t ≥ 0 of the displacement d at which a
// disc of radius r that starts at p first touches the point q: the root of
// |p + t·d − q| = r. A disc that touches or covers q at the start touches it at 0 if it
// is coming nearer, and otherwise never; so does one that stands still. ok is false for never.
// t may exceed 1: the caller knows how far the disc goes.
func DiscTouchesPoint(p, d Vec, r float64, q Vec) (t float64, ok bool) {
	v := p.Sub(q)
	closing := -v.Dot(d)
	if !(closing > 0) {
		return 0, false
	}
	if v.Norm2() <= float64(r*r) {
		return 0, true
	}
	d2 := d.Norm2()
	speed := math.Sqrt(d2)
	side := math.Abs(v.Cross(d)) / speed
	h2 := float64((r - side) * (r + side))
	if !(h2 >= 0) {
		return 0, false
	}
	return max((closing-float64(math.Sqrt(h2)*speed))/d2, 0), true
}

// DiscTouchesDisc is DiscTouchesPoint against the disc c: the point c.Center with
// the two radii added.
func DiscTouchesDisc(p, d Vec, r float64, c Disc) (t float64, ok bool) {
	return DiscTouchesPoint(p, d, r+c.Radius, c.Center)
}

// DiscTouchesSegment is DiscTouchesPoint against a segment: the centre against
// the segment thickened by r, which is two sides parallel to it and a round cap at
// each end (their Minkowski sum). Distance to a convex set is a convex function along a
// straight motion, so a disc that is not coming nearer at the start never will.
func DiscTouchesSegment(p, d Vec, r float64, s Segment) (t float64, ok bool) {
	v := FromSegment(p, s)
	if v.Norm2() <= float64(r*r) {
		return 0, v.Dot(d) < 0
	}
	e := s.B.Sub(s.A)
	if n := e.Norm(); n > 0 {
		e = Vec{e.X / n, e.Y / n}
		a := p.Sub(s.A)
		x, vx := e.Dot(a), e.Dot(d)
		h, vh := e.Cross(a), e.Cross(d)
		if h < 0 {
			h, vh = -h, -vh
		}
		// Beside the segment h may come out below r by a rounding error.
		if vh < 0 && (h >= r || x >= 0 && x <= n) {
			t = max((h-r)/-vh, 0)
			if x += float64(t * vx); x >= 0 && x <= n {
				return t, true
			}
		}
	}
	ta, oka := DiscTouchesPoint(p, d, r, s.A)
	tb, okb := DiscTouchesPoint(p, d, r, s.B)
	if oka && (!okb || ta <= tb) {
		return ta, true
	}
	return tb, okb
}
