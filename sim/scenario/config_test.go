package scenario

import (
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/steer"
)

func config(t testing.TB, s *Scenario) sim.Config {
	t.Helper()
	c, err := s.Config()
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// TestConfigOfDefaults spells out what the plain file means to the core.
func TestConfigOfDefaults(t *testing.T) {
	c := config(t, mustParse(t, plain))
	if got := len(c.Ring.Bearings); got != 16 {
		t.Errorf("%d beams", got)
	}
	c.Ring.Bearings = nil
	if c.Logic == nil {
		t.Error("no logic")
	}
	c.Logic = nil
	wall := func(id string, x0, y0, x1, y1 float64) floor.Solid {
		return floor.Solid{ID: id, Kind: floor.Wall, Points: []geom.Vec{{X: x0, Y: y0}, {X: x1, Y: y1}}}
	}
	want := sim.Config{
		Seed: 1, Tick: 0.005, DecideEvery: 4,
		Floor: floor.Config{Solids: []floor.Solid{
			wall("border-south", 0, 0, 12, 0), wall("border-east", 12, 0, 12, 8), wall("border-north", 12, 8, 0, 8), wall("border-west", 0, 8, 0, 0),
		}},
		Hull: 0.21, Start: geom.Pose{Pos: geom.Vec{X: 1, Y: 1}},
		Drive: drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, MaxWheelSpeed: 14, MaxWheelAccel: 40, Lag: 0.08, DeadTime: 0.02,
			DeadReckoning: true, CountsPerTurn: 1024, RightScale: 1, LeftScale: 1, TrackScale: 1, Slip: 0.00001, FixEvery: 5, FixNoise: 0.02, FixTurnNoise: math.Pi / 180},
		Steer: steer.Config{Rule: steer.HeadingServo, Gain: 3, Speed: steer.CosineSpeed, TurnBeyond: math.Pi / 3, Ahead: 0.1, Saturation: steer.KeepCurve,
			WheelRadius: 0.05, Track: 0.3, MaxWheelSpeed: 14},
		Speed: 0.45, Goal: geom.Vec{X: 11, Y: 7}, GoalRadius: 0.15,
		Asked: sim.Asked{Within: 90, Leeway: 0.05, Switches: -1}, OnContact: sim.Scrape,
	}
	want.Ring.Mount, want.Ring.Min, want.Ring.Max = 0.19, 0.02, 3
	want.Ring.NoiseBase, want.Ring.NoiseGain, want.Ring.Dropout, want.Ring.Quantum = 0.01, 0.005, 0.005, 0.001
	want.Ring.Period, want.Ring.SubRays = 10, 1
	if d := cmp.Diff(want, c, cmp.Comparer(func(a, b float64) bool { return math.Abs(a-b) <= 1e-15*math.Abs(a) })); d != "" {
		t.Error(d)
	}
}

// TestConfigChoices: each choice of the file is the constant of the core that bears its name.
func TestConfigChoices(t *testing.T) {
	type get func(sim.Config) any
	motion := func(c sim.Config) any { return c.Drive.Model }
	law := func(c sim.Config) any { return c.Steer.Speed }
	saturation := func(c sim.Config) any { return c.Steer.Saturation }
	for _, c := range []struct {
		path, value string
		get         get
		want        any
	}{
		{"robot.motion", "point", motion, drive.Point},
		{"robot.motion", "unicycle", motion, drive.Unicycle},
		{"robot.motion", "two_wheels", motion, drive.TwoWheels},
		{"robot.position", "true_pose", func(c sim.Config) any { return c.Drive.DeadReckoning }, false},
		{"robot.position", "dead_reckoning", func(c sim.Config) any { return c.Drive.DeadReckoning }, true},
		{"robot.steering", "heading_servo", func(c sim.Config) any { return c.Steer.Rule }, steer.HeadingServo},
		{"robot.steering", "look_ahead", func(c sim.Config) any { return c.Steer.Rule }, steer.LookAhead},
		{"robot.speed_law", "cosine", law, steer.CosineSpeed},
		{"robot.speed_law", "full", law, steer.FullSpeed},
		{"robot.speed_law", "stop_and_turn", law, steer.StopAndTurn},
		{"robot.saturation", "keep_curve", saturation, steer.KeepCurve},
		{"robot.saturation", "keep_turn", saturation, steer.KeepTurn},
		{"robot.saturation", "clip_each", saturation, steer.ClipEach},
		{"ring.in_turn", "true", func(c sim.Config) any { return c.Ring.InTurn }, true},
		{"on_contact", "scrape", func(c sim.Config) any { return c.OnContact }, sim.Scrape},
		{"on_contact", "end", func(c sim.Config) any { return c.OnContact }, sim.EndsTheRun},
		{"floor.enclosed", "false", func(c sim.Config) any { return len(c.Floor.Solids) }, 0},
	} {
		s := New(12, 8)
		if err := s.SetChoice(c.path, c.value); err != nil {
			t.Error(err)
		}
		if got := c.get(config(t, s)); got != c.want {
			t.Errorf("%s = %s: %v, want %v", c.path, c.value, got, c.want)
		}
	}
	for name, want := range map[string]sim.Ideal{
		"point_motion": sim.PointMotion, "no_wheel_limits": sim.NoWheelLimits, "no_lag": sim.NoLag,
		"all_round_sight": sim.AllRoundSight, "noiseless_sight": sim.NoiselessSight, "true_position": sim.TruePosition,
	} {
		s := New(12, 8)
		s.Ideal = []string{name}
		if got := config(t, s).Ideal; got != want {
			t.Errorf("%s: %b, want %b", name, got, want)
		}
	}
	for i, side := range []logic.SideRule{logic.BetterSide, logic.KeepLeft, logic.KeepRight} {
		s := New(12, 8)
		s.Logic.Side = ruleAt()["logic.side"].Options[i].Value
		if got := s.numbers().Side; got != side {
			t.Errorf("%s: %v", s.Logic.Side, got)
		}
	}
}

