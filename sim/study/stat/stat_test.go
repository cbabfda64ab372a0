package stat

import (
	"math"
	"math/bits"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
	"pgregory.net/rapid"

	"leeway/sim/chance"
)

// Coverage computed in full, not sampled: the probability that the interval of k
// holds the true share, over all k.
func coverage(n int, share float64, of func(k int) Interval) float64 {
	b := distuv.Binomial{N: float64(n), P: share}
	c := 0.0
	for k := range n + 1 {
		if of(k).Holds(share) {
			c += b.Prob(float64(k))
		}
	}
	return c
}

func TestIntervalsOfSharesCover(t *testing.T) {
	for _, n := range []int{20, 50, 200} {
		mean, m := 0.0, 0.0
		for share := 0.02; share < 0.99; share += 0.01 {
			c := coverage(n, share, func(k int) Interval { return ClopperPearson(k, n, 0.95) })
			if c < 0.95-1e-9 {
				t.Errorf("exact, n = %d, share %.2f: covers with %.4f", n, share, c)
			}
			mean += coverage(n, share, func(k int) Interval { return Wilson(k, n, 0.95) })
			m++
		}
		// A score interval covers as often as it says on average over the share.
		if mean /= m; math.Abs(mean-0.95) > 0.01 {
			t.Errorf("score, n = %d: covers with %.4f on average", n, mean)
		}
	}
}

// Simulated: two designs on the same trials, of which most that fail with the one fail
// with the other.
func TestPairedDifferenceCovers(t *testing.T) {
	const rounds, n = 2000, 50
	held := 0
	for i := range rounds {
		s := chance.New(6, "pairs", i)
		var count [2][2]int
		for range n {
			hard := s.Uniform() < 0.2
			first, other := 0, 0
			if s.Uniform() < 0.95 && !hard {
				first = 1
			}
			if s.Uniform() < 0.8 && !hard {
				other = 1
			}
			count[first][other]++
		}
		if NewcombePaired(count[1][1], count[1][0], count[0][1], count[0][0], 0.95).Holds(0.8 * (0.95 - 0.8)) {
			held++
		}
	}
	if c := float64(held) / rounds; c < 0.93 || c > 0.985 {
		t.Errorf("covers with %.3f", c)
	}
	if in := NewcombePaired(60, 0, 0, 0, 0.95); in.Low > -0.05 || in.High < 0.05 || in.Low < -0.07 {
		t.Errorf("sixty pairs without a failure: %v", in)
	}
}

// Simulated: intervals of quantiles cover at least as often as they say, and the
// bootstrap of a mean nearly so.
func TestIntervalsOfNumbersCover(t *testing.T) {
	const rounds, n = 400, 60
	var tenth, median, mean int
	for i := range rounds {
		s := chance.New(5, "coverage", i)
		v := make([]float64, n)
		for j := range v {
			v[j] = -math.Log(1 - s.Uniform()) // exponential: far from normal
		}
		if i < 150 {
			b := Bootstrap(uint64(i), n, 1, 0.9, func(rows []int, out []float64) {
				out[0] = 0
				for _, r := range rows {
					out[0] += v[r] / n
				}
			})
			if b[0].Holds(1) {
				mean++
			}
		}
		slices.Sort(v)
		if QuantileInterval(v, 0.1, 0.9).Holds(-math.Log(0.9)) {
			tenth++
		}
		if QuantileInterval(v, 0.5, 0.9).Holds(math.Ln2) {
			median++
		}
	}
	// Three standard errors of 400 draws at 0.9 are 0.045.
	for what, got := range map[string]float64{"tenth": float64(tenth) / rounds, "median": float64(median) / rounds} {
		if got < 0.9-0.045 || got > 0.99 {
			t.Errorf("%s: covers with %.3f", what, got)
		}
	}
	if got := float64(mean) / 150; got < 0.9-0.10 || got > 0.99 {
		t.Errorf("bootstrap of a mean: covers with %.3f", got)
	}
}

func TestQuantileIntervalOfFew(t *testing.T) {
	in := QuantileInterval([]float64{1, 2, 3}, 0.05, 0.95)
	if !math.IsInf(in.Low, -1) || math.IsInf(in.High, 1) && in.High < 2 {
		t.Errorf("three values bound the twentieth by %v", in)
	}
	if in := QuantileInterval(nil, 0.5, 0.95); !math.IsInf(in.Low, -1) || !math.IsInf(in.High, 1) {
		t.Errorf("nothing bounds the median by %v", in)
	}
}

