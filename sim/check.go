package sim

import (
	"errors"
	"fmt"
	"math"

	"leeway/sim/drive"
	"leeway/sim/steer"
)

// ConfigError is one fault of a Config.
type ConfigError struct {
	Path string // the field: "Ring.Max"
	Text string // what is wrong with it
}

func (e *ConfigError) Error() string { return e.Path + ": " + e.Text }

// largest bounds every number of a config: nothing on a floor comes near it, and
// sums and squares of such numbers stay finite.
const largest = 1e9

// Check returns every fault of the config, as a joined list of *ConfigError, or nil.
func (c *Config) Check() error {
	var errs []error
	bad := func(path, format string, a ...any) {
		errs = append(errs, &ConfigError{path, fmt.Sprintf(format, a...)})
	}
	between := func(path string, v, lo, hi float64) {
		if !(v >= lo && v <= hi) {
			bad(path, "must be between %g and %g; it is %g", lo, hi, v)
		}
	}
	between("Tick", c.Tick, 1e-4, 0.1)
	if c.DecideEvery < 1 {
		bad("DecideEvery", "must be at least 1; it is %d", c.DecideEvery)
	}
	between("Hull", c.Hull, 1e-3, 100)
	between("Start.X", c.Start.Pos.X, -largest, largest)
	between("Start.Y", c.Start.Pos.Y, -largest, largest)
	between("Start.Theta", c.Start.Theta, -100, 100)
	between("Goal.X", c.Goal.X, -largest, largest)
	between("Goal.Y", c.Goal.Y, -largest, largest)
	between("GoalRadius", c.GoalRadius, 1e-3, largest)
	between("Speed", c.Speed, 1e-4, 100)
	between("Asked.Within", c.Asked.Within, c.Tick, 1e6)

	g := &c.Ring
	if len(g.Bearings) == 0 && !g.AllRound && c.Ideal&AllRoundSight == 0 {
		bad("Ring.Bearings", "a ring needs a beam")
	}
	for i, b := range g.Bearings {
		between(fmt.Sprintf("Ring.Bearings[%d]", i), b, -2*math.Pi, 2*math.Pi)
	}
	between("Ring.Mount", g.Mount, 0, 100)
	between("Ring.Max", g.Max, 1e-3, farthest)
	between("Ring.Min", g.Min, 0, g.Max)
	between("Ring.NoiseBase", g.NoiseBase, 0, largest)
	between("Ring.NoiseGain", g.NoiseGain, 0, largest)
	between("Ring.Dropout", g.Dropout, 0, 1)
	between("Ring.Random", g.Random, 0, 1)
	between("Ring.Quantum", g.Quantum, 0, g.Max)
	between("Ring.Cone", g.Cone, 0, 2*math.Pi)
	if g.Period < 1 {
		bad("Ring.Period", "must be at least 1 tick; it is %d", g.Period)
	}
	if g.SubRays < 1 {
		bad("Ring.SubRays", "must be at least 1; it is %d", g.SubRays)
	}

	d := &c.Drive
	if d.Model > drive.TwoWheels {
		bad("Drive.Model", "unknown model %d", d.Model)
	}
	between("Drive.WheelRadius", d.WheelRadius, 1e-4, 100)
	between("Drive.Track", d.Track, 1e-4, 100)
	between("Drive.MaxWheelSpeed", d.MaxWheelSpeed, 0, largest)
	between("Drive.MaxWheelAccel", d.MaxWheelAccel, 0, largest)
	between("Drive.Lag", d.Lag, 0, 1000)
	between("Drive.DeadTime", d.DeadTime, 0, 100)
	between("Drive.RightScale", d.RightScale, 0, 10)
	between("Drive.LeftScale", d.LeftScale, 0, 10)
	between("Drive.TrackScale", d.TrackScale, 0, 10)
	between("Drive.Slip", d.Slip, 0, largest)
	between("Drive.FixEvery", d.FixEvery, 0, largest)
	between("Drive.FixNoise", d.FixNoise, 0, largest)
	between("Drive.FixTurnNoise", d.FixTurnNoise, 0, largest)
	if d.CountsPerTurn < 0 {
		bad("Drive.CountsPerTurn", "must not be negative; it is %d", d.CountsPerTurn)
	}

	s := &c.Steer
	switch s.Rule {
	case steer.HeadingServo:
		between("Steer.Gain", s.Gain, 1e-6, largest)
	case steer.LookAhead:
		between("Steer.Ahead", s.Ahead, 1e-3, 100)
	default:
		bad("Steer.Rule", "unknown rule %d", s.Rule)
	}
	between("Steer.TurnBeyond", s.TurnBeyond, 0, math.Pi)
	if s.WheelRadius != d.WheelRadius || s.Track != d.Track || s.MaxWheelSpeed != d.MaxWheelSpeed {
		bad("Steer", "wheel radius, track and wheel speed must be those of Drive")
	}

	if c.Logic == nil {
		bad("Logic", "a run needs a logic")
	} else {
		for _, p := range c.Logic.Check() {
			bad("Logic."+p.Path, "%s", p.Text)
		}
	}
	last := int64(0)
	for i := range c.Edits {
		e := &c.Edits[i]
		if e.Tick < last {
			bad(fmt.Sprintf("Edits[%d]", i), "must be in order of time")
		}
		last = e.Tick
		if err := c.checkEdit(e); err != nil {
			bad(fmt.Sprintf("Edits[%d]", i), "%s", err.(*ConfigError).Text)
		}
	}
	return errors.Join(errs...)
}
