package steer_test

import (
	"math"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/steer"

	"pgregory.net/rapid"
)

func drawConfig(t *rapid.T) steer.Config {
	return steer.Config{
		Rule:          steer.Rule(rapid.IntRange(0, 1).Draw(t, "rule")),
		Gain:          rapid.Float64Range(0.1, 20).Draw(t, "gain"),
		Speed:         steer.SpeedLaw(rapid.IntRange(0, 2).Draw(t, "speed law")),
		TurnBeyond:    rapid.Float64Range(0, math.Pi).Draw(t, "turn beyond"),
		Ahead:         rapid.Float64Range(0.01, 1).Draw(t, "ahead"),
		Saturation:    steer.Saturation(rapid.IntRange(0, 2).Draw(t, "saturation")),
		WheelRadius:   rapid.Float64Range(0.01, 0.3).Draw(t, "wheel"),
		Track:         rapid.Float64Range(0.05, 1).Draw(t, "track"),
		MaxWheelSpeed: rapid.Float64Range(0.5, 30).Draw(t, "limit"),
	}
}

func drawVec(t *rapid.T) geom.Vec {
	return geom.Vec{X: rapid.Float64Range(-2, 2).Draw(t, "ux"), Y: rapid.Float64Range(-2, 2).Draw(t, "uy")}
}

// Mirrored wishes give mirrored twists and wheels, to the bit.
func TestMirror(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, u := drawConfig(t), drawVec(t)
		theta := rapid.Float64Range(-30, 30).Draw(t, "θ")
		if h := geom.Heading(theta); h.Cross(u) == 0 && h.Dot(u) < 0 {
			return // the tie has no mirror image
		}
		v, omega := c.Twist(u, theta)
		v2, omega2 := c.Twist(geom.Vec{X: u.X, Y: -u.Y}, -theta)
		if v2 != v || omega2 != -omega {
			t.Fatalf("(%v, %v) mirrors to (%v, %v)", v, omega, v2, omega2)
		}
		held, heldOmega := c.TwistOver(u, theta, 0.005)
		held2, heldOmega2 := c.TwistOver(geom.Vec{X: u.X, Y: -u.Y}, -theta, 0.005)
		if held2 != held || heldOmega2 != -heldOmega {
			t.Fatalf("held, (%v, %v) mirrors to (%v, %v)", held, heldOmega, held2, heldOmega2)
		}
		w, l := c.Wheels(v, omega)
		w2, l2 := c.Wheels(v2, omega2)
		if w2 != (drive.Wheels{Left: w.Right, Right: w.Left}) || l != l2 {
			t.Fatalf("wheels %v mirror to %v", w, w2)
		}
		// Backwards is mirrored in the other axis.
		w3, _ := c.Wheels(-v, -omega)
		if w3 != (drive.Wheels{Left: -w.Left, Right: -w.Right}) {
			t.Fatalf("wheels %v reverse to %v", w, w3)
		}
	})
}

// Straight behind is a tie; the servo must turn, not stand.
func TestTieIsBrokenToTheLeft(t *testing.T) {
	for _, c := range []struct{ theta, ux float64 }{{0, -1}, {0, -1e-9}} {
		s := servo(2)
		v, omega := s.Twist(geom.Vec{X: c.ux}, c.theta)
		within(t, "ω", omega, 2*math.Pi, 1e-15)
		within(t, "v", v, 0, 0)
	}
}

// The rules as the formulas say, by other functions of angles.
func TestTwistIsTheFormula(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, u := drawConfig(t), drawVec(t)
		if u.Norm() < 1e-6 {
			return // no direction
		}
		theta := rapid.Float64Range(-30, 30).Draw(t, "θ")
		e := math.Remainder(math.Atan2(u.Y, u.X)-theta, 2*math.Pi)
		if math.Abs(math.Abs(e)-math.Pi) < 1e-9 || math.Abs(math.Abs(e)-c.TurnBeyond) < 1e-9 {
			return // on an edge
		}
		speed := math.Hypot(u.X, u.Y)
		var wantV, wantOmega float64
		if c.Rule == steer.LookAhead {
			wantV, wantOmega = speed*math.Cos(e), speed*math.Sin(e)/c.Ahead
		} else {
			wantOmega = c.Gain * e
			switch {
			case c.Speed == steer.CosineSpeed:
				wantV = speed * math.Max(0, math.Cos(e))
			case c.Speed == steer.FullSpeed || math.Abs(e) < c.TurnBeyond:
				wantV = speed
			}
		}
		v, omega := c.Twist(u, theta)
		if math.Abs(v-wantV) > 1e-12 || math.Abs(omega-wantOmega) > 1e-11 {
			t.Fatalf("(%v, %v), want (%v, %v)", v, omega, wantV, wantOmega)
		}
	})
}

