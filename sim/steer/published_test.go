package steer_test

import (
	"math"
	"slices"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/steer"
	"leeway/sim/truth"
)

var unicycle = drive.Config{Model: drive.Unicycle}

func TestLookAhead(t *testing.T) {
	t.Run("C-01 Siciliano et al. (11.75); Canudas de Wit et al.", func(t *testing.T) {
		c := ahead(0.1)
		v, omega := c.Twist(geom.Vec{X: 0.2, Y: 0.1}, 0.5)
		truth.Close(t, "v", v, truth.Value(t, "C-01", "v"), 1e-12)
		truth.Close(t, "ω", omega, truth.Value(t, "C-01", "ω"), 1e-12)
	})
	t.Run("C-02 derived: ψ̇ = −(|u|/ℓ) sin ψ", func(t *testing.T) {
		for span, name := range map[float64]string{0.5: "ψ(0.5)", 1: "ψ(1.0)"} {
			psi := limit(t, name, 4000, func(n int) float64 {
				return -loop(ahead(0.05), unicycle, geom.Pose{Theta: -2.5}, n, span/float64(n), always(geom.Vec{X: 0.2})).Theta
			})
			truth.Close(t, name, psi, truth.Value(t, "C-02", name), 1e-6)
		}
	})
	t.Run("C-03 derived: the axle traces a tractrix", func(t *testing.T) {
		at := func(n int) geom.Pose {
			start := geom.Pose{Pos: geom.Vec{Y: -0.1}, Theta: math.Pi / 2}
			return loop(ahead(0.1), unicycle, start, n, 1/float64(n), always(geom.Vec{X: 0.2}))
		}
		axle := truth.Values(t, "C-03", "axle")
		truth.Close(t, "x", limit(t, "x", 4000, func(n int) float64 { return at(n).Pos.X }), axle[0], 1e-6)
		truth.Close(t, "y", limit(t, "y", 4000, func(n int) float64 { return at(n).Pos.Y }), axle[1], 1e-6)
		truth.Close(t, "θ", limit(t, "θ", 4000, func(n int) float64 { return at(n).Theta }), truth.Value(t, "C-03", "θ"), 1e-6)
		p := at(100_000)
		within(t, "x in steps of 10 µs", p.Pos.X, axle[0], 1e-5)
		within(t, "y in steps of 10 µs", p.Pos.Y, axle[1], 1e-5)
	})
	t.Run("C-04 derived: the axle's circle inside the point's", func(t *testing.T) {
		const rho, l, speed, dt = 0.5, 0.1, 0.2, 1e-4
		around := func(at float64, _ geom.Pose) geom.Vec {
			sin, cos := math.Sincos(speed * at / rho)
			return geom.Vec{X: -speed * sin, Y: speed * cos}
		}
		start := geom.Pose{Pos: geom.Vec{X: rho - l}} // the point at (ρ, 0), heading outward
		p := loop(ahead(l), unicycle, start, 100_000, dt, around)
		truth.Close(t, "axle radius", p.Pos.Norm(), truth.Value(t, "C-04", "√(ρ²-l²)"), 1e-4)
		within(t, "radius of the point", p.ToWorld(geom.Vec{X: l}).Norm(), rho, 1e-4)
		within(t, "deviation", rho-p.Pos.Norm(), truth.Value(t, "C-04", "dev"), 1e-4)
	})
	t.Run("C-05 derived: the ceiling", func(t *testing.T) {
		c := steer.Config{Rule: steer.LookAhead, Ahead: 0.05, WheelRadius: 0.02, Track: 0.1, MaxWheelSpeed: 0.3 / 0.02}
		truth.Close(t, "|u|", c.Ceiling(), truth.Value(t, "C-05", "|u|"), 1e-12)
		// No heading saturates just below it, and some heading does just above.
		met := func(speed float64) (n int) {
			for i := range 3600 {
				if _, limited := c.Wheels(c.Twist(geom.Vec{X: speed}, float64(i)*math.Pi/1800)); limited {
					n++
				}
			}
			return n
		}
		if n := met(c.Ceiling() * (1 - 1e-9)); n != 0 {
			t.Errorf("%d headings saturate below the ceiling", n)
		}
		if n := met(c.Ceiling() * 1.0001); n == 0 || n > 200 {
			t.Errorf("%d headings of 3600 saturate just above the ceiling", n)
		}
	})
}

