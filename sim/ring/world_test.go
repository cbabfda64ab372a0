package ring

import (
	"math"

	"leeway/sim/floor"
	"leeway/sim/geom"
)

// toy is a world of straight walls without end and of discs, worked out on paper
// here so that the ring is tested by itself.
type toy struct {
	walls []wall
	discs []geom.Disc
	casts int // calls of Cast
	rays  int // rays in the last
}

// wall is the half plane n·p ≥ d, n a unit vector.
type wall struct {
	n geom.Vec
	d float64
}

// through returns the wall whose face runs through a and b, solid to the right.
func through(a, b geom.Vec) wall {
	n := b.Sub(a).Unit().Perp().Scale(-1)
	return wall{n, n.Dot(a)}
}

func (w *toy) Cast(rays []floor.Ray, limit float64, out []float64) {
	w.casts++
	w.rays = len(rays)
	for i, r := range rays {
		best := math.Inf(1)
		for _, l := range w.walls {
			behind := l.d - l.n.Dot(r.Origin)
			switch toward := l.n.Dot(r.Dir); {
			case behind <= 0:
				best = 0
			case toward > 0:
				best = min(best, behind/toward)
			}
		}
		for _, d := range w.discs {
			m := d.Center.Sub(r.Origin)
			along := m.Dot(r.Dir)
			across := m.Cross(r.Dir)
			if h := d.Radius*d.Radius - across*across; h >= 0 && along > 0 {
				best = min(best, max(along-math.Sqrt(h), 0))
			}
		}
		if best > limit {
			best = math.Inf(1)
		}
		out[i] = best
	}
}

func (w *toy) Nearest(p geom.Vec, within float64) (floor.Near, bool) {
	near := floor.Near{Distance: math.Inf(1)}
	for i, l := range w.walls {
		if d := l.d - l.n.Dot(p); d < near.Distance {
			near = floor.Near{Distance: d, Point: p.AddScaled(d, l.n), Ref: floor.Ref{Index: i}}
		}
	}
	for i, c := range w.discs {
		if d := c.Center.Sub(p).Norm() - c.Radius; d < near.Distance {
			near = floor.Near{Distance: d, Point: p.AddScaled(d, c.Center.Sub(p).Unit()), Ref: floor.Ref{Index: i}}
		}
	}
	return near, near.Distance <= within
}

// shell is a world in which every ray meets something at the same distance.
type shell float64

func (s shell) Cast(rays []floor.Ray, limit float64, out []float64) {
	for i := range rays {
		if out[i] = float64(s); out[i] > limit {
			out[i] = math.Inf(1)
		}
	}
}

func (s shell) Nearest(geom.Vec, float64) (floor.Near, bool) { return floor.Near{}, false }

// plain is an even ring of n beams without imperfections.
func plain(n int) Config {
	return Config{Bearings: Even(n), Max: 10, Period: 1, SubRays: 1}
}
