package gen_test

import (
	"fmt"
	"math"
	"runtime"
	"sync"
	"testing"

	"leeway/sim"
	"leeway/sim/gen"
	"leeway/sim/scenario"
)

// robotFile is a scenario that leaves everything about the robot, its ring and its logic at the defaults.
const robotFile = `{"leeway": 1, "floor": {"width_m": 10, "height_m": 10}, "start": {"x_m": 2, "y_m": 5}, "goal": {"x_m": 8, "y_m": 5}}`

const (
	robot = sim.Ideal(0)
	point = sim.PointMotion | sim.NoWheelLimits | sim.NoLag | sim.AllRoundSight | sim.NoiselessSight | sim.TruePosition
)

// outcome is what became of one floor.
type outcome struct {
	scene    gen.Scene
	feasible bool
	shortest float64
	run      sim.Outcome
	err      error
}

// drive runs the default logic over floors, on all processors; the outcomes are in the order of the floors.
func drive(t *testing.T, scenes []gen.Scene, ideal sim.Ideal) []outcome {
	t.Helper()
	s, err := scenario.Parse([]byte(robotFile))
	if err != nil {
		t.Fatal(err)
	}
	base, err := s.Config()
	if err != nil {
		t.Fatal(err)
	}
	out := make([]outcome, len(scenes))
	next := make(chan int)
	var wg sync.WaitGroup
	for range runtime.GOMAXPROCS(0) {
		wg.Go(func() {
			for i := range next {
				c := base
				c.Seed, c.Ideal = uint64(i), ideal // chance of its own on every floor
				out[i] = driveOne(c, scenes[i])
			}
		})
	}
	for i := range scenes {
		next <- i
	}
	close(next)
	wg.Wait()
	return out
}

func driveOne(c sim.Config, s gen.Scene) outcome {
	o := outcome{scene: s}
	r, err := s.Shortest()
	if err != nil {
		o.err = err
		return o
	}
	o.feasible, o.shortest = r.Reachable, r.Length
	c.Floor, c.Start, c.Goal, c.GoalRadius = s.Floor, s.Start, s.Goal, s.GoalRadius
	c.Asked = sim.Asked{Within: 600, Switches: -1}
	run, err := sim.New(c)
	if err != nil {
		o.err = err
		return o
	}
	o.run = run.Finish()
	return o
}

// floors draws as many floors of each kind, for the hull of the default robot.
func floors(t *testing.T, each int) (scenes []gen.Scene) {
	t.Helper()
	for _, kind := range gen.Kinds() {
		for seed := range uint64(each) {
			s, err := gen.Floor(seed, kind, gen.Options{})
			if err != nil {
				t.Fatal(err)
			}
			scenes = append(scenes, s)
		}
	}
	return scenes
}

// result is how many of the feasible floors ended with an arrival, and how many
// of the others with giving up.
type result struct{ arrived, feasible, gaveUp, closed int }

// tally counts, and says for each other end how often it came and on which
// floors, why, up to the number listed.
func tally(t *testing.T, what string, outcomes []outcome, listed int) (n result) {
	t.Helper()
	detour, leeway := 0.0, math.Inf(1)
	var ends []string // of floors with a way and without, in order of appearance
	count := make(map[string]int)
	lines := make(map[string]string)
	for i := range outcomes {
		o := &outcomes[i]
		switch {
		case o.err != nil:
			t.Errorf("%s: %v", o.scene.Name, o.err)
			continue
		case o.feasible:
			n.feasible++
			if o.run.Status == sim.Arrived {
				n.arrived++
				detour += o.run.Way / o.shortest
				leeway = min(leeway, o.run.Leeway)
				continue
			}
		default:
			n.closed++
			if o.run.Status == sim.GaveUp {
				n.gaveUp++
				continue
			}
		}
		end := fmt.Sprintf("%v, with no way", o.run.Status)
		if o.feasible {
			end = fmt.Sprintf("%v, with a way", o.run.Status)
		}
		if count[end] == 0 {
			ends = append(ends, end)
		}
		if count[end]++; count[end] <= listed {
			lines[end] += fmt.Sprintf("\n      %s: shortest %.1f m, driven %.1f m: %s", o.scene.Name, o.shortest, o.run.Way, o.run.Reason)
		}
	}
	text := fmt.Sprintf("%s: arrived on %d of %d floors with a way (%.1f %%), gave up on %d of %d without one; ways %.2f times the shortest, least leeway %.3f m",
		what, n.arrived, n.feasible, 100*float64(n.arrived)/float64(n.feasible), n.gaveUp, n.closed, detour/float64(n.arrived), leeway)
	for _, end := range ends {
		text += fmt.Sprintf("\n   %d times %s:%s", count[end], end, lines[end])
	}
	t.Log(text)
	return n
}

func TestDefaultLogicArrives(t *testing.T) {
	// What is asked is 99 % of 1,000 floors. On the 200 of a short test two
	// failures more or less decide about one per cent, so that it asks for less.
	each, share := 250, 99
	if testing.Short() {
		each, share = 50, 97
	}
	scenes := floors(t, each)
	n := tally(t, "point robot with ideal sight", drive(t, scenes, point), 1000)
	if 100*n.arrived < share*n.feasible {
		t.Errorf("the point robot arrived on %d of %d floors with a way, less than %d %%", n.arrived, n.feasible, share)
	}
	if n.gaveUp < n.closed {
		t.Errorf("the point robot gave up on %d of %d floors without a way", n.gaveUp, n.closed)
	}
	if n.closed < each/10 || n.feasible < each {
		t.Errorf("%d floors with a way and %d without: too few to tell", n.feasible, n.closed)
	}
	// How the machine with its sparse, noisy ring and its drift does is told, not held.
	tally(t, "default robot", drive(t, scenes, robot), 5)
}
