package floor

import (
	"cmp"
	"math"
	"math/bits"
	"slices"

	"leeway/sim/geom"
)

// sight says for each cell of the floor, and each of a number of sectors of
// directions, which primitives a ray from somewhere in that cell into that sector may
// meet within reach: nearly always a handful, and they are known without walking there.
//
// The primitives in reach of a cell form one list, nearest first, each with a lower bound of
// its distance from anywhere in the cell, so that a ray need not look at the far end of a
// long list. Which of them a sector can meet is a row of bits over that list.
type sight struct {
	frame
	reach float64 // how far the lists go; 0 when there are none
	fills lists   // as in grid

	spots []spot // one a cell
	seen  []seen
	bits  []uint64
}

// spot says where the lists of a cell are.
type spot struct {
	seen  int32 // where its list begins in seen
	rows  int32 // where its rows begin in bits: sectors × words of them
	words int32 // of 64 primitives each
	fills int32 // how many polygons reach into it
}

// seen is a primitive in reach of a cell.
type seen struct {
	item int32   // a segment as its number, a disc as −1−number
	low  float32 // it is at least this far from every point of the cell
}

const (
	sectors = 32 // a power of two

	// mostCells bounds the number of cells, and crowd the mean length of their lists: on a floor
	// with more to see the lists end earlier, and a ray walks on from there.
	mostCells = 50_000
	crowd     = 48
)

// sector returns the sector of a direction. It uses 1 − x/(|x|+|y|) with the sign
// of y in place of the angle, which grows with it from −2 to 2.
func sector(d geom.Vec) int { return int((turn(d)+2)*(sectors/4)) & (sectors - 1) }

func turn(d geom.Vec) float64 {
	return math.Copysign(1-d.X/(math.Abs(d.X)+math.Abs(d.Y)), d.Y)
}

func newSight(m *Map, reach float64) sight {
	lo, hi := m.grid.min, m.grid.max
	w, h := hi.X-lo.X, hi.Y-lo.Y
	n := float64(len(m.segs) + len(m.discs))
	reach = min(reach, w+h)
	if !(reach > 0) || n == 0 {
		return sight{}
	}
	// A circle of this radius holds about crowd primitives.
	far := math.Sqrt(crowd * (w + reach) * (h + reach) / (math.Pi * n))
	s := sight{reach: min(reach, far)}
	cells := min(float64(cellsPerPrimitive*n)+512, mostCells)
	size := max(s.reach/4, math.Sqrt(w*h/cells), max(w, h)/cells, finestCell)
	for size < max(w, h) && m.entries(s.reach, size) > mostEntries {
		size *= 2
	}
	s.frame = newFrame(lo, hi, size)
	s.fills = m.polygonsUnder(&s.frame)
	g := gatherer{m: m, stamp: make([]int32, len(m.segs)+len(m.discs))}
	for y := range s.ny {
		for x := range s.nx {
			s.add(g.around(s.box(x, y), s.reach))
		}
	}
	return s
}

// add appends the list and the rows of one cell.
func (s *sight) add(list []view) {
	words := (len(list) + 63) / 64
	at := len(s.bits)
	cell := len(s.spots)
	s.spots = append(s.spots, spot{int32(len(s.seen)), int32(at), int32(words), int32(len(s.fills.of(cell)))})
	s.bits = append(s.bits, make([]uint64, sectors*words)...)
	for i, v := range list {
		s.seen = append(s.seen, seen{v.item, v.low})
		for k := v.from; k <= v.to; k++ {
			s.bits[at+(k&(sectors-1))*words+i/64] |= 1 << (i % 64)
		}
	}
}

// box is an axis-parallel rectangle.
type box struct{ lo, hi geom.Vec }

// box returns cell (x, y), padded.
func (f *frame) box(x, y int) box {
	lo := geom.Vec{X: f.min.X + float64(float64(x)*f.size) - pad, Y: f.min.Y + float64(float64(y)*f.size) - pad}
	return box{lo, lo.Add(geom.Vec{X: f.size + 2*pad, Y: f.size + 2*pad})}
}

func (b box) corners() [4]geom.Vec {
	return [4]geom.Vec{b.lo, {X: b.hi.X, Y: b.lo.Y}, b.hi, {X: b.lo.X, Y: b.hi.Y}}
}

// distance returns how far p is from b, 0 inside.
func (b box) distance(p geom.Vec) float64 {
	return geom.Vec{X: max(b.lo.X-p.X, p.X-b.hi.X, 0), Y: max(b.lo.Y-p.Y, p.Y-b.hi.Y, 0)}.Norm()
}

// segmentDistance returns how far s is from b, 0 where they meet.
func (b box) segmentDistance(s geom.Segment) float64 {
	d := min(b.distance(s.A), b.distance(s.B))
	e := s.B.Sub(s.A)
	left, right := false, false
	for _, c := range b.corners() {
		d = min(d, geom.DistanceToSegment(c, s))
		side := e.Cross(c.Sub(s.A))
		left, right = left || side >= 0, right || side <= 0
	}
	if left && right && // neither the line of s nor an axis separates them
		min(s.A.X, s.B.X) <= b.hi.X && max(s.A.X, s.B.X) >= b.lo.X &&
		min(s.A.Y, s.B.Y) <= b.hi.Y && max(s.A.Y, s.B.Y) >= b.lo.Y {
		return 0
	}
	return d
}

