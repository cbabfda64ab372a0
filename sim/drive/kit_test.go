package drive_test

import (
	"math"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"
)

// perfect is a two-wheeled machine without imperfections that reckons.
func perfect() drive.Config {
	return drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, DeadReckoning: true}
}

// real is one with every imperfection.
func real() drive.Config {
	c := perfect()
	c.MaxWheelSpeed, c.MaxWheelAccel, c.Lag, c.DeadTime = 12, 30, 0.08, 0.02
	c.CountsPerTurn, c.RightScale, c.LeftScale, c.TrackScale, c.Slip = 1024, 1.002, 0.999, 1.01, 1e-5
	c.FixEvery, c.FixNoise, c.FixTurnNoise = 1, 0.02, 0.01
	return c
}

// rig is a machine on an empty floor.
type rig struct {
	*drive.Drive
	c    drive.Config
	pose geom.Pose
	tick int64
}

func newRig(c drive.Config, dt float64, start geom.Pose) *rig {
	return &rig{Drive: drive.New(c, dt, 1, start), c: c, pose: start}
}

// step does a tick of a run: reckon, actuate, move.
func (r *rig) step(cmd drive.Wheels) {
	r.Reckon(r.tick, r.pose)
	r.Actuate(cmd)
	r.pose = r.Move(r.pose)
	r.tick++
}

// steps does n ticks under the wheel speeds of v and omega, and a last reckoning.
func (r *rig) steps(n int, v, omega float64) {
	cmd := drive.WheelsFor(v, omega, r.c.WheelRadius, r.c.Track)
	for range n {
		r.step(cmd)
	}
	r.Reckon(r.tick, r.pose)
}

// mirror is the mirror image in the x axis.
func mirror(p geom.Pose) geom.Pose {
	return geom.Pose{Pos: geom.Vec{X: p.Pos.X, Y: -p.Pos.Y}, Theta: -p.Theta}
}

func believed(e drive.Estimate) geom.Pose {
	return geom.Pose{Pos: geom.Vec{X: e.X, Y: e.Y}, Theta: e.Theta}
}

// apart returns the largest difference of two poses in x, y and heading.
func apart(a, b geom.Pose) float64 {
	return max(math.Abs(a.Pos.X-b.Pos.X), math.Abs(a.Pos.Y-b.Pos.Y), math.Abs(a.Theta-b.Theta))
}

// wobble is a command that changes all the time and never repeats.
func wobble(i int) drive.Wheels {
	t := float64(i)
	return drive.Wheels{
		Left:  4 + 9*math.Sin(0.031*t) + 4*math.Sin(0.17*t+1),
		Right: 5 + 8*math.Cos(0.027*t) + 5*math.Sin(0.13*t),
	}
}

func within(t *testing.T, what string, got, want, limit float64) {
	t.Helper()
	if !(math.Abs(got-want) <= limit) {
		t.Errorf("%s = %.12g, want %.12g within %g", what, got, want, limit)
	}
}
