package geom

import (
	"math"
	"math/bits"
)

// twoOverPi holds the binary digits of 2/π behind the point, most significant
// first, after one word of the zeros before it: enough for the largest float64.
var twoOverPi = [...]uint64{
	0x0000000000000000,
	0xa2f9836e4e441529, 0xfc2757d1f534ddc0, 0xdb6295993c439041, 0xfe5163abdebbc561,
	0xb7246e3a424dd2e0, 0x06492eea09d1921c, 0xfe1deb1cb129a73e, 0xe88235f52ebb4484,
	0xe99c7026b45f7e41, 0x3991d639835339f4, 0x9c845f8bbdf9283b, 0x1ff897ffde05980f,
	0xef2f118b5a0a6d1f, 0x6d367ecf27cb09b7, 0x4f463f669e5fea2d, 0x7527bac7ebe5f17b,
	0x3d0739f78a5292ea, 0x6bfb5fb11f8d5d08, 0x56033046fc7b6bab, 0xf0cfbc209af4361d,
}

// reduceExactly takes the multiple of π/2 nearest to x off it, for any finite x
// with |x| ≥ ½. It returns that multiple modulo 4, and the rest in two parts,
// good to 2⁻⁶⁰ of itself.
//
// It multiplies the 53-bit significand of x by those 256 digits of 2/π that
// matter: the ones before give whole turns, the ones after less than 2⁻²⁰⁰
// (M. Payne and R. Hanek, "Radian reduction for trigonometric functions", ACM
// SIGNUM Newsletter 18(1), 1983). No float64 comes nearer than 2⁻⁶² to a multiple
// of π/2, so enough digits are left after the leading zeros of the fraction.
func reduceExactly(x float64) (quadrant uint64, r, tail float64) {
	b := math.Float64bits(x)
	m := b&(1<<52-1) | 1<<52
	e := int(b>>52&0x7ff) - 1075 // |x| = m·2ᵉ

	// The window starts at the digit of weight 2^(1−e), whose product with x
	// counts in units of 2·m. The digit of weight 2⁻¹ is bit 64 of the table.
	at := e + 62
	word, shift := at>>6, uint(at&63)
	var w [4]uint64
	for i := range w {
		w[i] = twoOverPi[word+i]<<shift | twoOverPi[word+i+1]>>(64-shift)
	}
	h1, l1 := bits.Mul64(w[1], m)
	h2, l2 := bits.Mul64(w[2], m)
	h3, _ := bits.Mul64(w[3], m)
	p2, carry := bits.Add64(l2, h3, 0)
	p1, carry := bits.Add64(l1, h2, carry)
	p0 := w[0]*m + h1 + carry

	// p0 begins with the two bits of the quadrant; the fraction follows.
	quadrant = p0 >> 62
	f0 := p0<<2 | p1>>62
	f1 := p1<<2 | p2>>62
	negative := b>>63 != 0
	if f0>>63 != 0 { // nearer to the next multiple, and short of it
		quadrant++
		f0, f1 = ^f0, ^f1 // negated, but for the last bit
		r = -1
	} else {
		r = 1
	}
	if negative {
		quadrant = -quadrant
		r = -r
	}

	// Leading zeros off; then times π/2, as an integer of 64 bits.
	zeros := bits.LeadingZeros64(f0)
	f := f0<<zeros | f1>>(64-zeros)
	const halfPi = 0xc90fdaa22168c235 // π/2·2⁶³
	f, _ = bits.Mul64(f, halfPi)
	unit := math.Copysign(powerOfTwo(int64(-63-zeros)), r)
	return quadrant, float64(float64(f&^0x7ff) * unit), float64(float64(f&0x7ff) * unit)
}
