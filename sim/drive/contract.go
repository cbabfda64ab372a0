// Package drive is the machine between a wish and the ground: the three models of motion, the wheels' actuators, the encoders and dead reckoning.
package drive

import (
	"leeway/sim/chance"
	"leeway/sim/geom"
)

// Model is a model of motion.
type Model uint8

// The models, from the fiction to the machine.
const (
	Point     Model = iota // goes wherever it is told: ẋ = u, heading kept
	Unicycle               // ẋ = v cos θ, ẏ = v sin θ, θ̇ = ω, at once and without limit
	TwoWheels              // two driven wheels with actuators
)

// Config is the machine. SI units; angles and wheel turns in radians.
type Config struct {
	Model       Model
	WheelRadius float64 // nominal, m
	Track       float64 // nominal distance wheel to wheel, m

	// Actuators, each wheel alike; 0 switches the effect off (for limits: no limit).
	MaxWheelSpeed float64 // rad/s
	MaxWheelAccel float64 // rad/s²
	Lag           float64 // time constant of the first-order lag, s
	DeadTime      float64 // s, rounded to whole ticks

	// Position.
	DeadReckoning bool    // false: the estimate is the true pose
	CountsPerTurn int     // encoder counts per wheel turn; 0: no quantisation
	RightScale    float64 // true right wheel radius / nominal; 0 means 1
	LeftScale     float64 // likewise left
	TrackScale    float64 // true track / nominal; 0 means 1
	Slip          float64 // variance of a wheel's ground travel per metre it turns, m (m²/m)
	FixEvery      float64 // s between position fixes; 0: none
	FixNoise      float64 // standard deviation of a fix in x and in y, m
	FixTurnNoise  float64 // standard deviation of a fix in heading, rad
}

// Estimate is the pose that the robot believes in. It is a type of its own so
// that what a robot believes cannot be mixed up with where it is.
type Estimate struct {
	X, Y, Theta float64
}

// Wheels is a pair of wheel speeds or turns.
type Wheels struct{ Left, Right float64 }

// Drive is the state of one machine.
type Drive struct { /* … */
}

// New returns a machine at rest whose estimate is the start pose. tick is the physics step in seconds.
func New(c Config, tick float64, seed uint64, start geom.Pose) *Drive { panic("contract") }

// Reset puts d back to rest, as New, keeping its memory.
func (d *Drive) Reset(c Config, tick float64, seed uint64, start geom.Pose) { panic("contract") }

// CopyFrom makes d the same as src, keeping its memory.
func (d *Drive) CopyFrom(src *Drive) { panic("contract") }

// SetLag changes the lag of a running machine.
func (d *Drive) SetLag(tau float64) { panic("contract") }

// Actuate passes the commanded wheel speeds (rad/s) through dead time, speed
// and acceleration limit and lag for one tick. Two wheels only.
func (d *Drive) Actuate(cmd Wheels) { panic("contract") }

// Command gives the unicycle its (v, ω) for this tick. Unicycle only (equal to Actuate with every effect off).
func (d *Drive) Command(v, omega float64) { panic("contract") }

// Move returns the ground displacement of this tick from the true pose p: the pose
// after the exact arc with the true wheel radii, true track and slip. Contact is the caller's business.
func (d *Drive) Move(p geom.Pose) geom.Pose { panic("contract") }

// Reckon updates the estimate from the encoders by what the wheels turned in
// the last Move (they count on while the hull is blocked), and takes a position fix of the true
// pose when one is due at this tick.
func (d *Drive) Reckon(tick int64, truth geom.Pose) { panic("contract") }

// Estimate returns the believed pose.
func (d *Drive) Estimate() Estimate { panic("contract") }

// Carry sets the believed pose: a person picked the robot up and put it down.
func (d *Drive) Carry(e Estimate) { panic("contract") }

// Turning returns the actual wheel speeds, rad/s. Twist returns the actual (v, ω).
func (d *Drive) Turning() Wheels           { panic("contract") }
func (d *Drive) Twist() (v, omega float64) { panic("contract") }

// Saturated reports whether the last command met the wheel speed or acceleration limit.
func (d *Drive) Saturated() bool { panic("contract") }

// Ensure that streams are values.
var _ = chance.Stream{}
