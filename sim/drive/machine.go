// Package drive is the machine between a wish and the ground: three models of
// motion, the actuators of the wheels, the encoders and dead reckoning.
//
// A [Drive] is stepped by three calls a tick. [Drive.Actuate] passes the
// commanded wheel speeds through the actuators and so settles how far each
// wheel turns. [Drive.Move] says where that takes the robot from its true pose,
// were nothing in the way. [Drive.Reckon], early in the next tick, lets the
// robot count its wheels and work out where it believes itself to be.
//
// # The actuator of a wheel
//
// A command passes dead time, speed limit, acceleration limit and first-order
// lag, in this order; zero switches an effect off. Commands are constant over a
// tick, so what each wheel turns is known in closed form, and it is integrated
// exactly: neither the speed of a wheel nor its way depends on the size of the
// tick, as long as dead time and changes of command fall on whole ticks. The
// pose moves along the arc of the mean speeds of the tick. That is exact while
// the curvature stands still, and of second order in the tick where it changes.
//
// # The same arithmetic for truth and belief
//
// Truth and belief go through one function, [Arc], with the travel of each wheel
// found by one multiplication. A machine without imperfections therefore
// believes exactly, to the last bit, the pose that it has, until something stops
// its hull. For the same reason a mirrored machine under mirrored commands is
// mirrored to the last bit.
//
// # Caveats
//
// Headings are not wrapped, in truth and in belief: they count whole turns, and
// a mirrored heading is just the negative one. Wrap differences of them.
//
// There is no inertia of the body, no slope and no side slip. The functions in
// braking.go are arithmetic about this model, not a safety assessment.
package drive

import "leeway/sim/geom"

// Model is a model of motion.
type Model uint8

// The models, from the fiction to the machine.
const (
	Point     Model = iota // goes wherever it is told: ẋ = u, heading kept
	Unicycle               // ẋ = v cos θ, ẏ = v sin θ, θ̇ = ω, at once and without limit
	TwoWheels              // two driven wheels with actuators
)

// Config is the machine. SI units; angles and wheel turns in radians.
//
// The unicycle is the two-wheeled machine with every actuator effect off, to the
// last bit; what it stands on, its wheels' true sizes, their slip and its
// encoders, it has too. The point has no wheels: of the imperfections only the
// noise of a position fix applies to it.
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
	FixEvery      float64 // s between position fixes, rounded to whole ticks; 0: none
	FixNoise      float64 // standard deviation of a fix in x and in y, m
	FixTurnNoise  float64 // standard deviation of a fix in heading, rad
}

// Estimate is the pose that the robot believes in. It is a type of its own so
// that what a robot believes cannot be mixed up with where it is. Theta counts
// whole turns, as the true heading does.
type Estimate struct {
	X, Y, Theta float64
}

func estimateOf(p geom.Pose) Estimate { return Estimate{p.Pos.X, p.Pos.Y, p.Theta} }

func (e Estimate) pose() geom.Pose { return geom.Pose{Pos: geom.Vec{X: e.X, Y: e.Y}, Theta: e.Theta} }

// Wheels is a pair of wheel speeds or turns.
type Wheels struct{ Left, Right float64 }

// WheelsFor returns the wheel speeds (rad/s) at which a machine with this wheel
// radius and track (m) drives at v (m/s) and turns at omega (rad/s, left
// positive): (v ∓ ω·track/2)/radius.
func WheelsFor(v, omega, radius, track float64) Wheels {
	half := float64(omega * track / 2)
	return Wheels{Left: (v - half) / radius, Right: (v + half) / radius}
}

// Twist returns the speed v (m/s) and turning rate omega (rad/s) of a machine
// with this wheel radius and track (m) whose wheels turn at w: the inverse of
// [WheelsFor].
func (w Wheels) Twist(radius, track float64) (v, omega float64) {
	return body(float64(w.Left*radius), float64(w.Right*radius), track)
}

// body returns the motion of the axle's middle for those of its ends: along
// the heading, and turning left.
func body(left, right, track float64) (along, turning float64) {
	return (left + right) / 2, (right - left) / track
}
