package logic_test

import (
	"math"
	"testing"

	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
)

// still is a logic that reads and stands.
func still() *logic.Logic {
	return &logic.Logic{Name: "still", Modes: []logic.Mode{{Name: "stand"}}, Sector: math.Pi / 6}
}

func read(in *logic.Input, l *logic.Logic) *[logic.NumReadings]float64 {
	e := logic.New(l)
	e.Decide(in)
	return e.Readings()
}

func TestGoalReadings(t *testing.T) {
	s := scan(0.19, 3, nil, nil)
	in := at(1, 2, math.Pi/2, v(4, 6), s)
	r := read(in, still())
	near(t, "goal distance", r[logic.GoalDistance], 5, 1e-12)
	near(t, "goal bearing", r[logic.GoalBearing], math.Atan2(3, 4), 1e-12)
	// Measured from the plan point, here 1 m ahead of the centre.
	in.Ahead = 1
	r = read(in, still())
	near(t, "goal distance of the plan point", r[logic.GoalDistance], math.Sqrt(18), 1e-12)
	near(t, "goal bearing from the plan point", r[logic.GoalBearing], math.Pi/4, 1e-12)
	// With nothing in sight every gap is the largest that could be seen.
	for _, g := range []logic.Reading{logic.Nearest, logic.Ahead, logic.Front, logic.Left, logic.Right} {
		near(t, g.String()+" in the open", r[g], 0.19+3-hull, 1e-12)
	}
	near(t, "alignment in the open", r[logic.Alignment], 1, 0)
}

// Gaps are measured from the hull: the return lies mount + range from the centre.
func TestSectorReadings(t *testing.T) {
	quarter := math.Pi / 2
	bearings := []float64{0, quarter / 4, quarter, -quarter, math.Pi}
	r := read(at(0, 0, 0.3, v(9, 0), scan(0.19, 3, bearings, []float64{1.5, 1.2, 0.8, 0.7, 0.1})), still())
	near(t, "front", r[logic.Front], 0.19+1.2-hull, 1e-12)
	near(t, "left", r[logic.Left], 0.19+0.8-hull, 1e-12)
	near(t, "right", r[logic.Right], 0.19+0.7-hull, 1e-12)
	near(t, "nearest", r[logic.Nearest], 0.19+0.1-hull, 1e-12)
}

// A sparse ring has no beam in some sectors; then the beams nearest in angle are looked at, both of two that are equally near.
func TestSectorWithoutBeam(t *testing.T) {
	third := 2 * math.Pi / 3
	l := still()
	l.Sector = 0.2
	r := read(at(0, 0, 0, v(9, 0), scan(0.2, 3, []float64{third / 2, -third / 2, math.Pi}, []float64{0.9, 0.6, 0.3})), l)
	near(t, "front", r[logic.Front], 0.2+0.6-hull, 1e-12)
	near(t, "left", r[logic.Left], 0.2+0.9-hull, 1e-12)
	near(t, "right", r[logic.Right], 0.2+0.6-hull, 1e-12)
}

// The way is a strip as wide as the hull with the margin on either side, not a sector.
func TestFreeWayAndAhead(t *testing.T) {
	const margin, w = 0.04, hull + 0.04
	l := still()
	l.Margin = margin
	place := func(goal geom.Vec, points ...geom.Vec) *[logic.NumReadings]float64 {
		var b, x []float64
		for i := range 90 { // a dense ring, so that only the strip counts
			b, x = append(b, geom.Wrap(2*math.Pi*float64(i)/90)), append(x, 3)
		}
		for _, p := range points {
			b, x = append(b, p.Angle()), append(x, p.Norm()-0.19)
		}
		return read(at(0, 0, 0, goal, scan(0.19, 3, b, x)), l)
	}
	goal := v(2.5, 0)
	r := place(goal)
	near(t, "free way in the open", r[logic.FreeWay], 2.5, 1e-12)
	near(t, "free way to what is beyond sight", place(v(9, 0))[logic.FreeWay], 3.19-hull, 1e-12)
	// Straight ahead: the hull drives up to the place less w.
	r = place(goal, v(1.5, 0))
	near(t, "free way to a place straight ahead", r[logic.FreeWay], 1.5-w, 1e-12)
	near(t, "gap of a place straight ahead", r[logic.Ahead], 1.5-hull, 1e-12)
	// At the side of the strip it is touched later.
	r = place(goal, v(1.5, 0.2))
	near(t, "free way to a place aside", r[logic.FreeWay], 1.5-math.Sqrt(w*w-0.04), 1e-12)
	near(t, "gap of a place aside", r[logic.Ahead], math.Hypot(1.5, 0.2)-hull, 1e-12)
	for name, p := range map[string]geom.Vec{
		"beside the strip": v(1.5, w+0.001), "behind": v(-0.5, 0), "beyond the goal": v(2.5+w, 0)} {
		r = place(goal, p)
		if r[logic.FreeWay] != 2.5 || r[logic.Ahead] != 3.19-hull {
			t.Errorf("a place %s counts: free way %g, ahead %g", name, r[logic.FreeWay], r[logic.Ahead])
		}
	}
	// What the hull would touch only when well inside the goal does not keep it from arriving.
	if r = place(goal, v(2.5-0.15/2+w+0.001, 0)); r[logic.FreeWay] != 2.5 {
		t.Errorf("the free way ends inside the goal: %g", r[logic.FreeWay])
	}
	if r = place(goal, v(2.5-0.15/2+w-0.001, 0)); r[logic.FreeWay] == 2.5 {
		t.Error("the free way leads through a place before the goal")
	}
}

