// Package ring is the ring of range sensors round the hull.
package ring

import (
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// Config is a ring. SI units, radians.
type Config struct {
	Bearings []float64 // of each beam, from the heading, counter-clockwise
	Mount    float64   // distance of the sensors from the hull's centre, m
	Min, Max float64   // range, m, measured from the sensor

	NoiseBase float64 // σ = NoiseBase + NoiseGain·range, m
	NoiseGain float64
	Dropout   float64 // probability that an echo is lost: reads Max, no hit
	Random    float64 // probability of a random return, uniform in [Min, Max]
	Quantum   float64 // readings are whole multiples of it; 0: none
	Period    int     // ticks between readings of one beam (≥ 1)
	InTurn    bool    // the beams fire one after the other, spread over the period
	SubRays   int     // rays in a cone, the nearest counts (≥ 1)
	Cone      float64 // opening angle of the cone, rad

	AllRound  bool // idealisation: a dense fan (FanSize) instead of Bearings, all beams at every Period, no cones
	Noiseless bool // idealisation: no noise, dropout, random returns, quantisation, and no minimum range
}

// FanSize is the number of beams of the all-round ideal.
const FanSize = 180

// Even returns n bearings spread evenly, the first dead ahead.
func Even(n int) []float64 { panic("contract") }

// Scan is what the ring knows at a moment: all that a logic may see of the floor.
type Scan struct {
	Bearing  []float64  // rad from the heading
	Dir      []geom.Vec // unit vectors of the bearings in the body frame
	Range    []float64  // m from the sensor; Max where there is no echo
	Hit      []bool     // there was an echo
	Tick     []int64    // when each beam was last read; −1: not yet
	Mount    float64
	Min, Max float64
	// Exact is set for the noiseless all-round ideal: Gap and Toward are then the
	// exact distance from the hull's centre to the nearest boundary, and its direction (body
	// frame, unit). Gap is +Inf when nothing is within Mount+Max of the centre.
	Exact  bool
	Gap    float64
	Toward geom.Vec
}

// World is what a ring needs of the floor.
type World interface {
	Cast(rays []floor.Ray, max float64, out []float64)
	Nearest(p geom.Vec, within float64) (floor.Near, bool)
}

// Ring is the state of one ring.
type Ring struct { /* … */
}

// New returns a ring that has read nothing yet. Streams: ("ring noise", i), ("ring dropout", i), ("ring random", i) for beam i.
func New(c Config, seed uint64) *Ring { panic("contract") }

// Reset is New keeping the memory. CopyFrom makes r the same as src.
func (r *Ring) Reset(c Config, seed uint64) { panic("contract") }
func (r *Ring) CopyFrom(src *Ring)          { panic("contract") }

// SetNoise changes the noise of a running ring.
func (r *Ring) SetNoise(base, gain, dropout float64) { panic("contract") }

// Sense reads the beams that are due at this tick from the true pose. At tick 0 all beams are read. No allocation.
func (r *Ring) Sense(tick int64, pose geom.Pose, w World) { panic("contract") }

// Scan returns the readings; the same memory at every call.
func (r *Ring) Scan() *Scan { panic("contract") }

// MissedWidth returns the width of the widest plate that can stand unseen between
// two neighbouring beams at distance rho from their common centre: 2ρ sin(Δφ/2) for the widest gap Δφ.
func (c *Config) MissedWidth(rho float64) float64 { panic("contract") }
