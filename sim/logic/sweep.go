package logic

import (
	"math"

	"leeway/sim/geom"
)

// This file answers one question: which directions are free? The hull, or the
// hull with some clearance, sweeps a strip when it moves; every seen place near
// enough blocks an interval of directions about its own, and a ray that is turned
// from one interval's end to the next finds the first free direction. It is the
// walk along the boundary of the obstacles grown by the hull, with nothing built up
// beforehand and no angle computed: directions are unit vectors, intervals cosines.

// block is the interval of directions that one place blocks.
type block struct {
	dir geom.Vec // of the place
	cos float64  // of the interval's half width
}

// blockStrips lists the directions in which a strip of half width w and length
// reach meets something.
func (s *sight) blockStrips(w, reach float64) {
	s.blocks = s.blocks[:0]
	far, edge, tangent := reach+w, float64(w*(1+alike)), float64(reach*reach)+float64(w*w)
	for i := range s.points {
		p := &s.points[i]
		if p.rho >= far || p.rho == 0 {
			continue
		}
		k := 1 / p.rho
		var cos float64
		switch {
		case p.rho <= edge:
			// Inside already, or on the edge: every direction that comes nearer is blocked.
			cos = -math.Min(0.5, (w-p.rho)/reach)
		case float64(p.rho*p.rho) <= tangent:
			// The side of the strip meets it.
			cos = math.Sqrt(1 - float64((w*k)*(w*k)))
		default:
			// The round end of the strip does.
			cos = (float64(p.rho*p.rho) + float64(reach*reach) - float64(w*w)) * k / (2 * reach)
		}
		s.blocks = append(s.blocks, block{p.v.Scale(k), cos})
	}
}

// covers reports whether the interval holds the direction d in its inside.
func (b *block) covers(d geom.Vec) bool { return b.dir.Dot(d) > b.cos+1e-12 }

// end returns the end of the interval, turning away from a wall on the given side;
// its start for the other side.
func (b *block) end(side Side) geom.Vec {
	sin := math.Sqrt(math.Max(0, 1-float64(b.cos*b.cos)))
	if side == LeftSide {
		sin = -sin
	}
	return b.dir.Rotate(sin, b.cos)
}

// maxPasses bounds how often the blocks are gone through for one direction. Beams
// in order of bearing take two or three passes, in reverse order one for each block in the way.
const maxPasses = 100

// sweep turns a ray from the direction from, away from a wall on the given side
// (clockwise for a wall on the left), to the first direction that nothing blocks,
// and returns that; ok is false when the ray comes once round.
func (s *sight) sweep(from geom.Vec, side Side) (dir geom.Vec, ok bool) {
	dir = from
	turned := 0.0
	for range maxPasses {
		moved := false
		for i := range s.blocks {
			b := &s.blocks[i]
			if !b.covers(dir) {
				continue
			}
			next := b.end(side)
			at := turn(from, next, side)
			if at < turned {
				return geom.Vec{}, false
			}
			dir, turned, moved = next, at, true
		}
		if !moved {
			return dir, true
		}
	}
	return geom.Vec{}, false
}

// middle returns the direction in the middle of the opening that begins at the
// direction first; a right angle beyond first where the opening is wider than a half turn.
func (s *sight) middle(first geom.Vec, side Side) geom.Vec {
	open, end := 2.0, first.Scale(-1)
	for i := range s.blocks {
		b := &s.blocks[i]
		if b.dir.Dot(first) > b.cos-alike && turn(first, b.dir, side) > 2 {
			continue // this one ends where the opening begins
		}
		start := b.end(-side)
		if a := turn(first, start, side); a < open {
			open, end = a, start
		}
	}
	m := first.Add(end)
	if open < 2 && m.Norm2() > 1e-12 {
		return m.Unit()
	}
	if side == LeftSide {
		return geom.Vec{X: first.Y, Y: -first.X}
	}
	return first.Perp()
}

// alike is how little two turns, or cosines, differ that only rounding tells apart.
const alike = 1e-9

// turn measures how far b is turned from a, away from a wall on the side: a number
// in [0, 4) that grows with the angle and is 0 at none, 1 at a right angle, 2 at a
// half turn. A b that is behind a by no more than rounding counts as not turned.
func turn(a, b geom.Vec, side Side) float64 {
	x, y := a.Dot(b), a.Cross(b)
	if side == LeftSide {
		y = -y
	}
	n := math.Abs(x) + math.Abs(y)
	switch {
	case n == 0 || x > 0 && y < 0 && -y < alike*n:
		return 0
	case y >= 0 && x >= 0:
		return y / n
	case y >= 0:
		return 1 - x/n
	case x < 0:
		return 2 - y/n
	default:
		return 3 + x/n
	}
}

// touchAt returns how far a disc of radius w, centred at the origin, moves along
// the unit vector dir until it touches the point p; ok is false when it never
// does. A disc that overlaps p already touches at 0, unless it moves away.
func touchAt(p, dir geom.Vec, w float64) (distance float64, ok bool) {
	along := p.Dot(dir)
	if along <= 0 {
		return 0, false
	}
	side := dir.Cross(p)
	left := float64(w*w) - float64(side*side)
	if left <= 0 {
		return 0, false
	}
	if along -= math.Sqrt(left); along < 0 {
		along = 0
	}
	return along, true
}
