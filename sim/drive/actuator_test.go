package drive_test

import (
	"math"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/truth"

	"pgregory.net/rapid"
)

func TestActuators(t *testing.T) {
	t.Run("K-08 linear systems: step through dead time and lag", func(t *testing.T) {
		// Exact at any tick that divides the dead time, so the order cannot show.
		for _, dt := range []float64{0.1, 0.005, 0.0025} {
			c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, Lag: 0.15, DeadTime: 0.1}
			r := newRig(c, dt, geom.Pose{})
			r.steps(int(math.Round(0.5/dt)), 0.4, 0)
			v, _ := r.Twist()
			truth.Close(t, "v", v, truth.Value(t, "K-08", "v"), 1e-12)
			truth.Close(t, "distance", r.pose.Pos.X, truth.Value(t, "K-08", "distance"), 1e-12)
		}
	})
	t.Run("K-09 derived: equal lags keep the circle", func(t *testing.T) {
		for _, dt := range []float64{0.1, 0.005} {
			c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, Lag: 0.2}
			r := newRig(c, dt, geom.Pose{})
			centre := geom.Vec{Y: 0.25}
			for range int(math.Round(2 / dt)) {
				r.step(drive.WheelsFor(0.2, 0.8, 0.05, 0.3))
				within(t, "distance from the centre", r.pose.Pos.Sub(centre).Norm(), 0.25, 1e-13)
			}
			poseClose(t, r.pose, truth.Values(t, "K-09", "pose"), 1e-11)
		}
	})
	t.Run("K-10 derived: acceleration limits bend the path", func(t *testing.T) {
		want := truth.Values(t, "K-10", "pose")
		off := func(dt float64) float64 {
			c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.1, MaxWheelAccel: 0.4 / 0.05}
			r := newRig(c, dt, geom.Pose{})
			for range int(math.Round(1 / dt)) {
				r.step(drive.Wheels{Left: 0.16 / 0.05, Right: 0.24 / 0.05})
				if r.tick == int64(math.Round(0.4/dt)) {
					within(t, "heading while both ramp", r.pose.Theta, 0, 1e-12)
				}
			}
			within(t, "θ", r.pose.Theta, want[2], 1e-12)
			return math.Hypot(r.pose.Pos.X-want[0], r.pose.Pos.Y-want[1])
		}
		coarse, fine, finer := off(0.02), off(0.01), off(0.005)
		within(t, "error at 5 ms", finer, 0, 1e-6) // asked: 1e-4
		within(t, "order 2: error 20 ms / 10 ms", coarse/fine, 4, 0.05)
		within(t, "order 2: error 10 ms / 5 ms", fine/finer, 4, 0.05)
	})
	t.Run("B-01 kinematics, driven: dead time as reaction, then braking", func(t *testing.T) {
		c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, MaxWheelAccel: 1.2 / 0.05, DeadTime: 0.25}
		r := newRig(c, 0.005, geom.Pose{})
		r.steps(1000, 0.8, 0)
		from := r.pose.Pos.X
		r.steps(300, 0, 0)
		truth.Close(t, "stopping distance", r.pose.Pos.X-from, truth.Value(t, "B-01", "d"), 1e-12)
		if v, _ := r.Twist(); v != 0 {
			t.Errorf("still at %v m/s", v)
		}
	})
	t.Run("B-02 derived, driven: the safe speed stops just within sight", func(t *testing.T) {
		v := drive.SafeSpeed(0.8-0.05, 0.5, 0.3)
		c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, MaxWheelAccel: 0.5 / 0.05, DeadTime: 0.3}
		r := newRig(c, 0.005, geom.Pose{})
		r.steps(1000, v, 0)
		from := r.pose.Pos.X
		r.steps(1000, 0, 0)
		within(t, "stopping distance", r.pose.Pos.X-from, 0.75, 1e-12)
	})
	t.Run("B-03 derived, driven: overrun through dead time and lag", func(t *testing.T) {
		c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, Lag: 0.2, DeadTime: 0.1}
		r := newRig(c, 0.005, geom.Pose{})
		r.steps(4000, 0.5, 0)
		from := r.pose.Pos.X
		r.steps(4000, 0, 0)
		truth.Close(t, "overrun", r.pose.Pos.X-from, truth.Value(t, "B-03", "d"), 1e-9)
	})
	t.Run("K-07 bang-bang closed form, driven", func(t *testing.T) {
		want := truth.Values(t, "K-07", "T")
		// Long: up to 0.3 m/s, command 0 in time, at rest after T at D.
		c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, MaxWheelSpeed: 0.3 / 0.05, MaxWheelAccel: 0.5 / 0.05}
		r := newRig(c, 0.005, geom.Pose{})
		r.steps(int(math.Round((want[0]-0.6)/0.005)), 99, 0)
		r.steps(120, 0, 0)
		within(t, "D long", r.pose.Pos.X, 1.2, 1e-11)
		v, _ := r.Twist()
		within(t, "speed at T", v, 0, 1e-12)
		// Short: full acceleration for half of T, then full braking.
		r = newRig(c, want[1]/200, geom.Pose{})
		r.steps(100, 99, 0)
		r.steps(100, 0, 0)
		within(t, "D short", r.pose.Pos.X, 0.1, 1e-12)
	})
}

