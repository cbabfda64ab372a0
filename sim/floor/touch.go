package floor

import (
	"math"

	"leeway/sim/geom"
)

// target says what a sweep is against: one body by its number, or one of these.
type target int

const (
	everything target = -1
	standing   target = -2 // all but the movers
)

// touch is the first contact found so far.
type touch struct {
	at    float64
	apart float64 // how far the surface was from the hull's centre at the start
	owner int32
	piece int32
	core  geom.Segment // the primitive: a segment, or the centre of a disc twice
	thick float64      // and its radius
}

// takes keeps t if it comes before h, whatever the order of asking. Of several surfaces that are
// touched from the start the one that the hull is deepest in counts, then the lower owner and piece.
func (h *touch) takes(t touch) {
	if t.at < h.at || t.at == h.at && (t.apart < h.apart ||
		t.apart == h.apart && (t.owner < h.owner || t.owner == h.owner && t.piece < h.piece)) {
		*h = t
	}
}

// from returns the unit vector from the touched surface to a hull at p, and the gap between them.
func (h *touch) from(p geom.Vec, radius float64) (n geom.Vec, gap float64) {
	v := geom.FromSegment(p, h.core)
	return v.Unit(), v.Norm() - h.thick - radius
}

// reaching is a hull on its way: where from, how far, how wide with its skin.
type reaching struct {
	p, d geom.Vec
	r    float64
	far  float64 // it gets no farther than this from p, hull included
}

// firstTouch lowers h to the first contact of a disc of radius r that moves from p by d.
func (w *World) firstTouch(h *touch, p, d geom.Vec, r float64, at target, in *covers) {
	m := reaching{p: p, d: d, r: r, far: r + d.Norm() + pad}
	if at < 0 {
		w.touchMap(h, &m, in)
	}
	for i := range w.bodies {
		if at == everything || at == standing && i >= len(w.travel) || int(at) == i {
			w.bodies[i].touch(h, &m, in)
		}
	}
}

func (w *World) touchMap(h *touch, m *reaching, in *covers) {
	g := &w.m.grid
	q := m.p.Add(m.d)
	v := geom.Vec{X: m.r + pad, Y: m.r + pad}
	lo := geom.Vec{X: min(m.p.X, q.X), Y: min(m.p.Y, q.Y)}.Sub(v)
	hi := geom.Vec{X: max(m.p.X, q.X), Y: max(m.p.Y, q.Y)}.Add(v)
	x0, y0, x1, y1, ok := g.span(lo, hi)
	if !ok {
		return
	}
	for y := y0; y <= y1; y++ {
		for x := x0; x <= x1; x++ {
			for _, k := range g.items.of(y*g.nx + x) {
				if k >= 0 {
					owner := w.m.segOwner[k]
					h.segment(m, w.segs[k], owner, k-w.m.firstSeg[owner], in)
				} else {
					h.disc(m, w.discs[-1-k], w.m.discOwner[-1-k])
				}
			}
		}
	}
}

func (b *body) touch(h *touch, m *reaching, in *covers) {
	r := b.bound + m.far
	if m.p.Sub(b.mid).Norm2() > float64(r*r) {
		return
	}
	if b.kind == Disc {
		h.disc(m, b.disc, b.owner)
		return
	}
	for k, s := range b.segs {
		h.segment(m, s, b.owner, int32(k), in)
	}
}

func (h *touch) segment(m *reaching, s geom.Segment, owner, piece int32, in *covers) {
	sq := geom.FromSegment(m.p, s).Norm2()
	if sq > float64(m.far*m.far) {
		return
	}
	t, ok := geom.DiscTouchesSegment(m.p, m.d, m.r, s)
	if ok && t <= h.at && !in.has(owner) {
		h.takes(touch{t, math.Sqrt(sq), owner, piece, s, 0})
	}
}

func (h *touch) disc(m *reaching, d geom.Disc, owner int32) {
	t, ok := geom.DiscTouchesDisc(m.p, m.d, m.r, d)
	if ok && t <= h.at {
		apart := geom.DistanceToDisc(m.p, d)
		h.takes(touch{t, apart, owner, 0, geom.Segment{A: d.Center, B: d.Center}, d.Radius})
	}
}

// covers are the polygons that the centre of the hull is inside of. Their edges do not stop it:
// from inside, the way out leads through one. Of more than four at one place the first four count.
type covers struct {
	owner [4]int32
	edges [4][]geom.Segment
	depth [4]float64 // of the centre at the start
	n     int
}

func (c *covers) has(owner int32) bool {
	for _, o := range c.owner[:c.n] {
		if o == owner {
			return true
		}
	}
	return false
}

// cover lists the polygons among the targets that p is inside of.
func (w *World) cover(c *covers, p geom.Vec, at target) {
	if g := &w.m.grid; at < 0 && g.holds(p) {
		for _, i := range g.fills.of(g.row(p.Y)*g.nx + g.column(p.X)) {
			if w.inside(i, p) {
				c.add(w.segs[w.m.firstSeg[i]:w.m.firstSeg[i+1]], i, p)
			}
		}
	}
	for i := range w.bodies {
		b := &w.bodies[i]
		if (at == everything || at == standing && i >= len(w.travel) || int(at) == i) && b.contains(p) {
			c.add(b.segs, b.owner, p)
		}
	}
}

// add keeps the list in the order of owners, so that the order of asking does not matter.
func (c *covers) add(edges []geom.Segment, owner int32, p geom.Vec) {
	i := c.n
	for i > 0 && c.owner[i-1] > owner {
		i--
	}
	if i == len(c.owner) {
		return
	}
	copy(c.owner[i+1:], c.owner[i:])
	copy(c.edges[i+1:], c.edges[i:])
	copy(c.depth[i+1:], c.depth[i:])
	c.owner[i], c.edges[i] = owner, edges
	_, c.depth[i] = nearestEdge(edges, p)
	c.n = min(c.n+1, len(c.owner))
}

// contact is the touch of cover k by a hull whose centre is at p, inside it, and that is to move by d.
func (c *covers) contact(k int, p, d geom.Vec, m *Map) Contact {
	q, _ := nearestEdge(c.edges[k], p)
	n := q.Sub(p).Unit()
	if n == (geom.Vec{}) { // the centre is on the very edge
		n = d.Unit().Scale(-1)
	}
	return Contact{Point: q, Normal: n, Ref: m.ref(c.owner[k])}
}

// outward returns d without what would lead straight deeper into the covers, and the first of them that
// took something away, or −1.
func (c *covers) outward(p, d geom.Vec) (geom.Vec, int) {
	first := -1
	for k := range c.n {
		q, _ := nearestEdge(c.edges[k], p)
		n := q.Sub(p).Unit()
		if in := d.Dot(n); in < 0 {
			d = d.AddScaled(-in, n)
			if first < 0 {
				first = k
			}
		}
	}
	return d, first
}

// deeper returns the first cover in which p is deeper than the start was, or −1.
func (c *covers) deeper(p geom.Vec) int {
	for k := range c.n {
		if _, d := nearestEdge(c.edges[k], p); d > c.depth[k]+Skin && insideOf(c.edges[k], p) {
			return k
		}
	}
	return -1
}

// nearestEdge returns the place on a polygon's boundary nearest to p, the first of equals, and how far it is.
func nearestEdge(edges []geom.Segment, p geom.Vec) (at geom.Vec, d float64) {
	sq := math.Inf(1)
	for _, e := range edges {
		q, _ := geom.NearestOnSegment(p, e)
		if v := p.Sub(q).Norm2(); v < sq {
			sq, at = v, q
		}
	}
	return at, math.Sqrt(sq)
}
