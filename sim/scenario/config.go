package scenario

import (
	"math"
	"slices"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
	"leeway/sim/steer"
)

func radians(degrees float64) float64 { return degrees * (math.Pi / 180) }

// place returns where value stands among the options of the choice at path. The
// options are in the order of the core's constants, so that it is the constant.
func place(path, value string) int {
	return max(0, slices.IndexFunc(ruleAt()[path].Options, func(o Option) bool { return o.Value == value }))
}

// Config returns the run that the scenario describes. The error is Problems when s is not valid.
func (s *Scenario) Config() (sim.Config, error) {
	if p := s.Validate(); p != nil {
		return sim.Config{}, p
	}
	return s.config(s.floorConfig()), nil
}

// config is Config of a valid scenario on its floor.
func (s *Scenario) config(f floor.Config) sim.Config {
	decide, _ := ticks(s.Timing.DecideEvery, s.Timing.Tick)
	c := sim.Config{
		Seed:        uint64(s.Seed),
		Tick:        s.Timing.Tick,
		DecideEvery: decide,
		Floor:       f,
		Hull:        s.Robot.Radius,
		Start:       geom.Pose{Pos: geom.Vec{X: s.Start.X, Y: s.Start.Y}, Theta: radians(s.Start.Heading)},
		Ring:        s.ringConfig(),
		Drive:       s.driveConfig(),
		Steer:       s.steerConfig(),
		Logic:       s.logic(),
		Speed:       s.Robot.Speed,
		Goal:        geom.Vec{X: s.Goal.X, Y: s.Goal.Y},
		GoalRadius:  s.Goal.Radius,
		Asked:       sim.Asked{Within: s.Asked.Within, Leeway: s.Asked.Leeway, Switches: s.Asked.Switches},
		OnContact:   sim.OnContact(place("on_contact", s.OnContact)),
	}
	for _, name := range s.Ideal {
		c.Ideal |= 1 << place("ideal[]", name)
	}
	solids := s.solidIndexes()
	for _, e := range s.Edits {
		f := sim.Edit{Tick: e.Tick, Pos: vec(e.To)}
		switch e.What {
		case "goal":
			f.Kind = sim.MoveGoal
		case "robot":
			f.Kind = sim.MoveRobot
		case "solid":
			f.Kind = sim.MoveSolid
			f.Index = solids[e.ID]
		case "mover":
			f.Kind = sim.MoveMover
			f.Index, _ = s.MoverIndex(e.ID)
		case "number":
			f.Kind, f.Number, f.Value = sim.SetNumber, ruleAt()[e.Name].Number, e.Value
		}
		c.Edits = append(c.Edits, f)
	}
	return c
}

// floorConfig returns walls, then solids, then the border.
func (s *Scenario) floorConfig() floor.Config {
	var c floor.Config
	walls := s.Floor.Walls
	wall := func(w Wall) {
		c.Solids = append(c.Solids, floor.Solid{ID: w.ID, Kind: floor.Wall, Points: vecs(w.Points)})
	}
	for _, w := range walls {
		wall(w)
	}
	for _, o := range s.Floor.Solids {
		if o.form() == "polygon" {
			c.Solids = append(c.Solids, floor.Solid{ID: o.ID, Kind: floor.Polygon, Points: vecs(o.Corners)})
		} else {
			c.Solids = append(c.Solids, floor.Solid{ID: o.ID, Kind: floor.Disc, Points: []geom.Vec{vec(o.Center)}, Radius: o.Radius})
		}
	}
	if s.Floor.Enclosed {
		for _, b := range s.border() {
			wall(b)
		}
	}
	for i := range s.Floor.Movers {
		c.Movers = append(c.Movers, s.Floor.Movers[i].config())
	}
	return c
}

func (m *Mover) config() floor.Mover {
	return floor.Mover{
		ID: m.ID, Radius: m.Radius, Half: geom.Vec{X: m.Box[0] / 2, Y: m.Box[1] / 2}, Heading: radians(m.Heading),
		Route: vecs(m.Route), Loop: m.Loop, Speed: m.Speed, Pause: m.Pause, Offset: m.Offset,
	}
}

func (s *Scenario) ringConfig() ring.Config {
	g := &s.Ring
	period, _ := ticks(g.Period, s.Timing.Tick)
	c := ring.Config{
		Mount: g.Mount, Min: g.RangeMin, Max: g.RangeMax,
		NoiseBase: g.Noise, NoiseGain: g.NoisePerM, Dropout: g.Dropout, Random: g.Random, Quantum: g.Step,
		Period: period, InTurn: g.InTurn, SubRays: g.ConeRays, Cone: radians(g.Cone),
	}
	if len(g.Bearings) == 0 {
		c.Bearings = ring.Even(g.Beams)
	}
	for _, b := range g.Bearings {
		c.Bearings = append(c.Bearings, radians(b))
	}
	return c
}