// The whole chain at once against brute force: the differential equation of one
// wheel in steps a thousand times as small, explicit midpoint rule.
func TestChainAgainstBruteForce(t *testing.T) {
	const dt, parts = 0.005, 1000
	c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3,
		MaxWheelSpeed: 7, MaxWheelAccel: 60, Lag: 0.03, DeadTime: 0.015}
	r := newRig(c, dt, geom.Pose{})
	var followed, speed, turned float64
	distance := 0.0
	for i := range 400 {
		// Big steps (limits met), small ones (ramps that end within the tick), none.
		cmd := func(i int) float64 {
			if i < 0 {
				return 0
			}
			return 9*math.Sin(0.05*float64(i/7)) + 0.1*math.Sin(float64(i))
		}
		r.step(drive.Wheels{Left: cmd(i), Right: cmd(i)})
		target := max(-7, min(7, cmd(i-3)))
		h := dt / parts
		for range parts {
			next := followed + max(-60*h, min(60*h, target-followed))
			middle := (followed + next) / 2
			half := speed + h/2*(followed-speed)/0.03
			turned += h * half
			speed += h * (middle - half) / 0.03
			followed = next
		}
		distance = 0.05 * turned
		within(t, "speed", r.Turning().Left, speed, 2e-5)
		within(t, "distance", r.pose.Pos.X, distance, 1e-6)
		if t.Failed() {
			t.Fatalf("at tick %d", i)
		}
	}
	if math.Abs(distance) < 0.05 {
		t.Fatalf("the machine hardly moved: %v m", distance)
	}
}

func TestDeadTimeIsWholeTicks(t *testing.T) {
	for _, c := range []struct {
		deadTime float64
		ticks    int
	}{{0, 0}, {0.0024, 0}, {0.0026, 1}, {0.005, 1}, {0.1, 20}} {
		cfg := perfect()
		cfg.DeadTime = c.deadTime
		r := newRig(cfg, 0.005, geom.Pose{})
		n := 0
		for ; r.Turning() == (drive.Wheels{}); n++ {
			r.step(drive.Wheels{Left: 1, Right: 2})
		}
		if n != c.ticks+1 {
			t.Errorf("dead time %v s: first turned in tick %d, want %d", c.deadTime, n, c.ticks+1)
		}
	}
}

