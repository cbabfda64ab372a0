package floor

import (
	"math"

	"leeway/sim/geom"
)

// World is the floor of one run at one time: the shared map, the movers where
// they are now, and the solids that a person has moved.
type World struct {
	m *Map

	// The primitives of the map. Once a solid has been moved they are the
	// world's own copy, in which those of the moved solid are not numbers: such a
	// primitive is never met and never nearest, so the shared index stays as it is.
	segs  []geom.Segment
	discs []geom.Disc

	ownSegs  []geom.Segment // memory of the copy, kept by Reset
	ownDiscs []geom.Disc

	lifted []int32 // of each solid, its place in bodies; −1 while it stands in the map
	moved  bool    // some solid has been lifted

	bodies []body // the movers in order, then the lifted solids as they were lifted
	travel []geom.Vec
	shift  []geom.Vec // of each mover, by which its route has been moved
	time   float64

	near []int32 // scratch of Cast
}

// body is something outside the index: a mover or a lifted solid.
type body struct {
	owner int32
	kind  Kind
	at    geom.Vec // of a mover its centre, of a solid its anchor
	segs  []geom.Segment
	disc  geom.Disc
	// A circle that holds all of it, a hair too wide.
	mid   geom.Vec
	bound float64
}

// NewWorld returns the floor at t = 0.
func (m *Map) NewWorld() *World {
	w := &World{}
	w.stand(m)
	return w
}

// Reset puts w back to t = 0 of its map with no edits, keeping its memory.
func (w *World) Reset() { w.stand(w.m) }

// stand makes w the unedited world of m at t = 0.
func (w *World) stand(m *Map) {
	w.m, w.segs, w.discs = m, m.segs, m.discs
	w.moved = false
	w.time = 0
	n := len(m.movers)
	w.bodies = resize(w.bodies, n)
	w.travel = resize(w.travel, n)
	w.shift = resize(w.shift, n)
	w.lifted = resize(w.lifted, len(m.solids))
	for i := range w.lifted {
		w.lifted[i] = -1
	}
	for i := range m.movers {
		w.travel[i], w.shift[i] = geom.Vec{}, geom.Vec{}
		w.placeMover(i, m.movers[i].at(0))
	}
}

// CopyFrom makes w the same as src (same map or not), keeping its memory.
func (w *World) CopyFrom(src *World) {
	if w == src {
		return
	}
	w.m, w.segs, w.discs = src.m, src.m.segs, src.m.discs
	w.moved, w.time = src.moved, src.time
	if src.moved {
		w.ownSegs = append(w.ownSegs[:0], src.segs...)
		w.ownDiscs = append(w.ownDiscs[:0], src.discs...)
		w.segs, w.discs = w.ownSegs, w.ownDiscs
	}
	w.lifted = append(w.lifted[:0], src.lifted...)
	w.travel = append(w.travel[:0], src.travel...)
	w.shift = append(w.shift[:0], src.shift...)
	w.bodies = resize(w.bodies, len(src.bodies))
	for i := range src.bodies {
		segs := append(w.bodies[i].segs[:0], src.bodies[i].segs...)
		w.bodies[i] = src.bodies[i]
		w.bodies[i].segs = segs
	}
}

// resize returns s with length n; elements within its capacity keep their memory.
func resize[T any](s []T, n int) []T {
	if n <= cap(s) {
		return s[:n]
	}
	return append(s[:cap(s)], make([]T, n-cap(s))...)
}

// Advance brings every mover to where its timetable has it at t seconds, a pure function of t
// and of the edits; it remembers the displacement since the last call for Shove. That displacement
// is taken as straight, also where a mover turns at a way point in between.
func (w *World) Advance(t float64) {
	w.time = t
	for i := range w.m.movers {
		tt := &w.m.movers[i]
		if tt.period == 0 {
			w.travel[i] = geom.Vec{}
			continue
		}
		from, to := w.bodies[i].at, tt.at(t).Add(w.shift[i])
		w.travel[i] = to.Sub(from)
		if to != from {
			w.placeMover(i, to)
		}
	}
}

// MoveSolid shifts a solid so that its anchor (the first point of a wall or
// polygon, the centre of a disc) comes to lie at p. The first time this takes the solid out
// of what the map holds for this world, which copies the primitives; later moves are cheap.
// Where it stands depends on p alone, not on the way there. A p that is not finite or beyond
// Limit is ignored.
func (w *World) MoveSolid(i int, p geom.Vec) {
	if !withinLimit(p) {
		return
	}
	if w.lifted[i] < 0 {
		w.lift(i)
	}
	s, b := &w.m.solids[i], &w.bodies[w.lifted[i]]
	b.at = p
	anchor := s.Points[0]
	place := func(k int) geom.Vec { return p.Add(s.Points[k].Sub(anchor)) }
	for k := range b.segs {
		b.segs[k] = geom.Segment{A: place(k), B: place((k + 1) % len(s.Points))}
	}
	b.disc = geom.Disc{Center: p, Radius: s.Radius}
	b.enclose()
}

