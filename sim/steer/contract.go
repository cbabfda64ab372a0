// Package steer turns a wanted planar velocity into wheel speeds.
package steer

import (
	"leeway/sim/drive"
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

// The speed laws: |u|·max(0, cos e); |u|; 0 beyond TurnBeyond, else |u|.
const (
	CosineSpeed SpeedLaw = iota
	FullSpeed
	StopAndTurn
)

// Saturation says what gives way when a wheel would have to turn too fast.
type Saturation uint8

// The saturation rules.
const (
	KeepCurve Saturation = iota // scale both wheels alike
	KeepTurn                    // give up v first
	ClipEach                    // clip each wheel on its own
)

// Config is the way from u to the wheels.
type Config struct {
	Rule       Rule
	Gain       float64 // k of the heading servo, 1/s
	Speed      SpeedLaw
	TurnBeyond float64 // rad
	Ahead      float64 // ℓ of the look-ahead rule, m
	Saturation Saturation

	WheelRadius   float64 // nominal
	Track         float64 // nominal
	MaxWheelSpeed float64 // rad/s, 0: no limit
}

// Twist returns (v, ω) for the wanted velocity u, given in the same frame as the heading theta.
// A zero u gives (0, 0).
func (c *Config) Twist(u geom.Vec, theta float64) (v, omega float64) { panic("contract") }

// Wheels returns the wheel speeds (rad/s) for (v, ω), limited by the saturation rule, and whether they had to be.
func (c *Config) Wheels(v, omega float64) (w drive.Wheels, limited bool) { panic("contract") }

// Ceiling returns the largest |u| (m/s) that no heading can saturate under the look-ahead rule:
// v_wheel/√(1+(L/2ℓ)²). +Inf without a wheel limit.
func (c *Config) Ceiling() float64 { panic("contract") }
