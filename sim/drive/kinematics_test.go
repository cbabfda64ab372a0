package drive_test

import (
	"math"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/truth"

	"pgregory.net/rapid"
)

// poseClose compares a pose with three published numbers.
func poseClose(t *testing.T, got geom.Pose, want []float64, rel float64) {
	t.Helper()
	truth.Close(t, "x", got.Pos.X, want[0], rel)
	truth.Close(t, "y", got.Pos.Y, want[1], rel)
	truth.Close(t, "θ", got.Theta, want[2], rel)
}

func TestKinematics(t *testing.T) {
	t.Run("K-01 Dudek & Jenkin; Siegwart & Nourbakhsh", func(t *testing.T) {
		for _, dt := range []float64{1.5, 0.005} { // an arc is exact in one tick and in 300
			c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.02, Track: 0.10}
			r := newRig(c, dt, geom.Pose{})
			for range int(math.Round(1.5 / dt)) {
				r.step(drive.Wheels{Right: 12, Left: 8})
			}
			v, omega := r.Twist()
			truth.Close(t, "v", v, truth.Value(t, "K-01", "v"), 1e-12)
			truth.Close(t, "ω", omega, truth.Value(t, "K-01", "ω"), 1e-12)
			truth.Close(t, "radius", v/omega, truth.Value(t, "K-01", "R_icc"), 1e-12)
			poseClose(t, r.pose, truth.Values(t, "K-01", "pose"), 1e-12)
		}
	})
	t.Run("K-02 Thrun, Burgard & Fox, Probabilistic Robotics, 5.3", func(t *testing.T) {
		for _, dt := range []float64{2, 0.005} {
			start := geom.Pose{Pos: geom.Vec{X: 1, Y: -0.5}, Theta: 2}
			r := newRig(drive.Config{Model: drive.Unicycle, WheelRadius: 0.05, Track: 0.3}, dt, start)
			for range int(math.Round(2 / dt)) {
				r.Command(0.3, -0.7)
				r.pose = r.Move(r.pose)
			}
			poseClose(t, r.pose, truth.Values(t, "K-02", "pose"), 1e-11)
		}
	})
	t.Run("K-03 algebra: the straight line as a limit", func(t *testing.T) {
		start := geom.Pose{Theta: math.Pi / 6}
		x, y := truth.Value(t, "K-03", "x"), truth.Value(t, "K-03", "y")
		for _, omega := range []float64{1e-12, -1e-12, 1e-300, 5e-324, 0, 1e-15} {
			p := drive.Arc(start, 0.4*3, omega*3)
			truth.Close(t, "x", p.Pos.X, x, 1e-11)
			truth.Close(t, "y", p.Pos.Y, y, 1e-11)
		}
		r := newRig(drive.Config{Model: drive.Unicycle, WheelRadius: 0.05, Track: 0.3}, 0.005, start)
		r.steps(600, 0.4, 1e-12)
		truth.Close(t, "x in 600 ticks", r.pose.Pos.X, x, 1e-11)
		truth.Close(t, "y in 600 ticks", r.pose.Pos.Y, y, 1e-11)
	})
	t.Run("K-04 algebra: a turn on the spot", func(t *testing.T) {
		c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.04, Track: 0.25}
		r := newRig(c, 0.005, geom.Pose{Pos: geom.Vec{X: 0.7, Y: 0.2}, Theta: 3})
		for range 400 {
			r.step(drive.Wheels{Right: 0.1 / 0.04, Left: -0.1 / 0.04})
		}
		if r.pose.Pos.X != truth.Value(t, "K-04", "x") || r.pose.Pos.Y != truth.Value(t, "K-04", "y") {
			t.Errorf("the place moved to %v", r.pose.Pos)
		}
		truth.Close(t, "θ", r.pose.Theta, truth.Value(t, "K-04", "θ unwrapped"), 1e-12)
		truth.Close(t, "wrapped", geom.Wrap(r.pose.Theta), truth.Value(t, "K-04", "θ wrapped"), 1e-12)
	})
	t.Run("K-05 derived: one-step integrators against the exact arc", func(t *testing.T) {
		errors := func(n int) (euler, midpoint, rk4 float64) {
			const v, omega, span = 0.5, 1.0, 2.0
			r := newRig(drive.Config{Model: drive.Unicycle, WheelRadius: 0.05, Track: 0.3}, span/float64(n), geom.Pose{})
			r.steps(n, v, omega)
			e, m, k := integrate(n, v, omega, span)
			return e.Sub(r.pose.Pos).Norm(), m.Sub(r.pose.Pos).Norm(), k.Sub(r.pose.Pos).Norm()
		}
		e, m, k := errors(20)
		truth.Close(t, "Euler", e, truth.Value(t, "K-05", "Euler"), 1e-9)
		truth.Close(t, "midpoint", m, truth.Value(t, "K-05", "midpoint"), 1e-9)
		truth.Close(t, "RK4", k, truth.Value(t, "K-05", "RK4"), 1e-5)
		e2, m2, k2 := errors(40)
		want := truth.Values(t, "K-05", "factors")
		truth.Close(t, "Euler's factor", e/e2, want[0], 1e-4)
		truth.Close(t, "midpoint's factor", m/m2, want[1], 1e-4)
		truth.Close(t, "RK4's factor", k/k2, want[2], 1e-4)
	})
}

