package geom

import "math"

// The functions of this file round every operation on its own: each product
// that is added to something passes through float64(...), which forbids the
// compiler to fuse the two, and nothing is called whose result may depend on the
// machine. They therefore return the same bits everywhere. Their polynomials are
// minimax fits, found by Remez exchange in 60-digit arithmetic and rounded to
// float64; the stated bounds are the largest errors that the tests have to stay
// under, against arithmetic of several hundred bits.

// Wrap returns the angle a brought into (−π, π] by whole turns of 2π, with the
// float64 values of π and 2π. The result is exact, and Wrap(−a) = −Wrap(a)
// except that −π becomes π. An infinite or undefined angle gives NaN.
//
// Since the float64 value of 2π is 2.4e-16 short, the result differs from that of
// the true turn by 2.4e-16 for each turn taken off: less than the spacing of the
// numbers that a itself was rounded to.
func Wrap(a float64) float64 {
	if a > -math.Pi && a <= math.Pi {
		return a
	}
	const (
		turn  = 2 * math.Pi
		big   = 1.5 * (1 << 52) // adding and taking it off rounds to an integer
		front = 0x1.921fb54400000p+2
		back  = 0x1.0b46p-32 // front + back = turn, and n·front, n·back are exact
	)
	if math.Abs(a) < 1<<20 {
		n := (a/turn + big) - big
		a = (a - float64(n*front)) - float64(n*back)
		// A quotient that was rounded across a half ends one turn off.
		if a > math.Pi {
			a -= turn
		} else if a < -math.Pi {
			a += turn
		}
	} else {
		a = math.Remainder(a, turn) // NaN for ±Inf and NaN
	}
	if a == -math.Pi {
		return math.Pi
	}
	return a
}

// Sincos returns sin x and cos x, each within 0.85 ulp for every finite x. It is
// exactly odd and even: Sincos(−x) = −sin x, cos x. Infinite and undefined
// angles give NaN.
//
// The angle is reduced to [−π/4, π/4] by subtracting a multiple of π/2 held in
// three parts (W. J. Cody and W. Waite, Software Manual for the Elementary
// Functions, 1980); where that runs out of bits, reduceExactly takes over.
func Sincos(x float64) (sin, cos float64) {
	const (
		big = 1.5 * (1 << 52)
		// π/2 in parts. The first two have 33 bits, so that their products with
		// a multiple below 2¹⁹ are exact; the third has 53.
		half1 = 0x1.921fb54400000p+0
		half2 = 0x1.0b4611a600000p-34
		half3 = 0x1.3198a2e037073p-69
	)
	shifted := float64(x*(2/math.Pi)) + big
	n := shifted - big
	quadrant := math.Float64bits(shifted)

	first := x - float64(n*half1) // exact
	second := float64(n * half2)  // exact
	rest := first - second
	third := float64(n*half3) - ((first - rest) - second)
	r := rest - third
	tail := (rest - r) - third // the angle is r + tail

	// What is lost beyond the parts of π/2 is less than 2⁻¹¹⁸ a multiple. Zero, NaN
	// and infinity come this way too.
	if !(math.Abs(x) < 1<<19) || math.Abs(r) <= float64(math.Abs(n)*0x1p-58) {
		if x == 0 {
			return x, 1
		}
		if !finite(x) {
			return math.NaN(), math.NaN()
		}
		quadrant, r, tail = reduceExactly(x)
	}

	const (
		s1 = -0x1.5555555555548p-3
		s2 = 0x1.111111110f7cap-7
		s3 = -0x1.a01a019bfd1c2p-13
		s4 = 0x1.71de3567148fep-19
		s5 = -0x1.ae5e59f6b07c7p-26
		s6 = 0x1.5d8fa3546f823p-33

		c1 = 0x1.555555555554bp-5
		c2 = -0x1.6c16c16c14f8ap-10
		c3 = 0x1.a01a019c838f3p-16
		c4 = -0x1.27e4f7ea36c9ep-22
		c5 = 0x1.1ee9d7524054ap-29
		c6 = -0x1.8fa465d9d247cp-37
	)
	z := r * r
	zz := z * z
	h := float64(0.5 * z)
	one := 1 - h // 1 − z/2, whose rounding error is (1 − one) − h

	p := (s1 + float64(z*s2)) + float64(zz*((s3+float64(z*s4))+float64(zz*(s5+float64(z*s6)))))
	sin = r + (float64(float64(z*r)*p) + float64(tail*one))

	q := (c1 + float64(z*c2)) + float64(zz*((c3+float64(z*c4))+float64(zz*(c5+float64(z*c6)))))
	cos = one + (((1 - one) - h) + (float64(zz*q) - float64(r*tail)))

	// Turn by the quadrant without branches, which random headings would
	// mispredict: odd quadrants swap the two, and the signs go by its bits.
	a, b := math.Float64bits(sin), math.Float64bits(cos)
	swap := (a ^ b) & -(quadrant & 1)
	a ^= swap ^ quadrant>>1<<63
	b ^= swap ^ (quadrant+1)>>1<<63
	return math.Float64frombits(a), math.Float64frombits(b)
}