func TestUnicycleIsTwoWheelsWithEveryEffectOff(t *testing.T) {
	for name, c := range map[string]drive.Config{"perfect": perfect(), "on real ground": real()} {
		t.Run(name, func(t *testing.T) {
			c.MaxWheelSpeed, c.MaxWheelAccel, c.Lag, c.DeadTime = 0, 0, 0, 0
			two := newRig(c, 0.005, geom.Pose{Theta: 0.3})
			c.Model = drive.Unicycle
			one, commanded := newRig(c, 0.005, geom.Pose{Theta: 0.3}), newRig(c, 0.005, geom.Pose{Theta: 0.3})
			c.MaxWheelSpeed, c.MaxWheelAccel, c.Lag, c.DeadTime = 1, 1, 1, 1 // which it has not
			lagless := newRig(c, 0.005, geom.Pose{Theta: 0.3})
			lagless.SetLag(3)
			for i := range 2000 {
				v, omega := 0.4*math.Sin(float64(i)/50), 2*math.Cos(float64(i)/31)
				cmd := drive.WheelsFor(v, omega, c.WheelRadius, c.Track)
				two.step(cmd)
				one.step(cmd)
				lagless.step(cmd)
				commanded.Reckon(commanded.tick, commanded.pose)
				commanded.Command(v, omega)
				commanded.pose = commanded.Move(commanded.pose)
				commanded.tick++
				for who, r := range map[string]*rig{"unicycle": one, "unicycle by Command": commanded, "unicycle with limits": lagless} {
					if r.pose != two.pose || r.Estimate() != two.Estimate() || r.Turning() != two.Turning() || r.Saturated() {
						t.Fatalf("tick %d: %s at %v, two wheels at %v", i, who, r.pose, two.pose)
					}
				}
			}
		})
	}
}

func TestSaturated(t *testing.T) {
	c := perfect()
	c.MaxWheelSpeed, c.MaxWheelAccel = 10, 100 // 0.5 rad/s a tick
	r := newRig(c, 0.005, geom.Pose{})
	for i, s := range []struct {
		left, right float64
		want        bool
		why         string
	}{
		{0, 0, false, "at rest"},
		{0.5, 0.4, false, "just reached within the tick"},
		{1.1, 0.4, true, "acceleration, left"},
		{1.1, 0.4, false, "reached"},
		{1.1, -0.3, true, "acceleration, right"},
		{1.1, -0.3, false, "reached"},
	} {
		r.step(drive.Wheels{Left: s.left, Right: s.right})
		if r.Saturated() != s.want {
			t.Errorf("step %d (%s): saturated = %v", i, s.why, r.Saturated())
		}
	}
	for range 100 {
		r.step(drive.Wheels{Left: 10, Right: -10})
	}
	if r.Saturated() {
		t.Error("saturated at the limit that it may turn at")
	}
	r.step(drive.Wheels{Left: 10, Right: -10.001})
	if !r.Saturated() {
		t.Error("not saturated above the speed limit")
	}
	within(t, "speed", r.Turning().Right, -10, 0)
}

func TestLimitsHold(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := perfect()
		c.MaxWheelSpeed = rapid.Float64Range(0.1, 20).Draw(t, "speed limit")
		c.MaxWheelAccel = rapid.Float64Range(1, 1000).Draw(t, "acceleration limit")
		c.Lag = rapid.SampledFrom([]float64{0, 1e-9, 0.001, 0.05, 1, 1000}).Draw(t, "lag")
		c.DeadTime = rapid.SampledFrom([]float64{0, 0.02}).Draw(t, "dead time")
		r := newRig(c, 0.005, geom.Pose{})
		cmds := rapid.SliceOfN(rapid.Float64Range(-30, 30), 1, 80).Draw(t, "commands")
		before := r.Turning().Left
		for _, cmd := range cmds {
			r.step(drive.Wheels{Left: cmd, Right: cmd})
			now := r.Turning().Left
			if math.Abs(now) > c.MaxWheelSpeed*(1+1e-12) {
				t.Fatalf("turns at %v", now)
			}
			if math.Abs(now-before) > c.MaxWheelAccel*0.005*(1+1e-9)+1e-12 {
				t.Fatalf("from %v to %v within a tick", before, now)
			}
			before = now
		}
	})
}

// A change of lag goes on from the speeds that the wheels have.
func TestSetLag(t *testing.T) {
	c := perfect()
	c.Lag = 0.2
	r := newRig(c, 0.005, geom.Pose{})
	r.steps(40, 0.4, 0) // one time constant
	v, _ := r.Twist()
	within(t, "v after 0.2 s", v, 0.4*(1-math.Exp(-1)), 1e-12)
	r.SetLag(0.1)
	r.steps(20, 0.4, 0)
	v, _ = r.Twist()
	within(t, "v another time constant later", v, 0.4*(1-math.Exp(-2)), 1e-12)
	r.SetLag(0)
	r.steps(1, 0.4, 0)
	v, _ = r.Twist()
	within(t, "v without lag", v, 0.4, 1e-15)
}
