package sim

import (
	"fmt"

	"leeway/sim/drive"
)

// Edit does a person's change now, between two ticks, and adds it to the run's
// edit list, stamped with the current tick. A second change of the same thing at
// the same tick replaces the first. It returns an error, and changes nothing,
// for a thing that does not exist or a place or number that is not finite.
func (r *Run) Edit(e Edit) error {
	e.Tick = r.tick
	if err := r.cfg.checkEdit(&e); err != nil {
		return err
	}
	r.applyEdits()
	for i := r.due - 1; i >= 0 && r.edits[i].Tick == e.Tick; i-- {
		if r.edits[i].sameThing(&e) {
			r.edits = append(r.edits[:i], r.edits[i+1:]...)
			r.due--
			break
		}
	}
	r.edits = append(r.edits[:r.due], append([]Edit{e}, r.edits[r.due:]...)...)
	r.apply(&e)
	r.due++
	return nil
}

// Edits returns the edit list: those of the config and those made since.
func (r *Run) Edits() []Edit { return r.edits }

// Foresee gives a run that has been brought back to the past the edits that src,
// the same run at a later tick, has had since: stepped on, it becomes src again.
func (r *Run) Foresee(src *Run) {
	r.edits = append(r.edits[:0], src.edits...)
}

// Forget drops the edits that are still to come: what is stepped from here is
// another future.
func (r *Run) Forget() { r.edits = r.edits[:r.due] }

func (e *Edit) sameThing(f *Edit) bool {
	return e.Kind == f.Kind && e.Index == f.Index && e.Number == f.Number
}

func (r *Run) editDue() bool { return r.due < len(r.edits) && r.edits[r.due].Tick <= r.tick }

// applyEdits does the edits that are due at this tick.
func (r *Run) applyEdits() {
	for r.editDue() {
		r.apply(&r.edits[r.due])
		r.due++
	}
}

func (r *Run) apply(e *Edit) {
	switch e.Kind {
	case MoveGoal:
		r.goal = e.Pos
	case MoveRobot:
		r.pose.Pos = r.put(e.Pos)
		r.drive.Carry(drive.Estimate{X: r.pose.Pos.X, Y: r.pose.Pos.Y, Theta: r.pose.Theta})
	case MoveSolid:
		r.world.MoveSolid(e.Index, e.Pos)
	case MoveMover:
		r.world.MoveMover(e.Index, e.Pos)
	case SetNumber:
		r.setNumber(e.Number, e.Value)
		return
	}
	r.room = 0
	r.revive(e.Kind)
}

// revive sets an ended run going again when an edit gives it something to do: a
// new goal, or another floor after it had given up or arrived. The time that is
// asked counts anew from a moved goal or a carried robot.
func (r *Run) revive(k EditKind) {
	if k == MoveGoal || k == MoveRobot {
		r.since = r.tick
	}
	switch r.measures.Status {
	case Running, Diverged:
		return
	case TimedOut:
		if r.since != r.tick {
			return
		}
	case Struck:
		if k != MoveRobot {
			return
		}
		r.measures.Contacts = 0
	}
	r.idled += r.tick - r.ended
	r.measures.Status, r.measures.Reason = Running, ""
	r.engine.Reset(r.cfg.Logic)
}

func (r *Run) setNumber(n Number, v float64) {
	c := &r.cfg
	switch n {
	case SpeedNumber:
		c.Speed = v
	case LagNumber:
		if c.Ideal&NoLag == 0 {
			c.Drive.Lag = v
			r.drive.SetLag(v)
		}
	case NoiseNumber:
		c.Ring.NoiseBase = v
	case NoiseGainNumber:
		c.Ring.NoiseGain = v
	case DropoutNumber:
		c.Ring.Dropout = v
	case GainNumber:
		c.Steer.Gain = v
	}
	r.ring.SetNoise(c.Ring.NoiseBase, c.Ring.NoiseGain, c.Ring.Dropout)
}

func (c *Config) checkEdit(e *Edit) error {
	bad := func(format string, a ...any) error {
		return &ConfigError{Path: "Edits", Text: fmt.Sprintf(format, a...)}
	}
	switch e.Kind {
	case MoveGoal, MoveRobot:
	case MoveSolid:
		if e.Index < 0 || e.Index >= len(c.Floor.Solids) {
			return bad("there is no solid %d", e.Index)
		}
	case MoveMover:
		if e.Index < 0 || e.Index >= len(c.Floor.Movers) {
			return bad("there is no mover %d", e.Index)
		}
	case SetNumber:
		return c.checkNumber(e)
	default:
		return bad("unknown kind of edit %d", e.Kind)
	}
	if !e.Pos.Finite() {
		return bad("the place of an edit must be finite")
	}
	return nil
}

func (c *Config) checkNumber(e *Edit) error {
	v := e.Value
	ok := v >= 0
	switch e.Number {
	case SpeedNumber, GainNumber:
		ok = v > 0
	case LagNumber, NoiseNumber, NoiseGainNumber:
	case DropoutNumber:
		ok = v >= 0 && v <= 1
	default:
		return &ConfigError{Path: "Edits", Text: fmt.Sprintf("unknown number %d", e.Number)}
	}
	if !ok || v > largest {
		return &ConfigError{Path: "Edits", Text: fmt.Sprintf("number %d cannot be %v", e.Number, v)}
	}
	return nil
}