// TestNamesOfTheLogic: the choices of a table are the core's names in the core's order.
func TestNamesOfTheLogic(t *testing.T) {
	for path, name := range map[string]func(i int) string{
		"logic.modes[].behaviour":             func(i int) string { return logic.Behaviour(i).String() },
		"logic.modes[].ending":                func(i int) string { return logic.Ending(i).String() },
		"logic.modes[].side":                  func(i int) string { return logic.SideRule(i).String() },
		"logic.side":                          func(i int) string { return logic.SideRule(i).String() },
		"logic.transitions[].when[].relation": func(i int) string { return logic.Relation(i).String() },
		"logic.transitions[].when[].reading":  func(i int) string { return logic.Reading(i).String() },
	} {
		for i, o := range ruleAt()[path].Options {
			if o.Value != name(i) {
				t.Errorf("%s: %s is %s in the core", path, o.Value, name(i))
			}
		}
	}
	if n := len(readings()); n != int(logic.NumReadings) {
		t.Errorf("%d readings", n)
	}
	if n := len(behaviours()); n != int(logic.Avoidance)+1 {
		t.Errorf("%d behaviours", n)
	}
}

// TestConfigOfAnyScenario: what the parser accepts, the core accepts.
func TestConfigOfAnyScenario(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := anyScenario(t)
		c, err := s.Config()
		if err != nil {
			t.Fatal(err)
		}
		r, err := sim.New(c)
		if err != nil {
			t.Fatalf("%v\n%s", err, s.Print())
		}
		for range 20 {
			r.Step()
		}
	})
}

func TestConfigOfEverything(t *testing.T) {
	s := mustParse(t, everything)
	c := config(t, s)
	rad := math.Pi / 180
	if d := cmp.Diff([]float64{0, 33.3 * rad, -90 * rad}, c.Ring.Bearings); d != "" {
		t.Error(d)
	}
	if c.Seed != maxSeed || c.Start.Theta != 0 || c.Ideal != sim.NoLag|sim.TruePosition {
		t.Errorf("%+v", c)
	}
	want := floor.Config{
		Solids: []floor.Solid{
			{ID: "w2", Kind: floor.Wall, Points: []geom.Vec{{X: 2, Y: 1}, {X: 2, Y: 4.125}, {X: 5, Y: 4}}},
			{ID: "w1", Kind: floor.Wall, Points: []geom.Vec{{X: 0.1, Y: 0.2}, {X: 0.30000000000000004, Y: 0.2}}},
			{ID: "s1", Kind: floor.Polygon, Points: []geom.Vec{{X: 3, Y: 5}, {X: 4, Y: 5}, {X: 4, Y: 5.6}}},
			{ID: `Säule "A"`, Kind: floor.Disc, Points: []geom.Vec{{X: 0, Y: 2}}, Radius: 0.001},
		},
		Movers: []floor.Mover{
			{ID: "m1", Half: geom.Vec{X: 0.4, Y: 0.25}, Heading: -90 * rad, Route: []geom.Vec{{X: 1, Y: 6}, {X: 9, Y: 6}}, Loop: true, Speed: 0.4},
			{ID: "m2", Radius: 0.25, Route: []geom.Vec{{X: 5, Y: 7}}, Speed: 0.4},
		},
	}
	if d := cmp.Diff(want, c.Floor); d != "" {
		t.Error(d)
	}
	edits := []sim.Edit{
		{Tick: 0, Kind: sim.MoveGoal, Pos: geom.Vec{X: 9, Y: 2}},
		{Tick: 3, Kind: sim.MoveSolid, Index: 1, Pos: geom.Vec{X: 3, Y: 5}},
		{Tick: 3, Kind: sim.MoveMover, Index: 0, Pos: geom.Vec{X: 2, Y: 2}},
		{Tick: 300, Kind: sim.MoveRobot, Pos: geom.Vec{X: 2, Y: 2}},
		{Tick: 400, Kind: sim.SetNumber, Number: sim.DropoutNumber, Value: 0.25},
	}
	if d := cmp.Diff(edits, c.Edits); d != "" {
		t.Error(d)
	}
	// What a run recorded goes back into a file as it came out.
	if d := cmp.Diff(s, s.WithEdits(c.Edits)); d != "" {
		t.Error(d)
	}
	border := sim.Edit{Kind: sim.MoveSolid, Index: 0, Pos: geom.Vec{X: 1}}
	if got := New(12, 8).WithEdits([]sim.Edit{border}); len(got.Edits) != 0 {
		t.Error("a moved border in a file")
	}
	if got := New(12, 8).WithEdits(nil); len(got.Edits) != 0 {
		t.Error("edits out of nothing")
	}
	if n := s.numbers(); n.Notice != 0.3 || n.Gain != 0 || n.StandOff == 0 {
		t.Errorf("%+v", n)
	}
	if _, err := (&Scenario{}).Config(); err == nil {
		t.Error("a run of nothing")
	}
}

