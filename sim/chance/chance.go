// Package chance holds the random streams of a run. Every source of chance has
// a stream of its own, derived from (seed, name, index), so that adding a
// source never shifts another's numbers. A Stream is a plain value: copying it
// copies its place in the sequence, which is what snapshots need.
package chance

// Stream is one sequence of random numbers.
type Stream struct{ hi, lo uint64 }

// New returns the stream called name, number index, of the run with this seed.
func New(seed uint64, name string, index int) Stream { panic("contract") }

// Uint64 returns 64 random bits.
func (s *Stream) Uint64() uint64 { panic("contract") }

// Uniform returns a number in [0, 1).
func (s *Stream) Uniform() float64 { panic("contract") }

// Normal returns a standard normal deviate.
func (s *Stream) Normal() float64 { panic("contract") }
