package floor

import (
	"math"

	"leeway/sim/geom"
)

// Nearest returns what is nearest to p, if its boundary is within the given distance of p or
// p is inside it. ok is false when nothing is. Of equally near things the first
// counts, solids before movers. No allocation.
//
// Inside filled solids it is the one that p is deepest in.
func (w *World) Nearest(p geom.Vec, within float64) (n Near, ok bool) {
	if !p.Finite() || math.IsNaN(within) {
		return Near{Ref: Ref{Index: -1}}, false
	}
	within = max(within, 0) // what p is inside of counts at any rate
	s := search{p: p, segSq: math.Inf(1), discGap: math.Inf(1)}
	w.searchMap(&s, within)
	for i := range w.bodies {
		w.searchBody(&s, i, within)
	}
	return s.answer(w.m, within)
}

// search holds the nearest of each kind of primitive so far. Segments are
// compared by squared distance, which saves a root each. Ties go to the lower owner and, among the pieces of
// one solid, to the lower number, so the order of asking does not matter.
type search struct {
	p geom.Vec

	segSq    float64
	segAt    geom.Vec
	segOwner int32
	segPiece int32

	discGap   float64
	disc      geom.Disc
	discOwner int32

	inside      bool // in some filled polygon; then the deepest of them
	depth       float64
	insideAt    geom.Vec
	insideOwner int32
}

func (s *search) segment(e geom.Segment, owner, piece int32) {
	q, _ := geom.NearestOnSegment(s.p, e)
	sq := s.p.Sub(q).Norm2()
	if sq < s.segSq || sq == s.segSq && (owner < s.segOwner || owner == s.segOwner && piece < s.segPiece) {
		s.segSq, s.segAt, s.segOwner, s.segPiece = sq, q, owner, piece
	}
}

func (s *search) circle(d geom.Disc, owner int32) {
	gap := geom.DistanceToDisc(s.p, d)
	if gap < s.discGap || gap == s.discGap && owner < s.discOwner {
		s.discGap, s.disc, s.discOwner = gap, d, owner
	}
}

// within notes that p is inside the polygon with these edges.
func (s *search) within(edges []geom.Segment, owner int32) {
	at, d := nearestEdge(edges, s.p)
	if d > 0 && (!s.inside || d > s.depth || d == s.depth && owner < s.insideOwner) {
		s.inside, s.depth, s.insideAt, s.insideOwner = true, d, at, owner
	}
}

// answer puts the kinds together.
func (s *search) answer(m *Map, within float64) (Near, bool) {
	d, at, owner := math.Inf(1), geom.Vec{}, int32(-1)
	switch {
	case s.inside:
		d, at, owner = -s.depth, s.insideAt, s.insideOwner
	case !math.IsInf(s.segSq, 1):
		d, at, owner = math.Sqrt(s.segSq), s.segAt, s.segOwner
	}
	if s.discGap < d || s.discGap == d && s.discOwner < owner {
		n := s.p.Sub(s.disc.Center).Unit()
		if n == (geom.Vec{}) {
			n.X = 1
		}
		d, at, owner = s.discGap, s.disc.Center.AddScaled(s.disc.Radius, n), s.discOwner
	}
	if owner < 0 || !(d <= within || d < 0) {
		return Near{Ref: Ref{Index: -1}}, false
	}
	return Near{d, at, m.ref(owner)}, true
}

// bound returns a distance within which the answer lies for certain, as far as is known.
func (s *search) bound() float64 {
	return min(math.Sqrt(s.segSq), s.discGap)
}

// searchMap asks what stands in the map, in boxes round p that double until one
// is certain to hold the nearest.
func (w *World) searchMap(s *search, within float64) {
	g := &w.m.grid
	p := s.p
	if g.holds(p) {
		for _, i := range g.fills.of(g.row(p.Y)*g.nx + g.column(p.X)) {
			if w.inside(i, p) {
				s.within(w.segs[w.m.firstSeg[i]:w.m.firstSeg[i+1]], i)
			}
		}
	}
	for r := min(within, g.size); ; r *= 2 {
		r = min(r, within)
		v := geom.Vec{X: r, Y: r}
		x0, y0, x1, y1, ok := g.span(p.Sub(v), p.Add(v))
		if ok {
			for y := y0; y <= y1; y++ {
				for x := x0; x <= x1; x++ {
					w.searchCell(s, y*g.nx+x)
				}
			}
		}
		if r >= within || s.bound() <= r || ok && x0 == 0 && y0 == 0 && x1 == g.nx-1 && y1 == g.ny-1 {
			return
		}
	}
}

func (w *World) searchCell(s *search, cell int) {
	for _, k := range w.m.grid.items.of(cell) {
		if k >= 0 {
			owner := w.m.segOwner[k]
			s.segment(w.segs[k], owner, k-w.m.firstSeg[owner])
		} else {
			s.circle(w.discs[-1-k], w.m.discOwner[-1-k])
		}
	}
}

func (w *World) searchBody(s *search, i int, within float64) {
	b := &w.bodies[i]
	r := b.bound + min(within, s.bound())
	if s.p.Sub(b.mid).Norm2() > float64(r*r) {
		return
	}
	if b.kind == Disc {
		s.circle(b.disc, b.owner)
		return
	}
	if b.contains(s.p) {
		s.within(b.segs, b.owner)
	}
	for k, e := range b.segs {
		s.segment(e, b.owner, int32(k))
	}
}
