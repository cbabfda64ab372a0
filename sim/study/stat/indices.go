package stat

// Design is the plan that first- and total-order indices of k factors are estimated
// from: N rows of A and B, and for every factor A with that one column of B. The
// points are in [0, 1)^k; N(k+2) of them.
type Design struct {
	K, N   int
	Points [][]float64 // A, then B, then A with column 0 of B, with column 1, …
}

// NewDesign takes A and B from a Sobol' sequence of 2k dimensions, without its
// origin. k is at most MaxDims/2.
func NewDesign(k, n int) Design {
	d := Design{K: k, N: n}
	rows := Sobol(2*k, n+1)[1:]
	for _, r := range rows {
		d.Points = append(d.Points, r[:k])
	}
	for _, r := range rows {
		d.Points = append(d.Points, r[k:])
	}
	for i := range k {
		for _, r := range rows {
			p := append([]float64(nil), r[:k]...)
			p[i] = r[k+i]
			d.Points = append(d.Points, p)
		}
	}
	return d
}

// Indices are shares of the variance of a result.
type Indices struct {
	Variance     float64
	First, Total []float64 // of each factor: by itself, and with all it acts together with
	FirstIn      []Interval
	TotalIn      []Interval
}

// Estimate returns the indices of the values y at d.Points, with bootstrap intervals
// over the rows: first order after A. Saltelli et al., Computer Physics
// Communications 181, 2010, table 2 (b), total order (f) after M. J. W. Jansen, 1999.
// A result that does not vary has indices of 0.
func (d Design) Estimate(y []float64, seed uint64, confidence float64) Indices {
	k, n := d.K, d.N
	at := func(block, row int) float64 { return y[block*n+row] }
	of := func(rows []int, out []float64) (variance float64) {
		mean, m := 0.0, float64(2*len(rows))
		for _, r := range rows {
			mean += (at(0, r) + at(1, r)) / m
		}
		for _, r := range rows {
			a, b := at(0, r)-mean, at(1, r)-mean
			variance += (a*a + b*b) / m
		}
		for i := range k {
			first, total := 0.0, 0.0
			for _, r := range rows {
				step := at(2+i, r) - at(0, r)
				first += (at(1, r) - mean) * step
				total += step * step
			}
			out[i], out[k+i] = 0, 0
			if variance > 0 {
				out[i] = first / float64(len(rows)) / variance
				out[k+i] = total / float64(2*len(rows)) / variance
			}
		}
		return variance
	}
	all := make([]int, n)
	for i := range all {
		all[i] = i
	}
	out := make([]float64, 2*k)
	x := Indices{Variance: of(all, out)}
	x.First, x.Total = out[:k], out[k:]
	in := Bootstrap(seed, n, 2*k, confidence, func(rows []int, out []float64) { of(rows, out) })
	x.FirstIn, x.TotalIn = in[:k], in[k:]
	return x
}
