package gen

import (
	"fmt"
	"math"

	"leeway/sim/chance"
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// dice draws from a random stream.
type dice struct{ stream chance.Stream }

// between returns a number in [lo, hi).
func (d *dice) between(lo, hi float64) float64 {
	return lo + float64((hi-lo)*d.stream.Uniform())
}

// below returns a whole number from 0 to n − 1.
func (d *dice) below(n int) int { return int(d.stream.Uniform() * float64(n)) }

// chance is true with probability p.
func (d *dice) chance(p float64) bool { return d.stream.Uniform() < p }

// angle returns an angle in [−π, π).
func (d *dice) angle() float64 { return d.between(-math.Pi, math.Pi) }

// shuffle puts n things into a random order.
func (d *dice) shuffle(n int, swap func(i, j int)) {
	for i := n - 1; i > 0; i-- {
		swap(i, d.below(i+1))
	}
}

// draft is a floor that is being laid out.
type draft struct {
	dice
	Options
	walledIn    bool // the goal shall have no way to it
	solids      []floor.Solid
	start, goal geom.Vec
}

// add puts a solid on the floor as it is.
func (d *draft) add(kind floor.Kind, id string, radius float64, points ...geom.Vec) {
	d.solids = append(d.solids, floor.Solid{ID: fmt.Sprintf("%s %d", id, len(d.solids)+1), Kind: kind, Points: points, Radius: radius})
}

// border walls the floor in.
func (d *draft) border() {
	w, h := d.Width, d.Height
	d.add(floor.Wall, "border", 0, geom.Vec{}, geom.Vec{X: w}, geom.Vec{X: w, Y: h}, geom.Vec{Y: h}, geom.Vec{})
}

// fits reports whether a solid touches the others or keeps clear of them, and
// keeps the hull and its margin free at start and goal where those are set.
func (d *draft) fits(s *floor.Solid) bool {
	for i := range d.solids {
		if g := gap(s, &d.solids[i]); g > 0 && g < d.clear() {
			return false
		}
	}
	return d.spares(s, d.start) && d.spares(s, d.goal)
}

// spares reports whether the hull and its margin are free of s at p. The zero point is not set yet.
func (d *draft) spares(s *floor.Solid, p geom.Vec) bool {
	return p == (geom.Vec{}) || distance(s, p) > d.Hull+d.Margin
}

// apart is fits for a solid that may touch none of the others.
func (d *draft) apart(s *floor.Solid) bool {
	for i := range d.solids {
		if gap(s, &d.solids[i]) < d.clear() {
			return false
		}
	}
	return d.spares(s, d.start) && d.spares(s, d.goal)
}

// free reports whether the hull and its margin are free at p.
func (d *draft) free(p geom.Vec) bool {
	for i := range d.solids {
		if distance(&d.solids[i], p) <= d.Hull+d.Margin {
			return false
		}
	}
	return true
}

// place returns a point within a rectangle, off its rim by the hull and its margin.
func (d *draft) place(x0, y0, x1, y1 float64) geom.Vec {
	r := d.Hull + d.Margin
	return geom.Vec{X: d.between(x0+r, x1-r), Y: d.between(y0+r, y1-r)}
}

// ends draws start and goal anywhere on the floor, well apart.
func (d *draft) ends() bool {
	for range 200 {
		a, b := d.place(0, 0, d.Width, d.Height), d.place(0, 0, d.Width, d.Height)
		if a.Sub(b).Norm() > d.Width/2 && d.free(a) && d.free(b) {
			d.start, d.goal = a, b
			return true
		}
	}
	return false
}

// pen walls the goal in with a ring of walls that leaves room for the hull and its margin.
func (d *draft) pen() bool {
	for range 50 {
		n := 4 + d.below(5)
		points := ngon(n, d.angle(), func() float64 { return d.between(1.1, 1.6) * (d.Hull + d.Margin) * 1.5 })
		for i := range points {
			points[i] = points[i].Add(d.goal)
		}
		s := floor.Solid{Kind: floor.Wall, Points: append(points, points[0])}
		if d.within(&s) && d.apart(&s) {
			d.add(s.Kind, "pen", 0, s.Points...)
			return true
		}
	}
	return false
}

// within reports whether a solid lies inside the border.
func (d *draft) within(s *floor.Solid) bool {
	for _, p := range s.Points {
		if p.X < s.Radius || p.X > d.Width-s.Radius || p.Y < s.Radius || p.Y > d.Height-s.Radius {
			return false
		}
	}
	return true
}
