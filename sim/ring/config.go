package ring

import (
	"math"
	"slices"

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

// Even returns n bearings spread evenly, the first dead ahead, the others
// counter-clockwise, in (−π, π]. Bearings to the left and to the right are exact
// negatives of each other, so that a mirrored world reads the same bits mirrored.
func Even(n int) []float64 {
	b := make([]float64, n)
	for i := range b {
		if 2*i <= n {
			b[i] = math.Pi * (float64(2*i) / float64(n)) // behind is exactly π
		} else {
			b[i] = -b[n-i]
		}
	}
	return b
}

// bearings returns those that the ring has, the fan of the ideal included.
func (c *Config) bearings() []float64 {
	if c.AllRound {
		return Even(FanSize)
	}
	return c.Bearings
}

// raysPerBeam returns how many rays make up one beam.
func (c *Config) raysPerBeam() int {
	if c.AllRound {
		return 1
	}
	return max(c.SubRays, 1)
}

// phase returns the tick of the period at which beam i of n fires: 0 unless the
// beams take turns, else round(i·Period/n) modulo Period.
func (c *Config) phase(i, n int) int64 {
	if !c.InTurn || c.AllRound {
		return 0
	}
	p := c.period()
	return (2*int64(i)*p + int64(n)) / (2 * int64(n)) % p
}

func (c *Config) period() int64 { return int64(max(c.Period, 1)) }

// MissedWidth returns the width of the widest plate that can stand unseen between
// two neighbouring beams at distance rho from their common centre: 2ρ sin(Δφ/2)
// for the widest gap Δφ. It is +Inf where the gap is half a turn or more, since a
// plate of any width then has room. Beams count as thin: a cone sees more.
func (c *Config) MissedWidth(rho float64) float64 {
	b := slices.Clone(c.bearings())
	if len(b) == 0 {
		return math.Inf(1)
	}
	for i := range b {
		b[i] = geom.Wrap(b[i])
	}
	slices.Sort(b)
	widest := b[0] + 2*math.Pi - b[len(b)-1]
	for i := 1; i < len(b); i++ {
		widest = max(widest, b[i]-b[i-1])
	}
	if widest >= math.Pi {
		return math.Inf(1)
	}
	sin, _ := geom.Sincos(widest / 2)
	return 2 * rho * sin
}
