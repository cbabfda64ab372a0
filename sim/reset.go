package sim

import (
	"math"

	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/logic"
	"leeway/sim/ring"
	"leeway/sim/steer"
)

// Reset makes r what NewOn returns, whatever it ran before, in the memory it has:
// a thousand runs need the memory of one. A zero Run will do. After an error r is
// as it was.
func (r *Run) Reset(m *floor.Map, c Config) error {
	if err := c.Check(); err != nil {
		return err
	}
	world, rg, dr, en := r.world, r.ring, r.drive, r.engine
	if world == nil {
		world, rg, dr, en = new(floor.World), new(ring.Ring), new(drive.Drive), new(logic.Engine)
	}
	*r = Run{
		cfg: c, dt: c.Tick,
		world: world, ring: rg, drive: dr, engine: en,
		pose: c.Start, goal: c.Goal,
		edits:    append(r.edits[:0], c.Edits...),
		switches: r.switches[:0],
		contacts: r.contacts[:0],
	}
	r.idealise()
	world.ResetOn(m)
	rg.Reset(r.cfg.Ring, c.Seed)
	dr.Reset(r.cfg.Drive, c.Tick, c.Seed, r.pose)
	en.Reset(c.Logic)
	r.input = logic.Input{GoalRadius: c.GoalRadius, Hull: c.Hull, Scan: rg.Scan()}
	if r.cfg.Steer.Rule == steer.LookAhead && r.cfg.Drive.Model != drive.Point {
		r.input.Ahead = r.cfg.Steer.Ahead
	}
	for _, mv := range c.Floor.Movers {
		r.moverStep = max(r.moverStep, mv.Speed*c.Tick)
	}
	r.measures = Outcome{Leeway: math.Inf(1), Hash: hashSeed}
	r.measureLeeway()
	return nil
}
