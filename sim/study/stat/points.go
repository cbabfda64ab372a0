package stat

import (
	"math/bits"

	"leeway/sim/chance"
)

// MaxDims is how many dimensions Sobol has.
const MaxDims = 21

// directions are the primitive polynomials and first direction numbers of
// dimensions 2 and up: degree, inner coefficients and odd numbers m (S. Joe and
// F. Y. Kuo, "Constructing Sobol sequences with better two-dimensional projections",
// SIAM Journal on Scientific Computing 30, 2008; their set D(6)).
var directions = [MaxDims - 1]struct {
	degree int
	inner  uint32
	m      [7]uint32
}{
	{1, 0, [7]uint32{1}},
	{2, 1, [7]uint32{1, 3}},
	{3, 1, [7]uint32{1, 3, 1}},
	{3, 2, [7]uint32{1, 1, 1}},
	{4, 1, [7]uint32{1, 1, 3, 3}},
	{4, 4, [7]uint32{1, 3, 5, 13}},
	{5, 2, [7]uint32{1, 1, 5, 5, 17}},
	{5, 4, [7]uint32{1, 1, 5, 5, 5}},
	{5, 7, [7]uint32{1, 1, 7, 11, 19}},
	{5, 11, [7]uint32{1, 1, 5, 1, 1}},
	{5, 13, [7]uint32{1, 1, 1, 3, 11}},
	{5, 14, [7]uint32{1, 3, 5, 5, 31}},
	{6, 1, [7]uint32{1, 3, 3, 9, 7, 49}},
	{6, 13, [7]uint32{1, 1, 1, 15, 21, 21}},
	{6, 16, [7]uint32{1, 3, 1, 13, 27, 49}},
	{6, 19, [7]uint32{1, 1, 1, 15, 7, 5}},
	{6, 22, [7]uint32{1, 3, 1, 15, 13, 25}},
	{6, 25, [7]uint32{1, 1, 5, 5, 19, 61}},
	{7, 1, [7]uint32{1, 3, 7, 11, 23, 15, 103}},
	{7, 4, [7]uint32{1, 3, 7, 13, 13, 15, 69}},
}

// Sobol returns the first n points of the Sobol' sequence in [0, 1)^dims, beginning
// with the origin, in the order of the Gray code (I. M. Sobol', 1967; I. A. Antonov
// and V. M. Saleev, 1979). Powers of two of points fill the space evenly. dims is at
// most MaxDims.
func Sobol(dims, n int) [][]float64 {
	v := make([][32]uint32, dims)
	for d := range v {
		for j := range 32 {
			switch {
			case d == 0:
				v[d][j] = 1 << (31 - j)
			case j < directions[d-1].degree:
				v[d][j] = directions[d-1].m[j] << (31 - j)
			default:
				p := &directions[d-1]
				x := v[d][j-p.degree] ^ v[d][j-p.degree]>>p.degree
				for k := 1; k < p.degree; k++ {
					if p.inner>>(p.degree-1-k)&1 == 1 {
						x ^= v[d][j-k]
					}
				}
				v[d][j] = x
			}
		}
	}
	out := make([][]float64, n)
	x := make([]uint32, dims)
	for i := range out {
		if i > 0 {
			c := bits.TrailingZeros32(^uint32(i - 1))
			for d := range x {
				x[d] ^= v[d][c]
			}
		}
		out[i] = make([]float64, dims)
		for d := range x {
			out[i][d] = float64(x[d]) * 0x1p-32
		}
	}
	return out
}

// LatinHypercube returns n points in [0, 1)^dims of which every n-th of every axis
// holds exactly one, somewhere in it (M. D. McKay, R. J. Beckman and W. J. Conover,
// Technometrics 21, 1979).
func LatinHypercube(seed uint64, dims, n int) [][]float64 {
	out := make([][]float64, n)
	for i := range out {
		out[i] = make([]float64, dims)
	}
	order := make([]int, n)
	for d := range dims {
		s := chance.New(seed, "latin hypercube", d)
		for i := range order {
			order[i] = i
		}
		for i := n - 1; i > 0; i-- {
			j := int(s.Uniform() * float64(i+1))
			order[i], order[j] = order[j], order[i]
		}
		for i := range out {
			out[i][d] = (float64(order[i]) + s.Uniform()) / float64(n)
		}
	}
	return out
}