func TestHeadingServo(t *testing.T) {
	// lost is the heading error to the wanted heading star.
	lost := func(star, theta float64) float64 { return geom.Wrap(star - theta) }
	toward := func(star float64) geom.Vec { return geom.Heading(star).Scale(0.2) }

	t.Run("C-06 derived: across the seam of the angle", func(t *testing.T) {
		c := servo(2)
		_, omega := c.Twist(toward(-3), 3)
		truth.Close(t, "e0", omega/2, truth.Value(t, "C-06", "e0"), 1e-12)
		e := limit(t, "e(1)", 2000, func(n int) float64 {
			return lost(-3, loop(c, unicycle, geom.Pose{Theta: 3}, n, 1/float64(n), always(toward(-3))).Theta)
		})
		truth.Close(t, "e(1)", e, truth.Value(t, "C-06", "e(1)"), 1e-6)
	})
	t.Run("C-07 derived (Jury): sampled", func(t *testing.T) {
		const period = 0.1
		late := drive.Config{Model: drive.TwoWheels, DeadTime: period}
		after := func(k float64, m drive.Config, n int) float64 {
			return -loop(servo(k), m, geom.Pose{Theta: -0.5}, n, period, always(geom.Vec{X: 0.2})).Theta
		}
		truth.Close(t, "e5/e0", after(4, unicycle, 5)/0.5, truth.Value(t, "C-07", "e5/e0"), 1e-12)
		truth.Close(t, "factor", math.Pow(steer.SampledFactor(4, period), 5), truth.Value(t, "C-07", "e5/e0"), 1e-12)
		truth.Close(t, "|z|", steer.LateModulus(5, period), truth.Value(t, "C-07", "|z|"), 1e-12)
		// One sample late at kT = 1/2 the poles are (1 ± i)/2: eight samples turn
		// them once round, so the error has shrunk by |z|⁸ whatever its phase.
		for n := 5; n < 13; n++ {
			want := math.Pow(truth.Value(t, "C-07", "|z|"), 8)
			within(t, "e(n+8)/e(n)", after(5, late, n+8), after(5, late, n)*want, 1e-15)
		}
		// On both sides of every limit of kT.
		grows := func(g float64, m drive.Config) bool {
			return math.Abs(after(g/period, m, 200)) > 0.5
		}
		crosses := func(g float64, m drive.Config) bool {
			for n := range 60 {
				if after(g/period, m, n) < -1e-12 {
					return true
				}
			}
			return false
		}
		for _, l := range []struct {
			what string
			bad  func(float64, drive.Config) bool
			m    drive.Config
			at   float64
		}{
			{"stable iff kT < 2", grows, unicycle, 2},
			{"monotone iff kT ≤ 1", crosses, unicycle, 1},
			{"late: stable iff kT < 1", grows, late, 1},
			{"late: monotone iff kT ≤ 1/4", crosses, late, 0.25},
		} {
			if l.bad(0.98*l.at, l.m) || !l.bad(1.02*l.at, l.m) {
				t.Errorf("%s: not so at 2 %% on either side", l.what)
			}
		}
	})
	t.Run("C-08 Hayes 1950; derived: dead time", func(t *testing.T) {
		truth.Close(t, "limit", steer.DelayLimit(5), truth.Value(t, "C-08", "π/2k"), 1e-12)
		truth.Close(t, "calm", steer.CalmDelay(5), truth.Value(t, "C-08", "1/(ek)"), 1e-12)
		s, swing := steer.DelayPole(2, 0.1)
		truth.Close(t, "s", s, truth.Value(t, "C-08", "s"), 1e-12)
		within(t, "swing", swing, 0, 0)

		// Driven in ticks of 1 ms. A command is held for a tick, which is half a
		// tick of dead time on average.
		const dt = 0.001
		settle := func(k, delay, span float64) (errors []float64) {
			c, p := servo(k), geom.Pose{Theta: -0.1}
			d := drive.New(drive.Config{Model: drive.TwoWheels, WheelRadius: radius, Track: track, DeadTime: delay - dt/2}, dt, 1, p)
			for range int(math.Round(span / dt)) {
				w, _ := c.Wheels(c.Twist(geom.Vec{X: 0.2}, p.Theta))
				d.Actuate(w)
				p = d.Move(p)
				errors = append(errors, -p.Theta)
			}
			return errors
		}
		largest := func(errors []float64) float64 {
			return max(slices.Max(errors), -slices.Min(errors))
		}
		if e := settle(5, 0.95*steer.DelayLimit(5), 40); largest(e[38_000:]) > 0.01 {
			t.Errorf("does not settle below the limit: %v", largest(e[38_000:]))
		}
		if e := settle(5, 1.05*steer.DelayLimit(5), 40); largest(e[38_000:]) < 0.2 {
			t.Errorf("settles above the limit: %v", largest(e[38_000:]))
		}
		if e := settle(5, 0.95*steer.CalmDelay(5), 3); slices.Min(e) < -1e-9 {
			t.Error("swings past below the calm delay")
		}
		if e := settle(5, 1.1*steer.CalmDelay(5), 3); slices.Min(e) > -1e-9 {
			t.Error("does not swing past above the calm delay")
		}
		// It settles at the rate of the pole, calm or swinging.
		e := settle(2, 0.1, 6)
		within(t, "rate, calm", math.Log(e[5999]/e[3999])/2, s, 0.005*math.Abs(s))
		s, swing = steer.DelayPole(2, 0.4)
		e = settle(2, 0.4, 12)
		half := int(math.Round(math.Pi / swing / dt)) // ticks of half a swing
		within(t, "rate, swinging", math.Log(-e[6000+half]/e[6000])/(float64(half)*dt), s, 0.02*math.Abs(s))
	})
	t.Run("C-09 second-order closed form: lag", func(t *testing.T) {
		zeta := steer.LagDamping(5, 0.2)
		truth.Close(t, "ζ", zeta, truth.Value(t, "C-09", "ζ"), 1e-12)
		truth.Close(t, "overshoot", steer.Overshoot(zeta), truth.Value(t, "C-09", "overshoot"), 1e-12)
		past := func(k, tau, dt float64) (most float64) {
			c := servo(k)
			p := geom.Pose{Theta: -0.5}
			d := drive.New(drive.Config{Model: drive.TwoWheels, WheelRadius: radius, Track: track, Lag: tau}, dt, 1, p)
			for range int(4 / dt) {
				w, _ := c.Wheels(c.Twist(geom.Vec{X: 0.2}, p.Theta))
				d.Actuate(w)
				p = d.Move(p)
				most = max(most, p.Theta/0.5)
			}
			return most
		}
		driven := limit(t, "overshoot", 500, func(n int) float64 { return past(5, 0.2, 1/float64(n)) })
		truth.Close(t, "overshoot, driven", driven, truth.Value(t, "C-09", "overshoot"), 1e-5)
		if o := past(1.2, 0.2, 0.001); o > 0 {
			t.Errorf("kτ < 1/4 overshoots by %v", o)
		}
		if o := past(1.6, 0.2, 0.001); !(o > 0) {
			t.Error("kτ > 1/4 does not overshoot")
		}
	})
}

func TestSaturation(t *testing.T) {
	c := steer.Config{WheelRadius: 0.04, Track: 0.2, MaxWheelSpeed: 0.6 / 0.04}
	curves := truth.Values(t, "K-06", "κ i, ii, iii")
	for i, rule := range []struct {
		name string
		s    steer.Saturation
	}{{"i", steer.KeepCurve}, {"ii", steer.ClipEach}, {"iii", steer.KeepTurn}} {
		t.Run("K-06 "+rule.name+" derived from the diamond of Balkcom & Mason 2002", func(t *testing.T) {
			c.Saturation = rule.s
			w, limited := c.Wheels(0.5, 4)
			if !limited {
				t.Error("not limited")
			}
			v, omega := w.Twist(c.WheelRadius, c.Track)
			want := truth.Values(t, "K-06", rule.name)
			truth.Close(t, "v", v, want[0], 1e-12)
			truth.Close(t, "ω", omega, want[1], 1e-12)
			truth.Close(t, "κ", omega/v, curves[i], 1e-12)
		})
	}
}
