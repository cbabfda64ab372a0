package reach

import (
	"math"

	"leeway/sim/geom"
)

// lists holds a list of numbers for every cell of a grid, one after the other:
// that of cell k is items[first[k]:first[k+1]].
type lists struct{ first, items []int32 }

func (l *lists) at(k int) []int32 { return l.items[l.first[k]:l.first[k+1]] }

// newLists collects what every calls add with, in two passes: count, then fill.
func newLists(cells int, every func(add func(k int, i int32))) lists {
	first := make([]int32, cells+1)
	every(func(k int, _ int32) { first[k+1]++ })
	for k := range cells {
		first[k+1] += first[k]
	}
	items := make([]int32, first[cells])
	next := make([]int32, cells)
	copy(next, first)
	every(func(k int, i int32) {
		items[next[k]] = i
		next[k]++
	})
	return lists{first, items}
}

// grid is a uniform grid over the grown prims: every cell lists the prims that,
// grown by the hull radius, may reach into it. So a point or a line needs only
// the lists of the cells that it lies in.
type grid struct {
	min, max   geom.Vec
	cell       float64 // size of a cell, m
	cols, rows int     // none when there are no prims
	prims      lists
	arcs       lists // arcs whose circle may pass through the cell
}

// newGrid lays out about two cells for every prim.
func newGrid(prims []prim, hull float64) grid {
	if len(prims) == 0 {
		return grid{}
	}
	g := grid{min: geom.Vec{X: math.Inf(1), Y: math.Inf(1)}, max: geom.Vec{X: math.Inf(-1), Y: math.Inf(-1)}}
	for i := range prims {
		lo, hi := prims[i].box(hull)
		g.min = geom.Vec{X: math.Min(g.min.X, lo.X), Y: math.Min(g.min.Y, lo.Y)}
		g.max = geom.Vec{X: math.Max(g.max.X, hi.X), Y: math.Max(g.max.Y, hi.Y)}
	}
	size := g.max.Sub(g.min)
	g.cell = math.Max(math.Sqrt(size.X*size.Y/float64(2*len(prims))), math.Max(size.X, size.Y)/2000)
	g.cols, g.rows = int(size.X/g.cell)+1, int(size.Y/g.cell)+1
	g.prims = newLists(g.cols*g.rows, func(add func(int, int32)) { g.cover(prims, hull, add) })
	return g
}

// place lists the arcs.
func (g *grid) place(arcs []arc) {
	g.arcs = newLists(g.cols*g.rows, func(add func(int, int32)) {
		for i := range arcs {
			a := &arcs[i]
			c0, r0 := g.column(a.center.X-a.radius), g.row(a.center.Y-a.radius)
			c1, r1 := g.column(a.center.X+a.radius), g.row(a.center.Y+a.radius)
			for r := r0; r <= r1; r++ {
				for c := c0; c <= c1; c++ {
					add(r*g.cols+c, int32(i))
				}
			}
		}
	})
}

// box returns the bounding box of the prim grown by r.
func (q *prim) box(r float64) (lo, hi geom.Vec) {
	r += q.thick
	lo = geom.Vec{X: math.Min(q.a.X, q.b.X) - r, Y: math.Min(q.a.Y, q.b.Y) - r}
	hi = geom.Vec{X: math.Max(q.a.X, q.b.X) + r, Y: math.Max(q.a.Y, q.b.Y) + r}
	return lo, hi
}

// cover calls f for every cell and every prim that may reach into it.
func (g *grid) cover(prims []prim, hull float64, f func(k int, i int32)) {
	// A cell is reached when its centre is within half its diagonal; the little extra absorbs rounding.
	slack := float64(g.cell * (math.Sqrt2/2 + 1e-6))
	for i := range prims {
		q := &prims[i]
		lo, hi := q.box(hull)
		c0, r0 := g.column(lo.X), g.row(lo.Y)
		c1, r1 := g.column(hi.X), g.row(hi.Y)
		for r := r0; r <= r1; r++ {
			for c := c0; c <= c1; c++ {
				centre := geom.Vec{X: g.min.X + float64((float64(c)+0.5)*g.cell), Y: g.min.Y + float64((float64(r)+0.5)*g.cell)}
				if q.covers(centre, hull+slack) {
					f(r*g.cols+c, int32(i))
				}
			}
		}
	}
}

