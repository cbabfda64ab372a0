package shadow_test

import (
	"math"
	"strings"
	"testing"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/ring"
	"leeway/sim/shadow"
	"leeway/sim/steer"
	"leeway/sim/truth"
)

func advice(t *testing.T, c sim.Config, about string) shadow.Advice {
	t.Helper()
	for _, a := range shadow.Advise(c) {
		if a.About == about {
			return a
		}
	}
	t.Fatalf("no advice about %q in %+v", about, shadow.Advise(c))
	return shadow.Advice{}
}

// C-05 (derived): v_max = 0.3, b = 0.1, l = 0.05 hold up to 0.2121 m/s.
func TestAdviceOnExactness(t *testing.T) {
	if want := truth.Value(t, "C-05", "|u|"); math.Abs(want-0.2121) > 1e-4 {
		t.Fatalf("C-05 is %g", want)
	}
	c := robot()
	c.Steer.Rule, c.Steer.Ahead = steer.LookAhead, 0.05
	c.Drive.Track, c.Steer.Track = 0.1, 0.1
	c.Drive.MaxWheelSpeed, c.Steer.MaxWheelSpeed = 6, 6 // 0.3 m/s on wheels of 0.05 m
	for speed, holds := range map[float64]bool{0.21: true, 0.22: false} {
		c.Speed = speed
		if a := advice(t, c, "exact"); a.Holds != holds || !strings.Contains(a.Text, "up to 0.21 m/s") {
			t.Errorf("at %g m/s: %+v", speed, a)
		}
	}
}

// The run agrees with the ceiling: just below it the wheels are never asked for
// more than they have, whichever way the robot has to turn; well above, they are.
func TestTheRunAgreesWithTheCeiling(t *testing.T) {
	for factor, saturates := range map[float64]bool{0.98: false, 1.3: true} {
		c := robot()
		c.Floor.Solids = nil
		c.Drive = drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, MaxWheelSpeed: 8}
		c.Steer.Rule, c.Steer.MaxWheelSpeed = steer.LookAhead, 8
		c.Speed = factor * c.Steer.Ceiling()
		share := 0.0
		for _, theta := range []float64{0, 1, 2, 3, -1.5, math.Atan2(c.Steer.Track/2, c.Steer.Ahead)} {
			c.Start.Theta = theta
			r, err := sim.New(c)
			if err != nil {
				t.Fatal(err)
			}
			share += r.Finish().Saturated
		}
		if (share > 0) != saturates {
			t.Errorf("at %g of the ceiling the wheels are at their limit for %g of the time", factor, share)
		}
	}
}

// C-08 and C-09: k·T ≤ 1/e for a delay, k·τ ≤ 1/4 for a lag.
func TestAdviceOnTheGain(t *testing.T) {
	c := robot()
	c.Drive.Lag, c.Drive.DeadTime = 0, 0.07357589 // 1/(e·5), row C-08
	c.Steer.Gain = 4.99
	if a := advice(t, c, "gain"); !a.Holds || !strings.Contains(a.Text, "5.0/s") {
		t.Errorf("%+v", a)
	}
	c.Steer.Gain = 5.01
	if a := advice(t, c, "gain"); a.Holds {
		t.Errorf("%+v", a)
	}
	c.Drive.Lag, c.Drive.DeadTime, c.Steer.Gain = 0.2, 0, 5 // row C-09: overshoot 0.1630335
	if a := advice(t, c, "gain"); a.Holds || !strings.Contains(a.Text, "overshoots a turn by 16 %") || !strings.Contains(a.Text, "past the 1.2/s") && !strings.Contains(a.Text, "past the 1.3/s") {
		t.Errorf("%+v", a)
	}
	c.Drive.DeadTime = 0.32 // C-08: beyond π/2k = 0.3141593 it never settles
	if a := shadow.Advise(c); !strings.Contains(a[1].Text, "never settles") || !strings.Contains(a[1].Text, "0.31 s") {
		t.Errorf("%+v", a)
	}
}

// B-08 (derived): a sensing period of 0.1 s, 0.12 s of latency and 0.05 s of actuation;
// v = 0.4, a = 0.8: 0.208 m.
func TestAdviceOnBraking(t *testing.T) {
	c := robot()
	c.Ring.Period, c.DecideEvery = 20, 24
	c.Drive.DeadTime, c.Drive.Lag = 0.05, 0
	c.Drive.WheelRadius, c.Drive.MaxWheelAccel = 0.05, 16
	c.Speed, c.Hull, c.Ring.Mount = 0.4, 0.2, 0.2
	c.Ring.Max = 0.209
	a := advice(t, c, "braking")
	if !a.Holds || !strings.Contains(a.Text, "within 0.21 m") {
		t.Errorf("%+v", a)
	}
	c.Ring.Max = 0.207
	if a := advice(t, c, "braking"); a.Holds || !strings.Contains(a.Text, "Up to 0.40 m/s") {
		t.Errorf("%+v", a)
	}
}

// S-01 (geometry): at 1 m a ring of 16 leaves 0.3902 m between two beams.
func TestAdviceOnWhatIsMissed(t *testing.T) {
	c := robot()
	c.Ring.Bearings = ring.Even(16)
	c.Drive.MaxWheelAccel, c.Drive.Lag, c.Drive.DeadTime = 0, 0, 0
	c.Hull, c.Speed = 0.99, 0.01/(float64(c.Ring.Period+c.DecideEvery)*c.Tick) // it stands after 0.01 m
	if a := advice(t, c, "missed"); !strings.Contains(a.Text, "less than 0.39 m") {
		t.Errorf("%+v", a)
	}
}

func TestAPointNeedsNoAdvice(t *testing.T) {
	if a := shadow.Advise(shadow.Config(robot(), shadow.Point)); len(a) != 0 {
		t.Errorf("%+v", a)
	}
}
