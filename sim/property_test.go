package sim_test

import (
	"math"
	"sync"
	"testing"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/steer"
)

// mapFloor applies f to every point of a floor.
func mapFloor(c floor.Config, f func(geom.Vec) geom.Vec, turn float64) floor.Config {
	var out floor.Config
	for _, s := range c.Solids {
		pts := make([]geom.Vec, len(s.Points))
		for i, p := range s.Points {
			pts[i] = f(p)
		}
		s.Points = pts
		out.Solids = append(out.Solids, s)
	}
	for _, m := range c.Movers {
		route := make([]geom.Vec, len(m.Route))
		for i, p := range m.Route {
			route[i] = f(p)
		}
		m.Route, m.Heading = route, m.Heading+turn
		out.Movers = append(out.Movers, m)
	}
	return out
}

// A mirrored world gives the mirrored run, for every model of motion and both
// steering rules. Noise is off: a stream belongs to a beam, not to a side.
func TestMirroredWorldGivesMirroredRun(t *testing.T) {
	flip := func(p geom.Vec) geom.Vec { return geom.Vec{X: p.X, Y: -p.Y} }
	for name, change := range variants {
		t.Run(name, func(t *testing.T) {
			c := clean()
			change(&c)
			m := c
			m.Floor = mapFloor(c.Floor, flip, 0)
			m.Start = geom.Pose{Pos: flip(c.Start.Pos), Theta: -c.Start.Theta}
			m.Goal = flip(c.Goal)
			a, b := newRun(t, c), newRun(t, m)
			worst := follow(t, a, b, func(p geom.Pose) geom.Pose { return geom.Pose{Pos: flip(p.Pos), Theta: -p.Theta} })
			t.Logf("largest difference from the mirror image: %.2g m", worst)
			if worst > 1e-9 {
				t.Errorf("the mirrored run leaves the mirror image by %g m", worst)
			}
		})
	}
}

// A rotated and shifted world gives the same run in the moved frame. Rounding
// differs there, and each switch may amplify it; the bound is far below a
// sensor's step.
func TestMovedWorldGivesMovedRun(t *testing.T) {
	const turn = 0.7
	shift := geom.Vec{X: 5.3, Y: -2.1}
	s, co := geom.Sincos(turn)
	move := func(p geom.Vec) geom.Vec { return p.Rotate(s, co).Add(shift) }
	for name, change := range variants {
		t.Run(name, func(t *testing.T) {
			c := clean()
			change(&c)
			m := c
			m.Floor = mapFloor(c.Floor, move, turn)
			m.Start = geom.Pose{Pos: move(c.Start.Pos), Theta: c.Start.Theta + turn}
			m.Goal = move(c.Goal)
			a, b := newRun(t, c), newRun(t, m)
			worst := follow(t, a, b, func(p geom.Pose) geom.Pose { return geom.Pose{Pos: move(p.Pos), Theta: p.Theta + turn} })
			t.Logf("largest difference from the moved run: %.2g m", worst)
			if worst > 1e-6 {
				t.Errorf("the moved run differs by %g m", worst)
			}
		})
	}
}

var variants = map[string]func(*sim.Config){
	"point, all-round sight": func(c *sim.Config) { c.Ideal = allIdeal },
	"point, 24 beams":        func(c *sim.Config) { c.Ideal = sim.PointMotion },
	"unicycle":               func(c *sim.Config) { c.Drive.Model = drive.Unicycle },
	"two wheels, lag": func(c *sim.Config) {
		c.Drive.Lag, c.Drive.DeadTime, c.Drive.MaxWheelAccel = 0.1, 0.03, 30
		c.Drive.MaxWheelSpeed, c.Steer.MaxWheelSpeed = 14, 14
	},
	"look-ahead": func(c *sim.Config) { c.Steer.Rule = steer.LookAhead },
}

// follow runs a and b side by side and returns the largest distance between
// image(a) and b.
func follow(t *testing.T, a, b *sim.Run, image func(geom.Pose) geom.Pose) float64 {
	t.Helper()
	worst := 0.0
	for i := 0; i < 40_000 && a.Outcome().Status == sim.Running; i++ {
		a.Step()
		b.Step()
		d := image(a.Pose()).Pos.Sub(b.Pose().Pos).Norm()
		worst = max(worst, d)
	}
	oa, ob := a.Outcome(), b.Outcome()
	if oa.Status != ob.Status || oa.Switches != ob.Switches || math.Abs(oa.Leeway-ob.Leeway) > 1e-6 {
		t.Errorf("%v, %d switches, leeway %g here; %v, %d, %g there", oa.Status, oa.Switches, oa.Leeway, ob.Status, ob.Switches, ob.Leeway)
	}
	if oa.Switches < 2 {
		t.Errorf("only %d switches: this floor tests nothing", oa.Switches)
	}
	return worst
}

