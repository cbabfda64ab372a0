package sim_test

import (
	"math"
	"strings"
	"testing"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/geom"
)

func TestTheRealRobotArrives(t *testing.T) {
	o := newRun(t, realRobot()).Finish()
	t.Logf("%+v", o)
	if o.Status != sim.Arrived {
		t.Fatalf("%v: %s", o.Status, o.Reason)
	}
	if o.Saturated > 1 || o.Way < 10 || o.Way > 25 || o.Switches < 2 || o.EstimateError == 0 || o.Saturated <= 0 {
		t.Errorf("implausible measures: %+v", o)
	}
}

// The measured leeway is the least clearance over the run, whatever the budget
// of room skipped: here it is asked at every tick.
func TestLeewayIsTheLeastGap(t *testing.T) {
	c := realRobot()
	c.Floor.Movers = []floor.Mover{{Radius: 0.2, Route: []geom.Vec{{X: 5, Y: 1}, {X: 5, Y: 5}}, Speed: 0.5}}
	for seed := range uint64(6) {
		c.Seed = seed
		r := newRun(t, c)
		least := r.Gap()
		for r.Outcome().Status == sim.Running {
			r.Step()
			least = min(least, r.Gap())
		}
		if o := r.Outcome(); o.Leeway != least {
			t.Errorf("seed %d: leeway %g, least gap of all ticks %g", seed, o.Leeway, least)
		}
	}
}

// The share of the time that a wheel is at a limit is a share, also where both the
// speed and the acceleration are at theirs.
func TestSaturationIsAShare(t *testing.T) {
	c := realRobot()
	c.Drive.MaxWheelSpeed, c.Steer.MaxWheelSpeed, c.Drive.MaxWheelAccel = 3, 3, 2
	c.Asked.Within = 20
	if o := newRun(t, c).Finish(); o.Saturated <= 0.3 || o.Saturated > 1 {
		t.Errorf("wheels too weak for anything are at their limit for a share of %g", o.Saturated)
	}
}

func TestStatuses(t *testing.T) {
	shut := func(c *sim.Config) {
		g := c.Goal
		c.Floor.Solids = append(c.Floor.Solids, wall(
			geom.Vec{X: g.X - 0.8, Y: g.Y - 0.8}, geom.Vec{X: g.X + 0.8, Y: g.Y - 0.8}, geom.Vec{X: g.X + 0.8, Y: g.Y + 0.8},
			geom.Vec{X: g.X - 0.8, Y: g.Y + 0.8}, geom.Vec{X: g.X - 0.8, Y: g.Y - 0.8}))
	}
	cases := []struct {
		name   string
		want   sim.Status
		says   string
		change func(*sim.Config)
	}{
		{"arrived", sim.Arrived, "came to rest", func(c *sim.Config) {}},
		{"timed out", sim.TimedOut, "After 5.0 s", func(c *sim.Config) { c.Asked.Within = 5 }},
		{"gave up", sim.GaveUp, "gave up", func(c *sim.Config) { shut(c); c.Asked.Within = 400; c.Ideal = allIdeal }},
		{"missed", sim.Missed, "believed", func(c *sim.Config) { c.Drive.RightScale = 1.03; c.Drive.FixEvery = 0; c.Floor.Solids = nil }},
		{"struck", sim.Struck, "touched", func(c *sim.Config) {
			c.OnContact = sim.EndsTheRun
			c.Floor.Movers = []floor.Mover{{Half: geom.Vec{X: 0.3, Y: 2.5}, Route: []geom.Vec{{X: 11, Y: 3}, {X: 0.5, Y: 3}}, Speed: 2}}
		}},
	}
	for _, tc := range cases {
		t.Run(tc.name, func(t *testing.T) {
			c := realRobot()
			tc.change(&c)
			o := newRun(t, c).Finish()
			if o.Status != tc.want || !strings.Contains(o.Reason, tc.says) {
				t.Errorf("%v (%s), want %v (…%s…)", o.Status, o.Reason, tc.want, tc.says)
			}
		})
	}
}

// A mover that runs into a standing robot is a contact, and pushes it.
func TestAMoverStrikesAStandingRobot(t *testing.T) {
	c := realRobot()
	c.Floor.Solids = nil
	c.Speed = 0.001 // it all but stands
	c.Floor.Movers = []floor.Mover{{Radius: 0.3, Route: []geom.Vec{{X: 6, Y: 3.1}, {X: -6, Y: 3.1}}, Speed: 30}}
	c.Asked.Within = 3
	r := newRun(t, c)
	o := r.Finish()
	if o.Contacts == 0 || o.Leeway > 1e-6 {
		t.Errorf("a cart drove through the robot: %+v", o)
	}
}

