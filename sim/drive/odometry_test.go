package drive_test

import (
	"fmt"
	"math"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/truth"

	"pgregory.net/rapid"
)

var start = geom.Pose{Pos: geom.Vec{X: 1.3, Y: -0.7}, Theta: 0.4}

// Truth and belief go through the same arithmetic.
func TestPerfectMachineBelievesTheTruthToTheBit(t *testing.T) {
	limited := perfect()
	limited.MaxWheelSpeed, limited.MaxWheelAccel, limited.Lag, limited.DeadTime = 8, 40, 0.1, 0.02
	ones := perfect()
	ones.RightScale, ones.LeftScale, ones.TrackScale = 1, 1, 1
	exactFixes := limited
	exactFixes.FixEvery = 0.05
	known := real()
	known.DeadReckoning = false
	unicycle := perfect()
	unicycle.Model = drive.Unicycle
	for name, c := range map[string]drive.Config{
		"no effect": perfect(), "all actuator effects": limited, "scales of one": ones,
		"fixes without noise": exactFixes, "position known": known, "unicycle": unicycle,
	} {
		t.Run(name, func(t *testing.T) {
			r := newRig(c, 0.005, start)
			for i := range 20_000 {
				r.Reckon(r.tick, r.pose)
				if believed(r.Estimate()) != r.pose {
					t.Fatalf("tick %d: believes %v, is at %v", i, r.Estimate(), r.pose)
				}
				r.Actuate(wobble(i))
				r.pose = r.Move(r.pose)
				r.tick++
			}
			if d := r.pose.Pos.Sub(start.Pos).Norm(); d < 0.1 || math.Abs(r.pose.Theta) < 2*math.Pi {
				t.Errorf("the drive was too tame: %v m, heading %v", d, r.pose.Theta)
			}
		})
	}
}

// Encoders count on while something holds the hull.
func TestBlockedHullDrifts(t *testing.T) {
	r := newRig(perfect(), 0.005, geom.Pose{})
	for range 200 {
		r.step(drive.WheelsFor(0.2, 0, 0.05, 0.3))
		r.pose.Pos.X = min(r.pose.Pos.X, 0.1)
	}
	r.Reckon(r.tick, r.pose)
	within(t, "is at", r.pose.Pos.X, 0.1, 0)
	within(t, "believes", r.Estimate().X, 0.2, 1e-12)
	r.Reckon(r.tick, r.pose) // what was counted is counted once
	within(t, "believes after a second look", r.Estimate().X, 0.2, 1e-12)
}

// A mirrored machine under mirrored commands is mirrored, to the bit.
func TestMirror(t *testing.T) {
	c := real()
	c.Slip, c.FixNoise, c.FixTurnNoise, c.FixEvery = 0, 0, 0, 0
	m := c
	m.LeftScale, m.RightScale = c.RightScale, c.LeftScale
	for _, dt := range []float64{0.005, 0.05} {
		a, b := newRig(c, dt, start), newRig(m, dt, mirror(start))
		for i := range 5000 {
			w := wobble(i)
			a.step(w)
			b.step(drive.Wheels{Left: w.Right, Right: w.Left})
			if b.pose != mirror(a.pose) || believed(b.Estimate()) != mirror(believed(a.Estimate())) {
				t.Fatalf("tick %d: %v and %v, belief %v and %v", i, a.pose, b.pose, a.Estimate(), b.Estimate())
			}
		}
	}
}

// A machine that starts elsewhere, turned, drives the same path there.
func TestMovedFrame(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		shift := geom.Pose{
			Pos:   geom.Vec{X: rapid.Float64Range(-10, 10).Draw(t, "x"), Y: rapid.Float64Range(-10, 10).Draw(t, "y")},
			Theta: rapid.Float64Range(-4, 4).Draw(t, "θ"),
		}
		c := real()
		c.FixEvery = 0 // a fix errs in the world's frame
		a, b := newRig(c, 0.005, geom.Pose{}), newRig(c, 0.005, shift)
		for i := range 400 {
			a.step(wobble(i))
			b.step(wobble(i))
		}
		want := geom.Pose{Pos: shift.ToWorld(a.pose.Pos), Theta: shift.Theta + a.pose.Theta}
		if d := apart(b.pose, want); d > 1e-11 {
			t.Fatalf("the paths are %g apart", d)
		}
	})
}

