package logic_test

import (
	"math"
	"testing"

	"leeway/sim/floor"
	"leeway/sim/gen"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/reach"
	"leeway/sim/ring"
	"leeway/sim/truth"
)

// Floors with a way are crossed, on all rings; floors without one are given up.
func TestDefaultLogicOnSmallFloors(t *testing.T) {
	for _, c := range []struct {
		name   string
		goal   geom.Vec
		want   logic.Ending
		most   float64 // s
		solids []floor.Solid
	}{
		{"an open floor", v(9, 3), logic.EndsArrived, 25, nil},
		{"a wall across", v(9, 3), logic.EndsArrived, 80, []floor.Solid{wall(v(5, 1), v(5, 6))}},
		{"a pocket that faces the start", v(9, 3), logic.EndsArrived, 60, []floor.Solid{wall(v(3, 2), v(6, 2), v(6, 4), v(3, 4))}},
		{"a goal in a pocket that faces away", v(7, 3), logic.EndsArrived, 60, []floor.Solid{wall(v(8.5, 2), v(6, 2), v(6, 4), v(8.5, 4))}},
		{"a door", v(9, 3), logic.EndsArrived, 60, []floor.Solid{wall(v(5, 0), v(5, 4.2)), wall(v(5, 4.9), v(5, 6))}},
		{"a goal beside a wall", v(9, 3), logic.EndsArrived, 30, []floor.Solid{wall(v(7, 3.3), v(9.6, 3.3))}},
		{"a walled-in goal", v(7, 3), logic.EndsGaveUp, 60, []floor.Solid{room(6, 2, 8, 4)}},
		{"a closed room", v(9, 3), logic.EndsGaveUp, 60, []floor.Solid{room(0.3, 2, 3, 4)}},
		{"a goal inside a pillar", v(7, 3), logic.EndsGaveUp, 60, []floor.Solid{post(7, 3, 0.8)}},
		{"a gap too narrow", v(9, 3), logic.EndsGaveUp, 150, []floor.Solid{wall(v(5, 0), v(5, 2.8)), wall(v(5, 3.2), v(5, 6))}},
		{"a passage narrower than is safe", v(9, 3), logic.EndsArrived, 80, []floor.Solid{box(4, 0, 6, 2.6), box(4, 3.13, 6, 6)}},
		{"hardly room to move", v(9, 3), logic.EndsGaveUp, 60, []floor.Solid{room(0.75, 2.75, 1.25, 3.25)}},
		{"no room to move", v(9, 3), logic.EndsGaveUp, 60, []floor.Solid{room(0.785, 2.785, 1.215, 3.215)}},
	} {
		for ringName, cfg := range map[string]ring.Config{"fan": fan, "24 beams": beams(24), "16 beams": beams(16)} {
			k := newCourse(t, defaults(), cfg, geom.Pose{Pos: v(1, 3), Theta: 0.05}, c.goal, append(c.solids, room(0, 0, 10, 6))...)
			if got := k.run(c.most); got != c.want {
				t.Errorf("%s, %s: ending %v after %.1f s at %v", c.name, ringName, got, k.in.Time, k.pose.Pos)
			}
			if c.want == logic.EndsArrived && k.pose.Pos.Sub(c.goal).Norm() > 0.1 { // held for a moment inside 0.15 m
				t.Errorf("%s, %s: arrived %.2f m from the goal", c.name, ringName, k.pose.Pos.Sub(c.goal).Norm())
			}
			if c.want == logic.EndsArrived && k.gap < 0.01 {
				t.Errorf("%s, %s: came as near as %.3f m", c.name, ringName, k.gap)
			}
		}
	}
}

// A robot that is pinned gives up in wall-following as well as in avoidance.
func TestPinnedGivesUp(t *testing.T) {
	n := logic.DefaultNumbers(hull, speed, 0.15)
	n.Safe, n.Band = 0.001, 0.0005
	k := newCourse(t, logic.Default(n), fan, geom.Pose{Pos: v(1, 3)}, v(7, 3), room(0.787, 2.787, 1.213, 3.213))
	if k.run(60) != logic.EndsGaveUp {
		t.Errorf("it does not give up; it is in %s", k.l.Modes[k.e.Mode()].Name)
	}
}

