package geom

import (
	"math"
	"math/big"
)

// Reference values for the tests: plain power series in numbers of several
// hundred bits, sharing nothing with the functions under test.

func bigFloat(x float64, prec uint) *big.Float {
	return new(big.Float).SetPrec(prec).SetFloat64(x)
}

// bigAtanInverse returns atan(1/n) by its Taylor series.
func bigAtanInverse(n int64, prec uint) *big.Float {
	term := new(big.Float).SetPrec(prec).Quo(bigFloat(1, prec), bigFloat(float64(n), prec))
	square := bigFloat(float64(n*n), prec)
	sum := new(big.Float).SetPrec(prec).Set(term)
	for k := int64(1); ; k++ {
		term.Quo(term, square)
		t := new(big.Float).SetPrec(prec).Quo(term, bigFloat(float64(2*k+1), prec))
		if t.MantExp(nil) < -int(prec) {
			return sum
		}
		if k%2 == 1 {
			sum.Sub(sum, t)
		} else {
			sum.Add(sum, t)
		}
	}
}

var piByPrecision = map[uint]*big.Float{}

// bigPi is π = 16 atan(1/5) − 4 atan(1/239) (J. Machin, 1706).
func bigPi(prec uint) *big.Float {
	if p, ok := piByPrecision[prec]; ok {
		return p
	}
	a := bigAtanInverse(5, prec+32)
	a.Mul(a, bigFloat(16, prec+32))
	b := bigAtanInverse(239, prec+32)
	b.Mul(b, bigFloat(4, prec+32))
	p := a.Sub(a, b).SetPrec(prec)
	piByPrecision[prec] = p
	return p
}

// bigSincos takes whole multiples of π/2 off x and sums the Taylor series.
func bigSincos(x float64) (sin, cos *big.Float) {
	prec := uint(300)
	if _, e := math.Frexp(x); e > 0 {
		prec += uint(e)
	}
	halfPi := new(big.Float).SetPrec(prec).Quo(bigPi(prec), bigFloat(2, prec))
	b := bigFloat(x, prec)
	n, _ := new(big.Float).SetPrec(prec).Quo(b, halfPi).Int(nil)
	rest := new(big.Float).SetPrec(prec).SetInt(n)
	rest.Sub(b, rest.Mul(rest, halfPi)).SetPrec(300)

	square := new(big.Float).SetPrec(300).Mul(rest, rest)
	series := func(first *big.Float, k float64) *big.Float {
		sum := new(big.Float).SetPrec(300).Set(first)
		term := new(big.Float).SetPrec(300).Set(first)
		for ; term.Sign() != 0 && term.MantExp(nil) > sum.MantExp(nil)-280; k += 2 {
			term.Mul(term, square)
			term.Quo(term, bigFloat(-k*(k+1), 300))
			sum.Add(sum, term)
		}
		return sum
	}
	sin, cos = series(rest, 2), series(bigFloat(1, 300), 1)
	switch new(big.Int).And(n, big.NewInt(3)).Int64() {
	case 1:
		sin, cos = cos, sin.Neg(sin)
	case 2:
		sin, cos = sin.Neg(sin), cos.Neg(cos)
	case 3:
		sin, cos = cos.Neg(cos), sin
	}
	return sin, cos
}

// bigAtan2 halves the angle until the Taylor series of atan runs fast.
func bigAtan2(y, x float64) *big.Float {
	const prec = 400
	low, high := bigFloat(math.Abs(y), prec), bigFloat(math.Abs(x), prec)
	steep := low.Cmp(high) > 0
	if steep {
		low, high = high, low
	}
	t := new(big.Float).SetPrec(prec).Quo(low, high)
	halvings := 8
	for range halvings { // atan t = 2 atan(t / (1 + √(1 + t²)))
		s := new(big.Float).SetPrec(prec).Mul(t, t)
		s.Sqrt(s.Add(s, bigFloat(1, prec)))
		t.Quo(t, s.Add(s, bigFloat(1, prec)))
	}
	square := new(big.Float).SetPrec(prec).Mul(t, t)
	sum := new(big.Float).SetPrec(prec).Set(t)
	for k := 3.0; t.Sign() != 0 && t.MantExp(nil) > sum.MantExp(nil)-300; k += 2 {
		t.Neg(t.Mul(t, square))
		sum.Add(sum, new(big.Float).SetPrec(prec).Quo(t, bigFloat(k, prec)))
	}
	a := sum.Mul(sum, bigFloat(float64(int(1)<<halvings), prec))
	pi := bigPi(prec)
	if steep {
		half := new(big.Float).SetPrec(prec).Quo(pi, bigFloat(2, prec))
		a = half.Sub(half, a)
	}
	if math.Signbit(x) {
		a = new(big.Float).SetPrec(prec).Sub(pi, a)
	}
	if math.Signbit(y) {
		a.Neg(a)
	}
	return a
}

// bigExp divides x by 2⁴⁰, sums the Taylor series, and squares 40 times.
func bigExp(x float64) *big.Float {
	const prec = 400
	r := bigFloat(x, prec)
	r.SetMantExp(r, -40)
	sum, term := bigFloat(1, prec), bigFloat(1, prec)
	for k := 1.0; k < 30; k++ {
		term.Mul(term, r)
		term.Quo(term, bigFloat(k, prec))
		sum.Add(sum, term)
	}
	for range 40 {
		sum.Mul(sum, sum)
	}
	return sum
}

// bigLog is 2 atanh((m − 1)/(m + 1)) + k·ln 2 for x = m·2ᵏ, ln 2 in the same way.
func bigLog(x float64) *big.Float {
	const prec = 400
	atanh2 := func(m *big.Float) *big.Float {
		one := bigFloat(1, prec)
		t := new(big.Float).SetPrec(prec).Sub(m, one)
		t.Quo(t, new(big.Float).SetPrec(prec).Add(m, one))
		square := new(big.Float).SetPrec(prec).Mul(t, t)
		sum := new(big.Float).SetPrec(prec).Set(t)
		for k := 3.0; t.Sign() != 0 && t.MantExp(nil) > sum.MantExp(nil)-300; k += 2 {
			t.Mul(t, square)
			sum.Add(sum, new(big.Float).SetPrec(prec).Quo(t, bigFloat(k, prec)))
		}
		return sum.Mul(sum, bigFloat(2, prec))
	}
	m, k := math.Frexp(x)
	if m < 0.75 { // keep m near 1, so that nothing cancels
		m, k = 2*m, k-1
	}
	log := atanh2(bigFloat(2, prec))
	log.Mul(log, bigFloat(float64(k), prec))
	return log.Add(log, atanh2(bigFloat(m, prec)))
}

// ulps returns |got − want| in units of the spacing of float64 at want.
func ulps(got float64, want *big.Float) float64 {
	if want.Sign() == 0 {
		if got == 0 {
			return 0
		}
		return math.Inf(1)
	}
	if math.IsNaN(got) || math.IsInf(got, 0) {
		return math.Inf(1)
	}
	exp := max(want.MantExp(nil)-53, -1074)
	d := new(big.Float).SetPrec(500).Sub(bigFloat(got, 500), want)
	d.SetMantExp(d, -exp)
	f, _ := d.Float64()
	return math.Abs(f)
}
