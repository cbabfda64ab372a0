package floor

import (
	"math"
	"slices"

	"leeway/sim/geom"
)

// pad is how much wider than it is a primitive counts when it is entered into an
// index, in metres. It covers the rounding in finding a cell and in meeting a
// surface, which at Limit is some 1e-10 m, with room to spare.
const pad = 1e-6

// grid lists for each square cell of the floor the primitives that reach into it,
// and the polygons that a point in it may be inside of. It serves questions about a neighbourhood.
type grid struct {
	frame
	items lists // segments as their number, then discs as −1−number
	fills lists // solids that are polygons
}

// frame is the division of a rectangle into square cells, counted row by row.
type frame struct {
	min, max geom.Vec
	size     float64
	inv      float64 // 1/size
	nx, ny   int
}

// lists holds one list of numbers for each cell, end to end.
type lists struct {
	start []int32 // where the list of each cell begins; one more entry at the end
	item  []int32
}

func (l *lists) of(cell int) []int32 { return l.item[l.start[cell]:l.start[cell+1]] }

// collect builds lists for n cells from a function that calls put for every entry, always the
// same, in the order that the lists are to have. It is called twice: to count, and to fill.
func collect(n int, enter func(put func(cell int, item int32))) lists {
	l := lists{start: make([]int32, n+1)}
	enter(func(cell int, _ int32) { l.start[cell+1]++ })
	for i := range n {
		l.start[i+1] += l.start[i]
	}
	l.item = make([]int32, l.start[n])
	next := slices.Clone(l.start[:n])
	enter(func(cell int, item int32) {
		l.item[next[cell]] = item
		next[cell]++
	})
	return l
}

// newFrame covers the primitives of m with cells of the given size.
func newFrame(lo, hi geom.Vec, size float64) frame {
	f := frame{min: lo, max: hi, size: size, inv: 1 / size}
	f.nx = int(math.Floor((hi.X-lo.X)*f.inv)) + 1
	f.ny = int(math.Floor((hi.Y-lo.Y)*f.inv)) + 1
	return f
}

// extentOf returns the rectangle that holds all the solids, a little wider.
func extentOf(solids []Solid) (lo, hi geom.Vec) {
	if len(solids) == 0 {
		return geom.Vec{}, geom.Vec{}
	}
	lo = geom.Vec{X: math.Inf(1), Y: math.Inf(1)}
	hi = geom.Vec{X: math.Inf(-1), Y: math.Inf(-1)}
	for i := range solids {
		s := &solids[i]
		r := 2 * pad
		if s.Kind == Disc {
			r += s.Radius
		}
		for _, p := range s.Points {
			lo.X, hi.X = min(lo.X, p.X-r), max(hi.X, p.X+r)
			lo.Y, hi.Y = min(lo.Y, p.Y-r), max(hi.Y, p.Y+r)
		}
	}
	return lo, hi
}

// column and row return the cell coordinates of a place, clamped to the frame.
func (f *frame) column(x float64) int { return clampCell((x-f.min.X)*f.inv, f.nx) }
func (f *frame) row(y float64) int    { return clampCell((y-f.min.Y)*f.inv, f.ny) }

// clampCell turns a cell coordinate into a number in [0, n). NaN gives 0.
func clampCell(c float64, n int) int {
	if !(c >= 0) {
		return 0
	}
	if c >= float64(n) {
		return n - 1
	}
	return int(c)
}

// holds reports whether p lies in the frame's rectangle.
func (f *frame) holds(p geom.Vec) bool {
	return p.X >= f.min.X && p.X <= f.max.X && p.Y >= f.min.Y && p.Y <= f.max.Y
}

// span returns the cells that the box from lo to hi reaches into, and false when there are none.
func (f *frame) span(lo, hi geom.Vec) (x0, y0, x1, y1 int, ok bool) {
	if !(lo.X <= f.max.X && hi.X >= f.min.X && lo.Y <= f.max.Y && hi.Y >= f.min.Y) {
		return 0, 0, 0, 0, false
	}
	return f.column(lo.X), f.row(lo.Y), f.column(hi.X), f.row(hi.Y), true
}

func newGrid(m *Map) grid {
	lo, hi := extentOf(m.solids)
	n := float64(len(m.segs) + len(m.discs) + 1)
	w, h := hi.X-lo.X, hi.Y-lo.Y
	// Some cells a primitive, so that a cell holds one or two; never finer than a
	// hull, never more cells in a row than the count allows (a long thin floor), and
	// coarser where large things would fill too many of them.
	size := max(math.Sqrt(w*h/(cellsPerPrimitive*n)), max(w, h)/(cellsPerPrimitive*n), finestCell)
	for size < max(w, h) && m.entries(0, size) > mostEntries {
		size *= 2
	}
	g := grid{frame: newFrame(lo, hi, size)}
	g.items = collect(g.nx*g.ny, func(put func(int, int32)) {
		for i, s := range m.segs {
			g.alongSegment(s, func(cell int) { put(cell, int32(i)) })
		}
		for i, d := range m.discs {
			g.underDisc(d, func(cell int) { put(cell, int32(-1-i)) })
		}
	})
	g.fills = m.polygonsUnder(&g.frame)
	return g
}

