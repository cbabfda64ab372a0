package logic_test

import (
	"strings"
	"testing"

	"leeway/sim/logic"
)

// sentence returns what is said of a transition with these conditions.
func sentence(r map[logic.Reading]float64, t logic.Transition) string {
	l := &logic.Logic{Modes: []logic.Mode{{Name: "a"}, {Name: "b"}}, Transitions: []logic.Transition{t}}
	s := &logic.Switch{Readings: [logic.NumReadings]float64{}}
	for k, x := range r {
		s.Readings[k] = x
	}
	return l.Why(s)
}

func when(c ...logic.Condition) logic.Transition { return logic.Transition{To: 1, When: c} }

func below(r logic.Reading, x float64) logic.Condition {
	return logic.Condition{Reading: r, Rel: logic.Below, Threshold: x}
}

func atLeast(r logic.Reading, x float64) logic.Condition {
	return logic.Condition{Reading: r, Rel: logic.AtLeast, Threshold: x}
}

// Every reading, in both relations.
func TestSentences(t *testing.T) {
	type values = map[logic.Reading]float64
	for _, c := range []struct {
		read values
		when logic.Condition
		want string
	}{
		{values{logic.Ahead: 0.47}, below(logic.Ahead, 0.5), "Something stood 0.47 m away on the way to the goal, nearer than 0.50 m."},
		{values{logic.Ahead: 0.8}, atLeast(logic.Ahead, 0.32), "Nothing on the way to the goal stood nearer than 0.80 m, at least 0.32 m."},
		{values{logic.GoalDistance: 0.123}, below(logic.GoalDistance, 0.15), "The goal was 0.12 m away, nearer than 0.15 m."},
		{values{logic.GoalDistance: 2}, atLeast(logic.GoalDistance, 1.5), "The goal was 2.00 m away, at least 1.50 m."},
		{values{logic.GoalBearing: 0.5}, below(logic.GoalBearing, 0.6), "The goal lay 29° off the heading, less than 34°."},
		{values{logic.Nearest: 0.05}, below(logic.Nearest, 0.08), "The nearest thing stood 0.05 m away, nearer than 0.08 m."},
		{values{logic.Nearest: 0.13}, atLeast(logic.Nearest, 0.12), "Nothing stood nearer than 0.13 m, at least 0.12 m."},
		{values{logic.Front: 0.3}, below(logic.Front, 0.4), "Something stood 0.30 m away in front, nearer than 0.40 m."},
		{values{logic.Left: 0.3}, below(logic.Left, 0.4), "Something stood 0.30 m away on the left, nearer than 0.40 m."},
		{values{logic.Right: 0.5}, atLeast(logic.Right, 0.4), "Nothing on the right stood nearer than 0.50 m, at least 0.40 m."},
		{values{logic.FreeWay: 1.2}, atLeast(logic.FreeWay, 0.4), "The way straight to the goal was free for 1.20 m, at least 0.40 m."},
		{values{logic.BestDistance: 2.3}, below(logic.BestDistance, 2.5), "The nearest it had been to the goal was 2.30 m, less than 2.50 m."},
		{values{logic.Gain: 0.62}, atLeast(logic.Gain, 0.4), "Straight on it could get 0.62 m nearer to the goal than it had been, at least 0.40 m."},
		{values{logic.Gain: -0.25}, below(logic.Gain, 0.4), "Straight on it would stay 0.25 m farther from the goal than it had been, less than a gain of 0.40 m."},
		{values{logic.Alignment: 0.87}, atLeast(logic.Alignment, 0.5), "The way to the goal agreed with the way out of the obstacles by 0.87, at least 0.50."},
		{values{logic.Alignment: -0.5}, below(logic.Alignment, 0), "The way to the goal agreed with the way out of the obstacles by −0.50, less than 0.00."},
		{values{logic.TimeInMode: 3.8}, atLeast(logic.TimeInMode, 1), "It had been 3.8 s in the mode, at least 1.0 s."},
		{values{logic.WayInMode: 2.3}, atLeast(logic.WayInMode, 2), "It had driven 2.30 m in the mode, at least 2.00 m."},
		{values{logic.Closed: 1}, atLeast(logic.Closed, 1), "The boundary had been followed back to where it was met."},
		{values{logic.Closed: 0}, below(logic.Closed, 0.5), "The boundary had not been followed back to where it was met."},
		{values{logic.MeetDistance: 3.2}, below(logic.MeetDistance, 4), "The obstacle was met 3.20 m from the goal, nearer than 4.00 m."},
		{values{logic.TimeSinceMeeting: 2}, atLeast(logic.TimeSinceMeeting, 1), "The obstacle had been met 2.0 s before, at least 1.0 s."},
		{values{logic.LineOffset: 0.02}, below(logic.LineOffset, 0.05), "It was 0.02 m off the straight line to the goal, less than 0.05 m."},
	} {
		if got := sentence(c.read, when(c.when)); got != c.want {
			t.Errorf("it says %q, want %q", got, c.want)
		}
	}
}

