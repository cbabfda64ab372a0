package chance

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
)

// TestMatchesTheStandardLibrary holds Uint64 to PCG of math/rand/v2, an
// implementation of the same generator by others.
func TestMatchesTheStandardLibrary(t *testing.T) {
	for seed := range uint64(20) {
		ours := New(seed, "any", 3)
		theirs := rand.NewPCG(ours.hi, ours.lo)
		for i := range 1000 {
			if a, b := ours.Uint64(), theirs.Uint64(); a != b {
				t.Fatalf("seed %d, draw %d: %#x, math/rand/v2 has %#x", seed, i, a, b)
			}
		}
	}
}

// TestFirstNumbers pins the first numbers of a stream: recorded runs and links
// replay only as long as these stay. The integers come from this code, once the
// generator had been held to math/rand/v2.
func TestFirstNumbers(t *testing.T) {
	s := New(1, "ring noise", 0)
	got := fmt.Sprintf("%#x %#x %v", s.Uint64(), s.Uint64(), s.Uniform())
	for range 3 {
		got += fmt.Sprintf(" %v", s.Normal())
	}
	if want := "0xb3fd261681a6a70b 0x63b60ee202013aba 0.3421600396529594 1.0185027174587473 1.4549517413533348 1.3449961513382636"; got != want {
		t.Errorf("the stream begins with %s, want %s", got, want)
	}

	// A long way down the stream, slow paths of Normal included.
	h := uint64(14695981039346656037)
	for range 100_000 {
		for b, i := math.Float64bits(s.Normal()), 0; i < 8; i, b = i+1, b>>8 {
			h = (h ^ b&0xff) * 1099511628211
		}
	}
	if want := uint64(0x51e946afac059d2a); h != want {
		t.Errorf("100,000 normal deviates hash to %#x, want %#x", h, want)
	}
}

func TestCopyKeepsThePlace(t *testing.T) {
	a := New(7, "wheel slip", 1)
	for range 100 {
		a.Normal()
	}
	b := a
	var first [50]float64
	for i := range first {
		first[i] = a.Normal()
	}
	for i := range first {
		if x := b.Normal(); x != first[i] {
			t.Fatalf("draw %d after the copy is %v, was %v", i, x, first[i])
		}
	}
}

func TestNoAllocation(t *testing.T) {
	s := New(1, "any", 0)
	if n := testing.AllocsPerRun(100, func() {
		s = New(s.Uint64(), "any", 1)
		for range 1000 {
			s.Normal()
		}
	}); n != 0 {
		t.Errorf("%v allocations", n)
	}
}

// draws returns n deviates from several streams, a block from each.
func draws(n int, f func(s *Stream) float64) []float64 {
	x := make([]float64, 0, n)
	for i := 0; len(x) < n; i++ {
		s := New(2026, "draws", i)
		for range min(1000, n-len(x)) {
			x = append(x, f(&s))
		}
	}
	return x
}

// notExtreme fails when z, standard normal if all is well, is beyond what
// happens once in two million times.
func notExtreme(t *testing.T, what string, z float64) {
	t.Helper()
	if !(math.Abs(z) < 5) {
		t.Errorf("%s is %.1f standard errors off", what, z)
	}
}

// TestNormalMoments: mean 0, variance 1, skewness 0, kurtosis 3, each within its
// standard error for n draws (textbook variances of sample moments of a normal).
func TestNormalMoments(t *testing.T) {
	const n = 2_000_000
	var m [5]float64
	for _, x := range draws(n, (*Stream).Normal) {
		p := x
		for k := 1; k <= 4; k++ {
			m[k] += p / n
			p *= x
		}
	}
	root := math.Sqrt(n)
	notExtreme(t, "mean", m[1]*root)
	notExtreme(t, "second moment", (m[2]-1)*root/math.Sqrt(2))
	notExtreme(t, "third moment", m[3]*root/math.Sqrt(15))
	notExtreme(t, "fourth moment", (m[4]-3)*root/math.Sqrt(96))
}

// TestNormalTails compares the shares beyond thresholds, those of the tail
// beyond the ziggurat's edge (3.654) included, with gonum's distribution.
func TestNormalTails(t *testing.T) {
	const n = 4_000_000
	x := draws(n, (*Stream).Normal)
	for _, limit := range []float64{0.5, 1, 2, 3, 3.5, edge, 3.8, 4, 4.3} {
		p := distuv.UnitNormal.Survival(limit)
		up, down := 0, 0
		for _, v := range x {
			if v > limit {
				up++
			} else if v < -limit {
				down++
			}
		}
		se := math.Sqrt(n * p * (1 - p))
		notExtreme(t, fmt.Sprintf("share above %v", limit), (float64(up)-n*p)/se)
		notExtreme(t, fmt.Sprintf("share below −%v", limit), (float64(down)-n*p)/se)
	}
}

// chiSquare sorts n values of [0, 1) into cells and returns how many standard
// deviations Pearson's sum is off, by the cube root approximation of Wilson and Hilferty.
func chiSquare(u []float64, cells int) float64 {
	count := make([]int, cells)
	for _, v := range u {
		count[int(v*float64(cells))]++
	}
	want := float64(len(u)) / float64(cells)
	sum := 0.0
	for _, c := range count {
		d := float64(c) - want
		sum += d * d / want
	}
	k := float64(cells - 1)
	return (math.Cbrt(sum/k) - (1 - 2/(9*k))) / math.Sqrt(2/(9*k))
}

