package reach

import (
	"math"

	"leeway/sim/geom"
)

// target is a point at which a way may end. The goal itself has stop = the goal
// radius: the way ends that much before it.
type target struct {
	p    geom.Vec
	stop float64
}

// targets lists the points at which a shortest way into the goal disc can end.
// It ends on the goal circle: heading straight for the centre, or where the
// goal circle meets the boundary of a grown solid. None is given when no place
// on the goal circle is free.
func (y *Yard) targets(to geom.Vec, goalRadius float64) []target {
	if goalRadius == 0 {
		if y.Free(to) {
			return []target{{to, 0}}
		}
		return nil
	}
	w := newCircler(y)
	var out []target
	for _, f := range w.free(to, goalRadius, y.hull) {
		middle := to.AddScaled(goalRadius, geom.Heading(f.start+float64(f.span/2)))
		if _, in := y.filling(middle); in {
			continue // inside a polygon, far from its sides
		}
		if len(out) == 0 {
			out = append(out, target{to, goalRadius})
		}
		if f.span < turn {
			for _, a := range [2]float64{f.start, f.start + f.span} {
				out = append(out, target{to.AddScaled(goalRadius, geom.Heading(a)), 0})
			}
		}
	}
	return out
}

// The search runs over places at which a way may leave an arc, that is over
// edges: to reach edge e means to stand on its side at e.leave. From there one
// may go on along the arc to where the next edge leaves, or along e to its far
// side and there on to the first edge that leaves ahead.

// flight is a straight line from the start to a side, found anew for every question.
type flight struct {
	to     int32 // side
	arrive float64
	length float64
}

// finish is a straight line to a target, entered when its side is reached.
type finish struct {
	origin origin
	side   int32 // −1: straight from the start
	arrive float64
	leave  float64
	target int32
	length float64 // of the straight line
}

// origin says how a side was reached: along edge e ≥ 0, or along flight −1−e.
type origin int32

// step is what the search knows of an edge.
type step struct {
	stamp  uint32 // number of the question it was last reached in
	done   bool
	origin origin
	cost   float64 // m, from the start to the place where the edge leaves
}

// search is the memory of a question.
type search struct {
	stamp    uint32
	steps    []step // by edge
	flights  []flight
	finishes []finish
	heap     heap
	from, to geom.Vec
	radius   float64
	targets  []target
}

// What an item of the heap stands for.
const (
	atEdge = iota
	atFlight
	atFinish
)

// bound returns a lower bound for what is left of the way from p.
func (s *search) bound(p geom.Vec) float64 {
	return math.Max(0, s.to.Sub(p).Norm()-s.radius)
}

// find runs A*. ok is false when there is no way.
func (y *Yard) find(from, to geom.Vec, radius float64, targets []target) (r Result, ok bool) {
	s := &y.search
	s.stamp++
	s.from, s.to, s.radius, s.targets = from, to, radius, targets
	s.flights, s.finishes, s.heap = s.flights[:0], s.finishes[:0], s.heap[:0]
	y.setOut()
	for len(s.heap) > 0 {
		it := s.heap.pop()
		switch it.kind {
		case atFlight:
			f := &s.flights[it.index]
			a := &y.arcs[f.to/2]
			if y.clear(from, a.point(f.arrive, signOf(f.to))) {
				y.arrive(f.to, f.arrive, f.length, origin(-1-it.index))
			}
		case atFinish:
			f := &s.finishes[it.index]
			if p, q := y.ends(f); y.clear(p, q) {
				return Result{Reachable: true, Length: it.least, Way: y.way(f)}, true
			}
		case atEdge:
			y.expand(it.index)
		}
	}
	return Result{}, false
}

// setOut enters all straight lines from the start.
func (y *Yard) setOut() {
	s := &y.search
	for k, t := range s.targets {
		if d := t.p.Sub(s.from).Norm(); d >= t.stop {
			s.finish(finish{side: -1, target: int32(k), length: d - t.stop}, d-t.stop)
		}
	}
	point := arc{center: s.from, span: turn, lo: geom.Vec{X: 1}}
	for _, i := range y.look(&point, 1) {
		a := &y.arcs[i]
		for side := 2 * i; side <= 2*i+1; side++ {
			sign := signOf(side)
			u, t, ok := join(s.from, a.center, sign*a.radius, false)
			if !ok {
				continue
			}
			n := u.Perp().Scale(-sign)
			if !a.has(n) || y.horizon.hidden(u.Perp().Scale(-1), t) {
				continue
			}
			s.heap.push(item{
				least: t + s.bound(a.center.AddScaled(a.radius, n)),
				kind:  atFlight, index: int32(len(s.flights)),
			})
			s.flights = append(s.flights, flight{to: side, arrive: a.along(n, sign), length: t})
		}
	}
}

