package gen

import (
	"math"

	"leeway/sim/floor"
	"leeway/sim/geom"
)

// ngon returns n points about the origin at even angles from turn on, at distances that radius gives.
func ngon(n int, turn float64, radius func() float64) []geom.Vec {
	points := make([]geom.Vec, n, n+1)
	for i := range points {
		points[i] = geom.Heading(turn + float64(2*math.Pi*float64(i)/float64(n))).Scale(radius())
	}
	return points
}

// rectangle returns the corners of a box with opposite corners at (x0, y0) and (x1, y1).
func rectangle(x0, y0, x1, y1 float64) []geom.Vec {
	return []geom.Vec{{X: x0, Y: y0}, {X: x1, Y: y0}, {X: x1, Y: y1}, {X: x0, Y: y1}}
}

// moved turns points by an angle about the origin and then shifts them.
func moved(points []geom.Vec, turn float64, by geom.Vec) []geom.Vec {
	sin, cos := geom.Sincos(turn)
	out := make([]geom.Vec, len(points))
	for i, p := range points {
		out[i] = p.Rotate(sin, cos).Add(by)
	}
	return out
}

// thing draws a solid about the origin: a box, a polygon convex or not, a disc, or a loose wall.
func (d *draft) thing() (s floor.Solid, id string) {
	switch d.below(6) {
	case 0:
		w, h := d.between(0.2, 1), d.between(0.15, 0.6)
		return floor.Solid{Kind: floor.Polygon, Points: rectangle(-w, -h, w, h)}, "box"
	case 1:
		r := d.between(0.3, 0.9)
		return floor.Solid{Kind: floor.Polygon, Points: ngon(3+d.below(5), d.angle(), func() float64 { return r })}, "block"
	case 2: // a rock: corners in and out
		return floor.Solid{Kind: floor.Polygon, Points: ngon(6+d.below(5), d.angle(), func() float64 { return d.between(0.35, 1) })}, "rock"
	case 3: // an angle of two thick arms
		a, b, t := d.between(0.8, 1.6), d.between(0.8, 1.6), d.between(0.15, 0.4)
		return floor.Solid{Kind: floor.Polygon, Points: []geom.Vec{{}, {X: a}, {X: a, Y: t}, {X: t, Y: t}, {X: t, Y: b}, {Y: b}}}, "angle"
	case 4:
		return floor.Solid{Kind: floor.Disc, Points: []geom.Vec{{}}, Radius: d.between(0.1, 0.6)}, "post"
	}
	// A loose wall of one to three legs, which turn gently enough that none comes back on another.
	points := []geom.Vec{{}}
	turn := 0.0
	for range 1 + d.below(3) {
		points = append(points, points[len(points)-1].Add(geom.Heading(turn).Scale(d.between(0.6, 1.8))))
		turn += d.between(-1, 1)
	}
	return floor.Solid{Kind: floor.Wall, Points: points}, "wall"
}

// sides calls f for every segment of a solid, until f says stop.
func sides(s *floor.Solid, f func(geom.Segment) (goOn bool)) {
	n := len(s.Points)
	switch s.Kind {
	case floor.Disc:
		f(geom.Segment{A: s.Points[0], B: s.Points[0]})
	case floor.Polygon:
		for i, p := range s.Points {
			if !f(geom.Segment{A: p, B: s.Points[(i+1)%n]}) {
				return
			}
		}
	case floor.Wall:
		for i := 1; i < n; i++ {
			if !f(geom.Segment{A: s.Points[i-1], B: s.Points[i]}) {
				return
			}
		}
	}
}

// distance returns the distance of p to a solid; 0 inside.
func distance(s *floor.Solid, p geom.Vec) float64 {
	if s.Kind == floor.Polygon && geom.Polygon(s.Points).Contains(p) {
		return 0
	}
	least := math.Inf(1)
	sides(s, func(e geom.Segment) bool {
		least = math.Min(least, geom.DistanceToSegment(p, e)-s.Radius)
		return true
	})
	return math.Max(0, least)
}

// gap returns the distance between two solids; 0 when they touch or overlap.
func gap(a, b *floor.Solid) float64 {
	if distance(a, b.Points[0]) == 0 || distance(b, a.Points[0]) == 0 {
		return 0 // one may lie inside the other
	}
	least := math.Inf(1)
	sides(a, func(e geom.Segment) bool {
		sides(b, func(f geom.Segment) bool {
			least = math.Min(least, segmentGap(e, f)-a.Radius-b.Radius)
			return least > 0
		})
		return least > 0
	})
	return math.Max(0, least)
}

// segmentGap returns the distance between two segments.
func segmentGap(e, f geom.Segment) float64 {
	if e.Cross(f) {
		return 0
	}
	return math.Min(
		math.Min(geom.DistanceToSegment(e.A, f), geom.DistanceToSegment(e.B, f)),
		math.Min(geom.DistanceToSegment(f.A, e), geom.DistanceToSegment(f.B, e)))
}
