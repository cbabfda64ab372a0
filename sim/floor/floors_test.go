package floor

// Floors that the tests and benchmarks share.

import (
	"math"
	"math/rand"
	"testing"

	"leeway/sim/geom"
)

// dice draws what the tests need, the same every time.
type dice struct{ *rand.Rand }

func newDice(seed int64) dice { return dice{rand.New(rand.NewSource(seed))} }

// span draws from (−x, x), between from [a, b).
func (r dice) span(x float64) float64       { return x * (2*r.Float64() - 1) }
func (r dice) between(a, b float64) float64 { return a + (b-a)*r.Float64() }
func (r dice) vec(x float64) geom.Vec       { return geom.Vec{X: r.span(x), Y: r.span(x)} }

func build(t testing.TB, c Config, reach float64) *Map {
	t.Helper()
	m, err := NewMap(c, reach)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// office is a floor of square rooms with doors, partitions, pillars and desks, with
// about the given number of wall pieces, and the length of its side.
func office(walls int) (Config, float64) {
	const room, door = 5.0, 1.1
	n := max(int(math.Sqrt(float64(walls)/6)+0.5), 2)
	side := float64(n) * room
	r := newDice(int64(walls))
	var c Config
	count := 0
	wall := func(p ...geom.Vec) {
		c.Solids = append(c.Solids, Solid{Kind: Wall, Points: p})
		count += len(p) - 1
	}
	at := func(x, y float64) geom.Vec { return geom.Vec{X: x, Y: y} }
	wall(at(0, 0), at(side, 0), at(side, side), at(0, side), at(0, 0))
	for i := range n {
		for k := range n {
			x, y := float64(i)*room, float64(k)*room
			if i > 0 { // the wall to the left, with a door
				g := r.between(0.5, room-0.5-door)
				wall(at(x, y), at(x, y+g))
				wall(at(x, y+g+door), at(x, y+room))
			}
			if k > 0 { // the wall below
				g := r.between(0.5, room-0.5-door)
				wall(at(x, y), at(x+g, y))
				wall(at(x+g+door, y), at(x+room, y))
			}
		}
	}
	for count < walls { // partitions in the rooms
		p := at(r.between(1, side-1), r.between(1, side-1))
		q := p.AddScaled(r.between(0.4, 1.5), geom.Heading(r.span(math.Pi)))
		wall(p, q)
	}
	return c, side
}

// clutter is a floor of everything: walls, polygons convex and not, discs, movers, on a lattice half the time.
func clutter(seed int64, solids, movers int) Config {
	r := newDice(seed)
	lattice := seed%2 == 0
	point := func() geom.Vec {
		if lattice {
			return geom.Vec{X: float64(r.Intn(9)), Y: float64(r.Intn(9))}
		}
		return geom.Vec{X: r.between(0, 8), Y: r.between(0, 8)}
	}
	var c Config
	for len(c.Solids) < solids {
		s := Solid{Kind: Kind(r.Intn(3)), Points: []geom.Vec{point()}}
		switch s.Kind {
		case Disc:
			s.Radius = r.between(0.05, 0.7)
			if lattice {
				s.Radius = 0.5
			}
		default:
			for range 1 + r.Intn(4) {
				p := point()
				if !lattice { // small things, so that there is room between them
					p = s.Points[0].Add(r.vec(1))
				}
				s.Points = append(s.Points, p)
			}
		}
		if CheckSolid(s) == nil {
			c.Solids = append(c.Solids, s)
		}
	}
	for len(c.Movers) < movers {
		v := Mover{Route: []geom.Vec{point()}, Speed: r.between(0, 2), Pause: r.between(0, 1) * float64(r.Intn(2)), Loop: r.Intn(2) == 0, Offset: r.span(20)}
		for range r.Intn(4) {
			v.Route = append(v.Route, point())
		}
		if r.Intn(2) == 0 {
			v.Radius = r.between(0.1, 0.5)
		} else {
			v.Half, v.Heading = geom.Vec{X: r.between(0.1, 0.6), Y: r.between(0.1, 0.6)}, r.span(3)
			if lattice {
				v.Half, v.Heading = geom.Vec{X: 0.5, Y: 0.5}, 0
			}
		}
		if CheckMover(v) == nil {
			c.Movers = append(c.Movers, v)
		}
	}
	return c
}
