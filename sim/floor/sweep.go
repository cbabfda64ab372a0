package floor

import (
	"math"

	"leeway/sim/geom"
)

const (
	// slides is how often the rest of a motion may be bent along what it touches
	// within one sweep. Two suffice in a corner; what is left after the last is lost.
	slides = 8

	// bias is the share of a bent motion by which it is turned away from the surface (at
	// most by Skin), so that rounding does not leave it pointing a hair into what it just touched.
	bias = 1e-13

	// flat is the angle, in radians, below which two surfaces that meet count as one.
	flat = 1e-9

	// longest is the farthest that a sweep goes, in metres: a motion beyond it is cut, lest squares overflow.
	longest = 10 * Limit
)

// Sweep moves a disc hull from p by d: up to the first touch freely, then along
// what it touches, the normal part of the motion lost (repeated a few times
// within the step for corners). It returns where the hull ends, and the first touch.
// A hull that starts by overlapping may move out but not further in.
// It never passes through anything, however fast. Touching (within Skin) is not overlapping.
//
// Where nothing is touched the end is p.Add(d), to the bit. Of several things touched at once
// the one that the hull is deepest in counts as the first. Numbers that are not finite, and
// places farther than 10·Limit from the origin, move nothing.
func (w *World) Sweep(p, d geom.Vec, radius float64) (end geom.Vec, c Contact, touched bool) {
	return w.slide(p, d, radius, everything)
}

// Shove says what the movers' displacement in the last Advance does to a hull
// standing at p: where it is pushed to (against standing solids it cannot be
// pushed through; then the mover overlaps it), and the first touch.
//
// It is Sweep seen from the mover: relative to it the hull moves by the opposite of its
// displacement and slides along its shape. Several movers push one after the other, in their order.
func (w *World) Shove(p geom.Vec, radius float64) (end geom.Vec, c Contact, touched bool) {
	c.Ref.Index = -1
	for i := range w.travel {
		v := w.travel[i]
		if v == (geom.Vec{}) {
			continue
		}
		// The mover stands at the end of its displacement. With it held there, the
		// hull comes from p + v and moves by −v.
		from := p.Add(v)
		rel, touch, ok := w.slide(from, v.Scale(-1), radius, target(i))
		if !ok {
			continue
		}
		if !touched || touch.At < c.At {
			// On the mover as it stood at the moment of the touch.
			touch.Point = touch.Point.AddScaled(touch.At-1, v)
			c, touched = touch, true
		}
		if push := rel.Sub(p); push != (geom.Vec{}) {
			p, _, _ = w.slide(p, push, radius, standing)
		}
	}
	return p, c, touched
}

// slide is Sweep against the targets.
func (w *World) slide(p, d geom.Vec, radius float64, at target) (end geom.Vec, c Contact, touched bool) {
	c.Ref.Index = -1
	if !(math.Abs(p.X) <= longest && math.Abs(p.Y) <= longest && d.Finite() && radius >= 0 && radius <= Limit) || d == (geom.Vec{}) {
		return p, c, false
	}
	if big := max(math.Abs(d.X), math.Abs(d.Y)); big > longest {
		d = d.Scale(longest / big)
	}
	start, reach := p, radius+Skin
	var in covers
	w.cover(&in, p, at)
	if in.n > 0 {
		if out, k := in.outward(p, d); k >= 0 {
			c, touched = in.contact(k, p, d, w.m), true
			d = out
		}
	}
	// What is left of the motion as it was wanted, and as bent along what was touched last.
	left, bent := d, d
	var last touch
	for i := range slides {
		h := touch{at: math.Inf(1), apart: math.Inf(1)}
		w.firstTouch(&h, p, bent, reach, at, &in)
		if !(h.at <= 1) {
			p = p.Add(bent)
			break
		}
		if h.at > 0 {
			p = p.AddScaled(h.at, bent)
			left = left.Scale(1 - h.at)
		}
		n, gap := h.from(p, radius)
		if !touched {
			q, _ := geom.NearestOnSegment(p, h.core)
			c = Contact{At: h.at, Point: q.AddScaled(h.thick, n), Normal: n, Ref: w.m.ref(h.owner)}
			touched = true
		}
		bent = bend(left, n, gap)
		if i > 0 && wedged(&last, p, radius, bent) {
			break
		}
		last = h
	}
	if in.n > 0 {
		if k := in.deeper(p); k >= 0 {
			p = start
			if !touched {
				c, touched = in.contact(k, p, d, w.m), true
			}
		}
	}
	return p, c, touched
}

// bend returns the motion d without its part into a surface with normal n that is gap away. What
// rounding has let the hull in by, within its skin, it gets back.
func bend(d, n geom.Vec, gap float64) geom.Vec {
	out := max(-d.Dot(n), 0) + min(float64(bias*d.Norm()), Skin)
	if gap >= 0 && gap < Skin {
		out += Skin - gap
	}
	return d.AddScaled(out, n)
}

// wedged reports whether a motion along one surface leads into the one touched before, which
// the hull at p still touches: along that one the way led into this one, so between the two
// there is none.
func wedged(last *touch, p geom.Vec, radius float64, d geom.Vec) bool {
	n, gap := last.from(p, radius)
	return gap <= 2*Skin && d.Dot(n) < -flat*d.Norm()
}
