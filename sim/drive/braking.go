package drive

import "math"

// The functions of this file are the arithmetic of stopping, for advice beside a
// design: what speed its own reactions and its own sight can stand. They describe
// the model of this package on ideal ground. Protective stops and separation
// distances are the business of ISO 13855, ISO 3691-4 and ISO 13482, and of
// competent people on site; nothing here replaces them.

// StoppingDistance returns the way (m) from speed v (m/s) to a standstill: v for
// the reaction time t (s), then braking at a (m/s²): vt + v²/(2a). See the
// caution at the head of this file.
func StoppingDistance(v, a, t float64) float64 {
	v = math.Abs(v)
	return float64(v*t) + float64(v*v)/(2*a)
}

// SafeSpeed returns the speed (m/s) whose StoppingDistance is reach (m), with
// braking at a (m/s²) after the reaction time t (s): a(−t + √(t² + 2·reach/a)),
// written so that it does not cancel. t is every latency together with one full
// sensing period and one control period ([WorstReaction]). Zero for no reach.
// See the caution at the head of this file.
func SafeSpeed(reach, a, t float64) float64 {
	if !(reach > 0 && a > 0) {
		return 0
	}
	return 2 * reach / (t + math.Sqrt(float64(t*t)+2*reach/a))
}

// WorstReaction returns the longest time (s) from something coming into sight to
// the brakes acting: one full sensing period, since it may come just after a
// look, then the latency of deciding and that of the actuators.
func WorstReaction(period, latency, actuation float64) float64 {
	return period + latency + actuation
}

// Overrun returns the way (m) that a robot at speed v (m/s) still makes after
// the command 0, through a dead time and a first-order lag (s), when no
// acceleration limit is met: v(deadTime + lag).
func Overrun(v, deadTime, lag float64) float64 {
	return float64(math.Abs(v) * (deadTime + lag))
}

// AdmissibleSpeed returns the speed from which braking at a ends just within
// dist, with no reaction time: √(2·dist·a). It serves for metres with m/s² and
// for radians with rad/s². (Fox, Burgard & Thrun, "The dynamic window approach to
// collision avoidance", 1997, eq. 14.) Zero for no distance. See the caution at
// the head of this file.
func AdmissibleSpeed(dist, a float64) float64 {
	return math.Sqrt(max(0, 2*dist*a))
}

// RestToRest returns the shortest time (s) for a move of dist (m) from rest to
// rest with speed at most v (m/s) and acceleration at most a (m/s²): dist/v + v/a
// when there is room to reach v, else 2√(dist/a).
func RestToRest(dist, v, a float64) float64 {
	dist = math.Abs(dist)
	if dist >= float64(v*v)/a {
		return dist/v + v/a
	}
	return 2 * math.Sqrt(dist/a)
}