// Values that only differ beyond the usual decimals are written with enough of them.
func TestSentencesTellNumbersApart(t *testing.T) {
	got := sentence(map[logic.Reading]float64{logic.Ahead: 0.2983}, when(below(logic.Ahead, 0.3)))
	if want := "Something stood 0.298 m away on the way to the goal, nearer than 0.300 m."; got != want {
		t.Errorf("it says %q, want %q", got, want)
	}
	got = sentence(map[logic.Reading]float64{logic.TimeInMode: 1.04}, when(atLeast(logic.TimeInMode, 1)))
	if want := "It had been 1.04 s in the mode, at least 1.00 s."; got != want {
		t.Errorf("it says %q, want %q", got, want)
	}
}

// Several conditions, another reading as threshold, the least time, holding, the release band.
func TestSentencesOfSeveral(t *testing.T) {
	r := map[logic.Reading]float64{logic.FreeWay: 2.4, logic.GoalDistance: 2.4, logic.Ahead: 0.9, logic.TimeInMode: 3.81}
	tr := when(logic.Condition{Reading: logic.FreeWay, Rel: logic.AtLeast, HasAgainst: true, Against: logic.GoalDistance}, atLeast(logic.Ahead, 0.32))
	tr.MinTime, tr.Hold = 1, 0.1
	want := "The way straight to the goal was free for 2.40 m, at least the goal distance of 2.40 m; nothing on the way to the goal stood nearer than 0.90 m, at least 0.32 m; and it had been 3.8 s in the mode, at least 1.0 s, and that for 0.1 s."
	if got := sentence(r, tr); got != want {
		t.Errorf("it says %q,\nwant %q", got, want)
	}
	tr = when(logic.Condition{Reading: logic.GoalDistance, Rel: logic.Below, Threshold: -0.1, HasAgainst: true, Against: logic.MeetDistance})
	want = "The goal was 2.40 m away, nearer than the goal distance at the meeting of 3.00 m less 0.10 m."
	r[logic.MeetDistance] = 3
	if got := sentence(r, tr); got != want {
		t.Errorf("it says %q,\nwant %q", got, want)
	}
	// Held by its band: not said to be nearer than it is.
	tr = when(logic.Condition{Reading: logic.Ahead, Rel: logic.Below, Threshold: 0.8, Band: 0.2})
	want = "Something stood 0.90 m away on the way to the goal, and had been nearer than 0.80 m and not yet beyond 1.00 m."
	if got := sentence(r, tr); got != want {
		t.Errorf("it says %q,\nwant %q", got, want)
	}
}

func TestSentencesOfNoSwitch(t *testing.T) {
	l := defaults()
	if got := l.Why(nil); got != "This is where the logic starts." {
		t.Errorf("before the first switch it says %q", got)
	}
	if got := l.Why(&logic.Switch{Transition: 99}); !strings.HasSuffix(got, ".") {
		t.Errorf("of a transition that is not there it says %q", got)
	}
}
