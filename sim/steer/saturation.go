package steer

import (
	"math"

	"leeway/sim/drive"
)

// Saturation says what gives way when a wheel would have to turn too fast.
//
// What the wheels can do is a diamond, |v| + |ω|·track/2 ≤ v_max (Balkcom & Mason
// 2002). Each rule brings (v, ω) into it, and leaves it alone when it is inside.
type Saturation uint8

// The saturation rules.
const (
	KeepCurve Saturation = iota // scale both wheels alike
	KeepTurn                    // give up v first
	ClipEach                    // clip each wheel on its own
)

// Wheels returns the wheel speeds (rad/s) for v (m/s) and omega (rad/s), limited
// by the saturation rule, and whether they had to be.
func (c *Config) Wheels(v, omega float64) (w drive.Wheels, limited bool) {
	w = drive.WheelsFor(v, omega, c.WheelRadius, c.Track)
	most := c.MaxWheelSpeed
	faster := max(math.Abs(w.Left), math.Abs(w.Right))
	if most == 0 || faster <= most {
		return w, false
	}
	switch c.Saturation {
	case KeepTurn:
		turn := clip(float64(omega*c.Track/2)/c.WheelRadius, most)
		ahead := clip(v/c.WheelRadius, most-math.Abs(turn))
		w = drive.Wheels{Left: clip(ahead-turn, most), Right: clip(ahead+turn, most)}
	case ClipEach:
		w = drive.Wheels{Left: clip(w.Left, most), Right: clip(w.Right, most)}
	default:
		// In this order the faster wheel comes out at the limit exactly.
		w = drive.Wheels{Left: most * (w.Left / faster), Right: most * (w.Right / faster)}
	}
	return w, true
}

// clip brings x into [−most, most].
func clip(x, most float64) float64 { return max(-most, min(most, x)) }

// Ceiling returns the largest |u| (m/s) that no heading can saturate under the
// look-ahead rule: v_wheel/√(1 + (track/2ℓ)²), with v_wheel for the ground speed of
// a wheel at its limit. Below it the axle stays exactly ℓ from a true point
// robot; above it there is a heading at which it does not. +Inf without a wheel
// limit.
func (c *Config) Ceiling() float64 {
	if c.MaxWheelSpeed == 0 {
		return math.Inf(1)
	}
	q := c.Track / (2 * c.Ahead)
	return float64(c.MaxWheelSpeed*c.WheelRadius) / math.Sqrt(1+float64(q*q))
}