// polygonsUnder lists for each cell the polygons that reach into it.
func (m *Map) polygonsUnder(f *frame) lists {
	return collect(f.nx*f.ny, func(put func(int, int32)) {
		for i := range m.solids {
			if m.solids[i].Kind == Polygon {
				f.underPolygon(m.solids[i].Points, func(cell int) { put(cell, int32(i)) })
			}
		}
	})
}

const (
	cellsPerPrimitive = 8
	finestCell        = 0.25      // metres
	mostEntries       = 2_000_000 // in the lists of an index: a bound on its memory and on the time to build it
)

// entries estimates from above in how many cells of the given size the primitives and the filled
// polygons are entered, each thickened by reach.
func (m *Map) entries(reach, size float64) float64 {
	wide := 2 * reach
	cells := func(along, across float64) float64 {
		return float64(((along+wide)/size + 2) * ((across+wide)/size + 2))
	}
	sum := 0.0
	for _, s := range m.segs {
		sum += cells(s.B.Sub(s.A).Norm(), 0)
	}
	for _, d := range m.discs {
		sum += cells(2*d.Radius, 2*d.Radius)
	}
	for i := range m.solids {
		if m.solids[i].Kind == Polygon {
			lo, hi := extentOf(m.solids[i : i+1])
			sum += cells(hi.X-lo.X, hi.Y-lo.Y)
		}
	}
	return sum
}

// rowBand returns the heights between which row y lies, padded.
func (f *frame) rowBand(y int) (lo, hi float64) {
	lo = f.min.Y + float64(float64(y)*f.size)
	return lo - pad, lo + f.size + pad
}

// alongSegment calls visit for every cell that s, padded, reaches into.
func (f *frame) alongSegment(s geom.Segment, visit func(cell int)) {
	if s.A.Y > s.B.Y {
		s.A, s.B = s.B, s.A
	}
	e := s.B.Sub(s.A)
	for y := f.row(s.A.Y - pad); y <= f.row(s.B.Y+pad); y++ {
		x0, x1 := s.A.X, s.B.X
		if lo, hi := f.rowBand(y); e.Y > 0 { // the part of it within this row
			x0 = s.A.X + float64(e.X*min(max((lo-s.A.Y)/e.Y, 0), 1))
			x1 = s.A.X + float64(e.X*min(max((hi-s.A.Y)/e.Y, 0), 1))
		}
		for x := f.column(min(x0, x1) - pad); x <= f.column(max(x0, x1)+pad); x++ {
			visit(y*f.nx + x)
		}
	}
}

// underDisc calls visit for every cell that the filled disc, padded, reaches into.
func (f *frame) underDisc(d geom.Disc, visit func(cell int)) {
	c, r := d.Center, d.Radius+pad
	for y := f.row(c.Y - r); y <= f.row(c.Y+r); y++ {
		lo, hi := f.rowBand(y)
		dy := max(lo-c.Y, c.Y-hi, 0)
		half := math.Sqrt(max(float64(r*r)-float64(dy*dy), 0)) + pad
		for x := f.column(c.X - half); x <= f.column(c.X+half); x++ {
			visit(y*f.nx + x)
		}
	}
}

// underPolygon calls visit once for every cell that the filled polygon reaches into: those its
// edges pass, and those between, whose centre is inside.
func (f *frame) underPolygon(g geom.Polygon, visit func(cell int)) {
	var cells []int
	lowest, highest := f.ny, -1
	for i := range g {
		f.alongSegment(g.Edge(i), func(cell int) { cells = append(cells, cell) })
		y := f.row(g[i].Y)
		lowest, highest = min(lowest, y), max(highest, y)
	}
	var cut []float64
	for y := lowest; y <= highest; y++ {
		mid := f.min.Y + float64((float64(y)+0.5)*f.size)
		cut = cut[:0]
		for i := range g {
			e := g.Edge(i)
			if (e.A.Y > mid) != (e.B.Y > mid) {
				cut = append(cut, e.A.X+float64((e.B.X-e.A.X)*((mid-e.A.Y)/(e.B.Y-e.A.Y))))
			}
		}
		slices.Sort(cut)
		for k := 0; k+1 < len(cut); k += 2 {
			for x := f.column(cut[k]); x <= f.column(cut[k+1]); x++ {
				cells = append(cells, y*f.nx+x)
			}
		}
	}
	slices.Sort(cells)
	for _, c := range slices.Compact(cells) {
		visit(c)
	}
}
