package stat

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"

	"leeway/sim/chance"
)

// Quantile returns the q-quantile of ascending values, interpolated between the
// neighbours of place (n−1)q (definition 7 of R. J. Hyndman and Y. Fan, The American
// Statistician 50, 1996). NaN when there are none.
func Quantile(sorted []float64, q float64) float64 {
	if len(sorted) == 0 {
		return math.NaN()
	}
	at := q * float64(len(sorted)-1)
	i := int(math.Floor(at))
	if i+1 >= len(sorted) || at == float64(i) {
		return sorted[min(i, len(sorted)-1)]
	}
	return sorted[i] + (at-float64(i))*(sorted[i+1]-sorted[i])
}

// QuantileInterval returns an interval for the q-quantile of whatever the ascending
// values were drawn from: between two of them, at ranks that the binomial
// distribution gives, whatever the shape (H. A. David and H. N. Nagaraja, Order
// Statistics, 2003, 7.1). An end that so few values cannot bound is infinite.
func QuantileInterval(sorted []float64, q, confidence float64) Interval {
	n := len(sorted)
	in := Interval{math.Inf(-1), math.Inf(1)}
	if n == 0 {
		return in
	}
	b := distuv.Binomial{N: float64(n), P: q}
	tail := (1 - confidence) / 2
	// X counts the values below the quantile. It lies above the value of rank r
	// (from 1) unless X < r: the largest r for which that has the chance of a tail.
	r := 0
	for r < n && b.CDF(float64(r)) <= tail {
		r++
	}
	if r > 0 {
		in.Low = sorted[r-1]
	}
	// It lies below the value of rank r unless X ≥ r.
	r = n + 1
	for r > 1 && 1-b.CDF(float64(r-2)) <= tail {
		r--
	}
	if r <= n {
		in.High = sorted[r-1]
	}
	return in
}

// Mean returns the mean, NaN of nothing.
func Mean(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x
	}
	return sum / float64(len(v))
}

// Resamples is how often a bootstrap resamples.
const Resamples = 1000

// Bootstrap returns percentile intervals (B. Efron, The Annals of Statistics 7, 1979)
// of statistics of n rows. of computes them from row numbers drawn with replacement
// into out; the same seed draws the same rows.
func Bootstrap(seed uint64, n, statistics int, confidence float64, of func(rows []int, out []float64)) []Interval {
	rows := make([]int, n)
	all := make([][]float64, statistics)
	for i := range all {
		all[i] = make([]float64, Resamples)
	}
	out := make([]float64, statistics)
	for b := range Resamples {
		s := chance.New(seed, "bootstrap", b)
		for i := range rows {
			rows[i] = int(s.Uniform() * float64(n))
		}
		of(rows, out)
		for i := range out {
			all[i][b] = out[i]
		}
	}
	in := make([]Interval, statistics)
	for i, v := range all {
		slices.Sort(v)
		in[i] = Interval{Quantile(v, (1-confidence)/2), Quantile(v, (1+confidence)/2)}
	}
	return in
}

// Positioning returns how well stops (x, y) hit a goal, after ISO 9283, 7.2: the
// accuracy, which is the distance from the goal to the mean of the stops; the mean
// distance l̄ of the stops from that mean; its sample standard deviation; and the
// repeatability l̄ + 3S. Two stops at least.
func Positioning(goal [2]float64, stops [][2]float64) (accuracy, mean, deviation, repeatability float64) {
	n := float64(len(stops))
	var mid [2]float64
	for _, p := range stops {
		mid[0] += p[0] / n
		mid[1] += p[1] / n
	}
	l := make([]float64, len(stops))
	for i, p := range stops {
		l[i] = math.Hypot(p[0]-mid[0], p[1]-mid[1])
	}
	mean = Mean(l)
	sum := 0.0
	for _, x := range l {
		sum += (x - mean) * (x - mean)
	}
	deviation = math.Sqrt(sum / (n - 1))
	return math.Hypot(mid[0]-goal[0], mid[1]-goal[1]), mean, deviation, mean + 3*deviation
}
