package ring

import (
	"math"

	"leeway/sim/geom"
)

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
	// exact distance from the hull's centre to the nearest boundary, and its
	// direction (body frame, unit). Gap is +Inf, and Toward zero, when nothing is
	// within Mount+Max of the centre and before the first reading. With the centre
	// inside a filled solid Gap is negative and Toward leads further in, so
	// that −Toward is always the way out.
	Exact  bool
	Gap    float64
	Toward geom.Vec
}

// clear makes s the scan of a ring that has read nothing yet.
func (s *Scan) clear(c *Config, bearings []float64) {
	n := len(bearings)
	s.Bearing = append(s.Bearing[:0], bearings...)
	s.Dir = sized(s.Dir, n)
	s.Range = sized(s.Range, n)
	s.Hit = sized(s.Hit, n)
	s.Tick = sized(s.Tick, n)
	for i, b := range s.Bearing {
		s.Dir[i] = geom.Heading(b)
		s.Range[i], s.Hit[i], s.Tick[i] = c.Max, false, -1
	}
	s.Mount, s.Min, s.Max = c.Mount, c.Min, c.Max
	s.Exact = c.AllRound && c.Noiseless
	s.Gap, s.Toward = math.Inf(1), geom.Vec{}
}

// copyFrom makes s the same as src, keeping its memory.
func (s *Scan) copyFrom(src *Scan) {
	old := *s
	*s = *src
	s.Bearing = append(old.Bearing[:0], src.Bearing...)
	s.Dir = append(old.Dir[:0], src.Dir...)
	s.Range = append(old.Range[:0], src.Range...)
	s.Hit = append(old.Hit[:0], src.Hit...)
	s.Tick = append(old.Tick[:0], src.Tick...)
}

// sized returns a slice of n elements, in the memory of s where that is enough.
func sized[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}