// Of a sparse ring the beams on either side of the way count even outside the strip.
func TestBeamsBesideTheWayCount(t *testing.T) {
	l := still()
	bearings := []float64{0.4, -0.4, 1.2, -1.2, 2.4, -2.4}
	r := read(at(0, 0, 0, v(2.5, 0), scan(0.19, 3, bearings, []float64{0.81, 3, 0.4, 0.4, 3, 3})), l)
	near(t, "free way", r[logic.FreeWay], 1-hull, 1e-12)
	near(t, "ahead", r[logic.Ahead], 1-hull, 1e-12)
	r = read(at(0, 0, 0, v(2.5, 0), scan(0.19, 3, bearings, []float64{3, 3, 0.4, 0.4, 3, 3})), l)
	near(t, "free way between free beams", r[logic.FreeWay], 2.5, 1e-12)
}

// The exact nearest place of the all-round ideal counts for Nearest.
func TestExactNearest(t *testing.T) {
	s := scan(0.19, 3, []float64{0, 2, 4}, []float64{3, 3, 3})
	s.Exact, s.Gap, s.Toward = true, 0.5, v(0, 1)
	near(t, "nearest", read(at(0, 0, 0, v(2, 0), s), still())[logic.Nearest], 0.5-hull, 1e-12)
	s.Gap = math.Inf(1)
	near(t, "nearest of nothing", read(at(0, 0, 0, v(2, 0), s), still())[logic.Nearest], 3.19-hull, 1e-12)
}

// Between two readings of a beam its return stays where it is on the floor.
func TestReturnsStayWhereTheyAre(t *testing.T) {
	e := logic.New(still())
	in := at(0, 0, 0, v(9, 0), scan(0.19, 3, []float64{0}, []float64{1.81}))
	e.Decide(in)
	in.Belief.X, in.Belief.Theta, in.Time = 0.5, 1, 0.02
	e.Decide(in)
	near(t, "nearest after driving on", e.Readings()[logic.Nearest], 1.5-hull, 1e-12)
	// A new reading replaces it.
	in.Scan.Tick[0], in.Scan.Range[0] = 1, 0.81
	e.Decide(in)
	near(t, "nearest after a new reading", e.Readings()[logic.Nearest], 1-hull, 1e-12)
}

// A sparse ring remembers near places that its beams have swept over, for four seconds.
func TestSparseRingRemembers(t *testing.T) {
	for _, n := range []int{12, 90} {
		var bearings, ranges []float64
		for i := range n {
			bearings, ranges = append(bearings, geom.Wrap(2*math.Pi*float64(i)/float64(n))), append(ranges, 3)
		}
		ranges[0] = 0.5
		in := at(0, 0, 0, v(2.5, 0), scan(0.19, 3, bearings, ranges))
		e := logic.New(still())
		e.Decide(in)
		near(t, "free way toward a place", e.Readings()[logic.FreeWay], 0.69-hull, 1e-12)
		free := func(time float64) float64 {
			in.Time = time
			for i := range in.Scan.Tick {
				in.Scan.Tick[i]++
				in.Scan.Hit[i] = false
			}
			e.Decide(in)
			return e.Readings()[logic.FreeWay]
		}
		want := 2.5
		if n == 12 {
			want = 0.69 - hull
		}
		near(t, "free way after the beam has lost it", free(1), want, 1e-12)
		near(t, "free way after a while", free(3.9), want, 1e-12)
		near(t, "nearest does not remember", e.Readings()[logic.Nearest], 3.19-hull, 1e-12)
		near(t, "free way long after", free(5.1), 2.5, 1e-12)
	}
}

