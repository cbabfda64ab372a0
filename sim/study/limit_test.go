package study_test

import (
	"math"
	"strings"
	"testing"

	"leeway/sim"
	"leeway/sim/drive"
	. "leeway/sim/study"
)

// The largest speed from which the robot stops before a wall seen a metre off is known
// in closed form: v = a(−t + √(t² + 2D/a)), with a reaction time t between nothing and
// two ticks. (Kinematics of braking; derived.)
func TestLimitOfBraking(t *testing.T) {
	plan := LimitPlan{
		Axis: Axis{Path: "robot.speed_m_s", Low: 0.4, High: 3}, Target: 0.9, Confidence: 0.95, N: 40, Scan: 4, Tolerance: 0.002,
	}
	l, err := RunLimit(ctx, &Runner{}, braking(t), plan)
	if err != nil {
		t.Fatal(err)
	}
	low, high := drive.SafeSpeed(sightGap, decel, 0.004), drive.SafeSpeed(sightGap, decel, 0)
	if !l.Found || !l.Monotone || l.Value < low-plan.Tolerance || l.Value > high+1e-6 || l.Beyond-l.Value > plan.Tolerance*1.001 {
		t.Errorf("found %v to %v, want within %v to %v: %s", l.Value, l.Beyond, low, high, l.Text)
	}
	// A value that fails every time is given up after a round.
	last := l.Curve[len(l.Curve)-1]
	if last.Meets || last.N >= 40 {
		t.Errorf("at %v m/s it ran %d trials", last.Value, last.N)
	}
	for _, s := range l.Curve {
		if s.Meets != (s.Value <= l.Value) {
			t.Errorf("%+v, with a limit of %v", s, l.Value)
		}
	}
	if _, err := RunLimit(ctx, &Runner{}, braking(t), LimitPlan{Axis: plan.Axis, Target: 0.9, Confidence: 0.95, N: 10}); err == nil || !strings.Contains(err.Error(), "25 without a failure") {
		t.Errorf("ten trials for 0.9: %v", err)
	}
}

// pass makes a family whose trials do as asked where ok says so: the robot stands in
// its goal, or its goal is out of reach.
func pass(t *testing.T, ok func(v float64) bool) Family {
	s := posts(t)
	s.c.Asked.Within = 1
	s.c.Start.Pos = s.c.Goal
	s.of = nil
	return func(v []float64) (Source, error) {
		n := *s
		if !ok(v[0]) {
			n.of = func(_ int, c *sim.Config) { c.Goal.X = 0.5 }
		}
		return &n, nil
	}
}

// Synthetic curves: steps from either side, whole numbers, all good, none good, and one
// with a hole.
func TestLimitOfSteps(t *testing.T) {
	plan := LimitPlan{Axis: Axis{Path: "x", Low: 0, High: 8}, Target: 0.8, Confidence: 0.9, N: 12, Scan: 5, Tolerance: 0.01}
	run := func(p LimitPlan, ok func(v float64) bool) *Limit {
		t.Helper()
		l, err := RunLimit(ctx, &Runner{}, pass(t, ok), p)
		if err != nil {
			t.Fatal(err)
		}
		return l
	}
	if l := run(plan, func(v float64) bool { return v <= 4.3 }); !l.Monotone || l.Value > 4.3 || l.Value < 4.29 || l.Beyond <= 4.3 {
		t.Errorf("up to 4.3: %+v", l)
	}
	small := plan
	small.Smallest = true
	if l := run(small, func(v float64) bool { return v >= 4.3 }); !l.Monotone || l.Value < 4.3 || l.Value > 4.31 || !strings.Contains(l.Text, "smallest") {
		t.Errorf("from 4.3: %+v", l)
	}
	whole := plan
	whole.Axis.Whole = true
	if l := run(whole, func(v float64) bool { return v <= 5 }); l.Value != 5 || l.Beyond != 6 {
		t.Errorf("whole numbers up to 5: %+v", l)
	}
	if l := run(plan, func(float64) bool { return true }); !l.Found || l.Value != 8 || !math.IsNaN(l.Beyond) {
		t.Errorf("all: %+v", l)
	}
	if l := run(plan, func(float64) bool { return false }); l.Found || !strings.Contains(l.Text, "low end") {
		t.Errorf("none: %+v", l)
	}
	if l := run(plan, func(v float64) bool { return v < 3 || v > 5 }); l.Monotone || l.Value >= 3 || l.Value < 2.98 || !strings.Contains(l.Text, "not monotone") {
		t.Errorf("with a hole: %+v", l)
	}
	bounded := plan
	bounded.Budget = 5 * 12
	if l := run(bounded, func(v float64) bool { return v <= 4.3 }); len(l.Curve) > 7 || l.Value != 4 {
		t.Errorf("with a budget of 60: %d values, %+v", len(l.Curve), l)
	}
}
