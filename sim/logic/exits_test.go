package logic

import "testing"

// The gauges are the conditions of the exits that the mode has, in order, with the
// values of the last look; an exit whose gauges are all met, for long enough, is the
// one that fires.
func TestExits(t *testing.T) {
	l := &Logic{
		Modes: []Mode{{Name: "a"}, {Name: "b"}, {Name: "c", Ending: EndsArrived}},
		Transitions: []Transition{
			{From: 1, To: 0, When: []Condition{{Reading: Nearest, Rel: AtLeast, Threshold: 1}}},
			{From: 0, To: 1, When: []Condition{{Reading: Ahead, Rel: Below, Threshold: 0.4, Band: 0.1}, {Reading: Front, Rel: Below, Threshold: 2}}, MinTime: 2},
			{From: AnyMode, To: 2, When: []Condition{{Reading: GoalDistance, Rel: Below, Threshold: 0.2}}, Hold: 0.5},
		},
	}
	e := New(l)
	e.readings[Ahead], e.readings[Front], e.readings[GoalDistance] = 0.3, 2.5, 0.1
	e.guard(&Input{Time: 1})
	e.guard(&Input{Time: 1.3})
	x := e.Exits(1.3)
	if len(x) != 2 || x[0].To != 1 || x[1].To != 2 {
		t.Fatalf("%+v", x)
	}
	g := x[0].Gauges
	if len(g) != 3 {
		t.Fatalf("%d gauges; two conditions and the minimum time make 3", len(g))
	}
	if !g[0].Met || g[0].Text != "0.30 < 0.40 m" || g[0].Mark != 0.4 || g[0].Share != 0.3 || g[0].Release != 0.5 {
		t.Errorf("ahead: %+v", g[0])
	}
	if g[1].Met || g[1].Text != "2.50 < 2.00 m" {
		t.Errorf("front: %+v", g[1])
	}
	if g[2].Met || g[2].Text != "1.3 ≥ 2.0 s" {
		t.Errorf("minimum time: %+v", g[2])
	}
	if h := x[1].Held; h < 0.29 || h > 0.31 || x[1].Hold != 0.5 {
		t.Errorf("held for %g of %g s", h, x[1].Hold)
	}
	// In its band the condition goes on holding, and the gauge says so.
	e.readings[Ahead] = 0.45
	e.guard(&Input{Time: 1.4})
	if g := e.Exits(1.4)[0].Gauges[0]; !g.Met {
		t.Errorf("within the release band: %+v", g)
	}
}
