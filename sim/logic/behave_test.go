package logic_test

import (
	"math"
	"strings"
	"testing"

	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
)

// one returns a logic of a single mode.
func one(m logic.Mode) *logic.Logic {
	m.Name = "only"
	return &logic.Logic{Name: "one mode", Modes: []logic.Mode{m}, Sector: 0.5, Margin: 0.04}
}

func decide(m logic.Mode, in *logic.Input) geom.Vec { return logic.New(one(m)).Decide(in).U }

// v = min(v0, k·distance), straight to the goal.
func TestGoalSeekingSpeed(t *testing.T) {
	open := scan(0.19, 3, nil, nil)
	for _, c := range []struct {
		name              string
		mode              logic.Mode
		distance, want    float64
		ahead, theta, dir float64
	}{
		{"far away", logic.Mode{GoalGain: 1.5}, 4, speed, 0, 0, 0.6},
		{"near", logic.Mode{GoalGain: 1.5}, 0.2, 0.3, 0, 2, -2.2},
		{"no gain, no slowing down", logic.Mode{}, 0.2, speed, 0, 0, 1},
		{"a share of the speed", logic.Mode{GoalGain: 1.5, Speed: 0.5}, 4, speed / 2, 0, 0, 3},
		{"near, a share of the speed", logic.Mode{GoalGain: 1.5, Speed: 0.5}, 0.1, 0.15, 0, 0, 0},
	} {
		c.mode.Behaviour = logic.GoalSeeking
		goal := geom.Heading(c.dir).Scale(c.distance)
		u := decide(c.mode, at(0, 0, c.theta, goal, open))
		near(t, c.name+": speed", u.Norm(), c.want, 1e-12)
		near(t, c.name+": direction", geom.Wrap(u.Angle()-c.dir), 0, 1e-12)
	}
	// With a plan point ahead of the centre, u leads from there.
	in := at(0, 0, 0, v(1, 1), open)
	in.Ahead = 1
	u := decide(logic.Mode{Behaviour: logic.GoalSeeking}, in)
	near(t, "direction from the plan point", u.Angle(), math.Pi/2, 1e-12)
}

// Toward something, the speed is the free way of the hull over a second.
func TestSpeedShrinksWithTheFreeWay(t *testing.T) {
	for _, gap := range []float64{2, 0.4, 0.2, 0.1} {
		u := decide(logic.Mode{Behaviour: logic.GoalSeeking}, at(0, 0, 0, v(9, 0), scan(0.19, 3, []float64{0}, []float64{gap + hull - 0.19})))
		near(t, "speed", u.Norm(), math.Min(speed, gap), 1e-12)
	}
	u := decide(logic.Mode{Behaviour: logic.GoalSeeking}, at(0, 0, 0, v(9, 0), scan(0.19, 3, []float64{0}, []float64{hull - 0.19})))
	near(t, "speed against a wall", u.Norm(), speed/10, 1e-12)
}

// Goal-seeking turns aside a little to keep its StandOff, and not where that takes more than 30°.
func TestGoalSeekingKeepsClear(t *testing.T) {
	m := logic.Mode{Behaviour: logic.GoalSeeking, StandOff: 0.12}
	turned := func(points ...geom.Vec) float64 {
		var b, x []float64
		for _, p := range points {
			b, x = append(b, p.Angle()), append(x, p.Norm()-0.19)
		}
		return decide(m, at(0, 0, 0, v(9, 0), scan(0.19, 3, b, x))).Angle()
	}
	left := turned(v(0.2, 0.3))
	if !(left < -0.05 && left > -math.Pi/6-1e-9) {
		t.Errorf("passing something on the left it turns by %g", left)
	}
	near(t, "the mirror image", turned(v(0.2, -0.3)), -left, 1e-12)
	near(t, "in a narrow door", turned(v(0.2, 0.28), v(0.2, -0.28)), 0, 0)
	near(t, "with something straight ahead", turned(v(0.3, 0.02)), 0, 0)
	near(t, "with nothing near", turned(v(1, 0.3)), 0, 0)
}

func TestStopStands(t *testing.T) {
	if u := decide(logic.Mode{}, at(0, 0, 0, v(9, 0), scan(0.19, 3, []float64{1}, []float64{0.2}))); u != (geom.Vec{}) {
		t.Errorf("stop wants %v", u)
	}
}