func TestConfigOfATable(t *testing.T) {
	c := config(t, mustParse(t, tableLogic))
	want := &logic.Logic{
		Name: "There", Start: 0, Sector: 40 * math.Pi / 180, Margin: 0.04,
		Modes: []logic.Mode{
			{Name: "go", Behaviour: logic.GoalSeeking, GoalGain: 1.5, Speed: 1},
			{Name: "back", Behaviour: logic.Avoidance, Speed: 0.5},
			{Name: "there", Behaviour: logic.Stop, Ending: logic.EndsArrived, Speed: 1},
		},
		Transitions: []logic.Transition{
			{From: -1, To: 2, When: []logic.Condition{{Reading: logic.GoalDistance, Rel: logic.Below, Threshold: 0.15}}, Hold: 0.1},
			{From: 0, To: 1, When: []logic.Condition{{Reading: logic.Nearest, Rel: logic.Below, Threshold: 0.1, Band: 0.05},
				{Reading: logic.FreeWay, Rel: logic.Below, Against: logic.GoalDistance, HasAgainst: true}}},
			{From: 1, To: 0, When: []logic.Condition{{Reading: logic.Nearest, Rel: logic.AtLeast, Threshold: 0.2}}, MinTime: 0.5, Meet: true},
		},
	}
	if d := cmp.Diff(want, c.Logic); d != "" {
		t.Error(d)
	}
}

func TestFolded(t *testing.T) {
	s := mustParse(t, everything)
	s.Edits = append(s.Edits, Edit{Tick: 500, What: "solid", ID: "s1", To: Point{6.1, 5.2}}, Edit{Tick: 501, What: "solid", ID: `Säule "A"`, To: Point{1, 1}},
		Edit{Tick: 502, What: "goal", To: Point{8, 3}})
	was := s.Clone()
	f := s.Folded()
	if d := cmp.Diff(was, s); d != "" {
		t.Errorf("folding changed the original:\n%s", d)
	}
	if len(f.Edits) != 0 {
		t.Error("edits left")
	}
	want := s.Clone()
	want.Edits = nil
	want.Goal.X, want.Goal.Y = 8, 3
	want.Floor.Walls[1].Points = []Point{{3, 5}, {3.2, 5}}
	want.Floor.Solids[0].Corners = []Point{{6.1, 5.2}, {7.1, 5.2}, {7.1, 5.8}}
	want.Floor.Solids[1].Center = Point{1, 1}
	want.Floor.Movers[0].Route = []Point{{2, 2}, {10, 2}}
	want.Ring.Dropout = 0.25
	if d := cmp.Diff(want, f); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff(f, f.Folded()); d != "" {
		t.Errorf("folding again changes something:\n%s", d)
	}
}

func TestIndexes(t *testing.T) {
	s := mustParse(t, everything)
	for id, want := range map[string]int{"w2": 0, "w1": 1, "s1": 2, `Säule "A"`: 3} {
		if i, fixed, ok := s.SolidIndex(id); i != want || fixed || !ok {
			t.Errorf("%s: %d, %t, %t", id, i, fixed, ok)
		}
	}
	for id, want := range map[string]int{"m1": 0, "m2": 1} {
		if i, ok := s.MoverIndex(id); i != want || !ok {
			t.Errorf("%s: %d, %t", id, i, ok)
		}
	}
	for _, id := range []string{"", "m1", "nothing", "border-south"} { // its floor is open
		if _, _, ok := s.SolidIndex(id); ok {
			t.Errorf("%q is a solid", id)
		}
	}
	if _, ok := s.MoverIndex("w1"); ok {
		t.Error("w1 is a mover")
	}
	e := New(12, 8)
	c := config(t, e)
	for i, solid := range c.Floor.Solids {
		if j, fixed, ok := e.SolidIndex(solid.ID); j != i || !fixed || !ok {
			t.Errorf("%s: %d, %t, %t", solid.ID, j, fixed, ok)
		}
	}
	if low, high := e.Bounds(); low != (geom.Vec{}) || high != (geom.Vec{X: 12, Y: 8}) {
		t.Error(low, high)
	}
}