func TestNoWishNoMotion(t *testing.T) {
	for _, rule := range []steer.Config{servo(3), ahead(0.1)} {
		zero := math.Copysign(0, -1)
		for _, u := range []geom.Vec{{}, {X: zero}, {Y: zero}, {X: zero, Y: zero}} {
			for theta := -4.0; theta < 4; theta++ { // a zero has a direction for atan2
				if v, omega := rule.Twist(u, theta); v != 0 || omega != 0 {
					t.Errorf("a zero wish %v at %v gives (%v, %v)", u, theta, v, omega)
				}
			}
		}
	}
}

// After saturation the wheels are within the limit and (v, ω) in the diamond;
// inside, nothing is touched; each rule keeps what it says it keeps.
func TestSaturationKeepsWhatItSays(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := drawConfig(t)
		v := rapid.Float64Range(-5, 5).Draw(t, "v")
		omega := rapid.Float64Range(-20, 20).Draw(t, "ω")
		w, limited := c.Wheels(v, omega)
		most := c.MaxWheelSpeed
		if math.Abs(w.Left) > most || math.Abs(w.Right) > most {
			t.Fatalf("%v exceeds %v", w, most)
		}
		gotV, gotOmega := w.Twist(c.WheelRadius, c.Track)
		top := most * c.WheelRadius
		if math.Abs(gotV)+math.Abs(gotOmega)*c.Track/2 > top*(1+1e-14) {
			t.Fatalf("(%v, %v) is outside the diamond of %v", gotV, gotOmega, top)
		}
		asked := drive.WheelsFor(v, omega, c.WheelRadius, c.Track)
		if inside := math.Abs(asked.Left) <= most && math.Abs(asked.Right) <= most; inside == limited {
			t.Fatalf("asked for %v of %v: limited = %v", asked, most, limited)
		}
		if !limited {
			if w != asked {
				t.Fatalf("changed %v into %v without need", asked, w)
			}
			return
		}
		switch c.Saturation {
		case steer.KeepCurve:
			if math.Abs(gotOmega*v-omega*gotV) > 1e-13*(1+math.Abs(omega*v)) {
				t.Fatalf("curvature %v became %v", omega/v, gotOmega/gotV)
			}
			if max(math.Abs(w.Left), math.Abs(w.Right)) != most {
				t.Fatalf("gives up more than it must: %v", w)
			}
		case steer.KeepTurn:
			want := math.Copysign(min(math.Abs(omega), 2*top/c.Track), omega)
			if math.Abs(gotOmega-want) > 1e-14*top/c.Track {
				t.Fatalf("ω = %v became %v, want %v", omega, gotOmega, want)
			}
			if v*gotV < -1e-15 {
				t.Fatalf("v = %v became %v", v, gotV)
			}
		case steer.ClipEach:
			if math.Abs(asked.Left) <= most && w.Left != asked.Left || math.Abs(asked.Right) <= most && w.Right != asked.Right {
				t.Fatalf("touched a wheel within the limit: %v to %v", asked, w)
			}
		}
	})
}

func TestAtTheLimitIsWithin(t *testing.T) {
	for _, s := range []steer.Saturation{steer.KeepCurve, steer.KeepTurn, steer.ClipEach} {
		c := steer.Config{WheelRadius: 0.5, Track: 1, MaxWheelSpeed: 2, Saturation: s}
		if w, limited := c.Wheels(1, 0); limited || w != (drive.Wheels{Left: 2, Right: 2}) {
			t.Errorf("rule %d: %v, limited %v", s, w, limited)
		}
	}
}