// With a Gain too large to be had anywhere, what sees the goal free still gets there.
func TestGoalInFreeSightIsEnough(t *testing.T) {
	n := logic.DefaultNumbers(hull, speed, 0.15)
	n.Gain = 50
	k := newCourse(t, logic.Default(n), fan, geom.Pose{Pos: v(1, 3)}, v(7, 3), wall(v(3, 2), v(5, 2), v(5, 4), v(3, 4)))
	if k.run(100) != logic.EndsArrived {
		t.Errorf("it does not arrive; it is at %v", k.pose.Pos)
	}
}

// On drawn floors of all kinds the ideal point arrives where there is a way and gives up where there is none.
// Package gen tests the same on a thousand.
func TestDefaultLogicOnDrawnFloors(t *testing.T) {
	type drawn struct {
		seed uint64
		kind gen.Kind
		o    gen.Options
	}
	// Two with niches that a robot must not turn about in for ever.
	list := []drawn{{23, gen.Rooms, gen.Options{}}, {56, gen.Rooms, gen.Options{}}}
	for _, kind := range gen.Kinds() {
		for seed := range uint64(6) {
			list = append(list, drawn{1000 + seed, kind, gen.Options{Width: 9, Height: 7}})
		}
	}
	for _, f := range list {
		s, err := gen.Floor(f.seed, f.kind, f.o)
		if err != nil {
			t.Fatal(err)
		}
		way, err := reach.Shortest(s.Floor, s.Hull, s.Start.Pos, s.Goal, s.GoalRadius)
		if err != nil {
			t.Fatal(err)
		}
		want := logic.EndsGaveUp
		if way.Reachable {
			want = logic.EndsArrived
		}
		k := newCourse(t, defaults(), fan, s.Start, s.Goal, s.Floor.Solids...)
		if got := k.run(400); got != want {
			t.Errorf("%s: ending %v after %.0f s, want %v", s.Name, got, k.in.Time, want)
		}
	}
}

// A goal that is moved, a robot that is carried, a cart that crosses: it arrives.
func TestDefaultLogicCopesWithChanges(t *testing.T) {
	t.Run("the goal moves behind a wall, and on into a pocket", func(t *testing.T) {
		k := pocket(t, fan)
		for k.in.Time < 4 {
			k.step()
		}
		for i := range 100 { // dragged, a little each tick
			k.in.Goal = v(9-0.03*float64(i), 3)
			k.step()
		}
		k.in.Goal = v(5, 3)
		if k.run(200) != logic.EndsArrived {
			t.Errorf("it does not arrive in the pocket; it is at %v", k.pose.Pos)
		}
	})
	t.Run("the robot is carried while it follows a wall", func(t *testing.T) {
		for _, to := range []geom.Vec{v(9, 1), v(5, 3), v(1, 5)} {
			k := pocket(t, beams(16))
			for k.e.Mode() != 1 {
				k.step()
			}
			for range 100 {
				k.step()
			}
			k.pose.Pos = to
			if k.run(200) != logic.EndsArrived {
				t.Errorf("carried to %v it does not arrive; it is at %v", to, k.pose.Pos)
			}
		}
	})
	t.Run("a cart crosses", func(t *testing.T) {
		for _, start := range []float64{0, 2, 4, 6} {
			m, err := floor.NewMap(floor.Config{Solids: []floor.Solid{room(0, 0, 10, 6)},
				Movers: []floor.Mover{{Half: v(0.4, 0.3), Route: []geom.Vec{v(5, 0.8), v(5, 5.2)}, Speed: 0.3, Offset: start}}}, 3.2)
			if err != nil {
				t.Fatal(err)
			}
			k := newCourse(t, defaults(), beams(24), geom.Pose{Pos: v(1, 3)}, v(9, 3))
			k.world = m.NewWorld()
			for k.step() && k.in.Time < 100 {
				k.world.Advance(k.in.Time)
			}
			if k.l.Modes[k.e.Mode()].Ending != logic.EndsArrived {
				t.Errorf("cart %.0f s ahead: it does not arrive; it is at %v", start, k.pose.Pos)
			}
			if k.gap < 0 {
				t.Errorf("cart %.0f s ahead: it comes as near as %.3f m", start, k.gap)
			}
		}
	})
}