func TestEncoders(t *testing.T) {
	t.Run("O-01 algebra: what one count is", func(t *testing.T) {
		c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.0325, Track: 0.15, DeadReckoning: true, CountsPerTurn: 1440}
		r := newRig(c, 0.01, geom.Pose{})
		// The right wheel turns slowly; look at the first step of the belief.
		for r.Estimate() == (drive.Estimate{}) {
			r.step(drive.Wheels{Right: 0.01})
		}
		e := r.Estimate()
		count := truth.Value(t, "O-01", "m/count")
		truth.Close(t, "turn of a count", e.Theta, truth.Value(t, "O-01", "rad/count"), 1e-12)
		truth.Close(t, "way of a count of one wheel", 2*math.Hypot(e.X, e.Y), count, 1e-6)
		truth.Close(t, "speed quantum", 2*math.Hypot(e.X, e.Y)/0.01, truth.Value(t, "O-01", "m/s"), 1e-6)
		// The truth at that moment: half a count, for encoders show the nearest.
		within(t, "true turn", r.pose.Theta/e.Theta, 0.5, 0.05)
	})
	t.Run("never more than half a count off, forwards and back", func(t *testing.T) {
		c := perfect()
		c.CountsPerTurn = 16
		r := newRig(c, 0.005, geom.Pose{})
		limit := math.Pi / 16 * 0.05
		worst := 0.0
		for i := range 20_000 {
			v := math.Sin(float64(i) / 700)
			r.step(drive.WheelsFor(v, 0, 0.05, 0.3))
			r.Reckon(r.tick, r.pose)
			worst = max(worst, math.Abs(r.Estimate().X-r.pose.Pos.X))
		}
		if worst > limit*(1+1e-9) || worst < limit*0.9 {
			t.Errorf("worst %v, half a count is %v", worst, limit)
		}
	})
}

func TestSystematicErrors(t *testing.T) {
	t.Run("O-07 derived: unequal wheels on a straight", func(t *testing.T) {
		const ratio = 1.002
		c := perfect()
		c.Track = 0.34
		c.RightScale, c.LeftScale = 2*ratio/(ratio+1), 2/(ratio+1)
		r := newRig(c, 0.005, geom.Pose{})
		r.steps(5000, 0.4, 0)
		v, omega := r.Twist()
		truth.Close(t, "κ", omega/v, truth.Value(t, "O-07", "κ"), 1e-11)
		truth.Close(t, "θ", r.pose.Theta, truth.Value(t, "O-07", "θ"), 1e-11)
		truth.Close(t, "y", r.pose.Pos.Y, truth.Value(t, "O-07", "y"), 1e-11)
		within(t, "believed x", r.Estimate().X, 10, 1e-11)
		within(t, "believed y", r.Estimate().Y, 0, 0)
	})
	t.Run("track error on the spot, derived: it turns by 1/E_b of what it counts", func(t *testing.T) {
		c := perfect()
		c.TrackScale = 1.01
		r := newRig(c, 0.005, geom.Pose{})
		r.steps(1000, 0, 1.5)
		within(t, "believed turn", r.Estimate().Theta, 7.5, 1e-12)
		within(t, "true turn", r.pose.Theta, 7.5/1.01, 1e-12)
	})
	t.Run("O-06 Borenstein & Feng 1996: the square path", func(t *testing.T) {
		// Driven by what the robot counts; the errors are true − believed.
		const side, ratio, tracks = 4.0, 1.002, 1.01
		c := drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.34, DeadReckoning: true,
			RightScale: 2 * ratio / (ratio + 1), LeftScale: 2 / (ratio + 1), TrackScale: tracks}
		square := func(turn float64) geom.Pose {
			r := newRig(c, 0.005, geom.Pose{})
			for range 4 {
				r.steps(2000, side/10, 0)
				r.steps(400, 0, turn*math.Pi/4)
			}
			if d := math.Hypot(r.Estimate().X, r.Estimate().Y); d > 1e-11 {
				t.Errorf("believes itself %g from where it began", d)
			}
			return r.pose
		}
		cw, ccw := square(-1).Pos, square(1).Pos
		for i, want := range truth.Values(t, "O-06", "cw") {
			truth.Close(t, fmt.Sprint("cw ", i), []float64{cw.X, cw.Y}[i], want, 1e-6)
		}
		for i, want := range truth.Values(t, "O-06", "ccw") {
			truth.Close(t, fmt.Sprint("ccw ", i), []float64{ccw.X, ccw.Y}[i], want, 1e-6)
		}
	})
}

