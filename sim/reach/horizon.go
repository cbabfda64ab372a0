package reach

import (
	"math"

	"leeway/sim/geom"
)

// horizon finds what can be seen from an arc, so that bitangents are only tried
// toward circles that are not plainly hidden.
//
// The rays that leave an arc along its tangents, all travelled the same way,
// sweep the plane outside the circle once: a place has one ray, told by the
// normal n at which it leaves the circle, and a distance t along it, where
// t² = D² − r² with D the distance to the circle's centre. So a straight wall,
// which a ray crosses once at most, hides a range of rays beyond the larger t of
// its ends. The range of rays is cut into bins, each with the distance beyond
// which it is wholly hidden. The grid's cells are visited in blocks, the near
// ones first, and blocks that lie beyond the horizon are passed over.
//
// A horizon only ever hides what is blocked; what it leaves over is looked at exactly.
type horizon struct {
	a      *arc
	k      float64 // signed radius of the arc's circle: + when travelled counter-clockwise
	sign   float64
	scale  float64 // bins per unit of pseudo angle
	bins   [horizonBins]float64
	stamp  uint32
	prims  []uint32 // stamps of the prims taken in
	arcs   []uint32 // stamps of the arcs seen
	seen   []int32  // arcs that may be in sight
	levels int
}

// horizonBins is how many bins the rays of an arc are cut into. Two walls that
// share a corner hide it together as long as a hull's diameter there spans a bin.
const horizonBins = 256

// pseudo maps a direction, seen from the arc's start, to [0, 4), growing with
// the angle: the corner distance along a square instead of a circle.
func (h *horizon) pseudo(n geom.Vec) float64 {
	x, y := h.a.lo.Dot(n), h.a.lo.Cross(n)
	f := x / (math.Abs(x) + math.Abs(y))
	if y < 0 {
		return 3 + f
	}
	return 1 - f
}

// look fills seen with the arcs that may be in sight from arc a travelled with the sign given.
func (y *Yard) look(a *arc, sign float64) []int32 {
	h := &y.horizon
	if h.prims == nil {
		h.prims, h.arcs = make([]uint32, len(y.prims)), make([]uint32, len(y.arcs))
		for 1<<h.levels < max(y.grid.cols, y.grid.rows) {
			h.levels++
		}
	}
	h.stamp++
	h.a, h.k, h.sign, h.seen = a, sign*a.radius, sign, h.seen[:0]
	h.scale = horizonBins / 4.0
	if !a.whole() {
		h.scale = horizonBins / h.pseudo(a.hi)
	}
	for i := range h.bins {
		h.bins[i] = math.Inf(1)
	}
	if y.grid.cols > 0 {
		y.visit(h.levels, 0, 0)
	}
	return h.seen
}

// visit takes in a block of 2^level cells a side, the near parts first.
func (y *Yard) visit(level, col, row int) {
	h, g := &y.horizon, &y.grid
	if col >= g.cols || row >= g.rows || h.hides(g, level, col, row) {
		return
	}
	if level > 0 {
		half := 1 << (level - 1)
		x, z := 0, 0
		if h.a.center.X > g.min.X+float64(float64(col+half)*g.cell) {
			x = half
		}
		if h.a.center.Y > g.min.Y+float64(float64(row+half)*g.cell) {
			z = half
		}
		y.visit(level-1, col+x, row+z)
		y.visit(level-1, col+half-x, row+z)
		y.visit(level-1, col+x, row+half-z)
		y.visit(level-1, col+half-x, row+half-z)
		return
	}
	k := row*g.cols + col
	for _, i := range g.prims.at(k) {
		if h.prims[i] != h.stamp {
			h.prims[i] = h.stamp
			h.takeIn(&y.prims[i], y.hull-Skin)
		}
	}
	for _, i := range g.arcs.at(k) {
		if h.arcs[i] != h.stamp {
			h.arcs[i] = h.stamp
			h.seen = append(h.seen, i)
		}
	}
}

// leaves returns the normal at which the ray toward a circle of signed radius k
// about p leaves the arc's circle, and the length of that ray up to where it touches.
func (h *horizon) leaves(p geom.Vec, k float64) (n geom.Vec, t float64, ok bool) {
	u, t, ok := tangent(h.a.center, h.k, p, k)
	return u.Perp().Scale(-h.sign), t, ok
}

