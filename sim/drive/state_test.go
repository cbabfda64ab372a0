package drive_test

import (
	"fmt"
	"math"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"

	"pgregory.net/rapid"
)

// run drives n ticks from tick k and returns all that can be seen of it.
func trace(r *rig, k, n int) string {
	s := ""
	for i := k; i < k+n; i++ {
		r.step(wobble(i))
		v, omega := r.Twist()
		s += fmt.Sprintln(r.pose, r.Estimate(), r.Turning(), v, omega, r.Saturated())
	}
	return s
}

func TestResetIsNew(t *testing.T) {
	for name, c := range map[string]drive.Config{"every imperfection": real(), "none": perfect()} {
		t.Run(name, func(t *testing.T) {
			used := newRig(real(), 0.01, geom.Pose{Theta: 2})
			trace(used, 0, 137)
			used.Reset(c, 0.005, 1, start)
			used.pose, used.tick, used.c = start, 0, c
			if got, want := trace(used, 0, 300), trace(newRig(c, 0.005, start), 0, 300); got != want {
				t.Error("a reset machine does not drive like a new one")
			}
		})
	}
}

func TestCopyGoesOnAlike(t *testing.T) {
	a := newRig(real(), 0.005, start)
	trace(a, 0, 333)
	b := newRig(perfect(), 0.005, start)
	b.CopyFrom(a.Drive)
	b.pose, b.tick = a.pose, a.tick
	if trace(a, 333, 300) != trace(b, 333, 300) {
		t.Error("the copy drives elsewhere")
	}
	// The copy shares nothing: what the one does, the other does not feel.
	c := newRig(real(), 0.005, start)
	c.CopyFrom(a.Drive)
	c.pose, c.tick = a.pose, a.tick
	want := trace(a, 633, 50)
	d := newRig(real(), 0.005, start)
	d.CopyFrom(c.Drive)
	d.pose, d.tick = c.pose, c.tick
	trace(d, 0, 50)
	if trace(c, 633, 50) != want {
		t.Error("two copies share their dead time")
	}
}

func TestTicksDoNotAllocate(t *testing.T) {
	r, other := newRig(real(), 0.005, start), newRig(real(), 0.005, start)
	i := 0
	for what, f := range map[string]func(){
		"tick":     func() { r.step(wobble(i)); i++ },
		"command":  func() { r.Command(0.1, 0.2) },
		"point":    func() { r.pose = r.MovePoint(r.pose, geom.Vec{X: 0.001}) },
		"readings": func() { r.Turning(); r.Twist(); r.Estimate(); r.Saturated() },
		"edits":    func() { r.SetLag(0.1); r.Carry(r.Estimate()) },
		"copy":     func() { other.CopyFrom(r.Drive) },
		"reset":    func() { r.Reset(r.c, 0.005, 2, start) },
	} {
		if n := testing.AllocsPerRun(200, f); n != 0 {
			t.Errorf("%s: %v allocations", what, n)
		}
	}
}

