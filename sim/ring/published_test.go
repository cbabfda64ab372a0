package ring

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/stat/distuv"

	"leeway/sim/chance"
	"leeway/sim/geom"
	"leeway/sim/truth"
)

// The rows S-* of testdata/published.json, each against what the ring does.
// S-06 and S-07 (speed of sound, triangulation) speak of how a sensor finds a
// range, which the ring does not simulate; package truth checks them.

// S-01 (plane geometry): the chord between neighbouring beams.
func TestChordBetweenBeams(t *testing.T) {
	for i, want := range truth.Values(t, "S-01", "") {
		n := []int{8, 16, 36}[i]
		c := plain(n)
		truth.Close(t, fmt.Sprintf("missed width of %d beams at 1 m", n), c.MissedWidth(1), want, 1e-6)
	}
}

func TestMissedWidthTakesTheWidestGap(t *testing.T) {
	deg := math.Pi / 180
	for _, x := range []struct {
		bearings []float64 // degrees, in any order and turn
		gap      float64   // 0: no bound
	}{
		{[]float64{0, 90, 180, 270}, 90},
		{[]float64{-180, 90, 0, 630}, 90},
		{[]float64{10, -10, 60, -60, 120, -120, 175}, 65},
		{[]float64{0, 120, -120}, 120},
		{[]float64{0, 20, 40}, 0}, {[]float64{0}, 0}, {nil, 0}, {[]float64{0, 180}, 0},
	} {
		var c Config
		for _, b := range x.bearings {
			c.Bearings = append(c.Bearings, b*deg)
		}
		want := 2 * 1.5 * math.Sin(x.gap*deg/2)
		if x.gap == 0 {
			want = math.Inf(1)
		}
		if got := c.MissedWidth(1.5); math.Abs(got-want) > 1e-12 && got != want {
			t.Errorf("bearings %v: missed width %v, want %v", x.bearings, got, want)
		}
	}
	c := plain(4)
	c.AllRound = true
	if got, want := c.MissedWidth(1), 2*math.Sin(math.Pi/FanSize); math.Abs(got-want) > 1e-12 {
		t.Errorf("the fan of the all-round ideal misses %v, want %v", got, want)
	}
}

// sees reports whether a thin-beam ring of n sees a disc of diameter d midway
// between two of its beams, its centre at rho.
func sees(n int, d, rho float64) bool {
	r := New(plain(n), 1)
	r.Sense(0, at(0, 0, 0), &toy{discs: []geom.Disc{{Center: geom.Heading(math.Pi / float64(n)).Scale(rho), Radius: d / 2}}})
	return slices.Contains(r.Scan().Hit, true)
}

// S-02 (plane geometry): the farthest centre range at which a disc of 7 cm is
// always hit. The ring is asked just short of it and just beyond.
func TestDiscAlwaysHit(t *testing.T) {
	for i, rho := range truth.Values(t, "S-02", "") {
		n := []int{8, 16, 36}[i]
		c := plain(n)
		truth.Close(t, fmt.Sprintf("missed width of %d beams there", n), c.MissedWidth(rho), 0.07, 1e-6)
		if !sees(n, 0.07, rho*0.9999) || sees(n, 0.07, rho*1.0001) {
			t.Errorf("%d beams lose the disc elsewhere than at %v m", n, rho)
		}
	}
}

// S-03 (derived from S-02): the same from the disc's surface.
func TestDiscAlwaysHitFromItsSurface(t *testing.T) {
	d := truth.Value(t, "S-03", "D")
	c := plain(8)
	truth.Close(t, "missed width at the disc's centre", c.MissedWidth(0.5+d/2), d, 1e-6)
	if !sees(8, d*1.0001, 0.5+d/2) || sees(8, d*0.9999, 0.5+d/2) {
		t.Errorf("eight beams lose another disc than %v m at 0.5 m from its surface", d)
	}
}

// S-04 (plane geometry): the worst over-reading of the nearest beam at a flat
// wall, found by turning the ring in front of one.
func TestOverReadingAtAWall(t *testing.T) {
	for i, want := range truth.Values(t, "S-04", "") {
		n := []int{8, 16}[i]
		r := New(plain(n), 1)
		worst := 0.0
		const steps = 1000 // an even number of them: the worst heading, midway, is among them
		for k := range steps {
			r.Sense(0, at(0, 0, 2*math.Pi/float64(n)*float64(k)/steps), ahead())
			worst = max(worst, slices.Min(r.Scan().Range)/2)
		}
		truth.Close(t, fmt.Sprintf("worst over-reading of %d beams", n), worst, want, 1e-6)
	}
}