// O-02, O-03, Siegwart & Nourbakhsh 5.2.4 and Chong & Kleeman 1997: the covariance
// after a straight metre in the continuous limit, scaled to a slip so small that
// the linearisation they rest on holds. 10,000 drives: a variance comes out with
// a standard error of √(2/10,000) = 1.4 %, and 5 % is 3.5 of those.
func TestSlipSpreadsAsPublished(t *testing.T) {
	const runs, steps, small = 10_000, 60, 1e-3
	c := perfect()
	c.Track, c.Slip = 0.5, 0.01*small
	var x, y, theta, yTheta float64
	d := drive.New(c, 1.0/steps, 0, geom.Pose{})
	for seed := range uint64(runs) {
		d.Reset(c, 1.0/steps, seed, geom.Pose{})
		p := geom.Pose{}
		for range steps {
			d.Command(1, 0)
			p = d.Move(p)
		}
		x += (p.Pos.X - 1) * (p.Pos.X - 1)
		y += p.Pos.Y * p.Pos.Y
		theta += p.Theta * p.Theta
		yTheta += p.Pos.Y * p.Theta
	}
	n := runs * small
	oneStep := truth.Values(t, "O-02", "")
	limit := truth.Values(t, "O-03", "")
	truth.Close(t, "var x", x/n, oneStep[0], 0.05)
	truth.Close(t, "var y", y/n, limit[1], 0.05)
	truth.Close(t, "var θ", theta/n, oneStep[2], 0.05)
	truth.Close(t, "cov(y,θ)", yTheta/n, oneStep[3], 0.05)
}

// Slip is unseen by the encoders, and the two wheels slip on their own.
func TestSlipIsUnseen(t *testing.T) {
	c := perfect()
	c.Slip = 1e-4
	r, same := newRig(c, 0.005, geom.Pose{}), newRig(c, 0.005, geom.Pose{})
	clean := newRig(perfect(), 0.005, geom.Pose{})
	for i := range 1000 {
		r.step(wobble(i))
		same.step(wobble(i))
		clean.step(wobble(i))
	}
	if r.Estimate() != clean.Estimate() {
		t.Error("the encoders see the slip")
	}
	if apart(r.pose, clean.pose) < 1e-4 {
		t.Error("no slip")
	}
	if r.pose != same.pose {
		t.Error("one seed, two drives")
	}
	other := drive.New(c, 0.005, 2, geom.Pose{})
	p := geom.Pose{}
	for i := range 1000 {
		other.Actuate(wobble(i))
		p = other.Move(p)
	}
	if p == r.pose {
		t.Error("two seeds, one drive")
	}
}

// Adding a source of chance leaves the numbers of the others alone.
func TestStreamsAreIndependent(t *testing.T) {
	c := perfect()
	c.Slip = 1e-4
	withFix := c
	withFix.FixEvery, withFix.FixNoise, withFix.FixTurnNoise = 0.1, 0.01, 0.01
	a, b := newRig(c, 0.005, geom.Pose{}), newRig(withFix, 0.005, geom.Pose{})
	fixOnly := withFix
	fixOnly.Slip = 0
	f := newRig(fixOnly, 0.005, geom.Pose{})
	for i := range 1000 {
		a.step(wobble(i))
		b.step(wobble(i))
		f.step(wobble(i))
		if a.pose != b.pose {
			t.Fatalf("tick %d: the fix changed the slip", i)
		}
	}
	for i := range 1000 {
		// Just reckoned: at a fix, belief − truth is the error of the fix alone.
		b.Reckon(b.tick, b.pose)
		f.Reckon(f.tick, f.pose)
		if b.tick%20 == 0 {
			within(t, "error of a fix in x", b.Estimate().X-b.pose.Pos.X, f.Estimate().X-f.pose.Pos.X, 1e-13)
			within(t, "error of a fix in θ", b.Estimate().Theta-b.pose.Theta, f.Estimate().Theta-f.pose.Theta, 1e-13)
		}
		b.Actuate(wobble(i))
		f.Actuate(wobble(i))
		b.pose, f.pose = b.Move(b.pose), f.Move(f.pose)
		b.tick++
		f.tick++
	}
}