// atanEighths[k] is atan(k/8) as a float64 and what it leaves over.
var atanEighths = [9][2]float64{
	{0, 0},
	{0.12435499454676144, -3.1253241424539383e-18},
	{0.24497866312686414, 1.0698755618734451e-17},
	{0.35877067027057225, -2.4623815582638635e-17},
	{0.4636476090008061, 2.2698777452961687e-17},
	{0.5585993153435624, -5.4556305485916264e-18},
	{0.6435011087932844, 1.5834785051444286e-17},
	{0.7188299996216245, -2.1478388444456983e-17},
	{0.7853981633974483, 3.061616997868383e-17},
}

// Atan2 returns the angle of the point (x, y) in [−π, π], within 1.5 ulp; special
// cases are those of [math.Atan2]. It is exactly odd in y.
//
// With t the smaller of |x|, |y| over the larger, and c a multiple of 1/8 near
// to t, it is atan t = atan c + atan((t − c)/(1 + t·c)).
func Atan2(y, x float64) float64 {
	const (
		tiny = 0x1p-900
		huge = 0x1p+1000
		// what the float64 values of π/2 and π leave over
		halfPiRest = 6.123233995736766e-17
		piRest     = 1.2246467991473532e-16
	)
	low, high := math.Abs(y), math.Abs(x)
	steep := low > high
	if steep {
		low, high = high, low
	}
	if !(low <= high && high > tiny && high < huge) { // NaN fails it too
		if high == 0 || !finite(x) || !finite(y) {
			return atan2Special(y, x)
		}
		// Scale, so that neither products nor sums leave the range. What
		// underflows here is lost in the quotient anyway.
		scale := 0x1p+110
		if high >= huge {
			scale = 0x1p-110
		}
		low, high = float64(low*scale), float64(high*scale)
	}

	// Rounding down more often than up keeps the sum below from cancelling.
	k := int(float64(low/high*8) + 0.375)
	c := float64(k) / 8
	u := (low - float64(c*high)) / (high + float64(c*low))
	base, rest := atanEighths[k][0], atanEighths[k][1]

	const (
		a1 = -0x1.5555555555436p-2
		a2 = 0x1.9999999853dd5p-3
		a3 = -0x1.24924565f15ccp-3
		a4 = 0x1.c712d1bc39a4dp-4
		a5 = -0x1.6ebd354de9a77p-4
	)
	z := u * u
	p := float64(z * (a1 + float64(z*(a2+float64(z*(a3+float64(z*(a4+float64(z*a5)))))))))
	bend := float64(u*p) + rest // atan t is base + (u + bend), in falling size

	// Mirror about the diagonal, then about the y axis.
	if steep {
		top := math.Pi/2 - base
		bend = (((math.Pi/2 - top) - base) + halfPiRest) - bend
		base, u = top, -u
	}
	if x < 0 {
		top := math.Pi - base
		bend = (((math.Pi - top) - base) + piRest) - bend
		base, u = top, -u
	}
	return math.Copysign(base+(u+bend), y)
}

// atan2Special is Atan2 where an argument is infinite or undefined, or both are zero.
func atan2Special(y, x float64) float64 {
	switch {
	case math.IsNaN(x) || math.IsNaN(y):
		return math.NaN()
	case math.IsInf(x, 1) && math.IsInf(y, 0):
		return math.Copysign(math.Pi/4, y)
	case math.IsInf(x, -1) && math.IsInf(y, 0):
		return math.Copysign(3*math.Pi/4, y)
	case math.IsInf(y, 0):
		return math.Copysign(math.Pi/2, y)
	case math.Signbit(x): // −Inf, or both are zero
		return math.Copysign(math.Pi, y)
	}
	return math.Copysign(0, y)
}

