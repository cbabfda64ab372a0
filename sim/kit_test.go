package sim_test

import (
	"math"
	"testing"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
	"leeway/sim/steer"
)

const allIdeal = sim.PointMotion | sim.NoWheelLimits | sim.NoLag | sim.AllRoundSight | sim.NoiselessSight | sim.TruePosition

// wall, box and post are short names for what stands on the tests' floors.
func wall(p ...geom.Vec) floor.Solid { return floor.Solid{Kind: floor.Wall, Points: p} }

func box(x0, y0, x1, y1 float64) floor.Solid {
	return floor.Solid{Kind: floor.Polygon, Points: []geom.Vec{{X: x0, Y: y0}, {X: x1, Y: y0}, {X: x1, Y: y1}, {X: x0, Y: y1}}}
}

func post(x, y, r float64) floor.Solid {
	return floor.Solid{Kind: floor.Disc, Points: []geom.Vec{{X: x, Y: y}}, Radius: r}
}

// realRobot is a small robot with every imperfection on, at x = 1, y = 3 of a
// floor 12 m by 6 m with a few things in the way of a goal at x = 11.
func realRobot() sim.Config {
	d := drive.Config{
		Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3,
		MaxWheelSpeed: 14, MaxWheelAccel: 40, Lag: 0.08, DeadTime: 0.02,
		DeadReckoning: true, CountsPerTurn: 1024, RightScale: 1.0005, LeftScale: 0.9998, TrackScale: 1.003, Slip: 1e-5,
		FixEvery: 8, FixNoise: 0.01, FixTurnNoise: 0.01,
	}
	return sim.Config{
		Seed: 7, Tick: 0.005, DecideEvery: 4,
		Floor: floor.Config{Solids: []floor.Solid{
			box(3.6, 1.9, 4.2, 4.6), post(6.1, 2.4, 0.35), post(6.9, 4.4, 0.3), box(8.2, 0.6, 8.7, 3.3),
			wall(geom.Vec{X: 0, Y: 0}, geom.Vec{X: 12, Y: 0}, geom.Vec{X: 12, Y: 6}, geom.Vec{X: 0, Y: 6}, geom.Vec{X: 0, Y: 0}),
		}},
		Hull:  0.21,
		Start: geom.Pose{Pos: geom.Vec{X: 1, Y: 3.1}},
		Ring: ring.Config{Bearings: ring.Even(24), Mount: 0.19, Min: 0.02, Max: 3,
			NoiseBase: 0.01, NoiseGain: 0.005, Dropout: 0.005, Random: 0.001, Quantum: 0.001, Period: 10, SubRays: 1},
		Drive: d,
		Steer: steer.Config{Rule: steer.HeadingServo, Gain: 3, TurnBeyond: math.Pi / 3, Ahead: 0.1,
			WheelRadius: d.WheelRadius, Track: d.Track, MaxWheelSpeed: d.MaxWheelSpeed},
		Logic:      logic.Default(logic.DefaultNumbers(0.21, 0.45, 0.15)),
		Speed:      0.45,
		Goal:       geom.Vec{X: 11, Y: 2.9},
		GoalRadius: 0.15,
		Asked:      sim.Asked{Within: 120, Leeway: 0.05, Switches: -1},
	}
}

// clean is realRobot with every imperfection at zero: still two wheels, still 24
// beams, still dead reckoning.
func clean() sim.Config {
	c := realRobot()
	c.Drive.MaxWheelSpeed, c.Drive.MaxWheelAccel, c.Drive.Lag, c.Drive.DeadTime = 0, 0, 0, 0
	c.Drive.CountsPerTurn, c.Drive.Slip, c.Drive.FixEvery = 0, 0, 0
	c.Drive.RightScale, c.Drive.LeftScale, c.Drive.TrackScale = 1, 1, 1
	c.Ring.NoiseBase, c.Ring.NoiseGain, c.Ring.Dropout, c.Ring.Random, c.Ring.Quantum, c.Ring.Min = 0, 0, 0, 0, 0, 0
	c.Steer.MaxWheelSpeed = 0
	return c
}

func newRun(t testing.TB, c sim.Config) *sim.Run {
	t.Helper()
	r, err := sim.New(c)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// hashes runs c to its end, or for n ticks, and returns the state hash of every tick.
func hashes(t testing.TB, r *sim.Run, n int) []uint64 {
	t.Helper()
	var h []uint64
	for i := 0; i < n && r.Outcome().Status == sim.Running; i++ {
		r.Step()
		h = append(h, r.Outcome().Hash)
	}
	return h
}

// sameRun fails at the first tick at which the two runs differ.
func sameRun(t testing.TB, a, b []uint64) {
	t.Helper()
	for i := range min(len(a), len(b)) {
		if a[i] != b[i] {
			t.Fatalf("the runs first differ at tick %d of %d", i+1, len(a))
		}
	}
	if len(a) != len(b) {
		t.Fatalf("the runs end after %d and %d ticks", len(a), len(b))
	}
}
