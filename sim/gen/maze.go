package gen

import (
	"math"

	"leeway/sim/floor"
	"leeway/sim/geom"
)

// maze lays out a maze of cells with few loops, and ends at most 14 cells apart.
func (d *draft) maze() bool {
	d.border()
	size := d.between(math.Max(1.3, 2*d.clear()), math.Max(1.8, 2.6*d.clear()))
	nx, ny := int(d.Width/size), int(d.Height/size)
	if nx < 2 || ny < 2 {
		return false
	}
	l, _ := d.carve(nx, ny, make([]bool, nx*ny), 0.1)
	x, y := d.lines(nx, d.Width, 0), d.lines(ny, d.Height, 0)

	start := d.below(nx * ny)
	depth := l.depths(start)
	goal := d.below(nx * ny)
	if depth[goal] < 3 || depth[goal] > 14 {
		return false
	}
	if d.walledIn && !l.closeOff(goal) {
		return false
	}
	in := func(c int) geom.Vec { return d.place(x[c%nx], y[c/nx], x[c%nx+1], y[c/nx+1]) }
	d.start, d.goal = in(start), in(goal)

	// Walls in one line are one wall.
	for i := 1; i < nx; i++ {
		runs(ny, func(j int) bool { return !l.right[j*nx+i-1] }, func(a, b int) {
			d.add(floor.Wall, "wall", 0, geom.Vec{X: x[i], Y: y[a]}, geom.Vec{X: x[i], Y: y[b]})
		})
	}
	for j := 1; j < ny; j++ {
		runs(nx, func(i int) bool { return !l.up[(j-1)*nx+i] }, func(a, b int) {
			d.add(floor.Wall, "wall", 0, geom.Vec{X: x[a], Y: y[j]}, geom.Vec{X: x[b], Y: y[j]})
		})
	}
	return true
}

// closeOff shuts the only opening of a cell; it reports false when the cell has more than one.
func (l *lattice) closeOff(c int) bool {
	var only *bool
	n := 0
	l.step(c, func(_ int, open *bool) {
		if *open {
			only = open
			n++
		}
	})
	if n != 1 {
		return false
	}
	*only = false
	return true
}

// runs calls f(a, b) for every longest range a ≤ k < b, within 0 ≤ k < n, for which is holds.
func runs(n int, is func(k int) bool, f func(a, b int)) {
	for a := 0; a < n; a++ {
		b := a
		for b < n && is(b) {
			b++
		}
		if b > a {
			f(a, b)
			a = b
		}
	}
}