// S-05 (altitude of a triangle): a wall that reads 0.8 and 1.0 m on two beams 45°
// apart. The exact gap of the ideal is its perpendicular distance.
func TestWallThroughTwoReadings(t *testing.T) {
	w := &toy{walls: []wall{through(geom.Heading(0).Scale(0.8), geom.Heading(math.Pi/4).Scale(1))}}
	if gap, _ := w.Nearest(geom.Vec{}, 10); gap.Distance < 0 {
		w.walls[0] = through(geom.Heading(math.Pi/4).Scale(1), geom.Heading(0).Scale(0.8))
	}
	r := New(plain(8), 1)
	r.Sense(0, at(0, 0, 0), w)
	truth.Close(t, "beam ahead", r.Scan().Range[0], 0.8, 1e-6)
	truth.Close(t, "beam at 45°", r.Scan().Range[1], 1.0, 1e-6)

	c := plain(8)
	c.AllRound, c.Noiseless = true, true
	ideal := New(c, 1)
	ideal.Sense(0, at(0, 0, 0), w)
	truth.Close(t, "gap", ideal.Scan().Gap, truth.Value(t, "S-05", "d"), 1e-6)
}

// mixture is the beam model of Thrun, Burgard & Fox, Probabilistic Robotics
// §6.3, eqs 6.4–6.13, written down here from the book alone.
type mixture struct {
	echo, far, sigma, lambda  float64 // z*, z_max
	hit, short, atFar, random float64
}

// density is p(z | z*) below z_max; at z_max it is the point mass there.
func (m mixture) density(z float64) float64 {
	if z == m.far {
		return m.atFar
	}
	gauss := distuv.Normal{Mu: m.echo, Sigma: m.sigma}
	p := m.hit * gauss.Prob(z) / (gauss.CDF(m.far) - gauss.CDF(0))
	if z <= m.echo {
		p += m.short * m.lambda * math.Exp(-m.lambda*z) / (1 - math.Exp(-m.lambda*m.echo))
	}
	return p + m.random/m.far
}

// S-08 (Thrun, Burgard & Fox §6.3): the density at three places; then the
// readings of the ring, sorted into cells, against the density with the weights
// that the ring has. The share of unexpectedly short readings is nought in the
// ring, and goes to the echo.
func TestBeamModel(t *testing.T) {
	m := mixture{echo: 2, far: 4, sigma: 0.1, lambda: 1, hit: 0.7, short: 0.1, atFar: 0.05, random: 0.15}
	for i, want := range truth.Values(t, "S-08", "") {
		z := []float64{1.95, 1.0, 4.0}[i]
		truth.Close(t, fmt.Sprintf("p(%v)", z), m.density(z), want, 1e-6)
	}

	m.hit, m.short = 0.8, 0
	c := plain(10)
	c.Max, c.NoiseBase = 4, 0.1
	c.Random = m.random
	c.Dropout = m.atFar / (1 - m.random) // a random return may stand in for a lost echo
	r := New(c, 17)
	const cells, scans = 160, 40_000
	var count [cells + 1]float64 // the last: at z_max
	for tick := range int64(scans) {
		r.Sense(tick, at(0, 0, 0), shell(2))
		for i, z := range r.Scan().Range {
			if k := int(z / m.far * cells); r.Scan().Hit[i] {
				count[k]++
			} else {
				count[cells]++
			}
		}
	}
	sum, n := 0.0, float64(scans*len(c.Bearings))
	for k, got := range count {
		share := m.atFar
		if k < cells {
			a, b := m.far*float64(k)/cells, m.far*float64(k+1)/cells
			share = quad.Fixed(m.density, a, math.Nextafter(b, 0), 30, nil, 0)
		}
		sum += (got - n*share) * (got - n*share) / (n * share)
	}
	if p := (distuv.ChiSquared{K: cells}).Survival(sum); p < 1e-6 {
		t.Errorf("readings do not follow the beam model: chi-square %.1f on %d degrees, p = %.2g", sum, cells, p)
	}
}