// One return: straight away from it, the faster the nearer. Two of a kind on either side: nowhere.
func TestAvoidance(t *testing.T) {
	m := logic.Mode{Behaviour: logic.Avoidance, StandOff: 0.2}
	push := func(bearings, gaps []float64) geom.Vec {
		x := make([]float64, len(gaps))
		for i, g := range gaps {
			x[i] = g + hull - 0.19
		}
		return decide(m, at(1, 1, 0.7, v(9, 0), scan(0.19, 3, bearings, x)))
	}
	for _, gap := range []float64{0.19, 0.1, 0.02} {
		u := push([]float64{0.5}, []float64{gap})
		near(t, "speed", u.Norm(), speed*(0.2-gap)/0.2, 1e-9)
		near(t, "direction", geom.Wrap(u.Angle()-(0.7+0.5+math.Pi)), 0, 1e-9)
	}
	near(t, "beyond StandOff", push([]float64{0.5}, []float64{0.2}).Norm(), 0, 1e-12)
	near(t, "between two alike", push([]float64{0.5, 0.5 - math.Pi}, []float64{0.1, 0.1}).Norm(), 0, 1e-9)
	// Two returns weigh (1 − gap/reach)².
	u := push([]float64{0, math.Pi / 2}, []float64{0.1, 0.15}).Rotate(geom.Sincos(-0.7))
	near(t, "weights", u.Y/u.X, 0.0625/0.25, 1e-9)
}

// With a wall on a side it goes on between two things that are too near, and is not held back by them.
func TestAvoidanceGoesOnThroughNarrowPlaces(t *testing.T) {
	l := &logic.Logic{Name: "meet at once", Sector: 0.5, Margin: 0.03,
		Modes: []logic.Mode{{Name: "go", Behaviour: logic.GoalSeeking}, {Name: "avoid", Behaviour: logic.Avoidance, StandOff: 0.2}},
		Transitions: []logic.Transition{{From: 0, To: 1, Meet: true,
			When: []logic.Condition{{Reading: logic.Nearest, Rel: logic.Below, Threshold: 0.1}}}}}
	const angle = 1.3 // of the two, off the way
	e := logic.New(l)
	d := e.Decide(at(0, 0, 0, v(9, 0), scan(0.19, 3, []float64{angle, -angle, math.Pi}, []float64{0.07, 0.07, 3})))
	if d.Fired != 0 || d.Side == logic.NoSide {
		t.Fatalf("the two are not met: %+v", d)
	}
	near(t, "speed on", d.U.X, speed/2, 1e-9)
	near(t, "speed aside", d.U.Y, 0, 0.02)
}

// following is a logic that only follows a wall on one side.
func following(side logic.SideRule) *logic.Logic {
	return one(logic.Mode{Behaviour: logic.WallFollowing, Side: side, StandOff: 0.2})
}

var rings = map[string]ring.Config{"fan": fan, "24 beams": beams(24), "16 beams": beams(16), "10 beams": beams(10)}

// Along a straight wall the stand-off is held, from wherever it begins and on either side.
func TestHoldsStandOff(t *testing.T) {
	for name, cfg := range rings {
		for side, sign := range map[logic.SideRule]float64{logic.KeepLeft: 1, logic.KeepRight: -1} {
			for _, gap := range []float64{0.05, 0.2, 0.6} {
				k := newCourse(t, following(side), cfg, geom.Pose{Pos: v(0, -sign*(hull+gap)), Theta: 0.13}, v(20, 0),
					wall(v(-30, 0), v(30, 0)))
				for k.in.Time < 12 {
					k.step()
				}
				if k.pose.Pos.X < 3 {
					t.Errorf("%s, wall on the %v, from %.2f m: got only to x = %.2f", name, side, gap, k.pose.Pos.X)
				}
				off := math.Abs(k.pose.Pos.Y) - hull
				if math.Abs(off-0.2) > 0.03 {
					t.Errorf("%s, wall on the %v, from %.2f m: the gap settles at %.3f m", name, side, gap, off)
				}
			}
		}
	}
}

