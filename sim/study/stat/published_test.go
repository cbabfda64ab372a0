package stat

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"leeway/sim/truth"
)

const p = 1e-6 // "P": the seven digits of the table

func within(t *testing.T, what string, got Interval, want []float64, rel float64) {
	t.Helper()
	truth.Close(t, what+", low", got.Low, want[0], rel)
	truth.Close(t, what+", high", got.High, want[1], rel)
}

// P-01 (NIST/SEMATECH e-Handbook 7.2.4.1; z rounded as there).
func TestP01WilsonLowerBound(t *testing.T) {
	truth.Close(t, "bound", ScoreInterval(26, 200, 1.645).Low, truth.Value(t, "P-01", ""), p)
	truth.Close(t, "bound with z in full", WilsonLower(26, 200, 0.95), truth.Value(t, "P-01", ""), 1e-4)
}

// P-02 (NIST 7.2.4.1: 0.071354, 0.401029).
func TestP02ClopperPearson90(t *testing.T) {
	within(t, "4 of 20", ClopperPearson(4, 20, 0.90), truth.Values(t, "P-02", ""), p)
}

// P-03 (reference page of SciPy).
func TestP03ClopperPearson95(t *testing.T) {
	within(t, "7 of 50", ClopperPearson(7, 50, 0.95), truth.Values(t, "P-03", ""), p)
}

// P-04 (NIST 7.2.4.1, formula).
func TestP04Wilson(t *testing.T) {
	want := truth.Values(t, "P-04", "")
	for i, x := range [][2]int{{18, 20}, {95, 100}, {0, 30}, {30, 30}} {
		within(t, fmt.Sprint(x), Wilson(x[0], x[1], 0.95), want[2*i:], p)
	}
}

// P-05 (Hanley & Lippman-Hand 1983; success runs from memory, computed).
func TestP05NoFailure(t *testing.T) {
	want := truth.Values(t, "P-05", "")
	truth.Close(t, "exact", NoFailureBound(100, 0.95), want[0], p)
	truth.Close(t, "exact by the beta distribution", ExactUpper(0, 100, 0.95), want[0], p)
	truth.Close(t, "rule of three", RuleOfThree(100), want[1], p)
	for i, r := range []float64{0.95, 0.90, 0.99} {
		if got, n := RunsWithoutFailure(r, 0.95), truth.Values(t, "P-05", "n")[i]; float64(got) != n {
			t.Errorf("%v: %d runs, want %v", r, got, n)
		}
	}
}

// P-06 (Wald 1947).
func TestP06SPRT(t *testing.T) {
	test := SPRT{P0: 0.05, P1: 0.20, Alpha: 0.05, Beta: 0.10}
	s, h1, h0 := test.Lines()
	truth.Close(t, "slope", s, truth.Value(t, "P-06", "s"), p)
	truth.Close(t, "h1", h1, truth.Value(t, "P-06", "h1"), p)
	truth.Close(t, "h0", h0, truth.Value(t, "P-06", "h0"), p)
	n := int(truth.Value(t, "P-06", "n"))
	if got := test.Fewest(); got != n {
		t.Errorf("%d runs, want %d", got, n)
	}
	if test.Decide(0, n-1) != Undecided || test.Decide(0, n) != Accept || test.Decide(3, 3) != Reject {
		t.Error("the verdicts do not follow the lines")
	}
}

// P-07 (McNemar 1947, exact binomial).
func TestP07McNemar(t *testing.T) {
	truth.Close(t, "p", McNemar(3, 14), truth.Value(t, "P-07", "p"), p)
	if McNemar(14, 3) != McNemar(3, 14) || McNemar(0, 0) != 1 || McNemar(4, 4) != 1 {
		t.Error("it is not symmetric, or balance is not 1")
	}
}

// game makes the list of values of a game from a rule for sets.
func game(k int, of func(in func(i int) bool) float64) []float64 {
	v := make([]float64, 1<<k)
	for s := range v {
		v[s] = of(func(i int) bool { return s>>i&1 == 1 })
	}
	return v
}

