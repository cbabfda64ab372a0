package sim_test

import (
	"testing"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/ring"
)

// A run that is reset is the run that NewOn would make, whatever it was before:
// other rings, other floors, moved solids, another motion.
func TestResetEqualsNew(t *testing.T) {
	var used sim.Run
	for i := range 12 {
		c := realRobot()
		c.Seed = uint64(i)
		c.Asked.Within = 25
		c.Ring.Bearings = ring.Even(24 - 3*(i%3))
		if i%2 == 1 {
			c.Ideal = sim.Ideal(5*i) & allIdeal
			c.Floor.Solids = c.Floor.Solids[1:]
			c.Floor.Movers = []floor.Mover{{Radius: 0.2, Route: []geom.Vec{{X: 5, Y: 1}, {X: 5, Y: 5}}, Speed: 0.3}}
		}
		if i%3 == 0 {
			c.Edits = []sim.Edit{{Tick: 400, Kind: sim.MoveSolid, Index: 0, Pos: geom.Vec{X: 4, Y: 2.5}}}
		}
		m, err := floor.NewMap(c.Floor, 3.2)
		if err != nil {
			t.Fatal(err)
		}
		fresh, err := sim.NewOn(m, c)
		if err != nil {
			t.Fatal(err)
		}
		if err := used.Reset(m, c); err != nil {
			t.Fatal(err)
		}
		if a, b := fresh.Finish(), used.Finish(); a != b {
			t.Errorf("run %d: reset gives\n%+v, new gives\n%+v", i, b, a)
		}
	}
}

// Reset needs no memory of its own, but for what config checking does.
func TestResetKeepsMemory(t *testing.T) {
	c := realRobot()
	m, err := floor.NewMap(c.Floor, 3.2)
	if err != nil {
		t.Fatal(err)
	}
	var r sim.Run
	reset := func() {
		if err := r.Reset(m, c); err != nil {
			t.Fatal(err)
		}
	}
	reset()
	check := testing.AllocsPerRun(20, func() { _ = c.Check() })
	// The race detector moves the copy of the config to the heap and empties fmt's pools at random, so that the counts
	// of Check differ by a few; making a run anew would take many more.
	const few = 16
	if n := testing.AllocsPerRun(20, reset); n > check+few {
		t.Errorf("%v allocations, of which Check makes %v", n, check)
	}
}