func TestFixes(t *testing.T) {
	t.Run("when they are due", func(t *testing.T) {
		c := perfect()
		c.LeftScale, c.FixEvery = 1.05, 0.1 // drifts, and a fix without noise mends it
		r := newRig(c, 0.005, geom.Pose{})
		for i := range 200 {
			r.Reckon(r.tick, r.pose)
			if same := believed(r.Estimate()) == r.pose; same != (i%20 == 0) {
				t.Errorf("tick %d: knows its pose: %v", i, same)
			}
			r.Actuate(drive.Wheels{Left: 8, Right: 8})
			r.pose = r.Move(r.pose)
			r.tick++
		}
	})
	t.Run("more often than the tick is every tick", func(t *testing.T) {
		c := perfect()
		c.LeftScale, c.FixEvery = 1.05, 1e-9
		r := newRig(c, 0.005, geom.Pose{})
		r.steps(3, 0.3, 0)
		if believed(r.Estimate()) != r.pose {
			t.Error("no fix")
		}
	})
	t.Run("none at the start, which is known", func(t *testing.T) {
		c := perfect()
		c.FixEvery, c.FixNoise = 0.1, 0.02
		d := drive.New(c, 0.005, 1, start)
		d.Reckon(0, start)
		if believed(d.Estimate()) != start {
			t.Errorf("believes %v", d.Estimate())
		}
	})
	t.Run("how far they err", func(t *testing.T) {
		c := perfect()
		c.FixEvery, c.FixNoise, c.FixTurnNoise = 0.005, 0.02, 0.01
		d := drive.New(c, 0.005, 1, geom.Pose{})
		const n = 20_000
		var x, y, theta, xy float64
		for tick := int64(1); tick <= n; tick++ {
			d.Reckon(tick, start)
			e := d.Estimate()
			dx, dy, dt := e.X-start.Pos.X, e.Y-start.Pos.Y, e.Theta-start.Theta
			x, y, theta, xy = x+dx*dx, y+dy*dy, theta+dt*dt, xy+dx*dy
		}
		// The standard error of a standard deviation is 0.5 % here.
		truth.Close(t, "σ x", math.Sqrt(x/n), 0.02, 0.02)
		truth.Close(t, "σ y", math.Sqrt(y/n), 0.02, 0.02)
		truth.Close(t, "σ θ", math.Sqrt(theta/n), 0.01, 0.02)
		within(t, "correlation of x and y", xy/n/(0.02*0.02), 0, 0.03)
	})
}

// Someone who carries the robot interrupts the counting.
func TestCarry(t *testing.T) {
	r := newRig(perfect(), 0.005, geom.Pose{})
	for range 10 {
		r.step(drive.Wheels{Left: 5, Right: 6})
	}
	put := geom.Pose{Pos: geom.Vec{X: 3, Y: 4}, Theta: 1}
	r.pose = put
	r.Carry(drive.Estimate{X: 3, Y: 4, Theta: 1})
	r.Reckon(r.tick, r.pose)
	if believed(r.Estimate()) != put {
		t.Errorf("believes %v", r.Estimate())
	}
	if r.Turning() != (drive.Wheels{Left: 5, Right: 6}) {
		t.Errorf("the wheels now turn at %v", r.Turning())
	}
}

func TestPointBelievesWhatItWasMoved(t *testing.T) {
	for name, known := range map[string]bool{"reckoning": false, "known": true} {
		t.Run(name, func(t *testing.T) {
			c := real() // of which it has only the fix, left out here
			c.Model, c.DeadReckoning, c.FixEvery = drive.Point, !known, 0
			d := drive.New(c, 0.005, 1, start)
			p := start
			for i := range 3000 {
				d.Reckon(int64(i), p)
				if believed(d.Estimate()) != p {
					t.Fatalf("tick %d: believes %v, is at %v", i, d.Estimate(), p)
				}
				p = d.MovePoint(p, geom.Vec{X: 0.002 * math.Sin(float64(i)/100), Y: 0.0013})
			}
			if p.Theta != start.Theta || p.Pos.Y < 3 {
				t.Errorf("moved to %v", p)
			}
		})
	}
	t.Run("with a wrong heading", func(t *testing.T) {
		c := perfect()
		c.Model = drive.Point
		d := drive.New(c, 0.005, 1, geom.Pose{Theta: 0.1})
		d.Carry(drive.Estimate{Theta: 0.1 + math.Pi/2})
		p := d.MovePoint(geom.Pose{Theta: 0.1}, geom.Vec{X: 1})
		d.Reckon(1, p)
		within(t, "believed x", d.Estimate().X, 0, 1e-15)
		within(t, "believed y", d.Estimate().Y, 1, 1e-15)
		within(t, "true x", p.Pos.X, 1, 0)
	})
	t.Run("blocked, it believes to have gone", func(t *testing.T) {
		c := perfect()
		c.Model = drive.Point
		d := drive.New(c, 0.005, 1, geom.Pose{})
		d.MovePoint(geom.Pose{}, geom.Vec{X: 0.5})
		d.Reckon(1, geom.Pose{})
		within(t, "believed x", d.Estimate().X, 0.5, 0)
	})
}
