package logic

import "math"

// Numbers are the default logic's numbers.
type Numbers struct {
	Notice     float64 // m: something nearer than this on the way to the goal starts wall-following
	StandOff   float64 // m
	Safe       float64 // m: nearer than this and obstacle avoidance takes over
	Band       float64 // m
	Gain       float64 // m: leave rule
	MinTime    float64 // s
	Side       SideRule
	GoalRadius float64 // m
}

// DefaultNumbers suit the hull radius (m), speed (m/s) and goal radius (m) given.
//
// They grow with the hull, and with the speed where a robot that fast needs more
// room: Notice must leave room to turn aside before StandOff is used up, Safe room to
// stop. Gain exceeds Notice, because a robot that leaves a wall for a free way meets the
// next obstacle as much as Notice before that way ends; only what Gain has beyond Notice
// is sure progress (see Default). For a hull of 0.21 m at 0.45 m/s they are
// 0.30, 0.20, 0.08, 0.04 and 0.35 m.
func DefaultNumbers(hull, speed, goalRadius float64) Numbers {
	mm := func(x float64) float64 { return math.Round(x*1000) / 1000 }
	standOff := mm(math.Max(0.953*hull, 0.3*speed))
	safe := mm(math.Max(0.38*hull, 0.12*speed))
	notice := mm(standOff + math.Max(float64(0.477*hull), float64(0.22*speed)))
	return Numbers{
		Notice:     notice,
		StandOff:   standOff,
		Safe:       safe,
		Band:       safe / 2,
		Gain:       mm(notice + float64(0.24*hull)),
		MinTime:    1,
		GoalRadius: goalRadius,
	}
}

// Default returns the default logic as data.
func Default(n Numbers) *Logic {
	const (
		goal = iota
		wall
		avoid
		arrived
		gaveUp
	)
	below := func(r Reading, x, band float64) Condition {
		return Condition{Reading: r, Rel: Below, Threshold: x, Band: band}
	}
	atLeast := func(r Reading, x float64) Condition { return Condition{Reading: r, Rel: AtLeast, Threshold: x} }
	return &Logic{
		Name: "default",
		Modes: []Mode{
			{Name: "goal-seeking", Behaviour: GoalSeeking, GoalGain: 1.5, StandOff: n.Safe + n.Band},
			{Name: "wall-following", Behaviour: WallFollowing, Side: n.Side, StandOff: n.StandOff},
			{Name: "obstacle avoidance", Behaviour: Avoidance, Side: n.Side, StandOff: n.Safe + 2*n.Band},
			{Name: "arrived", Behaviour: Stop, Ending: EndsArrived},
			{Name: "gave up", Behaviour: Stop, Ending: EndsGaveUp},
		},
		Start: goal,
		Transitions: []Transition{
			{From: AnyMode, To: arrived, When: []Condition{below(GoalDistance, n.GoalRadius, 0)}, Hold: 0.7},
			{From: goal, To: avoid, When: []Condition{below(Nearest, n.Safe, 0)}, Meet: true},
			{From: wall, To: avoid, When: []Condition{below(Nearest, n.Safe, 0)}},
			{From: goal, To: wall, When: []Condition{below(Ahead, n.Notice, 0)}, Meet: true},
			{From: wall, To: goal, Hold: 0.1, When: []Condition{
				{Reading: FreeWay, Rel: AtLeast, HasAgainst: true, Against: GoalDistance},
				atLeast(Ahead, 1.05*n.Notice), atLeast(TimeSinceMeeting, n.MinTime)}},
			{From: wall, To: goal, Hold: 0.1, When: []Condition{
				atLeast(Gain, n.Gain), atLeast(Ahead, 1.05*n.Notice), atLeast(TimeSinceMeeting, n.MinTime)}},
			{From: wall, To: gaveUp, When: []Condition{atLeast(Closed, 1)}},
			{From: avoid, To: gaveUp, When: []Condition{atLeast(Closed, 1)}},
			{From: wall, To: gaveUp, MinTime: 30, When: []Condition{below(WayInMode, n.StandOff, 0)}},
			{From: avoid, To: gaveUp, MinTime: 30, When: []Condition{below(WayInMode, n.StandOff, 0)}},
			{From: avoid, To: wall, When: []Condition{atLeast(Nearest, n.Safe+n.Band)}},
		},
		Sector: math.Pi / 6,
		Margin: 0.6 * n.Safe,
	}
}
