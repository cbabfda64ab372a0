package scenarios_test

import (
	"fmt"
	"math"
	"math/rand/v2"

	"leeway/sim/scenario"
)

// office draws the long office floor: two corridors with rooms on both sides, joined
// by three cross corridors, every room with a door and some furniture. The
// shipped file is what this draws; it is too long to be kept by hand.
func office() *scenario.Scenario {
	const (
		width    = 52.0
		deep     = 4.4 // of a room
		corridor = 2.0
		cross    = 2.4 // width of the cross corridors
		height   = 4*deep + 2*corridor
	)
	s := scenario.New(width, height)
	s.Name = "The long office"
	s.Purpose = "Two corridors, dozens of rooms, hundreds of walls: from one corner to the other, in two minutes or in ten."
	s.Start = scenario.Start{X: 1.2, Y: 1.2, Heading: 90}
	s.Goal.X, s.Goal.Y = 50.8, 16.2
	s.Asked = scenario.Asked{Within: 700, Leeway: 0.05, Switches: 250}

	o := drawing{s: s, dice: rand.New(rand.NewPCG(7, 2))}
	half := (width - 3*cross) / 2
	rows := []struct {
		front, back float64 // y of the wall with the doors, y of the far wall
	}{{deep, 0}, {deep + corridor, 2*deep + corridor}, {3*deep + corridor, 2*deep + corridor}, {3*deep + 2*corridor, height}}
	for _, r := range rows {
		for wing := range 2 {
			left := cross + float64(wing)*(half+cross)
			o.wing(left, left+half, r.front, r.back)
		}
	}
	return s
}

// drawing puts things on a floor.
type drawing struct {
	s    *scenario.Scenario
	dice *rand.Rand
}

func cm(x float64) float64 { return math.Round(100*x) / 100 }

func (o *drawing) wall(x0, y0, x1, y1 float64) {
	w := &o.s.Floor.Walls
	*w = append(*w, scenario.Wall{ID: fmt.Sprintf("w%d", len(*w)+1), Points: []scenario.Point{{cm(x0), cm(y0)}, {cm(x1), cm(y1)}}})
}

func (o *drawing) box(x0, y0, x1, y1 float64) {
	x0, y0, x1, y1 = cm(min(x0, x1)), cm(min(y0, y1)), cm(max(x0, x1)), cm(max(y0, y1))
	o.solid(scenario.Solid{Corners: []scenario.Point{{x0, y0}, {x1, y0}, {x1, y1}, {x0, y1}}})
}

func (o *drawing) disc(x, y, r float64) {
	o.solid(scenario.Solid{Center: scenario.Point{cm(x), cm(y)}, Radius: r})
}

func (o *drawing) solid(d scenario.Solid) {
	l := &o.s.Floor.Solids
	d.ID = fmt.Sprintf("s%d", len(*l)+1)
	*l = append(*l, d)
}

// wing draws a row of rooms from x0 to x1.
func (o *drawing) wing(x0, x1, front, back float64) {
	o.wall(x0, front, x0, back)
	if back != 0 && back < o.s.Floor.Height && front < back { // shared by two rows
		o.wall(x0, back, x1, back)
	}
	for x := x0; x < x1; {
		w := 3.2 + 0.4*float64(o.dice.IntN(4))
		if x1-x-w < 3.2 {
			w = x1 - x
		}
		o.room(x, x+w, front, back)
		x += w
		o.wall(x, front, x, back)
	}
}

// room draws the front of a room with its door, and what stands in it along its far wall and sides.
func (o *drawing) room(x0, x1, front, back float64) {
	const door = 1.1
	in := math.Copysign(1, back-front) // from the door into the room
	hinge := x0 + 0.3 + float64(o.dice.IntN(3))*(x1-x0-door-0.6)/2
	o.wall(x0, front, hinge, front)
	o.wall(hinge+door, front, x1, front)
	switch o.dice.IntN(5) {
	case 0, 1: // a desk along the far wall with a chair, and a cabinet
		o.box(x0+0.6, back-0.1*in, x0+2.2, back-0.85*in)
		o.disc(x0+1.4, back-1.25*in, 0.25)
		o.box(x1-0.15, back-0.3*in, x1-0.6, back-1.5*in)
	case 2: // two desks, face to face
		m := (x0 + x1) / 2
		o.box(m-0.8, back-0.9*in, m-0.02, back-2.3*in)
		o.box(m+0.02, back-0.9*in, m+0.8, back-2.3*in)
	case 3: // a table with chairs
		m := (x0 + x1) / 2
		o.disc(m, back-1.7*in, 0.6)
		for k := range 3 {
			a := 0.5 + float64(k)*2*math.Pi/3
			o.disc(m+0.92*math.Cos(a), back-(1.7+0.92*math.Sin(a))*in, 0.2)
		}
	case 4: // shelves along both sides
		o.box(x0+0.1, back-0.2*in, x0+0.5, back-2.6*in)
		o.box(x1-0.1, back-0.2*in, x1-0.5, back-2.6*in)
	}
}
