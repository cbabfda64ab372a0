package steer

import (
	"math"

	"leeway/sim/geom"
)

// The functions of this file say how large the gain of the heading servo may be.
// All are about the error e of ω = k·e for a heading that stands still, small
// enough not to be wrapped. T is a period or a dead time.
//
//	             decays iff    never crosses zero iff
//	continuous   k > 0         always
//	sampled      kT < 2        kT ≤ 1      [SampledFactor]
//	 one late    kT < 1        kT ≤ 1/4    [LateModulus]
//	dead time    kT < π/2      kT ≤ 1/e    [DelayLimit, CalmDelay, DelayPole]
//	lag τ        k > 0         kτ ≤ 1/4    [LagDamping, Overshoot]

// SampledFactor returns what an error is multiplied by from one sample to the
// next when the servo acts every period (s) and holds in between: 1 − k·period.
func SampledFactor(k, period float64) float64 { return 1 - float64(k*period) }

// LateModulus returns the modulus of the slowest pole when the sampled servo acts
// one sample late, e(n+1) = e(n) − kT·e(n−1): the roots of z² − z + kT. The error
// shrinks by it each period (s) in the long run; below 1 it decays.
func LateModulus(k, period float64) float64 {
	g := float64(k * period)
	if g > 0.25 {
		return math.Sqrt(g) // a complex pair
	}
	return (1 + math.Sqrt(1-float64(4*g))) / 2
}

// DelayLimit returns the dead time (s) from which the servo of gain k (1/s) no
// longer settles, π/(2k), for ė(t) = −k·e(t − T). (Hayes, "Roots of the
// transcendental equation associated with a certain difference-differential
// equation", 1950.)
func DelayLimit(k float64) float64 { return math.Pi / (2 * k) }

// CalmDelay returns the largest dead time (s) with which the servo of gain k
// (1/s) settles without swinging past: 1/(e·k).
func CalmDelay(k float64) float64 { return 1 / (math.E * k) }

// DelayPole returns the dominant root s = decay + i·swing (1/s, rad/s) of
// s + k·e^(−sT) = 0 for a gain k (1/s) and a dead time T (s): in the long run the
// error goes like e^(decay·t), swinging if swing is not 0.
//
// With w = sT the equation is w·e^w = −kT. Up to kT = 1/e the dominant root is
// real and lies in [−1, 0]. Beyond, w = −b·cot b + i·b with b in (0, π) given by
// kT = b/sin b · e^(−b·cot b). Either is monotone and is bisected.
func DelayPole(k, deadTime float64) (decay, swing float64) {
	g := float64(k * deadTime)
	if deadTime == 0 || g == 0 {
		return -k, 0
	}
	if g <= 1/math.E {
		w := bisect(-1, 0, func(w float64) bool { return float64(w*geom.Exp(w)) < -g })
		return w / deadTime, 0
	}
	real := func(b float64) float64 {
		sin, cos := geom.Sincos(b)
		return float64(-b*cos) / sin
	}
	b := bisect(0, math.Pi, func(b float64) bool {
		sin, _ := geom.Sincos(b)
		return float64(b/sin*geom.Exp(real(b))) < g
	})
	return real(b) / deadTime, b / deadTime
}

// bisect returns where below goes from true to false between lo and hi, to the
// last bit or nearly so.
func bisect(lo, hi float64, below func(float64) bool) float64 {
	for range 100 {
		mid := lo + float64((hi-lo)/2)
		if mid == lo || mid == hi {
			break
		}
		if below(mid) {
			lo = mid
		} else {
			hi = mid
		}
	}
	return lo + float64((hi-lo)/2)
}

// LagDamping returns the damping ratio ζ = 1/(2√(kτ)) of the servo of gain k
// (1/s) through a first-order lag τ (s). From 1 on it does not overshoot.
func LagDamping(k, tau float64) float64 { return 1 / (2 * math.Sqrt(float64(k*tau))) }

// Overshoot returns the share of a step by which a second-order system of
// damping ratio zeta swings past it, e^(−πζ/√(1−ζ²)); 0 from ζ = 1 on.
func Overshoot(zeta float64) float64 {
	if !(zeta < 1) {
		return 0
	}
	return geom.Exp(-math.Pi * zeta / math.Sqrt(1-float64(zeta*zeta)))
}