// The way out of the obstacles is the sum of the returns, nearer ones weighing more.
func TestAlignment(t *testing.T) {
	s := scan(0.19, 3, []float64{math.Pi, math.Pi / 2}, []float64{0.1, 0.1})
	near(t, "alignment", read(at(0, 0, 0, v(9, 0), s), still())[logic.Alignment], math.Sqrt(0.5), 1e-9)
	s = scan(0.19, 3, []float64{0}, []float64{0.1})
	near(t, "alignment with a wall ahead", read(at(0, 0, 0, v(9, 0), s), still())[logic.Alignment], -1, 1e-9)
}

// Readings that remember: time and way in the mode, d_min, gain, meeting, line.
func TestReadingsThatRemember(t *testing.T) {
	// goal-seeking until something is near ahead, then standing.
	l := &logic.Logic{Name: "two", Sector: 0.5,
		Modes: []logic.Mode{{Name: "go", Behaviour: logic.GoalSeeking}, {Name: "stand"}},
		Transitions: []logic.Transition{{From: 0, To: 1, Meet: true,
			When: []logic.Condition{{Reading: logic.Ahead, Rel: logic.Below, Threshold: 0.5}}}}}
	e := logic.New(l)
	s := scan(0.19, 3, []float64{0}, []float64{3})
	in := at(0, 0, 0, v(10, 0), s)
	step := func(time, x, y, rng float64) *[logic.NumReadings]float64 {
		in.Time, in.Belief.X, in.Belief.Y = time, x, y
		s.Range[0], s.Hit[0] = rng, rng < 3
		s.Tick[0]++
		e.Decide(in)
		return e.Readings()
	}
	r := step(5, 0, 0, 3)
	near(t, "time in the start mode", r[logic.TimeInMode], 0, 0)
	r = step(6, 0.3, 0.4, 3)
	near(t, "time in mode", r[logic.TimeInMode], 1, 1e-12)
	near(t, "way in mode", r[logic.WayInMode], 0.5, 1e-12)
	near(t, "off the line", r[logic.LineOffset], 0.4, 1e-12)
	r = step(7, 0.3, 0, 3)
	near(t, "way in mode there and back", r[logic.WayInMode], 0.9, 1e-12)
	near(t, "best distance", r[logic.BestDistance], 9.7, 1e-12)
	r = step(7.5, 0.1, 0, 3)
	near(t, "best distance stays", r[logic.BestDistance], 9.7, 1e-12)
	near(t, "gain", r[logic.Gain], 9.7-(9.9-(3.19-hull)), 1e-12)

	r = step(8, 0.2, 0, 0.4) // met here
	if e.Mode() != 1 {
		t.Fatal("the obstacle was not met")
	}
	near(t, "the readings of the switch are those looked at", r[logic.BestDistance], 9.7, 1e-12)
	r = step(9, 0.1, 0, 0.4)
	near(t, "d_min since the meeting", r[logic.BestDistance], 9.8, 1e-12)
	near(t, "goal distance at the meeting", r[logic.MeetDistance], 9.8, 1e-12)
	near(t, "time since the meeting", r[logic.TimeSinceMeeting], 1, 1e-12)
	near(t, "time in the new mode", r[logic.TimeInMode], 1, 1e-12)
	near(t, "way in the new mode", r[logic.WayInMode], 0.1, 1e-12)
	near(t, "closed", r[logic.Closed], 0, 0)

	// A goal that moves starts d_min, the meeting and the line afresh.
	in.Goal = v(0.1, 4)
	r = step(10, 0.1, 0, 0.4)
	near(t, "d_min of another goal", r[logic.BestDistance], 4, 1e-12)
	near(t, "meeting of another goal", r[logic.MeetDistance], 4, 1e-12)
	near(t, "time since, for another goal", r[logic.TimeSinceMeeting], 0, 1e-12)
	near(t, "line to another goal", r[logic.LineOffset], 0, 1e-12)

	// So does a belief that jumps, which is no way driven.
	r = step(10.02, 0.1, 1, 0.4)
	near(t, "d_min of a carried robot", r[logic.BestDistance], 3, 1e-12)
	near(t, "way of a carried robot", r[logic.WayInMode], 0.1, 1e-12)
	step(11, 0.1, 0.9, 0.4)
	r = step(12, 0.1, 1, 0.4)
	near(t, "driving on after that is", r[logic.WayInMode], 0.3, 1e-12)
}

// A ring of one beam, and one of none, are looked at without harm.
func TestFewBeams(t *testing.T) {
	for _, c := range []ring.Config{{SubRays: 1, Period: 1, Max: 3}, beams(1), beams(2)} {
		c.Noiseless = true
		k := newCourse(t, defaults(), c, geom.Pose{Pos: v(1, 1)}, v(3, 1), room(0, 0, 4, 2))
		if k.run(60) != logic.EndsArrived {
			t.Errorf("with %d beams it does not cross an empty room", len(c.Bearings))
		}
	}
}
