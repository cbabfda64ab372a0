package drive_test

import (
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"
)

// A tick is reckon, actuate and move.
func BenchmarkTick(b *testing.B) {
	limited := perfect()
	limited.MaxWheelSpeed, limited.MaxWheelAccel, limited.Lag, limited.DeadTime = 14, 40, 0.08, 0.02
	lag := perfect()
	lag.Lag = 0.08
	known := perfect()
	known.DeadReckoning = false
	var cmds [1024]drive.Wheels
	for i := range cmds { // small corrections: within the acceleration limit, the dearest case
		cmds[i] = wobble(i)
		cmds[i].Left, cmds[i].Right = 5+cmds[i].Left/100, 6+cmds[i].Right/100
	}
	for _, c := range []struct {
		name string
		c    drive.Config
	}{{"position known", known}, {"reckoning", perfect()}, {"lag", lag}, {"limits and lag", limited}, {"every imperfection", real()}} {
		b.Run(c.name, func(b *testing.B) {
			r := newRig(c.c, 0.005, geom.Pose{})
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				r.step(cmds[i&1023])
			}
		})
	}
}

func BenchmarkArc(b *testing.B) {
	p := geom.Pose{}
	for b.Loop() {
		p = drive.Arc(p, 0.002, 0.004)
	}
}
