package steer_test

import (
	"math"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/steer"
)

const (
	radius = 0.05
	track  = 0.3
)

func servo(k float64) steer.Config {
	return steer.Config{Rule: steer.HeadingServo, Gain: k, WheelRadius: radius, Track: track}
}

func ahead(l float64) steer.Config {
	return steer.Config{Rule: steer.LookAhead, Ahead: l, WheelRadius: radius, Track: track}
}

// loop closes the loop from the wanted velocity u, asked for at each tick's
// middle, over c and the machine m, from p for n ticks of dt seconds.
func loop(c steer.Config, m drive.Config, p geom.Pose, n int, dt float64, u func(t float64, p geom.Pose) geom.Vec) geom.Pose {
	m.WheelRadius, m.Track = c.WheelRadius, c.Track
	d := drive.New(m, dt, 1, p)
	for i := range n {
		w, _ := c.Wheels(c.Twist(u((float64(i)+0.5)*dt, p), p.Theta))
		d.Actuate(w)
		p = d.Move(p)
	}
	return p
}

// always wants one and the same velocity.
func always(u geom.Vec) func(float64, geom.Pose) geom.Vec {
	return func(float64, geom.Pose) geom.Vec { return u }
}

// limit extrapolates f, which errs in proportion to the step, to step zero from
// n and 2n steps, and checks on 4n that the error does fall that way.
func limit(t *testing.T, what string, n int, f func(n int) float64) float64 {
	t.Helper()
	a, b, c := f(n), f(2*n), f(4*n)
	if order := (a - b) / (b - c); math.Abs(order-2) > 0.1 {
		t.Errorf("%s: halving the step divides the error by %v, want 2", what, order)
	}
	return 2*c - b
}

func within(t *testing.T, what string, got, want, limit float64) {
	t.Helper()
	if !(math.Abs(got-want) <= limit) {
		t.Errorf("%s = %.12g, want %.12g within %g", what, got, want, limit)
	}
}
