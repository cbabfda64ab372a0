package gen

import (
	"math"

	"leeway/sim/floor"
	"leeway/sim/geom"
)

// rooms lays out a grid of rooms with doors and some furniture. Some rooms have no door.
func (d *draft) rooms() bool {
	d.border()
	least := math.Max(2.4, 3*d.clear())
	nx := min(5, int(d.Width/d.between(least, 1.6*least)))
	ny := min(4, int(d.Height/d.between(least, 1.6*least)))
	if nx*ny < 4 {
		return false
	}
	x, y := d.lines(nx, d.Width, 0.15*least), d.lines(ny, d.Height, 0.15*least)
	start, goal := d.below(nx*ny), d.below(nx*ny)
	if start == goal {
		return false
	}
	closed := make([]bool, nx*ny)
	for c := range closed {
		closed[c] = c != start && c != goal && d.chance(0.1)
	}
	closed[goal] = d.walledIn
	l, ok := d.carve(nx, ny, closed, 0.35)
	if !ok {
		return false
	}
	for j := range ny {
		for i := 1; i < nx; i++ {
			d.partition(geom.Vec{X: x[i], Y: y[j]}, geom.Vec{X: x[i], Y: y[j+1]}, l.right[j*nx+i-1])
		}
	}
	for j := 1; j < ny; j++ {
		for i := range nx {
			d.partition(geom.Vec{X: x[i], Y: y[j]}, geom.Vec{X: x[i+1], Y: y[j]}, l.up[(j-1)*nx+i])
		}
	}
	in := func(c int) geom.Vec { return d.place(x[c%nx], y[c/nx], x[c%nx+1], y[c/nx+1]) }
	d.start, d.goal = in(start), in(goal)
	for c := range closed {
		for range d.below(3) {
			d.furnish(x[c%nx], y[c/nx], x[c%nx+1], y[c/nx+1])
		}
	}
	return true
}

// partition puts up a wall along x or along y, with a door in it where it is
// open. Now and then an open one is left out altogether.
func (d *draft) partition(a, b geom.Vec, open bool) {
	if !open {
		d.add(floor.Wall, "partition", 0, a, b)
		return
	}
	if d.chance(0.1) {
		return
	}
	length := b.Sub(a).Norm()
	door := math.Min(d.clear()+d.between(0.1, 0.6), length-0.3)
	from := d.between(0, length-door)
	const stub = 0.15 // a shorter piece beside the door is left out
	if from < stub {
		from = 0
	}
	to := from + door
	if length-to < stub {
		to = length
	}
	u := b.Sub(a).Unit()
	if from > 0 {
		d.add(floor.Wall, "partition", 0, a, a.AddScaled(from, u))
	}
	if to < length {
		d.add(floor.Wall, "partition", 0, a.AddScaled(to, u), b)
	}
}

// furnish tries to put a thing into a room: against a wall, or free-standing.
func (d *draft) furnish(x0, y0, x1, y1 float64) {
	for range 10 {
		long, deep := d.between(0.5, 1.4), d.between(0.3, 0.8)
		var s floor.Solid
		id := "desk"
		switch d.below(6) {
		case 0:
			x := d.between(x0, x1-long)
			s = floor.Solid{Kind: floor.Polygon, Points: rectangle(x, y0, x+long, y0+deep)}
		case 1:
			x := d.between(x0, x1-long)
			s = floor.Solid{Kind: floor.Polygon, Points: rectangle(x, y1-deep, x+long, y1)}
		case 2:
			y := d.between(y0, y1-long)
			s = floor.Solid{Kind: floor.Polygon, Points: rectangle(x0, y, x0+deep, y+long)}
		case 3:
			y := d.between(y0, y1-long)
			s = floor.Solid{Kind: floor.Polygon, Points: rectangle(x1-deep, y, x1, y+long)}
		case 4:
			s = floor.Solid{Kind: floor.Disc, Points: []geom.Vec{{X: d.between(x0, x1), Y: d.between(y0, y1)}}, Radius: deep / 2}
			id = "post"
		default:
			s = floor.Solid{Kind: floor.Polygon, Points: moved(rectangle(0, 0, long, deep), d.angle(), geom.Vec{X: d.between(x0, x1), Y: d.between(y0, y1)})}
			id = "table"
		}
		// A desk touches its wall; what stands free keeps off all walls.
		if d.within(&s) && (id == "desk" && d.fits(&s) || d.apart(&s)) {
			d.add(s.Kind, id, s.Radius, s.Points...)
			return
		}
	}
}