// bug2 is the Bug2 rule as a table (Lumelsky & Stepanov): leave the boundary where it
// crosses the straight line from start to goal nearer to the goal than it was met.
func bug2(side logic.SideRule, standOff float64) *logic.Logic {
	return &logic.Logic{Name: "Bug2", Sector: 0.5,
		Modes: []logic.Mode{{Name: "to the goal", Behaviour: logic.GoalSeeking}, {Name: "round", Behaviour: logic.WallFollowing, Side: side, StandOff: standOff},
			{Name: "there", Ending: logic.EndsArrived}},
		Transitions: []logic.Transition{
			{From: logic.AnyMode, To: 2, When: []logic.Condition{{Reading: logic.GoalDistance, Rel: logic.Below, Threshold: 0.05}}},
			{From: 0, To: 1, Meet: true, When: []logic.Condition{{Reading: logic.Ahead, Rel: logic.Below, Threshold: 1.5 * standOff}}},
			{From: 1, To: 0, When: []logic.Condition{{Reading: logic.LineOffset, Rel: logic.Below, Threshold: 0.02},
				{Reading: logic.GoalDistance, Rel: logic.Below, Threshold: -0.1, HasAgainst: true, Against: logic.MeetDistance}}},
		}}
}

// H-01 (Lumelsky & Stepanov 1987; Lumelsky 2006): the lengths of the ways round a
// rectangle, for a point that touches it. Ours has a hull and a stand-off, both small, which cut
// or round each corner by as much. H-02: the bounds.
func TestPublishedWays(t *testing.T) {
	lengths := truth.Values(t, "H-01", "")
	bounds := truth.Values(t, "H-02", "")
	const small, off = 0.02, 0.02
	drive := func(l *logic.Logic) float64 {
		k := newCourse(t, l, fan, geom.Pose{}, v(10, 0), box(4, -1, 6, 3))
		k.in.Hull, k.in.GoalRadius = small, 0.05
		k.every = 1
		if k.run(200) != logic.EndsArrived {
			t.Fatalf("%s does not arrive; it is at %v", l.Name, k.pose.Pos)
		}
		return k.way + k.pose.Pos.Sub(v(10, 0)).Norm()
	}
	left, right := drive(bug2(logic.KeepRight, off)), drive(bug2(logic.KeepLeft, off))
	t.Logf("Bug2 left %.2f m, right %.2f m", left, right)
	near(t, "H-01 Bug2 turning left", left, lengths[0], 0.15)
	near(t, "H-01 Bug2 turning right", right, lengths[1], 0.15)

	n := logic.DefaultNumbers(small, speed, 0.05)
	n.StandOff, n.Notice, n.Safe, n.Band, n.Gain = off, 1.5*off, off/4, off/8, 0.05
	ours := drive(logic.Default(n))
	t.Logf("the default logic %.2f m", ours)
	if ours < lengths[3]-0.05 {
		t.Errorf("H-01: the default logic drives %.3f m, shorter than the shortest way of %.3f m", ours, lengths[3])
	}
	// Its side is the better one here, so it may not be longer than Bug2 on that side, nor
	// than the bound for Bug2 round one convex obstacle.
	if ours > math.Min(left, right)+0.05 || ours > bounds[1] {
		t.Errorf("H-02: the default logic drives %.3f m", ours)
	}
	if worst := math.Max(left, right); worst > bounds[1] {
		t.Errorf("H-02: Bug2 drives %.3f m, more than its bound of %.3f m", worst, bounds[1])
	}
}