// minima returns the smallest reading of each of many scans of n equal beams.
func minima(n, scans int, echo, sigma float64) []float64 {
	c := plain(n)
	c.NoiseBase = sigma
	r := New(c, 23)
	low := make([]float64, scans)
	for tick := range low {
		r.Sense(int64(tick), at(0, 0, 0), shell(echo))
		low[tick] = slices.Min(r.Scan().Range)
	}
	return low
}

// S-09 (Tippett 1925): the nearest of n noisy readings is biased low. The table
// is checked to its 1e-5 by integrating the order statistic, the ring within five
// standard errors of its mean.
func TestNearestReadingIsBiased(t *testing.T) {
	for i, want := range truth.Values(t, "S-09", "") {
		n := []int{2, 4, 8}[i]
		// E[min] = ∫ x·n·φ(x)·(1 − Φ(x))ⁿ⁻¹ dx
		exact := quad.Fixed(func(x float64) float64 {
			return x * float64(n) * distuv.UnitNormal.Prob(x) * math.Pow(distuv.UnitNormal.Survival(x), float64(n-1))
		}, -9, 9, 400, nil, 0)
		truth.Close(t, fmt.Sprintf("expected minimum of %d", n), exact, want, 1e-5)

		const scans, sigma = 100_000, 0.03
		mean, square := 0.0, 0.0
		for _, z := range minima(n, scans, 2, sigma) {
			bias := (z - 2) / sigma
			mean += bias / scans
			square += bias * bias / scans
		}
		if se := math.Sqrt((square - mean*mean) / scans); math.Abs(mean-want) > 5*se {
			t.Errorf("nearest of %d beams is off by %v σ on average, want %v ± %v", n, mean, want, se)
		}
	}
}

// S-10 (order statistics): how often at least one of eight beams at 0.31 m reads
// below 0.25 m, with 3 cm of noise.
func TestFalseTrigger(t *testing.T) {
	want := truth.Value(t, "S-10", "P")
	one := distuv.Normal{Mu: 0.31, Sigma: 0.03}.CDF(0.25)
	truth.Close(t, "1 − (1 − Φ)⁸", 1-math.Pow(1-one, 8), want, 1e-6)

	const scans = 200_000
	triggers := 0.0
	for _, z := range minima(8, scans, 0.31, 0.03) {
		if z < 0.25 {
			triggers++
		}
	}
	if se := math.Sqrt(want * (1 - want) / scans); math.Abs(triggers/scans-want) > 5*se {
		t.Errorf("%v of the scans trigger, want %v ± %v", triggers/scans, want, se)
	}
}

// TestNoiseGrowsWithRange: σ is NoiseBase + NoiseGain·distance.
func TestNoiseGrowsWithRange(t *testing.T) {
	c := plain(16)
	c.NoiseBase, c.NoiseGain = 0.01, 0.02
	for _, d := range []float64{0.5, 2, 8} {
		r := New(c, 4)
		n, mean, square := 0.0, 0.0, 0.0
		for tick := range int64(10_000) {
			r.Sense(tick, at(0, 0, 0), shell(d))
			for _, z := range r.Scan().Range {
				n++
				mean += z - d
				square += (z - d) * (z - d)
			}
		}
		sigma := 0.01 + 0.02*d
		if z := mean / n / sigma * math.Sqrt(n); math.Abs(z) > 5 {
			t.Errorf("at %v m the mean is %.1f standard errors off", d, z)
		}
		if z := (square/n/(sigma*sigma) - 1) * math.Sqrt(n/2); math.Abs(z) > 5 {
			t.Errorf("at %v m σ is %v, want %v", d, math.Sqrt(square/n), sigma)
		}
	}
}

// record returns the readings of a ring that drives past things.
func record(c Config, edit func(r *Ring, tick int64)) (z [][]float64, hit [][]bool) {
	r := New(c, 31)
	rnd := rand.New(rand.NewPCG(3, 3))
	for tick := range int64(2000) {
		if edit != nil {
			edit(r, tick)
		}
		r.Sense(tick, at(0, 0, 0), shell(0.5+2*rnd.Float64()))
		z = append(z, slices.Clone(r.Scan().Range))
		hit = append(hit, slices.Clone(r.Scan().Hit))
	}
	return z, hit
}

