package stat

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// normalQuantile returns the z below which a standard normal deviate stays with probability p.
func normalQuantile(p float64) float64 { return distuv.UnitNormal.Quantile(p) }

// TwoSided returns the z of a two-sided interval: 1.96 for 0.95.
func TwoSided(confidence float64) float64 { return normalQuantile(0.5 + confidence/2) }

// OneSided returns the z of a one-sided bound: 1.645 for 0.95.
func OneSided(confidence float64) float64 { return normalQuantile(confidence) }

// ScoreInterval returns the interval of those probabilities p for which k successes
// in n lie within z standard deviations of np:
//
//	(p̂ + z²/2n ± z √(p̂(1−p̂)/n + z²/4n²)) / (1 + z²/n)
//
// E. B. Wilson, Journal of the American Statistical Association 22, 1927. Nothing
// known (n = 0) gives [0, 1].
func ScoreInterval(k, n int, z float64) Interval {
	if n == 0 {
		return Interval{0, 1}
	}
	m, p := float64(n), float64(k)/float64(n)
	zz := z * z
	mid := p + zz/(2*m)
	half := z * math.Sqrt(p*(1-p)/m+zz/(4*m*m))
	in := Interval{(mid - half) / (1 + zz/m), (mid + half) / (1 + zz/m)}
	// Where the formula is exact, rounding must not take it away.
	if k == 0 {
		in.Low = 0
	}
	if k == n {
		in.High = 1
	}
	return in
}

// Wilson returns the two-sided score interval of a share of k in n.
func Wilson(k, n int, confidence float64) Interval { return ScoreInterval(k, n, TwoSided(confidence)) }

// WilsonLower returns the one-sided lower score bound.
func WilsonLower(k, n int, confidence float64) float64 {
	return ScoreInterval(k, n, OneSided(confidence)).Low
}

// WilsonUpper returns the one-sided upper score bound.
func WilsonUpper(k, n int, confidence float64) float64 {
	return ScoreInterval(k, n, OneSided(confidence)).High
}

// ClopperPearson returns the two-sided exact interval of a share of k in n, which
// covers the truth at least as often as it says (C. J. Clopper and E. S. Pearson,
// Biometrika 26, 1934), by quantiles of the beta distribution.
func ClopperPearson(k, n int, confidence float64) Interval {
	tail := (1 - confidence) / 2
	return Interval{exactLower(k, n, tail), exactUpper(k, n, tail)}
}

// ExactLower returns the one-sided exact lower bound.
func ExactLower(k, n int, confidence float64) float64 { return exactLower(k, n, 1-confidence) }

// ExactUpper returns the one-sided exact upper bound.
func ExactUpper(k, n int, confidence float64) float64 { return exactUpper(k, n, 1-confidence) }

func exactLower(k, n int, tail float64) float64 {
	if k == 0 {
		return 0
	}
	if k == n {
		return math.Pow(tail, 1/float64(n))
	}
	return distuv.Beta{Alpha: float64(k), Beta: float64(n - k + 1)}.Quantile(tail)
}

func exactUpper(k, n int, tail float64) float64 { return 1 - exactLower(n-k, n, tail) }

// NoFailureBound returns the exact one-sided upper bound of the failure rate when
// n runs went by without a failure: 1 − (1−confidence)^(1/n).
func NoFailureBound(n int, confidence float64) float64 {
	return -math.Expm1(math.Log1p(-confidence) / float64(n))
}

// RuleOfThree returns 3/n, close to NoFailureBound at 95 % (J. A. Hanley and
// A. Lippman-Hand, JAMA 249, 1983).
func RuleOfThree(n int) float64 { return 3 / float64(n) }

// RunsWithoutFailure returns how many runs without a failure show a reliability:
// the least n with reliability^n ≤ 1 − confidence.
func RunsWithoutFailure(reliability, confidence float64) int {
	return int(math.Ceil(math.Log1p(-confidence)/math.Log(reliability) - 1e-9))
}

// Newcombe returns the interval of the difference k1/n1 − k2/n2 of two independent
// shares: the hybrid score interval, method 10 of R. G. Newcombe, Statistics in
// Medicine 17, 1998.
func Newcombe(k1, n1, k2, n2 int, confidence float64) Interval {
	p1, p2 := float64(k1)/float64(n1), float64(k2)/float64(n2)
	a, b := Wilson(k1, n1, confidence), Wilson(k2, n2, confidence)
	d := p1 - p2
	return Interval{
		d - math.Hypot(p1-a.Low, b.High-p2),
		d + math.Hypot(a.High-p1, p2-b.Low),
	}
}

// NewcombePaired returns the interval of the difference between the shares of two
// designs on the same n = both + onlyFirst + onlyOther + neither trials, first − other:
// the score intervals of the two, put together with the correlation φ of the pairs
// (R. G. Newcombe, Statistics in Medicine 17, 1998, pp. 2635–2650, method 10; from
// memory). Unlike a bootstrap it does not shrink to nothing when no pair differs.
func NewcombePaired(both, onlyFirst, onlyOther, neither int, confidence float64) Interval {
	n := both + onlyFirst + onlyOther + neither
	if n == 0 {
		return Interval{-1, 1}
	}
	k1, k2 := both+onlyFirst, both+onlyOther
	p1, p2 := float64(k1)/float64(n), float64(k2)/float64(n)
	a, b := Wilson(k1, n, confidence), Wilson(k2, n, confidence)
	phi := 0.0
	if spread := float64(k1) * float64(n-k1) * float64(k2) * float64(n-k2); spread > 0 {
		cross := float64(both)*float64(neither) - float64(onlyFirst)*float64(onlyOther)
		if cross > 0 {
			cross = max(cross-float64(n)/2, 0)
		}
		phi = cross / math.Sqrt(spread)
	}
	side := func(x, y float64) float64 { return math.Sqrt(max(0, x*x-2*phi*x*y+y*y)) }
	d := p1 - p2
	return Interval{max(-1, d-side(p1-a.Low, b.High-p2)), min(1, d+side(a.High-p1, p2-b.Low))}
}

// McNemar returns the exact two-sided p value of two designs on the same seeds, of
// which b fail only with the first and c only with the second (Q. McNemar,
// Psychometrika 12, 1947): twice the smaller tail of a fair coin, at most 1.
func McNemar(b, c int) float64 {
	if b+c == 0 {
		return 1
	}
	return min(1, 2*distuv.Binomial{N: float64(b + c), P: 0.5}.CDF(float64(min(b, c))))
}
