package steer_test

import (
	"math"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/steer"

	"pgregory.net/rapid"
)

// Held over a tick of any length, the look-ahead rule moves its point by u·dt
// exactly, on the exact arc of the drive.
func TestSampledLookAheadIsExact(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		num := func(name string, lo, hi float64) float64 { return rapid.Float64Range(lo, hi).Draw(t, name) }
		c := steer.Config{Rule: steer.LookAhead, Ahead: num("ahead", 0.02, 0.5)}
		dt, theta := num("dt", 1e-4, 0.1), num("theta", -7, 7)
		u := geom.Heading(num("direction", -3, 3)).Scale(num("speed", 0, 1))
		d := drive.New(drive.Config{Model: drive.Unicycle, WheelRadius: 0.05, Track: 0.3}, dt, 1, geom.Pose{})
		v, omega := c.TwistOver(u, theta, dt)
		d.Command(v, omega)
		from := geom.Pose{Theta: theta}
		to := d.Move(from)
		point := func(p geom.Pose) geom.Vec { return p.Pos.Add(geom.Heading(p.Theta).Scale(c.Ahead)) }
		off := point(to).Sub(point(from)).Sub(u.Scale(dt)).Norm()
		if off > 1e-14 {
			t.Fatalf("the point ahead misses u·dt by %g m", off)
		}
	})
}

// It tends to the continuous rule, with an error of first order.
func TestSampledLookAheadTendsToTheContinuousRule(t *testing.T) {
	c := steer.Config{Rule: steer.LookAhead, Ahead: 0.1}
	u, theta := geom.Vec{X: 0.2, Y: 0.1}, 0.5
	v, w := c.Twist(u, theta)
	last := math.Inf(1)
	for _, dt := range []float64{0.04, 0.02, 0.01, 0.005} {
		sv, sw := c.TwistOver(u, theta, dt)
		off := math.Abs(sv-v) + math.Abs(sw-w)
		if f := last / off; !math.IsInf(last, 1) && (f < 1.9 || f > 2.1) {
			t.Errorf("halving dt to %g divides the difference by %g", dt, f)
		}
		last = off
	}
	servo := steer.Config{Gain: 3}
	if a, b := servo.TwistOver(u, theta, 0.01); true {
		if x, y := servo.Twist(u, theta); a != x || b != y {
			t.Error("the heading servo is another when it is held")
		}
	}
}
