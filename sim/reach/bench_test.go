package reach_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"leeway/sim/geom"
	"leeway/sim/reach"
)

func BenchmarkScatter(b *testing.B) {
	for _, n := range []int{50, 500, 5000} {
		// As many loose walls, at the same density, as the count says.
		rng := rand.New(rand.NewPCG(7, 6))
		size := 2 * math.Sqrt(float64(n))
		c := on()
		for range n {
			p := geom.Vec{X: size * rng.Float64(), Y: size * rng.Float64()}
			s, co := math.Sincos(7 * rng.Float64())
			c.Solids = append(c.Solids, wall(p, p.Add(geom.Vec{X: 1.5 * co, Y: 1.5 * s})))
		}
		from, to := geom.Vec{X: -1, Y: -1}, geom.Vec{X: size + 1, Y: size + 1}
		b.Run(fmt.Sprintf("fresh/%d", n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if r, err := reach.Shortest(c, 0.21, from, to, 0.15); err != nil || !r.Reachable {
					b.Fatal(r.Reason, err)
				}
			}
		})
		b.Run(fmt.Sprintf("prepare/%d", n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := reach.New(c, 0.21); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("again/%d", n), func(b *testing.B) {
			b.ReportAllocs()
			y, err := reach.New(c, 0.21)
			if err != nil {
				b.Fatal(err)
			}
			for b.Loop() {
				if r, err := y.Shortest(from, to, 0.15); err != nil || !r.Reachable {
					b.Fatal(r.Reason, err)
				}
			}
		})
	}
}
