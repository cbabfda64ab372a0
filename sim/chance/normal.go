package chance

import (
	"math"

	"leeway/sim/geom"
)

// The ziggurat: the area under exp(−x²/2), x ≥ 0, is covered by layers of equal
// area, all rectangles but the lowest, which has the tail beyond x = edge
// besides. A point drawn evenly in a rectangle is under the curve at once unless
// it lies near the rim (G. Marsaglia and W. W. Tsang, "The ziggurat method for
// generating random variables", Journal of Statistical Software 5(8), 2000).
// Layer, sign and place come from bits of their own, as J. A. Doornik asks for
// ("An improved ziggurat method to generate normal random samples", 2005).
const (
	layers = 256
	edge   = 3.6541528853610088   // where the tail begins, for 256 layers
	area   = 0.004928673233974655 // of each layer, the tail in the lowest included
)

// layer is what the usual case needs to know of a layer.
type layer struct {
	scale float64 // x = scale·place, for a place of 52 bits
	sure  uint64  // places below it are under the curve
}

// The ziggurat, filled once and never changed. heights[i] is the floor of layer
// i and heights[i+1] its ceiling.
var ziggurat, heights = build()

// density is that of the normal distribution, but for its factor.
func density(x float64) float64 { return geom.Exp(-0.5 * x * x) }

func build() (z [layers]layer, h [layers + 1]float64) {
	const places = 1 << 52
	// rim[i] is the width of layer i, falling to 0 above the topmost. The lowest
	// is as wide as if its tail lay beside it as a rectangle of the same height.
	var rim [layers + 1]float64
	rim[0] = area / density(edge)
	rim[1] = edge
	for i := 2; i < layers; i++ {
		rim[i] = math.Sqrt(-2 * geom.Log(area/rim[i-1]+density(rim[i-1])))
	}
	for i := range z {
		z[i] = layer{scale: rim[i] / places, sure: uint64(rim[i+1] / rim[i] * places)}
	}
	for i := range h {
		h[i] = density(rim[i])
	}
	return z, h
}

// Normal returns a standard normal deviate, distributed exactly evenly about
// zero. It takes one number from the stream almost always (99 %), seldom more.
func (s *Stream) Normal() float64 {
	for {
		u := s.Uint64()
		l := &ziggurat[u&(layers-1)]
		sign := u << 55 & (1 << 63) // bit 8
		place := u >> 12
		x := float64(place) * l.scale
		if place < l.sure || s.rimOrTail(u&(layers-1), &x) {
			return math.Float64frombits(math.Float64bits(x) | sign)
		}
	}
}

// rimOrTail decides about a point x that is not surely under the curve, and
// draws one from the tail for the lowest layer.
func (s *Stream) rimOrTail(i uint64, x *float64) bool {
	if i != 0 {
		return heights[i]+float64(s.Uniform()*(heights[i+1]-heights[i])) < density(*x)
	}
	// The tail, after Marsaglia (1964): x beyond the edge is exponential, and
	// kept with the probability that makes it normal.
	for {
		a := -geom.Log(1-s.Uniform()) / edge
		b := -geom.Log(1 - s.Uniform())
		if b+b > float64(a*a) {
			*x = edge + a
			return true
		}
	}
}