func (s *search) finish(f finish, total float64) {
	s.heap.push(item{least: total, kind: atFinish, index: int32(len(s.finishes))})
	s.finishes = append(s.finishes, f)
}

// backlash is how far (rad) behind the place of arrival an edge may leave, so
// that rounding does not part two lines that run straight on.
const backlash = 1e-11

// arrive notes that a side can be travelled from the place x on, at a cost.
func (y *Yard) arrive(side int32, x, cost float64, o origin) {
	s := &y.search
	y.list(side)
	a := &y.arcs[side/2]
	sign := signOf(side)
	for k, t := range s.targets {
		u, length, ok := join(t.p, a.center, sign*a.radius, true)
		if !ok || length < t.stop {
			continue
		}
		n := u.Perp().Scale(-sign)
		if !a.has(n) {
			continue
		}
		leave := a.along(n, sign)
		ahead, ok := a.ahead(x, leave)
		if !ok {
			continue
		}
		f := finish{origin: o, side: side, arrive: x, leave: leave, target: int32(k), length: length - t.stop}
		s.finish(f, cost+float64(ahead*a.radius)+f.length)
	}
	d := y.sides[side]
	// The first edge that leaves at x or later.
	lo, hi := d.first, d.last
	for lo < hi {
		m := (lo + hi) / 2
		if y.edges[m].leave < x-backlash {
			lo = m + 1
		} else {
			hi = m
		}
	}
	if lo == d.last {
		if !a.whole() || d.first == d.last {
			return
		}
		lo = d.first
	}
	if ahead, ok := a.ahead(x, y.edges[lo].leave); ok {
		y.relax(lo, cost+float64(ahead*a.radius), o)
	}
}

// ahead returns how far (rad) a traveller at x goes to reach the place leave;
// ok is false when it lies behind. On a whole circle everything lies ahead.
func (a *arc) ahead(x, leave float64) (float64, bool) {
	d := leave - x
	switch {
	case d >= 0:
		return d, true
	case d >= -backlash:
		return 0, true
	case a.whole():
		if d += turn; d > turn-backlash {
			d = 0
		}
		return d, true
	}
	return 0, false
}

// relax notes that the place where edge e leaves can be reached at a cost.
func (y *Yard) relax(e int32, cost float64, o origin) {
	s := &y.search
	for len(s.steps) < len(y.edges) {
		s.steps = append(s.steps, step{})
	}
	t := &s.steps[e]
	if t.stamp == s.stamp && (t.done || t.cost <= cost) {
		return
	}
	*t = step{stamp: s.stamp, origin: o, cost: cost}
	d := &y.edges[e]
	p := y.arcs[d.from/2].point(d.leave, signOf(d.from))
	s.heap.push(item{least: cost + s.bound(p), kind: atEdge, index: e})
}

// expand goes on from where edge e leaves: along the arc, and along the edge.
func (y *Yard) expand(e int32) {
	s := &y.search
	if s.steps[e].done {
		return
	}
	s.steps[e].done = true
	cost := s.steps[e].cost
	d := y.edges[e]
	a := &y.arcs[d.from/2]
	next := e + 1
	if side := y.sides[d.from]; next == side.last && a.whole() {
		next = side.first
	}
	if next < y.sides[d.from].last && next != e {
		if ahead, ok := a.ahead(d.leave, y.edges[next].leave); ok {
			y.relax(next, cost+float64(ahead*a.radius), s.steps[e].origin)
		}
	}
	if y.isOpen(e) {
		y.arrive(d.to, d.arrive, cost+d.length, origin(e))
	}
}

// item is an entry of the heap: least is a lower bound for the length of a whole way through it.
type item struct {
	least float64
	index int32
	kind  uint8
}

// heap is a binary heap, the smallest bound first; ties go by kind and index, so
// that the order is the same on every machine.
type heap []item

func (a item) before(b item) bool {
	if a.least != b.least {
		return a.least < b.least
	}
	if a.kind != b.kind {
		return a.kind > b.kind
	}
	return a.index < b.index
}

func (h *heap) push(it item) {
	*h = append(*h, it)
	q := *h
	i := len(q) - 1
	for i > 0 {
		up := (i - 1) / 2
		if !it.before(q[up]) {
			break
		}
		q[i] = q[up]
		i = up
	}
	q[i] = it
}

func (h *heap) pop() item {
	q := *h
	top, it := q[0], q[len(q)-1]
	q = q[:len(q)-1]
	*h = q
	i := 0
	for {
		k := 2*i + 1
		if k >= len(q) {
			break
		}
		if k+1 < len(q) && q[k+1].before(q[k]) {
			k++
		}
		if !q[k].before(it) {
			break
		}
		q[i] = q[k]
		i = k
	}
	if len(q) > 0 {
		q[i] = it
	}
	return top
}
