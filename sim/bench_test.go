package sim_test

import (
	"fmt"
	"testing"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/gen"
	"leeway/sim/geom"
	"leeway/sim/ring"
)

// office is the default robot with 24 beams of 3 m on a generated office floor.
func office(b *testing.B, walls int) (*floor.Map, sim.Config) {
	b.Helper()
	s, err := gen.Office(1, walls, gen.Options{})
	if err != nil {
		b.Fatal(err)
	}
	c := realRobot()
	c.Floor, c.Start, c.Goal, c.GoalRadius = s.Floor, s.Start, s.Goal, s.GoalRadius
	c.Asked.Within = 120
	m, err := floor.NewMap(c.Floor, c.Ring.Mount+c.Ring.Max)
	if err != nil {
		b.Fatal(err)
	}
	return m, c
}

var sizes = []int{50, 500, 5_000, 50_000}

// A step of the closed loop: 5 ms of physics, 20 ms of control, 50 ms of sensing.
// "sim-s/s" is simulated seconds in a second of one core.
func BenchmarkStep(b *testing.B) {
	for _, n := range sizes {
		b.Run(fmt.Sprintf("walls=%d", n), func(b *testing.B) {
			m, c := office(b, n)
			r, err := sim.NewOn(m, c)
			if err != nil {
				b.Fatal(err)
			}
			b.ReportAllocs()
			for b.Loop() {
				if !r.Going() {
					b.StopTimer()
					c.Seed++
					r, _ = sim.NewOn(m, c)
					b.StartTimer()
				}
				r.Step()
			}
			b.ReportMetric(float64(b.N)*c.Tick/b.Elapsed().Seconds(), "sim-s/s")
		})
	}
}

// A whole run from New to its Status, on a shared floor map.
func BenchmarkRun(b *testing.B) {
	for _, n := range sizes {
		b.Run(fmt.Sprintf("walls=%d", n), func(b *testing.B) {
			m, c := office(b, n)
			b.ReportAllocs()
			simulated := 0.0
			for b.Loop() {
				c.Seed++
				r, err := sim.NewOn(m, c)
				if err != nil {
					b.Fatal(err)
				}
				simulated += r.Finish().Time
			}
			b.ReportMetric(simulated/b.Elapsed().Seconds(), "sim-s/s")
		})
	}
}

// The parts of a step by themselves: a ring of 24 beams, and the nearest thing
// within half a metre, from places all over the floor.
func BenchmarkParts(b *testing.B) {
	for _, n := range sizes {
		m, c := office(b, n)
		w := m.NewWorld()
		s, _ := gen.Office(1, n, gen.Options{})
		places := make([]geom.Pose, 512)
		for i := range places {
			f := float64(i) / float64(len(places))
			places[i] = geom.Pose{Pos: geom.Vec{X: f * s.Width, Y: s.Height * geom.Wrap(7*f) / 7}, Theta: 6 * f}
		}
		b.Run(fmt.Sprintf("ring/walls=%d", n), func(b *testing.B) {
			r := ring.New(c.Ring, 1)
			b.ReportAllocs()
			i := 0
			for b.Loop() {
				r.Sense(int64(c.Ring.Period*(i+1)), places[i%len(places)], w)
				i++
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(24*b.N), "ns/ray")
		})
		b.Run(fmt.Sprintf("clearance/walls=%d", n), func(b *testing.B) {
			b.ReportAllocs()
			i := 0
			for b.Loop() {
				w.Nearest(places[i%len(places)].Pos, 0.5)
				i++
			}
		})
	}
}

// Building the index of a floor, once for all runs on it.
func BenchmarkNewMap(b *testing.B) {
	for _, n := range sizes {
		s, err := gen.Office(1, n, gen.Options{})
		if err != nil {
			b.Fatal(err)
		}
		b.Run(fmt.Sprintf("walls=%d", n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := floor.NewMap(s.Floor, 3.2); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