// What a person does while the run goes on is part of the run.
func TestEditsAreReplayed(t *testing.T) {
	c := realRobot()
	c.Floor.Movers = []floor.Mover{{Half: geom.Vec{X: 0.3, Y: 0.2}, Route: []geom.Vec{{X: 5, Y: 1}, {X: 5, Y: 5}}, Speed: 0.4, Pause: 1}}
	live := newRun(t, c)
	var h []uint64
	edits := map[int][]sim.Edit{
		0:    {{Kind: sim.MoveGoal, Pos: geom.Vec{X: 10, Y: 5}}, {Kind: sim.MoveGoal, Pos: geom.Vec{X: 10.5, Y: 4.4}}},
		300:  {{Kind: sim.MoveSolid, Index: 0, Pos: geom.Vec{X: 3, Y: 2}}, {Kind: sim.MoveSolid, Index: 0, Pos: geom.Vec{X: 3.3, Y: 2.2}}},
		700:  {{Kind: sim.MoveMover, Index: 0, Pos: geom.Vec{X: 4.7, Y: 1.5}}},
		1000: {{Kind: sim.SetNumber, Number: sim.SpeedNumber, Value: 0.3}, {Kind: sim.SetNumber, Number: sim.LagNumber, Value: 0.2}},
		1500: {{Kind: sim.MoveRobot, Pos: geom.Vec{X: 2, Y: 5}}},
		2000: {{Kind: sim.MoveSolid, Index: 4, Pos: geom.Vec{X: -0.1, Y: 0}}},
	}
	for i := 0; i < 100_000 && live.Outcome().Status == sim.Running; i++ {
		for _, e := range edits[i] {
			if err := live.Edit(e); err != nil {
				t.Fatal(err)
			}
		}
		live.Step()
		h = append(h, live.Outcome().Hash)
	}
	if n := len(live.Edits()); n != 7 {
		t.Errorf("%d edits recorded; a second one of the same thing at the same tick replaces the first, so 7 are right", n)
	}
	c.Edits = live.Edits()
	sameRun(t, h, hashes(t, newRun(t, c), 100_000))
}

// Edits that a file still has in store do not keep a second change at the same tick
// from replacing the first.
func TestEditsBeforeScriptedOnes(t *testing.T) {
	c := realRobot()
	c.Edits = []sim.Edit{{Tick: 900, Kind: sim.MoveGoal, Pos: geom.Vec{X: 10, Y: 4}}}
	r := newRun(t, c)
	for range 100 {
		r.Step()
	}
	for i := range 5 {
		if err := r.Edit(sim.Edit{Kind: sim.MoveSolid, Index: 1, Pos: geom.Vec{X: 6 + float64(i)/10, Y: 2.4}}); err != nil {
			t.Fatal(err)
		}
	}
	if e := r.Edits(); len(e) != 2 || e[0].Pos.X != 6.4 || e[1].Tick != 900 {
		t.Errorf("%+v", e)
	}
	c.Edits = r.Edits()
	if a, b := r.Finish().Hash, newRun(t, c).Finish().Hash; a != b {
		t.Error("the replay differs")
	}
}

// A moved goal sets an arrived robot going again, and the replay knows.
func TestAMovedGoalRevivesTheRun(t *testing.T) {
	c := realRobot()
	r := newRun(t, c)
	first := r.Finish()
	if first.Status != sim.Arrived {
		t.Fatal(first.Reason)
	}
	for range 400 {
		r.Idle()
	}
	if again := r.Outcome(); again != first {
		t.Errorf("idling changed the outcome: %+v", again)
	}
	if err := r.Edit(sim.Edit{Kind: sim.MoveGoal, Pos: geom.Vec{X: 1.2, Y: 1}}); err != nil {
		t.Fatal(err)
	}
	if s := r.Outcome().Status; s != sim.Running {
		t.Fatalf("after the goal was moved the run is %v", s)
	}
	second := r.Finish()
	if second.Status != sim.Arrived || second.Ticks <= first.Ticks {
		t.Errorf("%v: %s", second.Status, second.Reason)
	}
	c.Edits = r.Edits()
	if again := newRun(t, c).Finish(); again.Hash != second.Hash {
		t.Error("the replay of a revived run differs")
	}
}

func TestEditsThatCannotBe(t *testing.T) {
	r := newRun(t, realRobot())
	for _, e := range []sim.Edit{
		{Kind: sim.MoveSolid, Index: 99}, {Kind: sim.MoveMover, Index: 0}, {Kind: sim.MoveGoal, Pos: geom.Vec{X: math.NaN()}},
		{Kind: sim.SetNumber, Number: sim.SpeedNumber, Value: -1}, {Kind: sim.SetNumber, Number: sim.DropoutNumber, Value: 2}, {Kind: 77},
	} {
		if err := r.Edit(e); err == nil {
			t.Errorf("%+v was accepted", e)
		}
	}
	if len(r.Edits()) != 0 {
		t.Error("a refused edit was recorded")
	}
}

// Every fault of a config is reported, each with its field.
func TestCheckReportsEveryFault(t *testing.T) {
	c := realRobot()
	c.Tick, c.Hull, c.Ring.Max, c.Drive.Lag, c.Logic = 0, -1, math.NaN(), math.Inf(1), nil
	err := c.Check()
	if err == nil {
		t.Fatal("accepted")
	}
	for _, path := range []string{"Tick", "Hull", "Ring.Max", "Drive.Lag", "Logic"} {
		if !strings.Contains(err.Error(), path+":") {
			t.Errorf("%s is not reported in:\n%v", path, err)
		}
	}
}

func TestStepDoesNotAllocate(t *testing.T) {
	for name, ideal := range map[string]sim.Ideal{"the robot": 0, "the point": allIdeal} {
		c := realRobot()
		c.Ideal = ideal
		c.Floor.Movers = []floor.Mover{{Radius: 0.2, Route: []geom.Vec{{X: 5, Y: 1}, {X: 5, Y: 5}}, Speed: 0.5}}
		r := newRun(t, c)
		for range 400 {
			r.Step()
		}
		if n := testing.AllocsPerRun(2000, r.Step); n != 0 {
			t.Errorf("%s: %v allocations a step", name, n)
		}
	}
}