// TestStreamsDoNotShiftEachOther: whatever is switched on besides, a reading that
// it does not touch keeps its very bits.
func TestStreamsDoNotShiftEachOther(t *testing.T) {
	base := plain(12)
	base.NoiseBase, base.NoiseGain = 0.01, 0.01
	z0, hit0 := record(base, nil)
	for name, change := range map[string]func(c *Config){
		"dropout":           func(c *Config) { c.Dropout = 0.3 },
		"random returns":    func(c *Config) { c.Random = 0.3 },
		"both":              func(c *Config) { c.Dropout, c.Random = 0.3, 0.3 },
		"another beam":      func(c *Config) { c.Bearings = Even(13) },
		"cones":             func(c *Config) { c.SubRays, c.Cone = 5, 0.3 },
		"a higher minimum":  func(c *Config) { c.Min = 1 },
		"a shorter maximum": func(c *Config) { c.Max = 1.5 },
	} {
		c := base
		change(&c)
		z1, hit1 := record(c, nil)
		same, touched := 0, 0
		for k := range z0 {
			for i := range z0[k] {
				if z1[k][i] == z0[k][i] && hit1[k][i] == hit0[k][i] {
					same++
				} else {
					touched++
				}
			}
		}
		// What is untouched must be more than chance could leave: without common
		// numbers no two noisy readings would agree.
		var share float64
		switch name {
		case "dropout", "random returns":
			share = 0.7
		case "both":
			share = 0.49
		case "a higher minimum": // echoes evenly in [0.5, 2.5]
			share = 0.75
		case "a shorter maximum":
			share = 0.5
		default:
			share = 1
		}
		got := float64(same) / float64(same+touched)
		if math.Abs(got-share) > 5*math.Sqrt(share*(1-share)/float64(len(z0))) {
			t.Errorf("%s: %.4f of the readings keep their bits, want %.4f", name, got, share)
		}
	}

	// Which echoes are lost does not depend on the noise either.
	lossy := base
	lossy.Dropout = 0.3
	_, a := record(lossy, nil)
	lossy.NoiseBase, lossy.Random = 0.002, 0
	_, b := record(lossy, nil)
	for k := range a {
		if !slices.Equal(a[k], b[k]) {
			t.Fatalf("tick %d: other echoes are lost with less noise", k)
		}
	}
}

// TestReadingsComeFromTheNamedStreams works a reading out by hand from the
// streams that New names: those names are part of every recorded run.
func TestReadingsComeFromTheNamedStreams(t *testing.T) {
	c := plain(200)
	c.Min, c.NoiseBase, c.NoiseGain, c.Dropout, c.Random = 1, 0.01, 0.02, 0.4, 0.2
	r := New(c, 77)
	r.Sense(0, at(0, 0, 0), shell(4))
	for i, z := range r.Scan().Range {
		noise, dropout, random := chance.New(77, "ring noise", i), chance.New(77, "ring dropout", i), chance.New(77, "ring random", i)
		want, hit := 4+(0.01+0.02*4)*noise.Normal(), dropout.Uniform() >= 0.4
		if random.Uniform() < 0.2 {
			want, hit = 1+9*random.Uniform(), true
		}
		if !hit {
			want = 10
		}
		if math.Abs(z-want) > 1e-12 || r.Scan().Hit[i] != hit {
			t.Errorf("beam %d reads %v, %v; its streams say %v, %v", i, z, r.Scan().Hit[i], want, hit)
		}
	}
}

// TestSetNoiseLaterIsAsFromTheStart: numbers are drawn whether they count or not,
// so that a change in a running ring gives the readings of a ring that had it all along.
func TestSetNoiseLaterIsAsFromTheStart(t *testing.T) {
	quiet := plain(12)
	loud := quiet
	loud.NoiseBase, loud.NoiseGain, loud.Dropout = 0.02, 0.01, 0.1
	want, _ := record(loud, nil)
	got, _ := record(quiet, func(r *Ring, tick int64) {
		if tick == 1000 {
			r.SetNoise(0.02, 0.01, 0.1)
		}
	})
	for k := range want {
		if same := slices.Equal(got[k], want[k]); same != (k >= 1000) {
			t.Fatalf("tick %d: readings equal: %v", k, same)
		}
	}
}