// The sequential tests err no more often than they say.
func TestSequentialErrors(t *testing.T) {
	test := SPRT{P0: 0.05, P1: 0.20, Alpha: 0.05, Beta: 0.10}
	looks := Looks{Target: 0.8, Confidence: 0.9, First: 25, Most: 400}
	var rejected, accepted, wrong int
	const rounds = 1000
	for i := range rounds {
		s := chance.New(9, "sequential", i)
		for _, p := range []float64{test.P0, test.P1} {
			v, d := Undecided, 0
			for n := 1; v == Undecided; n++ {
				if s.Uniform() < p {
					d++
				}
				v = test.Decide(d, n)
			}
			if p == test.P0 && v == Reject {
				rejected++
			}
			if p == test.P1 && v == Accept {
				accepted++
			}
		}
		k, n := 0, 0
		for _, at := range looks.Times() {
			for ; n < at; n++ {
				if s.Uniform() < 0.8-0.001 { // just below what is asked
					k++
				}
			}
			if v := looks.Decide(k, n); v != Undecided {
				if v == Accept {
					wrong++
				}
				break
			}
		}
	}
	se := func(p float64) float64 { return 3 * math.Sqrt(p*(1-p)/rounds) }
	if r := float64(rejected) / rounds; r > test.Alpha+se(test.Alpha) || r < 0.01 {
		t.Errorf("rejects what is good enough with %.3f", r)
	}
	if a := float64(accepted) / rounds; a > test.Beta+se(test.Beta) || a < 0.02 {
		t.Errorf("accepts what is not with %.3f", a)
	}
	if w := float64(wrong) / rounds; w > 0.1+se(0.1) {
		t.Errorf("looks accept what is not with %.3f", w)
	}
}

// Shapley's axioms, on random games.
func TestShapleyAxioms(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := rapid.IntRange(1, 7).Draw(t, "players")
		v := rapid.SliceOfN(rapid.Float64Range(-1, 1), 1<<k, 1<<k).Draw(t, "values")
		dummy := rapid.IntRange(0, k-1).Draw(t, "dummy")
		for s := range v {
			if s>>dummy&1 == 1 {
				v[s] = v[s^1<<dummy]
			}
		}
		phi := Shapley(k, v)
		sum := 0.0
		for _, x := range phi {
			sum += x
		}
		if math.Abs(sum-(v[len(v)-1]-v[0])) > 1e-12 {
			t.Fatalf("the shares add up to %v, not to %v", sum, v[len(v)-1]-v[0])
		}
		if phi[dummy] != 0 {
			t.Fatalf("who adds nothing has a share of %v", phi[dummy])
		}
		d := Dividends(k, v)
		for i := range phi {
			share := 0.0
			for s, x := range d {
				if s>>i&1 == 1 {
					share += x / float64(bits.OnesCount(uint(s)))
				}
			}
			if math.Abs(share-phi[i]) > 1e-12 {
				t.Fatalf("by dividends player %d has %v, by Shapley %v", i, share, phi[i])
			}
		}
	})
}

// The interaction index by its other definition: the mean of what j changes about what
// i adds, with the weights that a random order gives.
func TestInteractions(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := rapid.IntRange(2, 6).Draw(t, "players")
		v := rapid.SliceOfN(rapid.Float64Range(-1, 1), 1<<k, 1<<k).Draw(t, "values")
		factorial := func(n int) float64 { return math.Gamma(float64(n + 1)) }
		got := Interactions(k, v)
		for i := range k {
			for j := range i {
				want, a, b := 0.0, 1<<i, 1<<j
				for s := range v {
					if s&a == 0 && s&b == 0 {
						n := bits.OnesCount(uint(s))
						want += factorial(k-n-2) * factorial(n) / factorial(k-1) * (v[s|a|b] - v[s|a] - v[s|b] + v[s])
					}
				}
				if math.Abs(got[i][j]-want) > 1e-9 {
					t.Fatalf("%d and %d: %v, want %v", i, j, got[i][j], want)
				}
			}
		}
	})
}

// Every one of 2^m intervals of every axis holds one of 2^m points; so it is for
// both ways to fill a space.
func TestPointsAreStratified(t *testing.T) {
	const n = 256
	for name, x := range map[string][][]float64{"Sobol'": Sobol(MaxDims, n), "Latin hypercube": LatinHypercube(3, MaxDims, n)} {
		for d := range MaxDims {
			var seen [n]bool
			for _, p := range x {
				seen[int(p[d]*n)] = true
			}
			if slices.Contains(seen[:], false) {
				t.Errorf("%s: axis %d is not stratified", name, d)
			}
		}
	}
	// Any two axes of different number: 2^8 points, and in many pairs one in each of 16 by 16 cells.
	good := 0
	x := Sobol(MaxDims, n)
	for a := range MaxDims {
		for b := range a {
			var seen [16 * 16]bool
			for _, p := range x {
				seen[int(p[a]*16)*16+int(p[b]*16)] = true
			}
			if !slices.Contains(seen[:], false) {
				good++
			}
		}
	}
	if good < 30 {
		t.Errorf("only %d pairs of axes are filled evenly", good)
	}
}

func TestIndicesOfNothing(t *testing.T) {
	d := NewDesign(2, 16)
	x := d.Estimate(make([]float64, len(d.Points)), 1, 0.95)
	if x.Variance != 0 || x.First[0] != 0 || x.Total[1] != 0 {
		t.Errorf("a constant has indices: %+v", x)
	}
}
