package sim

import (
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
	"leeway/sim/steer"
)

// Config says all there is to a run: a run is a pure function of it. SI units, radians.
type Config struct {
	Seed        uint64
	Tick        float64 // physics step, s
	DecideEvery int     // ticks between decisions

	Floor floor.Config
	Hull  float64 // hull radius, m
	Start geom.Pose
	Ring  ring.Config // its Period is the sensing period, in ticks
	Drive drive.Config
	Steer steer.Config
	Logic *logic.Logic
	Speed float64 // driving speed v0, m/s

	Goal       geom.Vec
	GoalRadius float64

	Asked     Asked
	OnContact OnContact
	Ideal     Ideal
	Edits     []Edit // in order of Tick
}

// Asked is what is asked of the run.
type Asked struct {
	Within   float64 // s; the run ends there
	Leeway   float64 // m
	Switches int     // at most; −1: not asked
}

// OnContact says what a touch does to the run.
type OnContact uint8

// What a touch does.
const (
	Scrape     OnContact = iota // the run goes on
	EndsTheRun                  // Status Struck
)

// Ideal is a set of idealisations, each a switch of its own.
type Ideal uint8

// The idealisations.
const (
	PointMotion    Ideal = 1 << iota // the robot goes wherever it is told
	NoWheelLimits                    // wheels of any speed and acceleration
	NoLag                            // no dead time, no lag
	AllRoundSight                    // a dense fan instead of the ring's beams
	NoiselessSight                   // exact ranges
	TruePosition                     // the robot knows its pose
)

// EditKind says what a person did.
type EditKind uint8

// The kinds of edit.
const (
	MoveGoal  EditKind = iota
	MoveRobot          // carried: the truth and the belief both
	MoveSolid
	MoveMover
	SetNumber
)

// Number names a number that can change in a running robot.
type Number uint8

// The numbers.
const (
	SpeedNumber Number = iota // Config.Speed
	LagNumber                 // Config.Drive.Lag
	NoiseNumber               // Config.Ring.NoiseBase
	NoiseGainNumber
	DropoutNumber
	GainNumber // Config.Steer.Gain
)

// Edit is one change by a person, due at the start of a tick.
type Edit struct {
	Tick   int64
	Kind   EditKind
	Index  int      // of the solid or mover
	Pos    geom.Vec // where to
	Number Number
	Value  float64
}

// Status is how a run stands or how it ended.
type Status uint8

// The statuses.
const (
	Running Status = iota
	Arrived
	TimedOut
	Struck
	GaveUp
	Missed   // it stopped where it believed the goal to be, and was not there
	Diverged // a number stopped being finite
)

// Outcome is the state of the measures of a run.
type Outcome struct {
	Status        Status
	Reason        string // one sentence
	Ticks         int64
	Time          float64 // s
	Leeway        float64 // least distance hull to anything solid so far, m; negative: pushed in
	LeewayAt      float64 // s
	LeewayPose    geom.Pose
	LeewayPoint   geom.Vec // the place on the solid
	Way           float64  // way driven by the hull's centre, m
	Switches      int
	Contacts      int     // touches (one for as long as the hull stays on the same thing)
	Saturated     float64 // share of the time that a wheel was at a limit
	EstimateError float64 // largest distance between belief and truth, m
	Hash          uint64
}