// takeIn lowers the horizon by a prim grown by r.
func (h *horizon) takeIn(q *prim, r float64) {
	if pointGap2(h.a.center, q.a, q.b) <= square(h.a.radius) {
		return
	}
	lo, hi := q.a, q.b
	n1, t1, ok1 := h.leaves(lo, 0)
	n2, t2, ok2 := h.leaves(hi, 0)
	if !ok1 || !ok2 {
		return
	}
	depth := math.Max(t1, t2)
	switch c := n1.Cross(n2); {
	case c < 0:
		lo, hi, n1, n2 = hi, lo, n2, n1
	case math.Abs(c) < 1e-9 && n1.Dot(n2) < 0:
		return // half a turn: which half is lost to rounding
	}
	// The thickness hides a little more on either side.
	r += q.thick
	if n, t, ok := h.leaves(lo, r); ok && apart(h.a, lo, r) {
		n1, depth = n, math.Max(depth, t)
	}
	if n, t, ok := h.leaves(hi, -r); ok && apart(h.a, hi, r) {
		n2, depth = n, math.Max(depth, t)
	}
	const margin = 1e-9
	from, to := float64(h.pseudo(n1)*h.scale), float64(h.pseudo(n2)*h.scale)
	i := int(math.Ceil(math.Min(from+margin, horizonBins)))
	j := int(math.Min(to-margin, horizonBins))
	switch {
	case from <= to:
		h.lower(i, j, depth)
	case from-to > h.scale: // across the arc's start; less is two equal directions, rounded
		h.lower(0, j, depth)
		h.lower(i, horizonBins, depth)
	}
}

// apart reports whether a circle of radius r about p keeps clear of the arc's circle.
func apart(a *arc, p geom.Vec, r float64) bool {
	return p.Sub(a.center).Norm2() > square(r+a.radius)
}

func (h *horizon) lower(i, j int, depth float64) {
	for ; i < j; i++ {
		h.bins[i] = math.Min(h.bins[i], depth)
	}
}

// hidden reports whether what the ray at normal n meets at distance t lies beyond the horizon.
func (h *horizon) hidden(n geom.Vec, t float64) bool {
	i := int(math.Min(h.pseudo(n)*h.scale, horizonBins-1))
	return t > h.bins[i]+Skin
}

// hides reports whether a block of cells lies wholly beyond the horizon or off the arc's rays.
func (h *horizon) hides(g *grid, level, col, row int) bool {
	reach := float64(g.cell * float64(int(1)<<level) / 2) // from a corner to the middle, along an axis
	half := reach + float64(g.cell*1e-6)
	middle := geom.Vec{X: g.min.X + float64(float64(col)*g.cell) + reach, Y: g.min.Y + float64(float64(row)*g.cell) + reach}
	// Near blocks are never hidden: seen from them the corners stand in no simple order.
	w := middle.Sub(h.a.center)
	dx, dy := math.Max(0, math.Abs(w.X)-half), math.Max(0, math.Abs(w.Y)-half)
	d2 := float64(dx*dx) + float64(dy*dy)
	if d2 < square(2*half+h.a.radius) {
		return false
	}
	first, _, _ := h.leaves(middle, 0)
	lo, hi := first, first
	for _, c := range [4]geom.Vec{{X: -half, Y: -half}, {X: half, Y: -half}, {X: half, Y: half}, {X: -half, Y: half}} {
		n, _, _ := h.leaves(middle.Add(c), 0)
		if lo.Cross(n) < 0 {
			lo = n
		}
		if hi.Cross(n) > 0 {
			hi = n
		}
	}
	t := math.Sqrt(d2 - square(h.a.radius))
	from, to := float64(h.pseudo(lo)*h.scale), float64(h.pseudo(hi)*h.scale)
	// A bin more on either side makes up for rounding.
	i, j := int(math.Min(from, horizonBins+1))-1, int(math.Min(to, horizonBins+1))+1
	if to >= from {
		return h.beyond(i, j, t)
	}
	return h.beyond(0, j, t) && h.beyond(i, horizonBins, t)
}

// beyond reports whether the bins i … j are all hidden at distance t.
func (h *horizon) beyond(i, j int, t float64) bool {
	for i, j = max(i, 0), min(j, horizonBins-1); i <= j; i++ {
		if h.bins[i] >= t {
			return false
		}
	}
	return true
}
