package floor

import (
	"fmt"
	"math"
	"testing"

	"leeway/sim/geom"
)

const (
	benchReach = 3.0
	benchHull  = 0.2
)

// benchPoses are free places in an office, each with the headings of a ring of 24.
func benchPoses(w *World, side float64) ([]geom.Vec, [][]Ray) {
	r := newDice(7)
	var at []geom.Vec
	var rings [][]Ray
	for len(at) < 1024 {
		p := geom.Vec{X: r.between(0, side), Y: r.between(0, side)}
		if _, near := w.Nearest(p, benchHull+0.05); near {
			continue
		}
		turn := r.span(math.Pi)
		ring := make([]Ray, 24)
		for i := range ring {
			d := geom.Heading(turn + 2*math.Pi*float64(i)/24)
			ring[i] = Ray{p.AddScaled(benchHull, d), d}
		}
		at, rings = append(at, p), append(rings, ring)
	}
	return at, rings
}

// onOffices runs a benchmark on floors of four sizes, at poses in random order.
func onOffices(b *testing.B, run func(b *testing.B, w *World, at []geom.Vec, rings [][]Ray)) {
	for _, walls := range []int{50, 500, 5000, 50000} {
		b.Run(fmt.Sprint(walls), func(b *testing.B) {
			c, side := office(walls)
			w := build(b, c, benchReach).NewWorld()
			at, rings := benchPoses(w, side)
			b.ReportAllocs()
			b.ResetTimer()
			run(b, w, at, rings)
		})
	}
}

// BenchmarkRay casts one ray a call.
func BenchmarkRay(b *testing.B) {
	onOffices(b, func(b *testing.B, w *World, _ []geom.Vec, rings [][]Ray) {
		var out [1]float64
		for i := 0; i < b.N; i++ {
			ring := rings[i&1023]
			k := i % 24
			w.Cast(ring[k:k+1], benchReach, out[:])
		}
	})
}

// BenchmarkFan casts a ring of 24 rays a call; the time is of the whole ring.
func BenchmarkFan(b *testing.B) {
	onOffices(b, func(b *testing.B, w *World, _ []geom.Vec, rings [][]Ray) {
		var out [24]float64
		for i := 0; i < b.N; i++ {
			w.Cast(rings[i&1023], benchReach, out[:])
		}
		b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/24, "ns/ray")
	})
}

// BenchmarkFanAmongMovers is BenchmarkFan on 500 walls with ten movers and three moved solids about.
func BenchmarkFanAmongMovers(b *testing.B) {
	c, side := office(500)
	r := newDice(3)
	for range 10 {
		c.Movers = append(c.Movers, Mover{Half: geom.Vec{X: 0.4, Y: 0.25}, Speed: 0.5, Route: []geom.Vec{
			{X: r.between(0, side), Y: r.between(0, side)}, {X: r.between(0, side), Y: r.between(0, side)}}})
	}
	w := build(b, c, benchReach).NewWorld()
	for i := range 3 {
		w.MoveSolid(10*i+5, geom.Vec{X: r.between(0, side), Y: r.between(0, side)})
	}
	w.Advance(5)
	_, rings := benchPoses(w, side)
	var out [24]float64
	b.ReportAllocs()
	b.ResetTimer()
	for i := 0; i < b.N; i++ {
		w.Cast(rings[i&1023], benchReach, out[:])
	}
}

// BenchmarkNearest asks within a hull and a little, as a run does at every tick.
func BenchmarkNearest(b *testing.B) {
	onOffices(b, func(b *testing.B, w *World, at []geom.Vec, _ [][]Ray) {
		for i := 0; i < b.N; i++ {
			w.Nearest(at[i&1023], benchHull+0.1)
		}
	})
}

// BenchmarkSweep moves a hull by one tick at 0.5 m/s.
func BenchmarkSweep(b *testing.B) {
	onOffices(b, func(b *testing.B, w *World, at []geom.Vec, rings [][]Ray) {
		for i := 0; i < b.N; i++ {
			w.Sweep(at[i&1023], rings[i&1023][0].Dir.Scale(0.0025), benchHull)
		}
	})
}

// BenchmarkMap builds the index.
func BenchmarkMap(b *testing.B) {
	for _, walls := range []int{50, 500, 5000, 50000} {
		c, _ := office(walls)
		b.Run(fmt.Sprint(walls), func(b *testing.B) {
			b.ReportAllocs()
			for i := 0; i < b.N; i++ {
				build(b, c, benchReach)
			}
		})
	}
}

// BenchmarkLift moves a solid of a fresh world for the first time.
func BenchmarkLift(b *testing.B) {
	c, _ := office(500)
	w := build(b, c, benchReach).NewWorld()
	for i := 0; i < b.N; i++ {
		w.Reset()
		w.MoveSolid(i%len(c.Solids), geom.Vec{X: 1, Y: 1})
	}
}