// integrate drives (v, omega) for span seconds in n steps of three textbook
// integrators, none of them the product's.
func integrate(n int, v, omega, span float64) (euler, midpoint, rk4 geom.Vec) {
	dt := span / float64(n)
	f := func(theta float64) geom.Vec { return geom.Vec{X: v * math.Cos(theta), Y: v * math.Sin(theta)} }
	for i := range n {
		theta := omega * dt * float64(i)
		first, middle, last := f(theta), f(theta+omega*dt/2), f(theta+omega*dt)
		euler = euler.AddScaled(dt, first)
		midpoint = midpoint.AddScaled(dt, middle)
		rk4 = rk4.AddScaled(dt/6, first.Add(middle.Scale(4)).Add(last))
	}
	return euler, midpoint, rk4
}

// The arc against the textbook form with a radius, where that does not cancel,
// and across the place where the series takes over.
func TestArcIsTheCircle(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := geom.Pose{
			Pos:   geom.Vec{X: rapid.Float64Range(-20, 20).Draw(t, "x"), Y: rapid.Float64Range(-20, 20).Draw(t, "y")},
			Theta: rapid.Float64Range(-50, 50).Draw(t, "θ"),
		}
		travel := rapid.Float64Range(-5, 5).Draw(t, "travel")
		turn := rapid.Float64Range(0.01, 12).Draw(t, "turn")
		if rapid.Bool().Draw(t, "right") {
			turn = -turn
		}
		got := drive.Arc(p, travel, turn)
		radius := travel / turn
		want := geom.Pose{Pos: geom.Vec{
			X: p.Pos.X + radius*(math.Sin(p.Theta+turn)-math.Sin(p.Theta)),
			Y: p.Pos.Y - radius*(math.Cos(p.Theta+turn)-math.Cos(p.Theta)),
		}, Theta: p.Theta + turn}
		if d := apart(got, want); d > 1e-11 {
			t.Fatalf("off by %g: %v, want %v", d, got, want)
		}
	})
	// sin(x)/x on both sides of the seam, and far from it, through the chord.
	for _, half := range []float64{1e-9, 1e-4, 0.01, 0.1, 0.1249999, 0.125, 0.1250001, 1, 3, 10} {
		p := drive.Arc(geom.Pose{Theta: -half}, 1, 2*half) // the chord lies along x
		within(t, "chord", p.Pos.X, math.Sin(half)/half, 2e-16)
	}
}

// An arc in many parts is the same as in one, and driven back it ends where it began.
func TestArcsAddUp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		travel := rapid.Float64Range(-3, 3).Draw(t, "travel")
		turn := rapid.Float64Range(-7, 7).Draw(t, "turn")
		n := rapid.IntRange(1, 200).Draw(t, "parts")
		start := geom.Pose{Pos: geom.Vec{X: 1, Y: 2}, Theta: rapid.Float64Range(-4, 4).Draw(t, "θ")}
		p := start
		for range n {
			p = drive.Arc(p, travel/float64(n), turn/float64(n))
		}
		if d := apart(p, drive.Arc(start, travel, turn)); d > 1e-12 {
			t.Fatalf("in %d parts it ends %g elsewhere", n, d)
		}
		if d := apart(drive.Arc(p, -travel, -turn), start); d > 1e-12 {
			t.Fatalf("there and back is %g off", d)
		}
	})
}

func TestTwistAndWheelsAreInverse(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := rapid.Float64Range(-3, 3).Draw(t, "v")
		omega := rapid.Float64Range(-9, 9).Draw(t, "ω")
		radius := rapid.Float64Range(0.01, 0.3).Draw(t, "radius")
		track := rapid.Float64Range(0.05, 1).Draw(t, "track")
		w := drive.WheelsFor(v, omega, radius, track)
		v2, omega2 := w.Twist(radius, track)
		if math.Abs(v-v2) > 1e-14 || math.Abs(omega-omega2) > 1e-13 {
			t.Fatalf("(%v, %v) → %v → (%v, %v)", v, omega, w, v2, omega2)
		}
		if m := drive.WheelsFor(v, -omega, radius, track); m != (drive.Wheels{Left: w.Right, Right: w.Left}) {
			t.Fatalf("mirrored twist gives %v, not %v swapped", m, w)
		}
	})
}
