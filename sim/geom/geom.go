// Package geom holds the plane geometry that everything else in Leeway stands
// on: vectors, poses, segments, discs, polygons, and the angles and distances
// between them. It is values and free functions only; nothing here keeps state.
//
// Lengths are metres, angles radians, headings counter-clockwise from +x.
//
// # Same bits on every machine
//
// A switching logic turns one rounding error into another route, so amd64 and
// arm64 must agree bit for bit. Two habits, kept in every package under sim,
// see to it. Products that are added or subtracted are written
// float64(a*b) + float64(c*d), because the compiler may otherwise fuse them
// into one rounding on arm64. And sine, cosine, arc tangent, hypotenuse,
// exponential and logarithm are Leeway's own (exact.go), because those of the
// standard library have assembly on some machines. Square root and division are
// rounded correctly everywhere and are used as they are.
package geom

import "math"

// Vec is a point or a displacement in the plane, in metres.
type Vec struct{ X, Y float64 }

// Add returns a + b.
func (a Vec) Add(b Vec) Vec { return Vec{a.X + b.X, a.Y + b.Y} }

// Sub returns a − b.
func (a Vec) Sub(b Vec) Vec { return Vec{a.X - b.X, a.Y - b.Y} }

// Scale returns k·a. The products are rounded at once: without it, a sum that
// follows could fuse with them after inlining.
func (a Vec) Scale(k float64) Vec { return Vec{float64(k * a.X), float64(k * a.Y)} }

// AddScaled returns a + k·b.
func (a Vec) AddScaled(k float64, b Vec) Vec {
	return Vec{a.X + float64(k*b.X), a.Y + float64(k*b.Y)}
}

// Dot returns the inner product a·b.
func (a Vec) Dot(b Vec) float64 { return float64(a.X*b.X) + float64(a.Y*b.Y) }

// Cross returns the z component of a × b: positive when b lies to the left of a.
func (a Vec) Cross(b Vec) float64 { return float64(a.X*b.Y) - float64(a.Y*b.X) }

// Perp returns a turned a quarter left.
func (a Vec) Perp() Vec { return Vec{-a.Y, a.X} }

// Norm2 returns |a|².
func (a Vec) Norm2() float64 { return a.Dot(a) }

// Norm returns |a|.
func (a Vec) Norm() float64 { return math.Sqrt(a.Norm2()) }

// Unit returns a/|a|, and the zero vector for the zero vector.
func (a Vec) Unit() Vec {
	n := a.Norm()
	if n == 0 {
		return Vec{}
	}
	return Vec{a.X / n, a.Y / n}
}

// Rotate returns a turned left by the angle whose sine and cosine are given.
func (a Vec) Rotate(sin, cos float64) Vec {
	return Vec{float64(cos*a.X) - float64(sin*a.Y), float64(sin*a.X) + float64(cos*a.Y)}
}

// Angle returns the direction of a in (−π, π]; 0 for the zero vector.
func (a Vec) Angle() float64 { return Atan2(a.Y, a.X) }

// Finite reports whether both components are finite numbers.
func (a Vec) Finite() bool { return finite(a.X) && finite(a.Y) }

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

// Heading returns the unit vector e(θ) = (cos θ, sin θ).
func Heading(theta float64) Vec {
	s, c := Sincos(theta)
	return Vec{c, s}
}

// Pose is a place and a heading.
type Pose struct {
	Pos   Vec
	Theta float64
}

// ToWorld returns where the body-frame point p (x forward, y left) is in the world.
func (p Pose) ToWorld(b Vec) Vec {
	s, c := Sincos(p.Theta)
	return p.Pos.Add(b.Rotate(s, c))
}

// ToBody returns the world point w in the body frame of p.
func (p Pose) ToBody(w Vec) Vec {
	s, c := Sincos(p.Theta)
	return w.Sub(p.Pos).Rotate(-s, c)
}

// Segment is the straight line from A to B. A == B is allowed and is a point.
type Segment struct{ A, B Vec }

// Disc is a filled circle.
type Disc struct {
	Center Vec
	Radius float64
}

// Polygon is a filled simple polygon given by its corners, in either winding,
// the last joined to the first.
type Polygon []Vec