func withinLimit(p geom.Vec) bool { return math.Abs(p.X) <= Limit && math.Abs(p.Y) <= Limit }

// lift takes solid i out of the primitives of the map and makes it a body.
func (w *World) lift(i int) {
	if !w.moved {
		w.ownSegs = append(w.ownSegs[:0], w.m.segs...)
		w.ownDiscs = append(w.ownDiscs[:0], w.m.discs...)
		w.segs, w.discs = w.ownSegs, w.ownDiscs
		w.moved = true
	}
	nan := geom.Vec{X: math.NaN(), Y: math.NaN()}
	for k := w.m.firstSeg[i]; k < w.m.firstSeg[i+1]; k++ {
		w.segs[k] = geom.Segment{A: nan, B: nan}
	}
	for k := w.m.firstDisc[i]; k < w.m.firstDisc[i+1]; k++ {
		w.discs[k] = geom.Disc{Center: nan, Radius: math.NaN()}
	}
	s := &w.m.solids[i]
	n := len(w.bodies)
	w.lifted[i] = int32(n)
	w.bodies = resize(w.bodies, n+1)
	b := &w.bodies[n]
	b.owner, b.kind = int32(i), s.Kind
	b.segs = resize(b.segs, edgeCount(s.Kind, len(s.Points)))
}

// MoveMover shifts the route of a mover so that its first way point comes to lie
// at p; the mover goes with it at once, and that jump is not a displacement that shoves.
func (w *World) MoveMover(i int, p geom.Vec) {
	if !withinLimit(p) {
		return
	}
	tt := &w.m.movers[i]
	w.shift[i] = p.Sub(tt.Route[0])
	if tt.period == 0 {
		w.placeMover(i, p)
		return
	}
	w.placeMover(i, tt.at(w.time).Add(w.shift[i]))
}

// placeMover puts the shape of mover i round its centre.
func (w *World) placeMover(i int, at geom.Vec) {
	tt, b := &w.m.movers[i], &w.bodies[i]
	b.owner, b.at = int32(len(w.m.solids)+i), at
	b.segs = resize(b.segs, len(tt.corners))
	if tt.corners == nil {
		b.kind = Disc
		b.disc = geom.Disc{Center: at, Radius: tt.Radius}
	} else {
		b.kind = Polygon
		for k := range b.segs {
			b.segs[k] = geom.Segment{A: at.Add(tt.corners[k]), B: at.Add(tt.corners[(k+1)%len(tt.corners)])}
		}
	}
	b.enclose()
}

// SolidAt says where a solid is now. The points of one that was never moved are
// the map's own memory: read, do not change.
func (w *World) SolidAt(i int) Solid {
	s := w.m.solids[i]
	k := w.lifted[i]
	if k < 0 {
		return s
	}
	b := &w.bodies[k]
	moved := make([]geom.Vec, 0, len(s.Points))
	if s.Kind == Disc {
		moved = append(moved, b.disc.Center)
	}
	for _, e := range b.segs {
		moved = append(moved, e.A)
	}
	if s.Kind == Wall {
		moved = append(moved, b.segs[len(b.segs)-1].B)
	}
	s.Points = moved
	return s
}

// MoverAt returns where the centre of a mover is now; its heading is fixed.
func (w *World) MoverAt(i int) geom.Vec { return w.bodies[i].at }

// enclose sets the bounding circle.
func (b *body) enclose() {
	if b.kind == Disc {
		b.mid, b.bound = b.disc.Center, b.disc.Radius
	} else {
		lo := geom.Vec{X: math.Inf(1), Y: math.Inf(1)}
		hi := geom.Vec{X: math.Inf(-1), Y: math.Inf(-1)}
		for _, s := range b.segs {
			lo.X, hi.X = min(lo.X, s.A.X, s.B.X), max(hi.X, s.A.X, s.B.X)
			lo.Y, hi.Y = min(lo.Y, s.A.Y, s.B.Y), max(hi.Y, s.A.Y, s.B.Y)
		}
		b.mid = geom.Vec{X: (lo.X + hi.X) / 2, Y: (lo.Y + hi.Y) / 2}
		b.bound = hi.Sub(lo).Norm() / 2
	}
	b.bound += pad
}

// contains reports whether p is inside the body, if it is a filled polygon.
func (b *body) contains(p geom.Vec) bool {
	if b.kind != Polygon || p.Sub(b.mid).Norm2() > float64(b.bound*b.bound) {
		return false
	}
	return insideOf(b.segs, p)
}

// insideOf is the crossing-number test on the edges of a polygon.
func insideOf(edges []geom.Segment, p geom.Vec) bool {
	in := false
	for i := range edges {
		if edges[i].Crosses(p) {
			in = !in
		}
	}
	return in
}
