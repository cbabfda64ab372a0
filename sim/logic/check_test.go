package logic_test

import (
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"

	"leeway/sim/logic"
)

// Every fault at once, each where it is.
func TestCheckFindsEveryFault(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	l := &logic.Logic{
		Start: 7, Sector: 4, Margin: -1,
		Modes: []logic.Mode{
			{Name: "a", Behaviour: 9, Ending: 9, Side: 9, StandOff: -1, GoalGain: nan, Speed: 1.5},
			{Name: "a", StandOff: inf},
			{Ending: logic.EndsArrived, Speed: nan},
		},
		Transitions: []logic.Transition{
			{From: -2, To: 3, MinTime: -1, Hold: inf},
			{From: 2, To: 0},
			{From: logic.AnyMode, To: 1, When: []logic.Condition{
				{Reading: logic.NumReadings, Rel: 5, Threshold: nan, Band: -1},
				{Reading: logic.Gain, HasAgainst: true, Against: logic.Gain},
				{Reading: logic.Gain, HasAgainst: true, Against: 200},
			}},
		},
	}
	var got []string
	for _, p := range l.Check() {
		got = append(got, p.Path)
		if len(p.Text) < 20 || p.Text[len(p.Text)-1] != '.' {
			t.Errorf("%s: %q is no sentence", p.Path, p.Text)
		}
	}
	want := []string{
		"start", "sector_deg", "margin_m",
		"modes[0].behaviour", "modes[0].ending", "modes[0].side", "modes[0].stand_off_m", "modes[0].goal_gain_per_s", "modes[0].speed_share",
		"modes[1].stand_off_m", "modes[1].name",
		"modes[2].name", "modes[2].speed_share",
		"transitions[0].from", "transitions[0].to", "transitions[0].min_time_s", "transitions[0].hold_s",
		"transitions[1].from", "transitions[1].when",
		"transitions[2].when[0].reading", "transitions[2].when[0].relation", "transitions[2].when[0].threshold", "transitions[2].when[0].band",
		"transitions[2].when[1].against", "transitions[2].when[2].against",
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Errorf("faults (−want +got):\n%s", d)
	}
}

func TestCheckOfNothing(t *testing.T) {
	if p := (&logic.Logic{}).Check(); len(p) != 2 || p[0].Path != "modes" || p[1].Path != "start" {
		t.Errorf("an empty logic: %v", p)
	}
}

func TestNames(t *testing.T) {
	seen := map[string]bool{}
	for r := range logic.NumReadings {
		name := r.String()
		if seen[name] {
			t.Errorf("two readings are called %q", name)
		}
		seen[name] = true
		if got, ok := logic.ReadingNamed(name); !ok || got != r {
			t.Errorf("%q names reading %d", name, got)
		}
	}
	for i, name := range []string{"stop", "goal_seeking", "wall_following", "avoidance"} {
		b, ok := logic.BehaviourNamed(name)
		if !ok || int(b) != i || b.String() != name {
			t.Errorf("%q names behaviour %v", name, b)
		}
	}
	for i, name := range []string{"better", "left", "right"} {
		if s, ok := logic.SideRuleNamed(name); !ok || int(s) != i || s.String() != name {
			t.Errorf("%q names side rule %v", name, s)
		}
	}
	for i, name := range []string{"goes_on", "arrived", "gave_up"} {
		if e, ok := logic.EndingNamed(name); !ok || int(e) != i || e.String() != name {
			t.Errorf("%q names ending %v", name, e)
		}
	}
	for i, name := range []string{"below", "at_least"} {
		if r, ok := logic.RelationNamed(name); !ok || int(r) != i || r.String() != name {
			t.Errorf("%q names relation %v", name, r)
		}
	}
	if _, ok := logic.ReadingNamed("altitude_m"); ok {
		t.Error("a reading that is not there has a name")
	}
	if got := logic.Reading(99).String(); got != "reading 99" {
		t.Errorf("reading 99 is called %q", got)
	}
	if logic.LeftSide.String() != "left" || logic.RightSide.String() != "right" || logic.NoSide.String() != "none" {
		t.Error("the sides have other names")
	}
}
