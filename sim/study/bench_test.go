package study_test

import (
	"fmt"
	"testing"

	"leeway/sim"
	"leeway/sim/gen"
	. "leeway/sim/study"
)

// Trials on an office floor of 500 walls, from a generated start, by workers. "runs/s"
// on two workers over that on one is the parallel efficiency times two.
func BenchmarkTrials(b *testing.B) {
	s, err := gen.Office(1, 500, gen.Options{})
	if err != nil {
		b.Fatal(err)
	}
	c := posts(b).c
	c.Floor, c.Start, c.Goal, c.GoalRadius = s.Floor, s.Start, s.Goal, s.GoalRadius
	c.Asked.Within = 60
	source := newSource(b, c, func(i int, c *sim.Config) {})
	for _, workers := range []int{1, 2} {
		b.Run(fmt.Sprintf("workers=%d", workers), func(b *testing.B) {
			b.ReportAllocs()
			n := 0
			for b.Loop() {
				if _, err := RunTrials(ctx, &Runner{Workers: workers}, source, TrialsPlan{N: 200, Confidence: 0.95}); err != nil {
					b.Fatal(err)
				}
				n += 200
			}
			b.ReportMetric(float64(n)/b.Elapsed().Seconds(), "runs/s")
		})
	}
}
