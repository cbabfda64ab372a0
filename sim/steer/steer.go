// Package steer turns a wanted planar velocity into wheel speeds: the step from
// the point that a plan is made for to the machine that carries it out.
//
// [Config.Twist] applies a steering rule, u → (v, ω), and [Config.TwistOver] does so
// for a machine that holds (v, ω) for a tick; [Config.Wheels] turns (v, ω) into
// wheel speeds within the limit, giving up what the saturation rule says.
// All are functions of their arguments alone: what is remembered, is remembered
// by drive and logic.
//
// # The two rules
//
// The heading servo turns the heading toward u with a rate proportional to the
// error. It is the rule of thumb, and the robot leaves the way of the point
// robot while it turns. The look-ahead rule makes a point ℓ ahead of the axle move
// exactly with u (feedback linearisation: Siciliano et al., Robotics, 11.6; Canudas
// de Wit et al., Theory of Robot Control; Oriolo, De Luca & Vendittelli 2002), so
// the plan is for that point, and the axle is always exactly ℓ from a true point
// robot, as long as no wheel is asked for more than it has ([Config.Ceiling]).
//
// # Caveats
//
// Mirrored arguments give mirrored results, bit for bit: v the same, ω negative.
// The one tie, u straight behind, cannot be mirrored and is broken to the left.
// Sampling, dead time and lag bound the servo's gain; limits.go says how.
package steer

import (
	"math"

	"leeway/sim/geom"
)

// Rule is a steering rule.
type Rule uint8

// The steering rules.
const (
	HeadingServo Rule = iota // ω = k·wrap(θ_d − θ)
	LookAhead                // feedback linearisation about a point ahead of the axle
)

// SpeedLaw says how fast the heading servo drives while it turns.
type SpeedLaw uint8

// The speed laws, with e for the heading error: |u|·max(0, cos e); |u|; 0 beyond
// TurnBeyond, else |u|.
const (
	CosineSpeed SpeedLaw = iota
	FullSpeed
	StopAndTurn
)

// Config is the way from u to the wheels.
type Config struct {
	Rule       Rule
	Gain       float64 // k of the heading servo, 1/s
	Speed      SpeedLaw
	TurnBeyond float64 // rad
	Ahead      float64 // ℓ of the look-ahead rule, m, above 0
	Saturation Saturation

	WheelRadius   float64 // nominal, m
	Track         float64 // nominal, m
	MaxWheelSpeed float64 // rad/s, 0: no limit
}

// Twist returns v (m/s) and omega (rad/s) for the wanted velocity u (m/s), given
// in the same frame as the heading theta (rad, any number of turns).
// A zero u gives (0, 0).
//
// With e(θ) for the heading and e⊥(θ) for its left, the look-ahead rule is
//
//	v = u·e(θ),   ω = u·e⊥(θ)/ℓ
//
// and the heading servo ω = k·atan2(u·e⊥, u·e), which is k·wrap(arg u − θ)
// without the wrapping, with v by the speed law.
func (c *Config) Twist(u geom.Vec, theta float64) (v, omega float64) {
	if u == (geom.Vec{}) {
		return 0, 0
	}
	heading := geom.Heading(theta)
	along, aside := u.Dot(heading), heading.Cross(u)
	if c.Rule == LookAhead {
		return along, aside / c.Ahead
	}
	e := geom.Atan2(aside, along)
	omega = float64(c.Gain * e)
	switch c.Speed {
	case FullSpeed:
		v = u.Norm()
	case StopAndTurn:
		if math.Abs(e) <= c.TurnBeyond {
			v = u.Norm()
		}
	default:
		v = max(0, along) // |u| cos e
	}
	return v, omega
}