// TestShapes sends the deviates through their distribution function (gonum's)
// and tests what comes out for evenness: chi-square in cells much finer than the
// layers of the ziggurat, and the Kolmogorov–Smirnov distance.
func TestShapes(t *testing.T) {
	const n = 2_000_000
	normal := draws(n, (*Stream).Normal)
	for i, x := range normal {
		normal[i] = distuv.UnitNormal.CDF(x)
	}
	for name, u := range map[string][]float64{"normal": normal, "uniform": draws(n, (*Stream).Uniform)} {
		for _, cells := range []int{10, 1000, 5000} {
			notExtreme(t, fmt.Sprintf("%s, chi-square of %d cells", name, cells), chiSquare(u, cells))
		}
		slices.Sort(u)
		d := 0.0
		for i, v := range u {
			d = max(d, math.Abs(v-(float64(i)+0.5)/n))
		}
		// P(√n·D > 2.7) = 2·exp(−2·2.7²) = 1e-6 (Kolmogorov's limit)
		if d*math.Sqrt(n) > 2.7 {
			t.Errorf("%s: Kolmogorov–Smirnov distance %v·√n", name, d*math.Sqrt(n))
		}
		if u[0] < 0 || u[n-1] >= 1 {
			t.Errorf("%s leaves [0, 1): %v … %v", name, u[0], u[n-1])
		}
	}
}

// TestZigguratIsWholeAndStacked: the layers narrow upwards, have the same area,
// and meet the peak of the curve. A wrong constant shows here and not in the moments.
func TestZigguratIsWholeAndStacked(t *testing.T) {
	const places = 1 << 52
	width := func(i int) float64 { return ziggurat[i].scale * places }
	if tail := math.Sqrt(math.Pi/2) * math.Erfc(edge/math.Sqrt2); math.Abs(edge*density(edge)+tail-area) > 1e-17 {
		t.Errorf("the lowest layer has area %v, the constant says %v", edge*density(edge)+tail, area)
	}
	for i := 1; i < layers; i++ {
		if width(i) >= width(i-1) {
			t.Errorf("layer %d is not narrower than the one below", i)
		}
		if a := width(i) * (heights[i+1] - heights[i]); math.Abs(a-area) > 1e-14 {
			t.Errorf("layer %d has area %v, want %v", i, a, area)
		}
	}
	if heights[layers] != 1 || ziggurat[layers-1].sure != 0 {
		t.Errorf("the topmost layer ends at %v, sure below %d", heights[layers], ziggurat[layers-1].sure)
	}
}

// TestStreamsAreUnrelated: streams that differ in one letter, one index or one
// bit of the seed share nothing: no correlation, no common numbers, no overlap.
func TestStreamsAreUnrelated(t *testing.T) {
	const n = 20_000
	var all []Stream
	var names []string
	for _, name := range []string{"ring noise", "ring noisf", "", "a", "aa"} {
		for _, index := range []int{0, 1, 2, 255, -1} {
			for _, seed := range []uint64{0, 1, 2, 1 << 63, math.MaxUint64} {
				all = append(all, New(seed, name, index))
				names = append(names, fmt.Sprintf("(%d, %q, %d)", seed, name, index))
			}
		}
	}
	seen := map[uint64]string{}
	for i := range all {
		s := all[i]
		for range 1000 {
			u := s.Uint64()
			if who, ok := seen[u]; ok {
				t.Fatalf("%s and %s both give %#x", names[i], who, u)
			}
			seen[u] = names[i]
		}
	}
	worst := 0.0
	for i := range all[:len(all)-1] {
		a, b := all[i], all[i+1]
		sum := 0.0
		for range n {
			sum += a.Normal() * b.Normal()
		}
		worst = max(worst, math.Abs(sum)/math.Sqrt(n))
	}
	notExtreme(t, "correlation of neighbouring streams", worst)

	// One bit of the seed or index changes half the bits of the state.
	flips, trials := 0, 0
	base := New(0, "x", 0)
	for bit := range 64 {
		for _, s := range []Stream{New(1<<bit, "x", 0), New(0, "x", int(uint64(1)<<bit))} {
			for d := s.hi ^ base.hi; d != 0; d &= d - 1 {
				flips++
			}
			for d := s.lo ^ base.lo; d != 0; d &= d - 1 {
				flips++
			}
			trials += 128
		}
	}
	notExtreme(t, "bits changed by one bit of seed or index", (float64(flips)/float64(trials)-0.5)*2*math.Sqrt(float64(trials)))
}

// TestFirstNumbersAcrossIndices: the first numbers of many streams are as even
// as many numbers of one stream; a weak seeding shows here.
func TestFirstNumbersAcrossIndices(t *testing.T) {
	const n = 200_000
	u := make([]float64, n)
	for i := range u {
		s := New(5, "beam", i)
		u[i] = s.Uniform()
	}
	notExtreme(t, "first numbers over indices", chiSquare(u, 1000))
	for i := range u {
		s := New(uint64(i), "beam", 0)
		u[i] = s.Uniform()
	}
	notExtreme(t, "first numbers over seeds", chiSquare(u, 1000))
}

var (
	sinkFloat float64
	sinkInt   uint64
)

func BenchmarkUint64(b *testing.B) {
	b.ReportAllocs()
	s := New(1, "bench", 0)
	for b.Loop() {
		sinkInt += s.Uint64()
	}
}

func BenchmarkNormal(b *testing.B) {
	b.Run("chance", func(b *testing.B) {
		b.ReportAllocs()
		s := New(1, "bench", 0)
		for b.Loop() {
			sinkFloat += s.Normal()
		}
	})
	b.Run("math/rand/v2", func(b *testing.B) {
		b.ReportAllocs()
		r := rand.New(rand.NewPCG(1, 2))
		for b.Loop() {
			sinkFloat += r.NormFloat64()
		}
	})
}

func BenchmarkNew(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		s := New(1, "ring noise", 7)
		sinkInt += s.lo
	}
}
