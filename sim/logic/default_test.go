package logic_test

import (
	"testing"

	"leeway/sim/logic"
)

func TestDefaultIsValid(t *testing.T) {
	for _, hull := range []float64{0.05, 0.21, 0.6} {
		for _, v := range []float64{0.05, 0.45, 2} {
			n := logic.DefaultNumbers(hull, v, 0.15)
			if p := logic.Default(n).Check(); len(p) > 0 {
				t.Errorf("hull %g m, %g m/s: %v", hull, v, p)
			}
			// What the rules need of each other.
			if !(n.Safe > 0 && n.Safe+n.Band < n.StandOff && n.StandOff < n.Notice && n.Notice < n.Gain) {
				t.Errorf("hull %g m, %g m/s: %+v", hull, v, n)
			}
			// Notice leaves a fifth of a second at full speed before StandOff is used up.
			if n.Notice-n.StandOff < 0.2*v {
				t.Errorf("hull %g m, %g m/s: %+v leaves no time to turn aside", hull, v, n)
			}
		}
	}
	got := logic.DefaultNumbers(0.21, 0.45, 0.15)
	want := logic.Numbers{Notice: 0.3, StandOff: 0.2, Safe: 0.08, Band: 0.04, Gain: 0.35, MinTime: 1, GoalRadius: 0.15}
	if got != want {
		t.Errorf("the usual robot gets %+v", got)
	}
}

// The numbers that a person sets arrive in the table.
func TestDefaultTakesItsNumbers(t *testing.T) {
	a := logic.Numbers{Notice: 0.31, StandOff: 0.22, Safe: 0.07, Band: 0.03, Gain: 0.41, MinTime: 1.3, Side: logic.KeepRight, GoalRadius: 0.17}
	l := logic.Default(a)
	found := map[float64]bool{}
	for _, tr := range l.Transitions {
		for _, c := range tr.When {
			found[c.Threshold] = true
		}
	}
	for name, x := range map[string]float64{"notice": a.Notice, "safe": a.Safe, "safe + band": a.Safe + a.Band, "gain": a.Gain, "least time": a.MinTime, "goal radius": a.GoalRadius} {
		if !found[x] {
			t.Errorf("no condition has the %s of %g", name, x)
		}
	}
	for _, m := range l.Modes {
		if m.Behaviour == logic.WallFollowing && (m.StandOff != a.StandOff || m.Side != a.Side) {
			t.Errorf("wall-following has %+v", m)
		}
	}
	for i, name := range []string{"goal-seeking", "wall-following", "obstacle avoidance", "arrived", "gave up"} {
		if l.Modes[i].Name != name {
			t.Errorf("mode %d is called %q", i, l.Modes[i].Name)
		}
	}
}
