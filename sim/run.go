package sim

import (
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
)

// Run is one closed loop from its start to its Status.
type Run struct{ stub int }

// New checks the config and returns a run that stands at tick 0.
func New(c Config) (*Run, error) { panic("contract") }

// NewOn is New on a floor map that other runs share (built from the same floor).
func NewOn(m *floor.Map, c Config) (*Run, error) { panic("contract") }

// Step goes on by one tick. It does nothing once the run has ended.
func (r *Run) Step() { panic("contract") }

// Finish steps until the run has ended, and returns its outcome.
func (r *Run) Finish() Outcome { panic("contract") }

// Edit enters a change due at the next tick (its Tick is set), and adds it to the run's edit list; a second edit of
// the same thing at the same tick replaces the first.
func (r *Run) Edit(e Edit) error { panic("contract") }

// Edits returns the edit list so far.
func (r *Run) Edits() []Edit { panic("contract") }

// Outcome returns the measures so far.
func (r *Run) Outcome() Outcome { panic("contract") }

// What a viewer needs. The returned memory is the run's own: read, do not keep.
func (r *Run) Tick() int64              { panic("contract") }
func (r *Run) Config() *Config          { panic("contract") }
func (r *Run) Pose() geom.Pose          { panic("contract") }
func (r *Run) Belief() drive.Estimate   { panic("contract") }
func (r *Run) Scan() *ring.Scan         { panic("contract") }
func (r *Run) World() *floor.World      { panic("contract") }
func (r *Run) Goal() geom.Vec           { panic("contract") }
func (r *Run) Logic() *logic.Logic      { panic("contract") }
func (r *Run) Engine() *logic.Engine    { panic("contract") }
func (r *Run) Switches() []logic.Switch { panic("contract") }
func (r *Run) Gap() float64             { panic("contract") } // hull to the nearest solid now, m

// Why returns the sentence for the current mode: why it was entered.
func (r *Run) Why() string { panic("contract") }
