// Package logic is the switching automaton: modes, behaviours, readings and
// guards as data, and the engine that runs any such data.
package logic

import (
	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/ring"
)

// Behaviour is what a mode does with the robot.
type Behaviour uint8

// The behaviours.
const (
	Stop          Behaviour = iota
	GoalSeeking             // toward the goal, v = min(v0, GoalGain·distance)
	WallFollowing           // along the wall on Side, at StandOff
	Avoidance               // weighted sum of returns
)

// SideRule says which side a wall-following mode keeps the wall on.
type SideRule uint8

// The side rules.
const (
	BetterSide SideRule = iota // by the tangent that points more toward the goal; kept when the same obstacle is met again soon
	KeepLeft                   // wall on the left
	KeepRight                  // wall on the right
)

// Ending says that reaching a mode ends the run.
type Ending uint8

// The endings.
const (
	GoesOn Ending = iota
	EndsArrived
	EndsGaveUp
)

// Mode is one mode. Fields that its behaviour does not use are zero.
type Mode struct {
	Name      string
	Behaviour Behaviour
	Ending    Ending
	Side      SideRule
	StandOff  float64 // wall-following: gap hull to wall to hold, m
	GoalGain  float64 // goal-seeking: 1/s; v = min(v0, GoalGain·goal distance)
	Speed     float64 // share of the scenario's driving speed v0 used in this mode, (0, 1]; 0 means 1
}

// Reading is something a guard can look at.
type Reading uint8

// The readings. Gaps are measured from the hull, m; angles rad; they come from the ring and the estimate alone.
const (
	GoalDistance Reading = iota // believed distance of the plan point to the goal
	GoalBearing                 // |angle| from the heading to the goal
	Nearest                     // smallest gap of all returns
	Ahead                       // smallest gap within a sector about the goal bearing
	Front                       // … about the heading
	Left                        // … about +90°
	Right                       // … about −90°
	FreeWay                     // F: how far the hull could go straight toward the goal
	BestDistance                // d_min: best goal distance since the obstacle was met
	Gain                        // d_min − (goal distance − F)
	Alignment                   // cosine between the way to the goal and the way out of the obstacles
	TimeInMode                  // s
	WayInMode                   // m, by the estimate
	Closed                      // 1 when the boundary has been followed back to the meeting point, else 0
	// (further readings may be added here by the logic's author: each with a phrase for sentences)
	NumReadings
)

// Relation compares a reading with its threshold.
type Relation uint8

// The relations.
const (
	Below Relation = iota
	AtLeast
)

// Condition holds when Reading Rel Threshold. With a Band it stays held until the reading
// has gone Band beyond the threshold on the other side. Condition memory starts afresh when the mode is entered.
// VersusReading, when ≥ 0 … (kept out unless needed): compare with another reading plus Threshold.
type Condition struct {
	Reading   Reading
	Rel       Relation
	Threshold float64
	Band      float64
	// Against, when HasAgainst, adds another reading to the threshold: Reading Rel (Against + Threshold).
	Against    Reading
	HasAgainst bool
}

// Transition leads from one mode (or any) to another when all its conditions
// have held for Hold seconds and the mode is at least MinTime old.
type Transition struct {
	From    int // mode; −1: any mode that does not end the run
	To      int
	When    []Condition
	MinTime float64 // s in the mode
	Hold    float64 // s
	Meet    bool    // an obstacle is met: d_min, meeting point and side start here
}

// Logic is a whole switching table. Transitions are in priority order.
type Logic struct {
	Name        string
	Modes       []Mode
	Start       int
	Transitions []Transition
	Sector      float64 // half width of the sectors of Ahead, Front, Left, Right, rad
}

// Side is where the followed wall is.
type Side int8

// The sides.
const (
	NoSide    Side = 0
	LeftSide  Side = 1
	RightSide Side = -1
)

// Input is all that a logic may look at.
type Input struct {
	Tick       int64
	Time       float64 // s
	Belief     drive.Estimate
	Goal       geom.Vec
	GoalRadius float64
	Scan       *ring.Scan
	Hull       float64 // hull radius, m
	Ahead      float64 // distance from the hull's centre to the plan point along the heading (0, or ℓ of the look-ahead rule), m
	Speed      float64 // v0, m/s
}

// Decision is the outcome of one control tick.
type Decision struct {
	U     geom.Vec // wanted velocity of the plan point, in the frame of the belief, |U| ≤ v0
	Mode  int
	Side  Side
	Fired int // transition that fired at this tick, −1: none
}

// Switch records one firing with everything that was looked at.
type Switch struct {
	Tick       int64
	Time       float64
	From, To   int
	Transition int
	Side       Side // after
	Readings   [NumReadings]float64
}

// Engine runs one logic. It knows nothing of any particular one.
type Engine struct { /* … */
}

// New returns an engine in the logic's start mode. The logic must be valid (Check).
func New(l *Logic) *Engine { panic("contract") }

// Reset is New keeping memory; CopyFrom makes e the same as src.
func (e *Engine) Reset(l *Logic)       { panic("contract") }
func (e *Engine) CopyFrom(src *Engine) { panic("contract") }

// Decide runs one control tick: readings, guards (at most one transition), behaviour. No allocation.
// A goal that has moved since the last call starts d_min and the meeting point afresh.
func (e *Engine) Decide(in *Input) Decision { panic("contract") }

// Readings returns the readings of the last Decide. LastSwitch the last firing; ok is false before the first.
func (e *Engine) Readings() *[NumReadings]float64  { panic("contract") }
func (e *Engine) LastSwitch() (s *Switch, ok bool) { panic("contract") }

// Mode, Side, Since: the current mode, side, and the time it was entered.
func (e *Engine) Mode() int      { panic("contract") }
func (e *Engine) Side() Side     { panic("contract") }
func (e *Engine) Since() float64 { panic("contract") }

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
func DefaultNumbers(hull, speed, goalRadius float64) Numbers { panic("contract") }

// Default returns the default logic as data.
func Default(n Numbers) *Logic { panic("contract") }

// Why says in one sentence why the switch fired, with its numbers: "something stood 0.47 m
// away on the way to the goal, nearer than 0.50 m".
func (l *Logic) Why(s *Switch) string { panic("contract") }

// Problem is one fault of a logic: the field path inside it ("transitions[2].when[0].threshold") and a sentence.
type Problem struct{ Path, Text string }

// Check returns every fault that keeps the logic from running: no modes, indices out of range, non-finite numbers, …
func (l *Logic) Check() []Problem { panic("contract") }

// Names of behaviours, readings, relations, sides as written in files ("wall_following", "goal_distance_m", …).
func (b Behaviour) String() string { panic("contract") }
func (r Reading) String() string   { panic("contract") }