func (s *Scenario) driveConfig() drive.Config {
	b := &s.Robot
	return drive.Config{
		Model:         drive.Model(place("robot.motion", b.Motion)),
		WheelRadius:   b.WheelRadius,
		Track:         b.Track,
		MaxWheelSpeed: b.WheelSpeedMax, MaxWheelAccel: b.WheelAccelMax, Lag: b.WheelLag, DeadTime: b.WheelDeadTime,
		DeadReckoning: b.Position == "dead_reckoning",
		CountsPerTurn: b.EncoderCounts, RightScale: b.RightWheelScale, LeftScale: b.LeftWheelScale, TrackScale: b.TrackScale,
		Slip: b.Slip, FixEvery: b.FixEvery, FixNoise: b.FixNoise, FixTurnNoise: radians(b.FixTurnNoise),
	}
}

func (s *Scenario) steerConfig() steer.Config {
	b := &s.Robot
	return steer.Config{
		Rule: steer.Rule(place("robot.steering", b.Steering)),
		Gain: b.SteeringGain, Speed: steer.SpeedLaw(place("robot.speed_law", b.SpeedLaw)), TurnBeyond: radians(b.TurnBeyond),
		Ahead: b.LookAhead, Saturation: steer.Saturation(place("robot.saturation", b.Saturation)),
		WheelRadius: b.WheelRadius, Track: b.Track, MaxWheelSpeed: b.WheelSpeedMax,
	}
}

// numbers returns the numbers of the default logic: those of the file, and for those it leaves out what suits hull, speed and goal.
func (s *Scenario) numbers() logic.Numbers {
	n := logic.DefaultNumbers(s.Robot.Radius, s.Robot.Speed, s.Goal.Radius)
	l := &s.Logic
	for _, f := range []struct {
		to   *float64
		from *float64
	}{{&n.Notice, l.Notice}, {&n.StandOff, l.StandOff}, {&n.Safe, l.Safe}, {&n.Band, l.Band}, {&n.Gain, l.Gain}, {&n.MinTime, l.MinTime}} {
		if f.from != nil {
			*f.to = *f.from
		}
	}
	n.Side = logic.SideRule(place("logic.side", l.Side))
	return n
}

// derived returns what a number of the default logic is when the file leaves it out.
func (s *Scenario) derived(path string) float64 {
	n := s.numbers()
	return map[string]float64{
		"logic.notice_m": n.Notice, "logic.stand_off_m": n.StandOff, "logic.safe_m": n.Safe,
		"logic.band_m": n.Band, "logic.gain_m": n.Gain, "logic.min_time_s": n.MinTime,
	}[path]
}

// logic returns the switching table.
func (s *Scenario) logic() *logic.Logic {
	l := &s.Logic
	if l.Kind == "default" {
		return logic.Default(s.numbers())
	}
	out := &logic.Logic{Name: l.Name, Start: l.mode(l.Start), Sector: radians(l.Sector), Margin: l.Margin}
	for _, m := range l.Modes {
		out.Modes = append(out.Modes, logic.Mode{
			Name:      m.Name,
			Behaviour: logic.Behaviour(place("logic.modes[].behaviour", m.Behaviour)),
			Ending:    logic.Ending(place("logic.modes[].ending", m.Ending)),
			Side:      logic.SideRule(place("logic.modes[].side", m.Side)),
			StandOff:  m.StandOff, GoalGain: m.GoalGain, Speed: m.SpeedShare,
		})
	}
	reading := func(name string) logic.Reading {
		r, _ := logic.ReadingNamed(name)
		return r
	}
	for _, t := range l.Transitions {
		u := logic.Transition{From: l.mode(t.From), To: l.mode(t.To), MinTime: t.MinTime, Hold: t.Hold, Meet: t.Meet}
		for _, w := range t.When {
			c := logic.Condition{
				Reading:   reading(w.Reading),
				Rel:       logic.Relation(place("logic.transitions[].when[].relation", w.Relation)),
				Threshold: w.Threshold, Band: w.Band,
			}
			if w.Against != "" {
				c.Against, c.HasAgainst = reading(w.Against), true
			}
			u.When = append(u.When, c)
		}
		out.Transitions = append(out.Transitions, u)
	}
	return out
}

// mode returns the place of the mode with this name; −1: there is none, or any.
func (l *Logic) mode(name string) int {
	return slices.IndexFunc(l.Modes, func(m Mode) bool { return m.Name == name })
}