// Saturation is continuous: just inside the limit and just outside, the wheels are alike.
func TestSaturationIsContinuous(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := drawConfig(t)
		v := rapid.Float64Range(-5, 5).Draw(t, "v")
		omega := rapid.Float64Range(-20, 20).Draw(t, "ω")
		w := drive.WheelsFor(v, omega, c.WheelRadius, c.Track)
		faster := max(math.Abs(w.Left), math.Abs(w.Right))
		if faster < 1e-3 {
			return // hardly moves
		}
		k := c.MaxWheelSpeed / faster
		below, _ := c.Wheels(v*k*(1-1e-9), omega*k*(1-1e-9))
		above, limited := c.Wheels(v*k*(1+1e-9), omega*k*(1+1e-9))
		if d := max(math.Abs(below.Left-above.Left), math.Abs(below.Right-above.Right)); d > 1e-8*c.MaxWheelSpeed || !limited {
			t.Fatalf("jumps by %v at the limit (limited: %v)", d, limited)
		}
	})
}

// Under the look-ahead rule the point ahead of the axle is a point robot: along
// any wish, with the speed below the ceiling, it errs by the size of the tick only.
func TestPointAheadIsAPointRobot(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := ahead(rapid.Float64Range(0.05, 0.4).Draw(t, "ℓ"))
		c.MaxWheelSpeed = 10
		speed := 0.99 * c.Ceiling()
		p := geom.Pose{Theta: rapid.Float64Range(-4, 4).Draw(t, "θ")}
		turns := rapid.Float64Range(-2, 2).Draw(t, "wish turns at")
		front := p.ToWorld(geom.Vec{X: c.Ahead})
		const dt = 1e-4
		d := drive.New(drive.Config{Model: drive.Unicycle, WheelRadius: radius, Track: track}, dt, 1, p)
		for i := range 10_000 {
			u := geom.Heading(turns * float64(i) * dt).Scale(speed)
			w, limited := c.Wheels(c.Twist(u, p.Theta))
			if limited {
				t.Fatal("saturated below the ceiling")
			}
			d.Actuate(w)
			p = d.Move(p)
			front = front.AddScaled(dt, u)
		}
		if off := p.ToWorld(geom.Vec{X: c.Ahead}).Sub(front).Norm(); off > 20*dt*speed*speed/c.Ahead {
			t.Fatalf("the point is %v off", off)
		}
	})
}

func TestCeilingWithoutLimit(t *testing.T) {
	c := ahead(0.1)
	if !math.IsInf(c.Ceiling(), 1) {
		t.Errorf("ceiling %v", c.Ceiling())
	}
	if w, limited := c.Wheels(1e6, 1e6); limited || w.Right < 1e7 {
		t.Errorf("limited to %v", w)
	}
}

func TestDelayPoleSolvesItsEquation(t *testing.T) {
	solves := func(t interface{ Fatalf(string, ...any) }, k, delay float64) {
		decay, swing := steer.DelayPole(k, delay)
		// s + k e^(−sT), both parts.
		grow := k * math.Exp(-decay*delay)
		re := decay + grow*math.Cos(swing*delay)
		im := swing - grow*math.Sin(swing*delay)
		if math.Hypot(re, im) > 1e-9*(1+math.Hypot(decay, swing)) {
			t.Fatalf("s = %v + %vi leaves %v, %v", decay, swing, re, im)
		}
		if (k*delay < math.Pi/2) != (decay < 0) || (k*delay > 1/math.E) != (swing > 0) {
			t.Fatalf("kT = %v, s = %v + %vi", k*delay, decay, swing)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		solves(t, rapid.Float64Range(0.01, 50).Draw(t, "k"), rapid.Float64Range(1e-6, 3).Draw(t, "T"))
	})
	for _, g := range []float64{0.3, 0.34, 0.3678, 0.367879, 0.367880, 0.37, 0.4, 1.57, 1.571} {
		solves(t, g, 1)
		solves(t, 4*g, 0.25)
	}
	if s, swing := steer.DelayPole(3, 0); s != -3 || swing != 0 {
		t.Errorf("without dead time s = %v + %vi", s, swing)
	}
}

