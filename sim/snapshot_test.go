package sim_test

import (
	"testing"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// A run brought back to any place goes on from there bit for bit, edits and all.
func TestACopyGoesOnTheSame(t *testing.T) {
	c := realRobot()
	c.Floor.Movers = []floor.Mover{{Radius: 0.2, Route: []geom.Vec{{X: 5, Y: 1}, {X: 5, Y: 5}}, Speed: 0.5, Pause: 1}}
	c.Edits = []sim.Edit{
		{Tick: 500, Kind: sim.MoveSolid, Index: 1, Pos: geom.Vec{X: 6, Y: 3}},
		{Tick: 900, Kind: sim.SetNumber, Number: sim.LagNumber, Value: 0.15},
		{Tick: 1500, Kind: sim.MoveSolid, Index: 1, Pos: geom.Vec{X: 6.2, Y: 2}},
	}
	whole := hashes(t, newRun(t, c), 100_000)
	r := newRun(t, c)
	marks := map[int]*sim.Run{}
	for i := range whole {
		if i%700 == 0 {
			m := new(sim.Run)
			m.CopyFrom(r)
			marks[i] = m
		}
		r.Step()
	}
	back := newRun(t, realRobot()) // of another floor: its memory is taken over
	for _, i := range []int{2100, 0, 700, 1400, 700} {
		back.CopyFrom(marks[i])
		sameRun(t, whole[i:], hashes(t, back, 100_000))
	}
	sameRun(t, whole[700:], hashes(t, marks[700], 100_000))
}
