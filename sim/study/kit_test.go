package study_test

import (
	"context"
	"math"
	"testing"

	"leeway/sim"
	"leeway/sim/chance"
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
	"leeway/sim/steer"
	. "leeway/sim/study"
)

var ctx = context.Background()

// source makes trials by a function, on one floor map.
type source struct {
	c  sim.Config
	m  *floor.Map
	of func(i int, c *sim.Config)
}

func (s *source) Config(i int) (sim.Config, *floor.Map, error) {
	c := s.c
	c.Seed = uint64(1000 + i)
	if s.of != nil {
		s.of(i, &c)
	}
	return c, s.m, nil
}

func newSource(t testing.TB, c sim.Config, of func(i int, c *sim.Config)) *source {
	t.Helper()
	m, err := floor.NewMap(c.Floor, c.Ring.Mount+c.Ring.Max)
	if err != nil {
		t.Fatal(err)
	}
	return &source{c, m, of}
}

// posts is a robot with every imperfection on a floor 6 m by 4 m with a box and two posts
// between it and its goal; it starts somewhere along its west side.
func posts(t testing.TB) *source {
	d := drive.Config{
		Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, MaxWheelSpeed: 12, MaxWheelAccel: 30, Lag: 0.15, DeadTime: 0.04,
		DeadReckoning: true, CountsPerTurn: 512, RightScale: 1.002, LeftScale: 0.999, TrackScale: 1.01, Slip: 1e-4,
	}
	box := []geom.Vec{{X: 2.2, Y: 1.2}, {X: 2.7, Y: 1.2}, {X: 2.7, Y: 2.6}, {X: 2.2, Y: 2.6}}
	c := sim.Config{
		Tick: 0.01, DecideEvery: 2,
		Floor: floor.Config{Solids: []floor.Solid{
			{ID: "box", Kind: floor.Polygon, Points: box},
			{ID: "post", Kind: floor.Disc, Points: []geom.Vec{{X: 4, Y: 2.2}}, Radius: 0.25},
			{ID: "other", Kind: floor.Disc, Points: []geom.Vec{{X: 4.1, Y: 1.1}}, Radius: 0.2},
			{ID: "border", Kind: floor.Wall, Points: []geom.Vec{{}, {X: 6}, {X: 6, Y: 4}, {Y: 4}, {}}},
		}},
		Hull:  0.21,
		Start: geom.Pose{Pos: geom.Vec{X: 0.6, Y: 2}},
		Ring: ring.Config{Bearings: ring.Even(10), Mount: 0.19, Min: 0.02, Max: 2,
			NoiseBase: 0.02, NoiseGain: 0.01, Dropout: 0.02, Quantum: 0.001, Period: 5, SubRays: 1},
		Drive: d,
		Steer: steer.Config{Rule: steer.HeadingServo, Gain: 3, TurnBeyond: math.Pi / 3, Ahead: 0.1,
			WheelRadius: d.WheelRadius, Track: d.Track, MaxWheelSpeed: d.MaxWheelSpeed},
		Logic: logic.Default(logic.DefaultNumbers(0.21, 0.45, 0.15)),
		Speed: 0.45, Goal: geom.Vec{X: 5.3, Y: 2}, GoalRadius: 0.15,
		Asked: sim.Asked{Within: 25, Leeway: 0.04, Switches: -1},
	}
	return newSource(t, c, func(i int, c *sim.Config) {
		s := chance.New(5, "start", i)
		c.Start.Pos.Y = 0.6 + 2.8*s.Uniform()
		c.Start.Theta = 2 * s.Uniform()
	})
}

// braking drives straight at a wall that it sees from a metre off, and must come to
// rest before it. Its wheels brake at 1 m/s² on the ground, without any lag, and the
// ring and the logic look at every tick.
const (
	sightGap = 1.0 // m, from hull to wall
	decel    = 1.0 // m/s²
)

func braking(t testing.TB) Family {
	const wheel, tick = 0.05, 0.002
	d := drive.Config{Model: drive.TwoWheels, WheelRadius: wheel, Track: 0.3, MaxWheelAccel: decel / wheel}
	c := sim.Config{
		Tick: tick, DecideEvery: 1,
		Floor: floor.Config{Solids: []floor.Solid{{ID: "wall", Kind: floor.Wall, Points: []geom.Vec{{X: 6.5, Y: -3}, {X: 6.5, Y: 3}}}}},
		Hull:  0.2,
		Ring:  ring.Config{Bearings: []float64{0}, Mount: 0.2, Max: sightGap, Period: 1, SubRays: 1},
		Drive: d,
		Steer: steer.Config{Rule: steer.HeadingServo, Gain: 3, WheelRadius: wheel, Track: d.Track},
		Logic: &logic.Logic{Name: "stop at a wall", Sector: 0.5,
			Modes: []logic.Mode{{Name: "go", Behaviour: logic.GoalSeeking}, {Name: "halt", Behaviour: logic.Stop, Ending: logic.EndsArrived}},
			Transitions: []logic.Transition{{From: 0, To: 1, When: []logic.Condition{
				{Reading: logic.Nearest, Rel: logic.Below, Threshold: sightGap}}}}},
		Goal: geom.Vec{X: 30}, GoalRadius: 40,
		Asked:     sim.Asked{Within: 60, Leeway: 0, Switches: -1},
		OnContact: sim.EndsTheRun,
	}
	s := newSource(t, c, func(i int, c *sim.Config) {
		u := chance.New(3, "start", i)
		c.Start.Pos.X = 0.5 + 0.1*u.Uniform() // where within a tick it sees the wall
	})
	return func(v []float64) (Source, error) {
		n := *s
		n.c.Speed = v[0]
		return &n, nil
	}
}