// ln 2 in two parts, the first of 33 bits: its products with exponents are exact.
const (
	ln2Front = 0x1.62e42fef00000p-1
	ln2Back  = math.Ln2 - ln2Front
)

// Exp returns eˣ within 1 ulp: +Inf beyond the largest number, 0 below the
// smallest, NaN for NaN.
func Exp(x float64) float64 {
	const (
		largest  = 709.782712893384   // beyond it: infinity
		smallest = -745.1332191019412 // below it: less than half the smallest number
		big      = 1.5 * (1 << 52)
	)
	switch {
	case math.IsNaN(x):
		return x
	case x > largest:
		return math.Inf(1)
	case x < smallest:
		return 0
	}
	// eˣ = 2ᵏ·eʳ with |r| ≤ ln 2 / 2
	n := (float64(x*math.Log2E) + big) - big
	front := x - float64(n*ln2Front)
	back := float64(n * ln2Back)
	r := front - back
	tail := (front - r) - back

	const (
		e2  = 0.5
		e3  = 0x1.555555555555bp-3
		e4  = 0x1.5555555555502p-5
		e5  = 0x1.111111110ec1ap-7
		e6  = 0x1.6c16c16c30764p-10
		e7  = 0x1.a01a01b399051p-13
		e8  = 0x1.a01a013604abbp-16
		e9  = 0x1.71ddefdc76fd5p-19
		e10 = 0x1.27e5b4e2856bcp-22
		e11 = 0x1.af6c613a2060cp-26
		e12 = 0x1.1e3cf032c7e9ep-29
	)
	z := r * r
	zz := z * z
	p := (e2 + float64(r*e3)) + float64(z*(e4+float64(r*e5)))
	q := (e6 + float64(r*e7)) + float64(z*(e8+float64(r*e9)))
	s := (e10 + float64(r*e11)) + float64(z*e12)
	p += float64(zz * (q + float64(zz*s)))
	y := 1 + (r + (float64(z*p) + tail))

	// Two factors, since 2ᵏ alone may be out of range at either end.
	k := int64(n)
	return y * powerOfTwo(k/2) * powerOfTwo(k-k/2)
}

// powerOfTwo returns 2ᵏ for −1022 ≤ k ≤ 1023.
func powerOfTwo(k int64) float64 { return math.Float64frombits(uint64(k+1023) << 52) }

// Log returns the natural logarithm within 1 ulp: −Inf for zero, NaN for NaN
// and for negative numbers.
//
// With x = 2ᵏ(1 + f), √½ ≤ 1 + f < √2 and s = f/(2 + f), it is
// log(1 + f) = log((1 + s)/(1 − s)) = f − (f²/2 − s·(f²/2 + R(s²))).
func Log(x float64) float64 {
	switch {
	case math.IsNaN(x) || x > math.MaxFloat64:
		return x
	case x < 0:
		return math.NaN()
	case x == 0:
		return math.Inf(-1)
	}
	var k int64
	if x < 0x1p-1022 { // subnormal
		x *= 0x1p+54
		k = -54
	}
	const (
		mantissa = 1<<52 - 1
		sqrtHalf = 0x3fe6a09e667f3bcd // the bits of √½
		one      = 0x3ff << 52
	)
	// Adding 1 − √½ to the bits carries into the exponent where the mantissa is √2 or more.
	ix := math.Float64bits(x) + (one - sqrtHalf)
	k += int64(ix>>52) - 1023
	f := math.Float64frombits(ix&mantissa+sqrtHalf) - 1 // exact

	const (
		l1 = 0x1.5555555555593p-1
		l2 = 0x1.999999997f9dbp-2
		l3 = 0x1.249249422dc73p-2
		l4 = 0x1.c71c51d37c8a0p-3
		l5 = 0x1.74664adbe1987p-3
		l6 = 0x1.39a0704246a87p-3
		l7 = 0x1.2f133a65b2ccbp-3
	)
	s := f / (2 + f)
	z := s * s
	zz := z * z
	odd := l1 + float64(zz*(l3+float64(zz*(l5+float64(zz*l7)))))
	even := l2 + float64(zz*(l4+float64(zz*l6)))
	r := float64(z*odd) + float64(zz*even)
	h := float64(0.5 * f * f)
	n := float64(k)
	return float64(n*ln2Front) - ((h - (float64(s*(h+r)) + float64(n*ln2Back))) - f)
}
