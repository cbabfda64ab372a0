package logic_test

import (
	"testing"

	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
)

func pocket(t testing.TB, cfg ring.Config) *course {
	return newCourse(t, defaults(), cfg, geom.Pose{Pos: v(1, 3), Theta: 0.1}, v(9, 3),
		room(0, 0, 10, 6), wall(v(4, 2), v(6, 2), v(6, 4), v(4, 4)))
}

// A copy goes on as the engine that it was taken from, and leaves that alone.
func TestCopyGoesOnAlike(t *testing.T) {
	for name, cfg := range map[string]ring.Config{"fan": fan, "12 beams": beams(12)} {
		for _, until := range []float64{0, 5, 12, 20} {
			a, b := pocket(t, cfg), pocket(t, cfg)
			for a.in.Time < until && a.step() {
			}
			// Into an engine that has run something else before.
			used := logic.New(still())
			used.Decide(at(0, 0, 0, v(1, 1), scan(0.1, 2, []float64{0, 1}, []float64{1, 1})))
			used.CopyFrom(a.e)
			b.e, b.pose, b.k = used, a.pose, a.k
			b.ring.CopyFrom(a.ring)
			for i := range 1500 {
				if a.step() != b.step() || a.last != b.last || *a.e.Readings() != *b.e.Readings() {
					t.Fatalf("%s, copied at %.0f s: they differ %d ticks later", name, until, i)
				}
			}
		}
	}
}

// Reset leaves nothing of the run before.
func TestResetStartsAfresh(t *testing.T) {
	a, b := pocket(t, beams(12)), pocket(t, beams(12))
	for range 900 {
		a.step()
	}
	a.e.Reset(a.l)
	a.pose, a.k = b.pose, 0
	a.ring.Reset(beams(12), 1)
	for i := range 1500 {
		a.step()
		b.step()
		if a.last != b.last || *a.e.Readings() != *b.e.Readings() {
			t.Fatalf("a reset engine differs from a new one at tick %d", i)
		}
	}
	if _, ok := logic.New(a.l).LastSwitch(); ok {
		t.Error("a new engine has switched")
	}
}

func TestDecideDoesNotAllocate(t *testing.T) {
	for name, cfg := range map[string]ring.Config{"fan": fan, "16 beams": beams(16)} {
		k := pocket(t, cfg)
		start, spare := k.pose, logic.New(k.l)
		// The first run shows the floor and the ring all that the second one will ask of them.
		allocs := testing.AllocsPerRun(1, func() {
			k.e.Reset(k.l)
			k.ring.Reset(cfg, 1)
			k.pose, k.k = start, 0
			for range 2500 { // from start to goal, through the modes
				k.step()
				spare.CopyFrom(k.e)
			}
		})
		if allocs > 0 {
			t.Errorf("%s: %.0f allocations in a run", name, allocs)
		}
		if k.l.Modes[k.e.Mode()].Ending != logic.EndsArrived {
			t.Errorf("%s: the run did not arrive", name)
		}
	}
}