// Round what stands on the floor: inside corners, outside corners, thin ends, a door, a
// narrow passage, a post. The way must lead through all the gates in turn, and never nearer than least.
func TestGoesRound(t *testing.T) {
	for name, c := range map[string]struct {
		solids []floor.Solid
		start  geom.Vec
		gates  []geom.Vec // to pass within 0.35 m
		least  float64
	}{
		"an inside corner":  {[]floor.Solid{wall(v(0, 0), v(0, 4), v(4, 4))}, v(0.41, 1), []geom.Vec{v(0.41, 3), v(2, 3.59)}, 0.1},
		"an outside corner": {[]floor.Solid{box(0, 0, 3, 3)}, v(-0.41, 1), []geom.Vec{v(-0.41, 3), v(0, 3.41), v(2, 3.41)}, 0.1},
		"a thin end":        {[]floor.Solid{wall(v(0, 0), v(0, 3))}, v(-0.41, 1), []geom.Vec{v(-0.41, 2.8), v(0, 3.41), v(0.41, 2.8), v(0.41, 1)}, 0.1},
		"a door":            {[]floor.Solid{wall(v(0, -3), v(0, 1)), wall(v(0, 1.7), v(0, 5))}, v(-0.41, 0), []geom.Vec{v(-0.3, 1), v(0, 1.35), v(0.41, 0.5)}, 0.05},
		"a passage":         {[]floor.Solid{box(0, 0, 2, 2), box(0, 2.6, 2, 5)}, v(-0.41, 1), []geom.Vec{v(0.2, 2.3), v(1, 2.3), v(2, 2.3), v(2.41, 1)}, 0.03},
		"a post":            {[]floor.Solid{post(0, 0, 0.3)}, v(-0.71, 0), []geom.Vec{v(0, 0.71), v(0.71, 0), v(0, -0.71), v(-0.71, 0)}, 0.1},
		"a dead end":        {[]floor.Solid{wall(v(0, 0), v(0, 3), v(0.9, 3), v(0.9, 0))}, v(0.4, 0.3), []geom.Vec{v(0.4, 1.5), v(0.45, 2.4), v(0.5, 1.5), v(1.31, 1)}, 0.1},
	} {
		// The wall is on the right on the way round a thing that stands free.
		side := logic.KeepRight
		if name == "an inside corner" || strings.HasSuffix(name, "dead end") {
			side = logic.KeepLeft
		}
		for ringName, cfg := range rings {
			if ringName == "10 beams" && name != "an inside corner" && name != "an outside corner" {
				continue // sees too little of the others
			}
			t.Run(name+", "+ringName, func(t *testing.T) {
				k := newCourse(t, following(side), cfg, geom.Pose{Pos: c.start, Theta: 0.1}, v(50, 50), c.solids...)
				n := 0
				for n < len(c.gates) && k.in.Time < 60 {
					k.step()
					if k.pose.Pos.Sub(c.gates[n]).Norm() < 0.35 {
						n++
					}
				}
				if n < len(c.gates) {
					t.Errorf("gets to %d of %d places and then to %v", n, len(c.gates), k.pose.Pos)
				}
				if k.gap < c.least {
					t.Errorf("comes as near as %.3f m", k.gap)
				}
			})
		}
	}
}

// The side is that of the way more toward the goal; the left on a tie.
func TestChoosesTheBetterSide(t *testing.T) {
	for _, c := range []struct {
		from, to float64 // of a box across the way
		goal     geom.Vec
		want     logic.Side
	}{
		{-0.3, 2, v(6, 0), logic.LeftSide},
		{-2, 0.3, v(6, 0), logic.RightSide},
		{-3, 3, v(6, -1), logic.LeftSide},
		{-3, 3, v(6, 1), logic.RightSide},
		{-1, 1, v(6, 0), logic.LeftSide},
	} {
		k := newCourse(t, defaults(), fan, geom.Pose{}, c.goal, box(2, c.from, 2.5, c.to))
		for k.last.Side == logic.NoSide && k.in.Time < 10 {
			k.step()
		}
		if k.last.Side != c.want {
			t.Errorf("box from %g to %g, goal at %v: the wall is kept on the %v", c.from, c.to, c.goal, k.last.Side)
		}
		if k.run(60) != logic.EndsArrived {
			t.Errorf("box from %g to %g: does not arrive", c.from, c.to)
		}
	}
}

// A mode's own side rule is kept to.
func TestKeepsToItsSide(t *testing.T) {
	for rule, want := range map[logic.SideRule]logic.Side{logic.KeepLeft: logic.LeftSide, logic.KeepRight: logic.RightSide} {
		n := logic.DefaultNumbers(hull, speed, 0.15)
		n.Side = rule
		k := newCourse(t, logic.Default(n), fan, geom.Pose{}, v(6, 0), box(2, -1, 2.5, 1))
		for k.step() && k.in.Time < 60 {
			if k.last.Side != logic.NoSide && k.last.Side != want {
				t.Fatalf("rule %v, wall on the %v", rule, k.last.Side)
			}
		}
		if k.l.Modes[k.e.Mode()].Ending != logic.EndsArrived {
			t.Errorf("rule %v does not arrive", rule)
		}
	}
}