// Each imperfection, made smaller and smaller, goes over into none: the pose and
// the belief after a second and a half of driving approach those of the machine
// without it, at the order given or faster.
func TestImperfectionsAreContinuousAtZero(t *testing.T) {
	drives := func(c drive.Config) (pose, belief geom.Pose) {
		r := newRig(c, 0.005, start)
		for i := range 300 {
			r.step(wobble(i))
		}
		r.Reckon(r.tick, r.pose)
		return r.pose, believed(r.Estimate())
	}
	pose0, belief0 := drives(perfect())
	for name, with := range map[string]struct {
		set   func(c *drive.Config, size float64)
		order float64
	}{
		"lag":                {func(c *drive.Config, s float64) { c.Lag = s }, 1},
		"acceleration limit": {func(c *drive.Config, s float64) { c.MaxWheelAccel = 1 / s }, 1},
		"speed limit":        {func(c *drive.Config, s float64) { c.MaxWheelSpeed = 1 / s }, 1},
		"counts":             {func(c *drive.Config, s float64) { c.CountsPerTurn = int(1 / s) }, 1},
		"right radius":       {func(c *drive.Config, s float64) { c.RightScale = 1 + s }, 1},
		"left radius":        {func(c *drive.Config, s float64) { c.LeftScale = 1 - s }, 1},
		"track":              {func(c *drive.Config, s float64) { c.TrackScale = 1 + s }, 1},
		"slip":               {func(c *drive.Config, s float64) { c.Slip = s }, 0.5},
		"fix":                {func(c *drive.Config, s float64) { c.FixEvery, c.FixNoise = 0.5, s }, 1},
		"fix of heading":     {func(c *drive.Config, s float64) { c.FixEvery, c.FixTurnNoise = 0.5, s }, 1},
	} {
		t.Run(name, func(t *testing.T) {
			off := func(size float64) float64 {
				c := perfect()
				with.set(&c, size)
				pose, belief := drives(c)
				return max(apart(pose, pose0), apart(belief, belief0))
			}
			if off(0.05) == 0 && off(0.2) == 0 {
				t.Fatal("it changes nothing")
			}
			for size := 0.01; size > 1e-9; size /= 10 {
				if d := off(size); d > 40*math.Pow(size, with.order)+1e-12 {
					t.Errorf("size %g is %g off", size, d)
				}
			}
		})
	}
	t.Run("dead time", func(t *testing.T) {
		// In whole ticks: with the tick it goes to zero.
		late := func(dt float64, deadTime float64) geom.Pose {
			c := perfect()
			c.DeadTime = deadTime
			r := newRig(c, dt, geom.Pose{})
			r.steps(int(math.Round(1/dt)), 0.4, 0.5)
			return r.pose
		}
		for _, dt := range []float64{0.05, 0.01, 0.002, 0.0004} {
			within(t, "one tick late", apart(late(dt, dt), late(dt, 0)), 0, 0.51*dt)
			if late(dt, 0.49*dt) != late(dt, 0) {
				t.Error("less than half a tick is not none")
			}
		}
	})
}

// Commands and numbers within what sim admits never give anything but numbers.
func TestStaysFinite(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		pick := func(what string, v ...float64) float64 { return rapid.SampledFrom(v).Draw(t, what) }
		c := drive.Config{
			Model:         drive.Model(rapid.IntRange(0, 2).Draw(t, "model")),
			WheelRadius:   pick("wheel", 1e-4, 0.05, 100),
			Track:         pick("track", 1e-4, 0.3, 100),
			MaxWheelSpeed: pick("speed limit", 0, 1e-9, 14, 1e9),
			MaxWheelAccel: pick("acceleration limit", 0, 1e-9, 40, 1e9),
			Lag:           pick("lag", 0, 5e-324, 1e-300, 1e-9, 0.08, 1000),
			DeadTime:      pick("dead time", 0, 1e-300, 0.02, 0.5),
			DeadReckoning: rapid.Bool().Draw(t, "reckons"),
			CountsPerTurn: rapid.SampledFrom([]int{0, 1, 1024, math.MaxInt32}).Draw(t, "counts"),
			RightScale:    pick("right", 0, 1e-9, 1, 10),
			LeftScale:     pick("left", 0, 1e-9, 1, 10),
			TrackScale:    pick("track scale", 0, 1e-9, 1, 10),
			Slip:          pick("slip", 0, 1e-300, 1e-5, 1e9),
			FixEvery:      pick("fix", 0, 1e-300, 0.1, 1e9),
			FixNoise:      pick("fix noise", 0, 1e9),
			FixTurnNoise:  pick("fix turn noise", 0, 1e9),
		}
		r := newRig(c, pick("tick", 1e-4, 0.005, 0.1), start)
		cmds := rapid.SliceOfN(rapid.Float64Range(-1e6, 1e6), 2, 20).Draw(t, "commands")
		for i := range 60 {
			if i == 30 {
				r.SetLag(pick("later lag", 0, 0.1))
			}
			r.step(drive.Wheels{Left: cmds[i%len(cmds)], Right: cmds[(i*i+1)%len(cmds)]})
			v, omega := r.Twist()
			e := r.Estimate()
			for _, x := range []float64{r.pose.Pos.X, r.pose.Pos.Y, r.pose.Theta, e.X, e.Y, e.Theta, v, omega} {
				if math.IsNaN(x) || math.IsInf(x, 0) {
					t.Fatalf("tick %d: pose %v, belief %v, twist %v %v", i, r.pose, e, v, omega)
				}
			}
		}
	})
}
