package reach

import (
	"math"
	"slices"

	"leeway/sim/geom"
)

// ends returns the ends of the straight line that finishes a way.
func (y *Yard) ends(f *finish) (p, q geom.Vec) {
	s := &y.search
	p = s.from
	if f.side >= 0 {
		p = y.arcs[f.side/2].point(f.leave, signOf(f.side))
	}
	t := s.targets[f.target]
	if t.stop == 0 {
		return p, t.p
	}
	return p, p.AddScaled(f.length, t.p.Sub(p).Unit())
}

// way follows the way that ends with f back to the start, and flattens it.
func (y *Yard) way(f *finish) []geom.Vec {
	s := &y.search
	p, q := y.ends(f)
	back := []geom.Vec{q}
	if f.side >= 0 {
		o, side, arrive, leave := f.origin, f.side, f.arrive, f.leave
		for {
			back = y.flatten(back, side, arrive, leave)
			if o < 0 {
				break
			}
			// Edge o was left at its own place; its side was reached at the origin noted there.
			e := &y.edges[o]
			side, leave = e.from, e.leave
			if o = s.steps[o].origin; o < 0 {
				arrive = s.flights[-1-o].arrive
			} else {
				arrive = y.edges[o].arrive
			}
		}
		p = s.from
	}
	back = append(back, p)
	slices.Reverse(back)
	return slices.CompactFunc(back, func(a, b geom.Vec) bool { return a.Sub(b).Norm() < Skin })
}

// flatten appends the arc from leave back to arrive.
func (y *Yard) flatten(back []geom.Vec, side int32, arrive, leave float64) []geom.Vec {
	a := &y.arcs[side/2]
	angle, _ := a.ahead(arrive, leave)
	// A chord over the angle φ stays within radius·(1 − cos φ/2) ≤ radius·φ²/8 of its arc.
	n := math.Ceil(angle / math.Sqrt(8*Flatness/a.radius))
	for k := n; k >= 0; k-- {
		x := arrive
		if n > 0 {
			x += float64(angle * (k / n))
		}
		back = append(back, a.point(x, signOf(side)))
	}
	return back
}