// view is a primitive as it may be seen from a cell: in the sectors from … to, where to ≥ from
// counts on past the last.
type view struct {
	seen
	from, to int
}

// gatherer lists what is in reach of a cell.
type gatherer struct {
	m     *Map
	stamp []int32 // of each primitive: the last cell it was listed for
	cell  int32
	list  []view
}

func (g *gatherer) around(b box, reach float64) []view {
	g.cell++
	g.list = g.list[:0]
	r := geom.Vec{X: reach, Y: reach}
	grid := &g.m.grid
	x0, y0, x1, y1, _ := grid.span(b.lo.Sub(r), b.hi.Add(r))
	for y := y0; y <= y1; y++ {
		for x := x0; x <= x1; x++ {
			for _, k := range grid.items.of(y*grid.nx + x) {
				id := k
				if k < 0 {
					id = int32(len(g.m.segs)) - 1 - k
				}
				if g.stamp[id] == g.cell {
					continue
				}
				g.stamp[id] = g.cell
				if k >= 0 {
					g.add(b, g.m.segs[k], 0, k, reach)
				} else {
					c := g.m.discs[-1-k]
					g.add(b, geom.Segment{A: c.Center, B: c.Center}, c.Radius, k, reach)
				}
			}
		}
	}
	slices.SortFunc(g.list, func(a, b view) int {
		return cmp.Or(cmp.Compare(a.low, b.low), cmp.Compare(a.item, b.item))
	})
	return g.list
}

// add lists a segment thickened by r, if it is in reach.
func (g *gatherer) add(b box, s geom.Segment, r float64, item int32, reach float64) {
	apart := b.segmentDistance(s)
	d := apart - r
	if d > reach+pad {
		return
	}
	v := view{seen{item, 0}, 0, sectors - 1}
	if d > 2*pad {
		v.low = float32((d - pad) * (1 - 1e-6)) // also after rounding to 24 bits
	}
	if apart > float64(math.Sqrt2*r)+2*pad {
		v.from, v.to = directions(b, s, r)
	}
	g.list = append(g.list, v)
}

// directions returns the sectors of the directions from b to a segment thickened by r, which
// are more than √2·r apart. The directions are those of the points of their difference, a convex set
// without the origin, so they span less than half a turn and its corners hold the first and the last.
func directions(b box, s geom.Segment, r float64) (from, to int) {
	r += pad
	var first, last geom.Vec
	for i, c := range b.corners() {
		// The thickened end lies within the box of half size r round it; in the
		// difference with b only its corner on the same side counts.
		o := [4]geom.Vec{{X: r, Y: r}, {X: -r, Y: r}, {X: -r, Y: -r}, {X: r, Y: -r}}[i]
		for k, end := range [2]geom.Vec{s.A, s.B} {
			p := end.Sub(c).Add(o)
			if i == 0 && k == 0 {
				first, last = p, p
				continue
			}
			if first.Cross(p) < 0 {
				first = p
			}
			if last.Cross(p) > 0 {
				last = p
			}
		}
	}
	const slack = 1e-9
	from = int(math.Floor((turn(first) - slack + 2) * (sectors / 4)))
	to = int(math.Floor((turn(last) + slack + 2) * (sectors / 4)))
	if to < from {
		to += sectors
	}
	return from, to
}

// look returns the least range of what the lists of a cell have for a ray from within it, or +Inf.
//
// It is SegmentRange without its branches, which the processor cannot foresee and
// which would cost more than the arithmetic: the least range is kept as its bit pattern, which orders
// positive floats as the floats are; a miss, a range behind and what is not a number all come
// to a pattern above that of any range. What SegmentRange treats apart goes there.
func (w *World) look(at spot, o, d geom.Vec, reach float64) float64 {
	s := &w.m.sight
	segs, seen := w.segs, s.seen[at.seen:]
	rows := s.bits[int(at.rows)+sector(d)*int(at.words):]
	best := math.Float64bits(math.Inf(1))
	for k := range int(at.words) {
		if k > 0 && float64(seen[k*64].low) > min(math.Float64frombits(best), reach) {
			break
		}
		for row := rows[k]; row != 0; row &= row - 1 {
			v := seen[k*64+bits.TrailingZeros64(row)]
			if v.item < 0 {
				if t, ok := geom.RayDisc(o, d, w.discs[-1-v.item]); ok {
					best = min(best, math.Float64bits(t))
				}
				continue
			}
			e := &segs[v.item]
			a, b := e.A.Sub(o), e.B.Sub(o)
			ca, cb := d.Cross(a), d.Cross(b)
			den := cb - ca
			t := a.Cross(b) / den
			if math.Abs(den) < geom.Narrow || math.Abs(t) <= geom.OnLine {
				if t, ok := geom.SegmentRange(o, d, *e); ok {
					best = min(best, math.Float64bits(t))
				}
				continue
			}
			// Both ends strictly on one side: a product above zero.
			side := int64(math.Float64bits(ca * cb))
			missed := uint64(^((side | (side - 1)) >> 63))
			best = min(best, math.Float64bits(t)|missed)
		}
	}
	return math.Float64frombits(best)
}
