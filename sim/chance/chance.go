// Package chance holds the random streams of a run. Every source of chance has
// a stream of its own, derived from (seed, name, index), so that adding a
// source never shifts another's numbers. A Stream is a plain value: copying it
// copies its place in the sequence, which is what snapshots need.
//
// The numbers are the same bits on every machine: integers throughout, and
// normal deviates whose rare slow paths use the exact functions of package geom.
// They are for simulation; nothing here is meant to be hard to guess.
package chance

import "math/bits"

// Stream is one sequence of random numbers, of period 2¹²⁸. The zero value is a
// valid stream, but New is the way to one that is unlike all others.
//
// It is the generator PCG with the output function DXSM: a linear congruential
// generator on 128 bits whose state is scrambled by multiplications and shifts
// (M. E. O'Neill, "PCG: a family of simple fast space-efficient statistically
// good algorithms for random number generation", Harvey Mudd College
// HMC-CS-2014-0905, 2014; DXSM is of 2019). It is the sequence of PCG in
// math/rand/v2, which the tests hold it to.
type Stream struct{ hi, lo uint64 }

// New returns the stream called name, number index, of the run with this seed.
//
// The name is hashed by FNV-1a; seed, name and index then go through the
// finaliser of SplitMix64 one after the other (G. L. Steele, D. Lea and C. H.
// Flood, "Fast splittable pseudorandom number generators", OOPSLA 2014), which
// changes about half of the bits whenever one changes. Two streams are two
// places, picked at random, on a cycle of 2¹²⁸: that they overlap within any
// number of draws a machine can make is out of the question.
func New(seed uint64, name string, index int) Stream {
	h := uint64(14695981039346656037)
	for i := range len(name) {
		h = (h ^ uint64(name[i])) * 1099511628211
	}
	const golden = 0x9e3779b97f4a7c15 // 2⁶⁴ over the golden ratio, the step of SplitMix64
	x := mix(seed + golden)
	x = mix((x ^ h) + golden)
	x = mix((x ^ uint64(index)) + golden)
	return Stream{hi: mix(x + golden), lo: mix(x + golden + golden)}
}

// mix is a bijection of 64 bits in which every bit of the argument acts on every
// bit of the result. The constants are variant 13 of D. Stafford, used by SplitMix64.
func mix(x uint64) uint64 {
	x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
	x = (x ^ x>>27) * 0x94d049bb133111eb
	return x ^ x>>31
}

// Uint64 returns 64 random bits.
func (s *Stream) Uint64() uint64 {
	const (
		factorHi, factorLo = 2549297995355413924, 4865540595714422341
		stepHi, stepLo     = 6364136223846793005, 1442695040888963407
		cheap              = 0xda942042e4dd58b5
	)
	hi, lo := bits.Mul64(s.lo, factorLo)
	hi += s.hi*factorLo + s.lo*factorHi
	lo, carry := bits.Add64(lo, stepLo, 0)
	hi, _ = bits.Add64(hi, stepHi, carry)
	s.hi, s.lo = hi, lo

	hi ^= hi >> 32
	hi *= cheap
	hi ^= hi >> 48
	return hi * (lo | 1)
}

// Uniform returns a number in [0, 1), one of the 2⁵³ evenly spaced ones.
func (s *Stream) Uniform() float64 { return float64(float64(s.Uint64()>>11) * 0x1p-53) }
