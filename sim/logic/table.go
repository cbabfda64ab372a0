package logic

// Behaviour is what a mode does with the robot.
type Behaviour uint8

// The behaviours.
const (
	Stop          Behaviour = iota // stands still
	GoalSeeking                    // toward the goal, v = min(v0, GoalGain·distance)
	WallFollowing                  // along the wall on Side, at StandOff
	Avoidance                      // away from near returns, by a weighted sum; and on along a wall that is on a side
	numBehaviours
)

// SideRule says which side a wall-following mode keeps the wall on.
type SideRule uint8

// The side rules.
const (
	BetterSide SideRule = iota // by the way along the wall that points more toward the goal; kept when the same obstacle is met again soon
	KeepLeft                   // wall on the left
	KeepRight                  // wall on the right
	numSideRules
)

// Ending says that reaching a mode ends the run.
type Ending uint8

// The endings.
const (
	GoesOn Ending = iota
	EndsArrived
	EndsGaveUp
	numEndings
)

// Mode is one mode. Fields that its behaviour does not use are zero.
type Mode struct {
	Name      string
	Behaviour Behaviour
	Ending    Ending
	Side      SideRule
	// StandOff is a gap from the hull, m. Wall-following holds it from the wall.
	// Goal-seeking keeps it from what it passes, where a small turn is enough for
	// that. Avoidance counts the returns that are nearer.
	StandOff float64
	GoalGain float64 // goal-seeking: 1/s; v = min(v0, GoalGain·goal distance); 0 means no slowing down
	Speed    float64 // share of the driving speed v0 used in this mode, (0, 1]; 0 means 1
}

// share returns the share of v0 that the mode drives at.
func (m *Mode) share() float64 {
	if m.Speed == 0 {
		return 1
	}
	return m.Speed
}

// Reading is something a guard can look at.
type Reading uint8

// The readings. Gaps are measured from the hull, in metres, and are the sight
// limit where nothing is in sight; all come from the ring and the estimate alone.
const (
	GoalDistance     Reading = iota // believed distance of the plan point to the goal, m
	GoalBearing                     // |angle| from the heading to the goal, rad
	Nearest                         // smallest gap of all returns
	Ahead                           // smallest gap of what stands in the hull's way straight to the goal
	Front                           // smallest gap in the sector about the heading
	Left                            // … about +90°
	Right                           // … about −90°
	FreeWay                         // F: how far the hull could go straight toward the goal, at most the goal distance
	BestDistance                    // d_min: best goal distance since the obstacle was met, m
	Gain                            // d_min − (goal distance − F), m
	Alignment                       // cosine between the way to the goal and the way out of the obstacles
	TimeInMode                      // s
	WayInMode                       // way driven in the mode by the estimate, m
	Closed                          // 1 when the boundary has been followed back to where it was met, else 0
	MeetDistance                    // goal distance where the obstacle was met, m
	TimeSinceMeeting                // time since the obstacle was met, s
	LineOffset                      // distance from the straight line between where the goal was set out for and the goal, m
	NumReadings
)

// Relation compares a reading with its threshold.
type Relation uint8

// The relations.
const (
	Below Relation = iota
	AtLeast
	numRelations
)

// Condition holds when Reading Rel Threshold. With a Band it stays held until
// the reading has gone Band beyond the threshold on the other side. The memory
// of a condition starts afresh when a mode is entered.
type Condition struct {
	Reading   Reading
	Rel       Relation
	Threshold float64
	Band      float64
	// Against, when HasAgainst, adds another reading to the threshold: Reading Rel (Against + Threshold).
	Against    Reading
	HasAgainst bool
}

// bound returns the value that the reading is compared with.
func (c *Condition) bound(r *[NumReadings]float64) float64 {
	if c.HasAgainst {
		return r[c.Against] + c.Threshold
	}
	return c.Threshold
}

// holds reports whether the condition holds for the readings, given whether it
// held at the last look.
func (c *Condition) holds(r *[NumReadings]float64, held bool) bool {
	b := c.bound(r)
	if c.Rel == Below {
		if held {
			b += c.Band
		}
		return r[c.Reading] < b
	}
	if held {
		b -= c.Band
	}
	return r[c.Reading] >= b
}

// Transition leads from one mode (or any) to another when all its conditions
// have held for Hold seconds and the mode is at least MinTime old.
type Transition struct {
	From    int // mode; AnyMode: every mode that does not end the run, but To itself
	To      int
	When    []Condition
	MinTime float64 // s in the mode
	Hold    float64 // s
	Meet    bool    // an obstacle is met: d_min, meeting point and side start here (see Engine)
}

// AnyMode as Transition.From stands for every mode that does not end the run.
const AnyMode = -1

// Logic is a whole switching table. Transitions are in priority order.
type Logic struct {
	Name        string
	Modes       []Mode
	Start       int
	Transitions []Transition
	Sector      float64 // half width of the sectors of Front, Left and Right, rad
	Margin      float64 // least clearance on either side of the hull that a way must have to count as free, m
}

// leaves reports whether transition t can fire in the given mode.
func (l *Logic) leaves(t *Transition, mode int) bool {
	if l.Modes[mode].Ending != GoesOn {
		return false
	}
	return t.From == mode || t.From == AnyMode && t.To != mode
}

// Side is where the followed wall is.
type Side int8

// The sides.
const (
	NoSide    Side = 0
	LeftSide  Side = 1
	RightSide Side = -1
)
