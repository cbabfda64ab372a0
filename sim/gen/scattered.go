package gen

import (
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// scattered lays out loose things between two ends that are set first.
func (d *draft) scattered() bool {
	d.border()
	if !d.ends() || d.walledIn && !d.pen() {
		return false
	}
	d.scatter(8 + d.below(25))
	return true
}

// scatter tries to put n things on the floor; some cling to others or to the border.
func (d *draft) scatter(n int) {
	for range n {
		cling := d.chance(0.3)
		s, id := d.thing()
		onBorder := s.Kind == floor.Wall && cling
		for range 20 {
			t := s
			t.Points = moved(s.Points, d.angle(), geom.Vec{X: d.between(0, d.Width), Y: d.between(0, d.Height)})
			if onBorder { // its first point comes to lie on the border
				p := d.onBorder()
				t.Points = moved(t.Points, 0, p.Sub(t.Points[0]))
				t.Points[0] = p
			}
			if d.within(&t) && (cling && d.fits(&t) || d.apart(&t)) {
				d.add(t.Kind, id, t.Radius, t.Points...)
				break
			}
		}
	}
}

// onBorder returns a place on the border.
func (d *draft) onBorder() geom.Vec {
	x, y := d.between(0, d.Width), d.between(0, d.Height)
	switch d.below(4) {
	case 0:
		return geom.Vec{X: x}
	case 1:
		return geom.Vec{X: x, Y: d.Height}
	case 2:
		return geom.Vec{Y: y}
	}
	return geom.Vec{X: d.Width, Y: y}
}
