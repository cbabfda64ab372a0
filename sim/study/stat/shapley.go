package stat

import "math/bits"

// A game of k players is its list of 2^k values: v[S] is the value of the set S,
// whose bit i says whether player i is in it.

// Shapley returns the players' shares of v[all] − v[none], which they add up to:
//
//	φ_i = Σ_{S∌i} |S|! (k−|S|−1)! / k! · (v(S∪i) − v(S))
//
// L. S. Shapley, "A value for n-person games", 1953.
func Shapley(k int, v []float64) []float64 {
	// weight[s] = s! (k−s−1)! / k!, as 1 / (k · C(k−1, s)).
	weight := make([]float64, k)
	c := 1.0
	for s := range weight {
		weight[s] = 1 / (float64(k) * c)
		c = c * float64(k-1-s) / float64(s+1)
	}
	phi := make([]float64, k)
	for i := range phi {
		for s := range v {
			if s>>i&1 == 0 {
				phi[i] += weight[bits.OnesCount(uint(s))] * (v[s|1<<i] - v[s])
			}
		}
	}
	return phi
}

// Alone returns what each player adds by itself, v({i}) − v(none), and what those
// leave unexplained of v[all] − v[none].
func Alone(k int, v []float64) (each []float64, rest float64) {
	each = make([]float64, k)
	rest = v[len(v)-1] - v[0]
	for i := range each {
		each[i] = v[1<<i] - v[0]
		rest -= each[i]
	}
	return each, rest
}

// Dividends returns what each set adds beyond all that is in it: v(S) is v(none)
// plus the sum of the dividends of the sets within S (J. C. Harsanyi, International
// Economic Review 4, 1963). A player's Shapley share is the sum over the sets it is
// in, each divided evenly among its members.
func Dividends(k int, v []float64) []float64 {
	d := append([]float64(nil), v...)
	for i := range k {
		for s := range d {
			if s>>i&1 == 1 {
				d[s] -= d[s^1<<i]
			}
		}
	}
	return d
}

// Interactions returns how much each pair i > j adds together beyond what the two
// add each, on average over what else is in: Shapley's interaction index (M. Grabisch
// and M. Roubens, International Journal of Game Theory 28, 1999), which is the sum of
// the dividends of the sets that hold both, each divided by its size less one.
func Interactions(k int, v []float64) [][]float64 {
	out := make([][]float64, k)
	for i := range out {
		out[i] = make([]float64, i)
	}
	for s, d := range Dividends(k, v) {
		for i := range out {
			for j := range out[i] {
				if s>>i&1 == 1 && s>>j&1 == 1 {
					out[i][j] += d / float64(bits.OnesCount(uint(s))-1)
				}
			}
		}
	}
	return out
}
