package reach_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"leeway/sim/floor"
	"leeway/sim/gen"
	"leeway/sim/geom"
	"leeway/sim/reach"
)

// question is a floor with a start and a goal at its far ends.
type question struct {
	c        floor.Config
	from, to geom.Vec
}

// looseWalls is a square strewn with n walls, at the same density whatever n is.
func looseWalls(n int) question {
	rng := rand.New(rand.NewPCG(7, 6))
	size := 2 * math.Sqrt(float64(n))
	c := on()
	for range n {
		p := geom.Vec{X: size * rng.Float64(), Y: size * rng.Float64()}
		s, co := math.Sincos(7 * rng.Float64())
		c.Solids = append(c.Solids, wall(p, p.Add(geom.Vec{X: 1.5 * co, Y: 1.5 * s})))
	}
	return question{c, geom.Vec{X: -1, Y: -1}, geom.Vec{X: size + 1, Y: size + 1}}
}

func office(b *testing.B, n int) question {
	s, err := gen.Office(1, n, gen.Options{})
	if err != nil {
		b.Fatal(err)
	}
	return question{s.Floor, s.Start.Pos, s.Goal}
}

func BenchmarkLooseWalls(b *testing.B) {
	for _, n := range []int{50, 500, 5000} {
		measure(b, n, looseWalls(n))
	}
}

func BenchmarkOffice(b *testing.B) {
	for _, n := range []int{50, 500, 5000} {
		measure(b, n, office(b, n))
	}
}

// measure times one question on a fresh floor, the preparation alone, and the same question asked again.
func measure(b *testing.B, n int, q question) {
	b.Run(fmt.Sprintf("fresh/%d", n), func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			if r, err := reach.Shortest(q.c, 0.21, q.from, q.to, 0.15); err != nil || !r.Reachable {
				b.Fatal(r.Reason, err)
			}
		}
	})
	b.Run(fmt.Sprintf("prepare/%d", n), func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			if _, err := reach.New(q.c, 0.21); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run(fmt.Sprintf("again/%d", n), func(b *testing.B) {
		b.ReportAllocs()
		y, err := reach.New(q.c, 0.21)
		if err != nil {
			b.Fatal(err)
		}
		for b.Loop() {
			if r, err := y.Shortest(q.from, q.to, 0.15); err != nil || !r.Reachable {
				b.Fatal(r.Reason, err)
			}
		}
	})
}
