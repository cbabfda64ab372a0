package gen

import (
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// pockets lays out one or two shapes that a robot can drive into and must come
// out of again, between start and goal or about the goal, and a few loose things.
func (d *draft) pockets() bool {
	d.border()
	if !d.ends() || d.walledIn && !d.pen() {
		return false
	}
	placed := 0
	for n := 1 + d.below(2); n > 0; n-- {
		if d.pocket() {
			placed++
		}
	}
	d.scatter(d.below(6))
	return placed > 0
}

// pocket tries to put one up.
func (d *draft) pocket() bool {
	way := d.goal.Sub(d.start)
	kind, thick := d.below(3), d.chance(0.5)
	aboutGoal := !d.walledIn && d.chance(0.35)
	for range 40 {
		var s floor.Solid
		var id string
		switch kind {
		case 0:
			s, id = d.cup(thick), "pocket"
		case 1:
			s, id = d.hook(thick), "hook"
		default:
			s, id = d.coil(), "coil"
		}
		// The shapes are drawn with their inside about the origin and their mouth
		// toward −x. On the way they face the start; about the goal, any side.
		at, turn := d.goal, d.angle()
		if !aboutGoal {
			aside := way.Perp().Scale(d.between(-0.1, 0.1))
			at, turn = d.start.AddScaled(d.between(0.3, 0.75), way).Add(aside), way.Angle()+d.between(-0.5, 0.5)
		}
		s.Points = moved(s.Points, turn, at)
		if d.within(&s) && d.apart(&s) {
			d.add(s.Kind, id, 0, s.Points...)
			return true
		}
	}
	return false
}

// cup is a U whose arms differ in length.
func (d *draft) cup(thick bool) floor.Solid {
	w, deep := float64(d.clear()/2)+d.between(0.3, 1.5), d.between(0.8, 2.6)
	x := float64(deep / 2)
	left, right := -x, -x
	if short := float64(d.between(-0.5, 0.5) * deep); short < 0 {
		left -= short
	} else {
		right += short
	}
	if !thick {
		return floor.Solid{Kind: floor.Wall, Points: []geom.Vec{{X: left, Y: w}, {X: x, Y: w}, {X: x, Y: -w}, {X: right, Y: -w}}}
	}
	t := d.between(0.1, 0.4)
	return floor.Solid{Kind: floor.Polygon, Points: []geom.Vec{
		{X: left, Y: w}, {X: left, Y: w + t}, {X: x + t, Y: w + t}, {X: x + t, Y: -w - t},
		{X: right, Y: -w - t}, {X: right, Y: -w}, {X: x, Y: -w}, {X: x, Y: w}}}
}

// hook is an L, its arms across the way and back along it.
func (d *draft) hook(thick bool) floor.Solid {
	across, deep := d.between(1.5, 4), d.between(0.8, 2.6)
	side := 1.0
	if d.chance(0.5) {
		side = -1
	}
	x, y := float64(deep/2), float64(side*across/2)
	if !thick {
		return floor.Solid{Kind: floor.Wall, Points: []geom.Vec{{X: x - deep, Y: y}, {X: x, Y: y}, {X: x, Y: -y}}}
	}
	t := d.between(0.1, 0.4)
	z := y + float64(side*t)
	return floor.Solid{Kind: floor.Polygon, Points: []geom.Vec{{X: x - deep, Y: y}, {X: x - deep, Y: z}, {X: x + t, Y: z}, {X: x + t, Y: -y}, {X: x, Y: -y}, {X: x, Y: y}}}
}

// coil is a spiral of one turn: a corridor along its lower side leads into a chamber above.
func (d *draft) coil() floor.Solid {
	c := d.clear() + d.between(0.1, 0.5)
	w, h := float64(c*d.between(2.1, 3)), float64(c*d.between(2.1, 3))
	points := []geom.Vec{{}, {X: w}, {X: w, Y: h}, {Y: h}, {Y: c}, {X: w - c, Y: c}}
	if d.chance(0.5) { // the other hand
		for i, p := range points {
			points[i] = geom.Vec{X: p.X, Y: h - p.Y}
		}
		return floor.Solid{Kind: floor.Wall, Points: moved(points, 0, geom.Vec{X: -w / 2, Y: (c - h) / 2})}
	}
	return floor.Solid{Kind: floor.Wall, Points: moved(points, 0, geom.Vec{X: -w / 2, Y: -(c + h) / 2})}
}
