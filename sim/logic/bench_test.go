package logic_test

import (
	"testing"

	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
)

// benchmarkDecide measures one control tick of a robot that goes along a wall in a
// furnished room, a new scan every third tick.
func benchmarkDecide(b *testing.B, c ring.Config) {
	m, err := floor.NewMap(floor.Config{Solids: []floor.Solid{
		{Kind: floor.Wall, Points: []geom.Vec{{X: 0, Y: 0}, {X: 6, Y: 0}, {X: 6, Y: 5}, {X: 0, Y: 5}, {X: 0, Y: 0}}},
		{Kind: floor.Disc, Points: []geom.Vec{{X: 3, Y: 2.4}}, Radius: 0.4},
		{Kind: floor.Wall, Points: []geom.Vec{{X: 2, Y: 3.2}, {X: 4.5, Y: 3.2}}},
	}}, 3.2)
	if err != nil {
		b.Fatal(err)
	}
	w := m.NewWorld()
	c.Mount, c.Max, c.Period, c.SubRays = 0.19, 3, 1, 1
	r := ring.New(c, 1)
	pose := geom.Pose{Pos: geom.Vec{X: 3, Y: 1.5}}
	e := logic.New(logic.Default(logic.DefaultNumbers(0.21, 0.45, 0.15)))
	in := logic.Input{Goal: geom.Vec{X: 3, Y: 8}, GoalRadius: 0.15, Scan: r.Scan(), Hull: 0.21, Speed: 0.45}
	step := func(k int) {
		if k%3 == 0 {
			r.Sense(int64(k), pose, w)
		}
		in.Tick, in.Time = int64(k), float64(k)*0.02
		in.Belief.X, in.Belief.Y, in.Belief.Theta = pose.Pos.X, pose.Pos.Y, pose.Theta
		d := e.Decide(&in)
		pose.Pos = pose.Pos.AddScaled(0.02, d.U)
	}
	const wallFollowing = 1
	k := 0
	for ; e.Mode() != wallFollowing || in.Time < e.Since()+0.5; k++ {
		if k > 1000 {
			b.Fatal("the robot never follows the wall")
		}
		step(k)
	}
	// The decision alone, at one place: time stands still, or the logic would switch on.
	b.ReportAllocs()
	for b.Loop() {
		e.Decide(&in)
	}
	if e.Mode() != wallFollowing {
		b.Fatal("the robot has left the wall")
	}
}

func BenchmarkDecide24Beams(b *testing.B) {
	benchmarkDecide(b, ring.Config{Bearings: ring.Even(24)})
}

func BenchmarkDecideFan(b *testing.B) {
	benchmarkDecide(b, ring.Config{Bearings: ring.Even(24), AllRound: true, Noiseless: true})
}