// P-08 (airport game, after Littlechild & Owen 1973).
func TestP08ShapleyAirport(t *testing.T) {
	costs := []float64{40, 50, 60, 70, 80, 90}
	phi := Shapley(6, game(6, func(in func(int) bool) float64 {
		most := 0.0
		for i, c := range costs {
			if in(i) {
				most = max(most, c)
			}
		}
		return most
	}))
	for i, want := range truth.Values(t, "P-08", "φ·6") {
		truth.Close(t, fmt.Sprint("φ", i, "·6"), 6*phi[i], want, p)
	}
}

// P-09 (glove game).
func TestP09ShapleyGloves(t *testing.T) {
	phi := Shapley(3, game(3, func(in func(int) bool) float64 {
		if in(2) && (in(0) || in(1)) {
			return 1
		}
		return 0
	}))
	for i, want := range truth.Values(t, "P-09", "φ") {
		truth.Close(t, fmt.Sprint("φ", i), phi[i], want, p)
	}
}

// P-10 (Shapley 1953; made-up rates).
func TestP10SharesOfAFailureRate(t *testing.T) {
	// ∅, K, L, KL, S, KS, LS, KLS
	v := []float64{0.02, 0.10, 0.05, 0.30, 0.08, 0.16, 0.12, 0.55}
	phi := Shapley(3, v)
	each, rest := Alone(3, v)
	for i := range 3 {
		truth.Close(t, fmt.Sprint("φ", i), phi[i], truth.Values(t, "P-10", "φ")[i], p)
		truth.Close(t, fmt.Sprint("alone", i), each[i], truth.Values(t, "P-10", "OAT")[i], p)
	}
	truth.Close(t, "rest", rest, truth.Value(t, "P-10", "rest"), p)
}

func ishigami(u []float64) float64 {
	x := func(i int) float64 { return math.Pi * (2*u[i] - 1) }
	s := math.Sin(x(1))
	return math.Sin(x(0)) + 7*s*s + 0.1*math.Pow(x(2), 4)*math.Sin(x(0))
}

// P-11 (Ishigami & Homma 1990): the estimators at N = 2^13 to 0.02.
func TestP11Ishigami(t *testing.T) {
	d := NewDesign(3, 1<<13)
	y := make([]float64, len(d.Points))
	for i, u := range d.Points {
		y[i] = ishigami(u)
	}
	x := d.Estimate(y, 1, 0.95)
	truth.Close(t, "variance", x.Variance, truth.Value(t, "P-11", "V"), 0.02)
	for i := range 3 {
		first, total := truth.Values(t, "P-11", "S")[i], truth.Values(t, "P-11", "ST")[i]
		if math.Abs(x.First[i]-first) > 0.02 || math.Abs(x.Total[i]-total) > 0.02 {
			t.Errorf("factor %d: %.4f and %.4f, want %.4f and %.4f", i, x.First[i], x.Total[i], first, total)
		}
		if !x.FirstIn[i].Holds(first) || !x.TotalIn[i].Holds(total) {
			t.Errorf("factor %d: the intervals %v and %v do not hold %.4f and %.4f", i, x.FirstIn[i], x.TotalIn[i], first, total)
		}
	}
}

// P-12 (direction numbers of Joe & Kuo 2008).
func TestP12Sobol(t *testing.T) {
	var got []string
	for _, x := range Sobol(2, 8) {
		got = append(got, fmt.Sprintf("(%v, %v)", x[0], x[1]))
	}
	if want := truth.Text(t, "P-12", ""); strings.Join(got, "; ") != want {
		t.Errorf("%v, want %s", got, want)
	}
}

// P-15 (ISO 9283, 7.2).
func TestP15Positioning(t *testing.T) {
	ap, l, s, rp := Positioning([2]float64{1, 1}, [][2]float64{{1.02, 0.99}, {1.01, 1.03}, {0.98, 1.01}, {1.03, 1.00}, {1.00, 0.97}})
	for i, got := range []float64{ap, l, s, rp} {
		truth.Close(t, []string{"AP", "l̄", "S", "RP"}[i], got, truth.Values(t, "P-15", "")[i], p)
	}
}

// P-17 (Newcombe 1998, method 10).
func TestP17Newcombe(t *testing.T) {
	within(t, "56/70 − 48/80", Newcombe(56, 70, 48, 80, 0.95), truth.Values(t, "P-17", ""), p)
}