// The two poles of the late servo have the product kT and the sum 1.
func TestLateModulus(t *testing.T) {
	for _, g := range []float64{0, 0.01, 0.1, 0.2, 0.25} {
		z := steer.LateModulus(g, 1)
		within(t, "z(1−z), calm", z*(1-z), g, 1e-15)
	}
	for _, g := range []float64{0.2501, 0.28, 0.5, 1, 2} {
		z := steer.LateModulus(2*g, 0.5)
		within(t, "|z|², swinging", z*z, g, 1e-15)
	}
}

func TestOvershootIsNoneWhenDamped(t *testing.T) {
	for _, zeta := range []float64{1, 1.5, math.Inf(1)} {
		within(t, "overshoot", steer.Overshoot(zeta), 0, 0)
	}
	within(t, "overshoot without damping", steer.Overshoot(0), 1, 1e-15)
	within(t, "damping without lag", 1/steer.LagDamping(5, 0), 0, 0)
}

func FuzzSteerStaysFinite(f *testing.F) {
	f.Add(uint8(0), uint8(0), uint8(0), 0.2, 0.1, 0.5, 3.0, 0.1, 14.0)
	f.Add(uint8(0), uint8(2), uint8(1), -0.2, 0.0, 0.0, 3.0, 0.1, 0.0)
	f.Add(uint8(1), uint8(1), uint8(2), 1e-300, 5e-324, 1e9, 3.0, 1e-3, 1e-9)
	f.Fuzz(func(t *testing.T, rule, law, saturation uint8, ux, uy, theta, gain, l, most float64) {
		in := func(x, lo, hi float64) bool { return x >= lo && x <= hi } // what sim admits
		if !in(ux, -1e9, 1e9) || !in(uy, -1e9, 1e9) || !in(theta, -1e9, 1e9) || !in(gain, 1e-6, 1e9) || !in(l, 1e-3, 100) || !in(most, 0, 1e9) {
			return
		}
		c := steer.Config{Rule: steer.Rule(rule % 2), Speed: steer.SpeedLaw(law % 3), Saturation: steer.Saturation(saturation % 3),
			Gain: gain, TurnBeyond: 1, Ahead: l, WheelRadius: 0.05, Track: 0.3, MaxWheelSpeed: most}
		v, omega := c.Twist(geom.Vec{X: ux, Y: uy}, theta)
		w, _ := c.Wheels(v, omega)
		heldV, heldOmega := c.TwistOver(geom.Vec{X: ux, Y: uy}, theta, 0.005)
		for _, x := range []float64{v, omega, heldV, heldOmega, w.Left, w.Right} {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				t.Fatalf("(%v, %v), %v", v, omega, w)
			}
		}
		if most > 0 && (math.Abs(w.Left) > most || math.Abs(w.Right) > most) {
			t.Fatalf("%v exceeds %v", w, most)
		}
		if c.Rule == steer.HeadingServo && math.Abs(omega) > gain*math.Pi*(1+1e-15) {
			t.Fatalf("ω = %v", omega)
		}
	})
}

func TestDoesNotAllocate(t *testing.T) {
	c := servo(3)
	c.MaxWheelSpeed = 3
	if n := testing.AllocsPerRun(100, func() { c.Wheels(c.Twist(geom.Vec{X: 0.3, Y: 0.2}, 2)) }); n != 0 {
		t.Errorf("%v allocations", n)
	}
}

func BenchmarkSteer(b *testing.B) {
	look := ahead(0.1)
	look.MaxWheelSpeed = 3
	turn := servo(3)
	turn.MaxWheelSpeed = 3
	for name, c := range map[string]steer.Config{"heading servo": turn, "look-ahead": look} {
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			theta := 0.0
			for b.Loop() {
				c.Wheels(c.Twist(geom.Vec{X: 0.3, Y: 0.2}, theta))
				theta += 0.001
			}
		})
	}
}