// Every imperfection at zero equals the simpler model, bit for bit.
func TestZeroImperfectionsEqualTheSimplerModel(t *testing.T) {
	pairs := map[string][2]func(*sim.Config){
		"two wheels without limits are a unicycle": {
			func(c *sim.Config) {}, func(c *sim.Config) { c.Drive.Model = drive.Unicycle }},
		"flawless dead reckoning is the true position": {
			func(c *sim.Config) {}, func(c *sim.Config) { c.Ideal = sim.TruePosition }},
		"a ring without noise is noiseless sight": {
			func(c *sim.Config) { c.Ideal = sim.TruePosition }, func(c *sim.Config) { c.Ideal = sim.TruePosition | sim.NoiselessSight }},
		"all idealisations make a point": {
			func(c *sim.Config) { c.Ideal = allIdeal },
			func(c *sim.Config) {
				c.Drive.Model, c.Drive.DeadReckoning = drive.Point, false
				c.Ring.AllRound, c.Ring.Noiseless = true, true
			}},
	}
	for name, p := range pairs {
		t.Run(name, func(t *testing.T) {
			a, b := clean(), clean()
			p[0](&a)
			p[1](&b)
			sameRun(t, hashes(t, newRun(t, a), 20_000), hashes(t, newRun(t, b), 20_000))
		})
	}
	t.Run("every switch thrown makes the real robot the clean one", func(t *testing.T) {
		a, b := realRobot(), clean()
		a.Ideal, b.Ideal = allIdeal, allIdeal
		sameRun(t, hashes(t, newRun(t, a), 20_000), hashes(t, newRun(t, b), 20_000))
	})
}

// Halving the physics step halves the error of the closed loop: the arc and the
// actuators are of second order or exact, and what is left is that steering is
// looked at once a tick, which is of first order.
func TestHalvingTheStepShowsTheOrder(t *testing.T) {
	end := func(tick float64, every int) geom.Vec {
		c := clean()
		c.Floor.Solids = nil
		c.Ideal = sim.TruePosition
		c.Drive.Lag, c.Drive.MaxWheelAccel = 0.2, 20
		c.Goal = geom.Vec{X: 6, Y: 7}
		c.Tick, c.DecideEvery, c.Ring.Period = tick, every, every
		r := newRun(t, c)
		for range int(math.Round(4 / tick)) {
			r.Step()
		}
		return r.Pose().Pos
	}
	exact := end(0.04/256, 256)
	coarse, middle, fine := end(0.01, 4).Sub(exact).Norm(), end(0.005, 8).Sub(exact).Norm(), end(0.0025, 16).Sub(exact).Norm()
	t.Logf("error after 4 s: %.3g m at 10 ms, %.3g at 5 ms, %.3g at 2.5 ms", coarse, middle, fine)
	for _, f := range []float64{coarse / middle, middle / fine} {
		if f < 1.7 || f > 2.4 {
			t.Errorf("halving the step divides the error by %.2f; first order divides it by 2", f)
		}
	}
	if middle > 5e-3 {
		t.Errorf("at the default step the loop is off by %g m after 4 s", middle)
	}
}

// Adding a noise stream leaves the others' numbers alone: what the ring reads at
// the start is the same whether or not the wheels slip and fixes come in.
func TestAddingAStreamLeavesTheOthersAlone(t *testing.T) {
	a, b := realRobot(), realRobot()
	b.Drive.Slip, b.Drive.FixEvery, b.Drive.FixNoise = 1e-3, 0.005, 0.2
	b.Ring.Random = 0
	ra, rb := newRun(t, a), newRun(t, b)
	for range 2 {
		ra.Step()
		rb.Step()
	}
	if ea, eb := ra.Belief(), rb.Belief(); ea == eb {
		t.Fatal("the second run takes no fix: this test tests nothing")
	}
	for i, x := range ra.Scan().Range {
		if y := rb.Scan().Range[i]; x != y {
			t.Errorf("beam %d reads %g, and %g beside another stream", i, x, y)
		}
	}
}

// Runs that share a map, and run at the same time, give what they give alone.
func TestRunsShareAMap(t *testing.T) {
	c := realRobot()
	m, err := floor.NewMap(c.Floor, 3.2)
	if err != nil {
		t.Fatal(err)
	}
	alone := make([]uint64, 8)
	for i := range alone {
		c.Seed = uint64(i)
		alone[i] = newRun(t, c).Finish().Hash
	}
	var wg sync.WaitGroup
	for i := range alone {
		wg.Go(func() {
			c := c
			c.Seed = uint64(i)
			r, err := sim.NewOn(m, c)
			if err != nil {
				t.Error(err)
				return
			}
			r.Edit(sim.Edit{Kind: sim.MoveSolid, Index: 1, Pos: c.Floor.Solids[1].Points[0]})
			if got := r.Finish().Hash; got != alone[i] {
				t.Errorf("seed %d: another hash beside others than alone", i)
			}
		})
	}
	wg.Wait()
}
