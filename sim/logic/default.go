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

// DefaultNumbers suit the hull radius, speed and goal radius given.
func DefaultNumbers(hull, speed, goalRadius float64) Numbers {
	return Numbers{Notice: 0.3, StandOff: 0.2, Safe: 0.08, Band: 0.04, Gain: 0.35, MinTime: 1, GoalRadius: goalRadius}
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
			{From: AnyMode, To: arrived, When: []Condition{below(GoalDistance, n.GoalRadius/2, 0)}},
			{From: AnyMode, To: arrived, When: []Condition{below(GoalDistance, n.GoalRadius, 0)}, Hold: 0.5},
			{From: goal, To: avoid, When: []Condition{below(Nearest, n.Safe, 0)}, Meet: true},
			{From: wall, To: avoid, When: []Condition{below(Nearest, n.Safe, 0)}},
			{From: goal, To: wall, When: []Condition{below(Ahead, n.Notice, 0)}, Meet: true},
			{From: wall, To: goal, Hold: 0.1, When: []Condition{atLeast(TimeSinceMeeting, n.MinTime),
				{Reading: FreeWay, Rel: AtLeast, HasAgainst: true, Against: GoalDistance}, atLeast(Ahead, 1.05*n.Notice)}},
			{From: wall, To: goal, Hold: 0.1, When: []Condition{atLeast(TimeSinceMeeting, n.MinTime),
				atLeast(Gain, n.Gain), atLeast(Ahead, 1.05*n.Notice)}},
			{From: wall, To: gaveUp, When: []Condition{atLeast(Closed, 1)}},
			{From: avoid, To: wall, When: []Condition{atLeast(Nearest, n.Safe+n.Band)}},
		},
		Sector: math.Pi / 6,
		Margin: 0.04,
	}
}