// column and row return the cell that a coordinate falls into, the outermost one if it is outside.
func (g *grid) column(x float64) int { return clamp((x-g.min.X)/g.cell, g.cols) }
func (g *grid) row(y float64) int    { return clamp((y-g.min.Y)/g.cell, g.rows) }

func clamp(x float64, n int) int { return int(math.Max(0, math.Min(x, float64(n-1)))) }

// at returns the prims that may cover p, grown.
func (g *grid) at(p geom.Vec) []int32 {
	if g.cols == 0 || p.X < g.min.X || p.X > g.max.X || p.Y < g.min.Y || p.Y > g.max.Y {
		return nil
	}
	k := g.row(p.Y)*g.cols + g.column(p.X)
	return g.prims.at(k)
}

// near appends to out, without repeats, the prims that may come within r of p once grown.
func (g *grid) near(p geom.Vec, r float64, seen []bool, out []int32) []int32 {
	if g.cols == 0 {
		return out
	}
	c0, r0 := g.column(p.X-r), g.row(p.Y-r)
	c1, r1 := g.column(p.X+r), g.row(p.Y+r)
	for row := r0; row <= r1; row++ {
		for col := c0; col <= c1; col++ {
			k := row*g.cols + col
			for _, i := range g.prims.at(k) {
				if !seen[i] {
					seen[i] = true
					out = append(out, i)
				}
			}
		}
	}
	for _, i := range out {
		seen[i] = false
	}
	return out
}

// clear reports whether the hull's centre can go straight from p to q.
func (y *Yard) clear(p, q geom.Vec) bool {
	g := &y.grid
	t0, t1, ok := g.clip(p, q)
	if !ok {
		return true
	}
	l := newBeam(p, q)
	d := q.Sub(p)
	a := p.AddScaled(t0, d)
	col, row := g.column(a.X), g.row(a.Y)

	// Walk the cells in the order in which the line passes through them: tx, ty
	// say at which fraction of d it enters the next column and row.
	stepX, tx, dx := g.walk(col, p.X, d.X, g.min.X)
	stepY, ty, dy := g.walk(row, p.Y, d.Y, g.min.Y)
	for col >= 0 && col < g.cols && row >= 0 && row < g.rows {
		k := row*g.cols + col
		for _, i := range g.prims.at(k) {
			if l.meets(&y.prims[i], y.hull-Skin) {
				return false
			}
		}
		if math.Min(tx, ty) > t1 {
			break
		}
		if tx < ty {
			col, tx = col+stepX, tx+dx
		} else {
			row, ty = row+stepY, ty+dy
		}
	}
	return true
}

// walk returns, along one axis, the step from cell to cell, the fraction of d at
// which the next cell is entered, and the fraction from one cell to the next.
func (g *grid) walk(cell int, p, d, min float64) (step int, next, every float64) {
	switch {
	case d > 0:
		return 1, (min + float64(float64(cell+1)*g.cell) - p) / d, g.cell / d
	case d < 0:
		return -1, (min + float64(float64(cell)*g.cell) - p) / d, -g.cell / d
	}
	return 0, math.Inf(1), math.Inf(1)
}

// clip returns the part of the line from p to q that lies in the grid, as fractions.
func (g *grid) clip(p, q geom.Vec) (t0, t1 float64, ok bool) {
	if g.cols == 0 {
		return 0, 0, false
	}
	t0, t1 = 0, 1
	for _, s := range [4][2]float64{
		{p.X - q.X, p.X - g.min.X}, {q.X - p.X, g.max.X - p.X},
		{p.Y - q.Y, p.Y - g.min.Y}, {q.Y - p.Y, g.max.Y - p.Y},
	} {
		slope, room := s[0], s[1]
		switch {
		case slope == 0:
			if room < 0 {
				return 0, 0, false
			}
		case slope > 0:
			t1 = math.Min(t1, room/slope)
		default:
			t0 = math.Max(t0, room/slope)
		}
	}
	return t0, t1, t0 <= t1
}
