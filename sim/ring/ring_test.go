package ring

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/google/go-cmp/cmp"

	"leeway/sim/geom"
)

// ahead is a wall 2 m in front of the origin.
func ahead() *toy { return &toy{walls: []wall{{geom.Vec{X: 1}, 2}}} }

func at(x, y, theta float64) geom.Pose { return geom.Pose{Pos: geom.Vec{X: x, Y: y}, Theta: theta} }

func TestEvenIsMirrored(t *testing.T) {
	for n := 1; n <= 200; n++ {
		b := Even(n)
		if len(b) != n || b[0] != 0 {
			t.Fatalf("Even(%d) = %v", n, b)
		}
		for i := 1; i < n; i++ {
			want := 2 * math.Pi * float64(i) / float64(n)
			if math.Abs(geom.Wrap(b[i]-want)) > 2e-15 || b[i] <= -math.Pi || b[i] > math.Pi {
				t.Errorf("Even(%d)[%d] = %v, want %v", n, i, b[i], want)
			}
			if 2*i != n && b[i] != -b[n-i] {
				t.Errorf("Even(%d): beams %d and %d are not mirrored: %v, %v", n, i, n-i, b[i], b[n-i])
			}
		}
	}
}

// TestBeamsStartAtTheMount: a reading is measured from the sensor, and free
// bearings are taken from the heading, counter-clockwise.
func TestBeamsStartAtTheMount(t *testing.T) {
	c := plain(1)
	c.Bearings = []float64{0, math.Pi / 3, -math.Pi / 3, math.Pi / 2, math.Pi}
	c.Mount = 0.2
	r := New(c, 1)
	for _, turned := range []float64{0, 0.4, -2, 7} {
		// The wall stays 2 m ahead of the robot however the robot is turned.
		pose := at(3, -1, turned)
		n := geom.Heading(turned)
		r.Sense(0, pose, &toy{walls: []wall{{n, n.Dot(pose.Pos) + 2}}})
		s := r.Scan()
		for i, want := range []float64{1.8, 3.8, 3.8, 10, 10} { // (2 − 0.2 cos β)/cos β
			if math.Abs(s.Range[i]-want) > 1e-12 || s.Hit[i] != (want < 10) {
				t.Errorf("turned %v, beam %d reads %v (hit %v), want %v", turned, i, s.Range[i], s.Hit[i], want)
			}
		}
	}
}

func TestScanBeforeTheFirstReading(t *testing.T) {
	c := plain(6)
	c.Mount, c.Min = 0.1, 0.02
	s := New(c, 1).Scan()
	for i := range s.Range {
		if s.Range[i] != 10 || s.Hit[i] || s.Tick[i] != -1 {
			t.Errorf("beam %d: %v, %v, %d", i, s.Range[i], s.Hit[i], s.Tick[i])
		}
	}
	if s.Mount != 0.1 || s.Min != 0.02 || s.Max != 10 || s.Exact || !math.IsInf(s.Gap, 1) {
		t.Errorf("scan is %+v", s)
	}
	for i, b := range s.Bearing {
		if s.Dir[i].Sub(geom.Heading(b)).Norm() > 1e-15 {
			t.Errorf("direction %d is %v", i, s.Dir[i])
		}
	}
}

func TestRangeLimits(t *testing.T) {
	c := plain(1)
	c.Min, c.Max = 0.3, 5
	for _, q := range []float64{0, 0.001, 0.1} {
		c.Quantum = q
		r := New(c, 1)
		for _, x := range []struct {
			distance, want float64
			hit            bool
		}{{0, 0.3, true}, {0.1, 0.3, true}, {0.3, 0.3, true}, {0.5, 0.5, true}, {5, 5, true}, {5.0001, 5, false}, {7, 5, false}, {math.Inf(1), 5, false}} {
			r.Sense(0, at(0, 0, 0), shell(x.distance))
			if s := r.Scan(); math.Abs(s.Range[0]-x.want) > 1e-12 || s.Hit[0] != x.hit {
				t.Errorf("step %v: %v reads %v, %v; want %v, %v", q, x.distance, s.Range[0], s.Hit[0], x.want, x.hit)
			}
		}
	}
}

// TestReadingsStayInRange: with everything wrong at once, a hit lies in [Min, Max]
// and on the steps of Quantum; no hit reads exactly Max.
func TestReadingsStayInRange(t *testing.T) {
	for _, q := range []float64{0, 0.001, 0.07} {
		c := Config{Bearings: Even(8), Min: 0.09, Max: 1.3, NoiseBase: 0.4, NoiseGain: 0.3,
			Dropout: 0.2, Random: 0.2, Quantum: q, Period: 1, SubRays: 1}
		r := New(c, 5)
		hits := 0
		for tick := range int64(20_000) {
			r.Sense(tick, at(0, 0, 0), shell(0.7))
			s := r.Scan()
			for i, z := range s.Range {
				if !s.Hit[i] {
					if z != c.Max {
						t.Fatalf("no hit reads %v", z)
					}
					continue
				}
				hits++
				if z < c.Min-1e-12 || z > c.Max {
					t.Fatalf("step %v: a hit reads %v", q, z)
				}
				if k := z / q; q > 0 && math.Abs(k-math.Round(k)) > 1e-9 {
					t.Fatalf("step %v: %v is not a multiple", q, z)
				}
			}
		}
		if hits < 60_000 {
			t.Errorf("only %d hits of 160,000", hits)
		}
	}
}

// TestLimitsThatAreStepsButForRounding: 3·0.1 is a little more than 0.3 and 0.3/0.1
// a little less than 3 in float64; the far limit is a step and a hit all the same.
func TestLimitsThatAreStepsButForRounding(t *testing.T) {
	c := plain(1)
	c.Min, c.Max, c.Quantum = 0.1, 0.3, 0.1
	r := New(c, 1)
	r.Sense(0, at(0, 0, 0), shell(0.3))
	if z := r.Scan().Range[0]; z != 0.3 || !r.Scan().Hit[0] {
		t.Errorf("an echo at 0.3 reads %v, %v", z, r.Scan().Hit[0])
	}
}

// TestRandomReturnsSpanTheRange: evenly between Min and Max, whether or not there
// is an echo.
func TestRandomReturnsSpanTheRange(t *testing.T) {
	c := plain(10)
	c.Min, c.Max, c.Random = 1, 3, 0.25
	for _, echo := range []float64{2, math.Inf(1)} {
		r := New(c, 8)
		n, random := 0.0, 0.0
		var quarter [4]float64
		for tick := range int64(20_000) {
			r.Sense(tick, at(0, 0, 0), shell(echo))
			for i, z := range r.Scan().Range {
				n++
				if r.Scan().Hit[i] && z != echo {
					random++
					quarter[min(max(int((z-1)/2*4), 0), 3)]++
				}
			}
		}
		if z := (random - 0.25*n) / math.Sqrt(n*0.25*0.75); math.Abs(z) > 5 {
			t.Errorf("echo at %v: %v of %v readings are random, %.1f standard errors off", echo, random, n, z)
		}
		for k, q := range quarter {
			if z := (q - random/4) / math.Sqrt(random*0.25*0.75); math.Abs(z) > 5 {
				t.Errorf("echo at %v: quarter %d of the range has %v of %v, %.1f standard errors off", echo, k, q, random, z)
			}
		}
	}
}

// TestQuantumRoundsToTheNearest: without noise a reading is within half a step.
func TestQuantumRoundsToTheNearest(t *testing.T) {
	c := plain(1)
	c.Quantum = 0.01
	r := New(c, 1)
	for d := 0.001; d < 9.99; d += 0.0037 {
		r.Sense(0, at(0, 0, 0), shell(d))
		if e := math.Abs(r.Scan().Range[0] - d); e > 0.005+1e-12 {
			t.Fatalf("%v reads %v", d, r.Scan().Range[0])
		}
	}
}

func TestAllBeamsTogether(t *testing.T) {
	c := plain(24)
	c.Period = 10
	r := New(c, 1)
	w := ahead()
	for tick := range int64(101) {
		r.Sense(tick, at(0, 0, 0), w)
		for i, last := range r.Scan().Tick {
			if want := tick / 10 * 10; last != want {
				t.Fatalf("tick %d: beam %d was last read at %d, want %d", tick, i, last, want)
			}
		}
	}
	if w.casts != 11 || w.rays != 24 {
		t.Errorf("%d calls of the world, %d rays in the last; want 11 and 24", w.casts, w.rays)
	}
}

// TestBeamsInTurn: at tick 0 all; then beam i of n at the ticks ≡ round(i·P/n)
// modulo P, so each once a period and never more at once than their share.
func TestBeamsInTurn(t *testing.T) {
	for _, x := range []struct{ n, period int }{{8, 8}, {24, 10}, {16, 10}, {3, 10}, {5, 7}, {12, 1}, {1, 4}} {
		c := plain(x.n)
		c.Period, c.InTurn = x.period, true
		r := New(c, 1)
		r.Sense(0, at(0, 0, 0), ahead())
		if slices.Contains(r.Scan().Tick, -1) {
			t.Errorf("%d beams: not all were read at tick 0", x.n)
		}
		for tick := int64(1); tick < int64(5*x.period); tick++ {
			w := ahead()
			r.Sense(tick, at(0, 0, 0), w)
			fired := 0
			for i, last := range r.Scan().Tick {
				turn := int64(math.Floor(float64(i*x.period)/float64(x.n)+0.5)) % int64(x.period)
				if due := tick%int64(x.period) == turn; due != (last == tick) {
					t.Errorf("%d beams, period %d, tick %d: beam %d fired: %v", x.n, x.period, tick, i, last == tick)
				}
				if last == tick {
					fired++
				}
			}
			if share := (x.n + x.period - 1) / x.period; fired > share {
				t.Errorf("%d beams, period %d: %d at once, share %d", x.n, x.period, fired, share)
			}
			if (fired == 0) != (w.casts == 0) || w.casts > 1 || w.casts == 1 && w.rays != fired {
				t.Errorf("%d beams due: %d calls of %d rays", fired, w.casts, w.rays)
			}
		}
	}
}

// TestConeReadsTheNearest: a post beside a thin beam is seen by a cone that
// reaches it, at the distance of the nearest of its rays.
func TestConeReadsTheNearest(t *testing.T) {
	post := &toy{discs: []geom.Disc{{Center: geom.Heading(0.1).Scale(2), Radius: 0.05}}}
	c := plain(1)
	read := func(cone float64, rays int) (float64, bool) {
		c.Cone, c.SubRays = cone, rays
		r := New(c, 1)
		r.Sense(0, at(0, 0, 0), post)
		return r.Scan().Range[0], r.Scan().Hit[0]
	}
	if z, hit := read(0, 1); hit {
		t.Errorf("a thin beam sees the post at %v", z)
	}
	if z, hit := read(0.1, 5); hit {
		t.Errorf("a cone that ends short of the post sees it at %v", z)
	}
	if z, hit := read(0.2, 3); !hit || math.Abs(z-1.95) > 1e-12 { // its outermost ray meets the post square
		t.Errorf("a cone whose rim meets the post reads %v, %v, want 1.95", z, hit)
	}
	if z, hit := read(0.2, 2); !hit || math.Abs(z-1.95) > 1e-12 {
		t.Errorf("two rays on the rim read %v, %v, want 1.95", z, hit)
	}
	// A flat wall: the middle ray is nearest, the cone reads as the beam does.
	c.Cone, c.SubRays = 0.6, 7
	r := New(c, 1)
	r.Sense(0, at(0, 0, 0), ahead())
	if z := r.Scan().Range[0]; math.Abs(z-2) > 1e-12 {
		t.Errorf("a cone square to a wall at 2 m reads %v", z)
	}
	// Turned 0.2 from square, its rim at 0.3 reaches past square; the ray at 0.2 is square.
	r.Sense(0, at(0, 0, 0.2), ahead())
	if z := r.Scan().Range[0]; math.Abs(z-2) > 1e-12 {
		t.Errorf("a cone with a ray square to the wall reads %v", z)
	}
}

// TestIdealReadsExactly: the noiseless all-round ideal knows the distance of the
// hull's centre to the nearest boundary and the way there.
func TestIdealReadsExactly(t *testing.T) {
	c := Config{Bearings: Even(4), Mount: 0.2, Min: 0.5, Max: 3, NoiseBase: 1, Dropout: 0.5, Random: 0.5, Quantum: 0.3,
		Period: 10, InTurn: true, SubRays: 3, Cone: 0.5, AllRound: true, Noiseless: true}
	r := New(c, 1)
	w := ahead()
	w.discs = []geom.Disc{{Center: geom.Vec{X: 0, Y: 1.5}, Radius: 0.5}}
	s := r.Scan()
	if len(s.Range) != FanSize || !s.Exact {
		t.Fatalf("the ideal has %d beams, exact %v", len(s.Range), s.Exact)
	}
	r.Sense(0, at(0, 0, 0.7), w)
	toward := s.Toward.Rotate(geom.Sincos(0.7)) // in the world
	if math.Abs(s.Gap-1) > 1e-12 || toward.Sub(geom.Vec{Y: 1}).Norm() > 1e-12 {
		t.Errorf("gap %v toward %v, want 1 toward +y", s.Gap, toward)
	}
	for i, z := range s.Range { // every reading is exact, whatever Min and the noise say
		to := geom.Heading(0.7 + s.Bearing[i]).Scale(c.Mount + z)
		onDisc := math.Abs(to.Sub(w.discs[0].Center).Norm() - 0.5)
		onWall := math.Abs(to.X - 2)
		if s.Hit[i] && min(onDisc, onWall) > 1e-12 || !s.Hit[i] && z != c.Max {
			t.Errorf("beam %d reads %v, which lies %v from the disc and %v from the wall", i, z, onDisc, onWall)
		}
	}

	// Between the periods nothing changes.
	before := s.Gap
	r.Sense(5, at(1.5, 0, 0), w)
	if s.Gap != before {
		t.Errorf("the gap changed between readings")
	}

	r.Sense(10, at(-1.3, -5, 0), w) // the wall is 3.3 m away: beyond Mount + Max
	if !math.IsInf(s.Gap, 1) || s.Toward != (geom.Vec{}) || slices.Contains(s.Hit, true) {
		t.Errorf("out of range: gap %v toward %v", s.Gap, s.Toward)
	}
	r.Sense(15, at(-1.1, -5, 0), w)
	if s.Gap != math.Inf(1) {
		t.Errorf("the gap changed between readings")
	}
	r.Sense(20, at(-1.1, -5, 0), w) // 3.1 m: beyond Max, but not from the sensors
	if math.Abs(s.Gap-3.1) > 1e-12 {
		t.Errorf("at 3.1 m the gap is %v", s.Gap)
	}
	r.Sense(30, at(2.1, -5, math.Pi/2), w) // 0.1 m inside the wall
	toward = s.Toward.Rotate(1, 0)
	if math.Abs(s.Gap+0.1) > 1e-12 || toward.Sub(geom.Vec{X: 1}).Norm() > 1e-12 {
		t.Errorf("inside: gap %v toward %v, want −0.1 and further in", s.Gap, toward)
	}
}

// TestHalfIdeals: each switch works by itself. Noise without beams to miss, and
// the ring's own beams without noise.
func TestHalfIdeals(t *testing.T) {
	c := Config{Bearings: Even(8), Mount: 0.2, Min: 0.5, Max: 5, NoiseBase: 0.05, Dropout: 0.1, Period: 1, SubRays: 1}
	c.AllRound = true
	fan := New(c, 3)
	fan.Sense(0, at(0, 0, 0), shell(2))
	s := fan.Scan()
	lost, off := 0, 0
	for i := range s.Range {
		if !s.Hit[i] {
			lost++
		} else if s.Range[i] != 2 {
			off++
		}
	}
	if len(s.Range) != FanSize || s.Exact || !math.IsInf(s.Gap, 1) || lost == 0 || off == 0 {
		t.Errorf("all-round only: %d beams, exact %v, %d lost, %d noisy", len(s.Range), s.Exact, lost, off)
	}

	c.AllRound, c.Noiseless = false, true
	beams := New(c, 3)
	for tick := range int64(50) {
		beams.Sense(tick, at(0, 0, 0), shell(0.1+float64(tick)/10))
		for i, z := range beams.Scan().Range {
			if want := min(0.1+float64(tick)/10, 5); z != want {
				t.Fatalf("noiseless only: beam %d reads %v, want %v", i, z, want)
			}
		}
	}
	if n := len(beams.Scan().Range); n != 8 || beams.Scan().Exact {
		t.Errorf("noiseless only: %d beams, exact %v", n, beams.Scan().Exact)
	}
}

// TestManyBeamsApproachTheIdeal: as the beams grow dense, the nearest reading
// comes down to the exact gap, by the law of a flat wall: over-reading 1/cos(Δφ/2).
func TestManyBeamsApproachTheIdeal(t *testing.T) {
	rnd := rand.New(rand.NewPCG(1, 1))
	for _, n := range []int{8, 64, 512} {
		r := New(plain(n), 1)
		for range 200 {
			pose := at(rnd.Float64(), rnd.Float64(), rnd.Float64()*7)
			r.Sense(0, pose, ahead())
			gap, nearest := 2-pose.Pos.X, slices.Min(r.Scan().Range)
			if over := nearest / gap; over < 1-1e-12 || over > 1/math.Cos(math.Pi/float64(n))+1e-12 {
				t.Errorf("%d beams: nearest reading is %v times the gap", n, over)
			}
		}
	}
}

// TestZeroImperfectionsAreTheIdeal: an imperfection of size nought is none.
func TestZeroImperfectionsAreTheIdeal(t *testing.T) {
	zero := Config{Bearings: Even(16), Mount: 0.19, Max: 3, Period: 1, SubRays: 1}
	ideal := zero
	ideal.Noiseless = true
	a, b := New(zero, 1), New(ideal, 2)
	w := ahead()
	for tick := range int64(300) {
		pose := at(math.Sin(float64(tick)), 0, float64(tick))
		a.Sense(tick, pose, w)
		b.Sense(tick, pose, w)
		if d := cmp.Diff(a.Scan(), b.Scan()); d != "" {
			t.Fatalf("tick %d: %s", tick, d)
		}
	}
}

// TestMirroredWorld: a mirrored floor and pose give the mirrored readings, to the
// bit. The beam dead astern is left out: the float64 value of π is not quite π.
func TestMirroredWorld(t *testing.T) {
	const n = 24
	c := Config{Bearings: Even(n), Mount: 0.19, Max: 6, Period: 1, SubRays: 3, Cone: 0.2, Noiseless: true}
	left, right := New(c, 1), New(c, 1)
	rnd := rand.New(rand.NewPCG(2, 2))
	for range 500 {
		x, y, theta := rnd.NormFloat64(), rnd.NormFloat64(), rnd.NormFloat64()*3
		d := geom.Disc{Center: geom.Vec{X: rnd.NormFloat64() * 3, Y: rnd.NormFloat64() * 3}, Radius: rnd.Float64()}
		e := d
		e.Center.Y = -e.Center.Y
		left.Sense(0, at(x, y, theta), &toy{discs: []geom.Disc{d}})
		right.Sense(0, at(x, -y, -theta), &toy{discs: []geom.Disc{e}})
		for i := range n {
			if a, b := left.Scan().Range[i], right.Scan().Range[(n-i)%n]; a != b && 2*i != n {
				t.Fatalf("beam %d reads %v, its mirror image %v", i, a, b)
			}
		}
	}
}

// imperfect has every effect switched on.
func imperfect() Config {
	return Config{Bearings: Even(24), Mount: 0.19, Min: 0.02, Max: 3, NoiseBase: 0.01, NoiseGain: 0.005,
		Dropout: 0.05, Random: 0.02, Quantum: 0.001, Period: 10, InTurn: true, SubRays: 3, Cone: 0.1}
}

func TestCopyAndReset(t *testing.T) {
	w := ahead()
	a := New(imperfect(), 9)
	run := func(r *Ring, from, to int64) {
		for tick := from; tick < to; tick++ {
			r.Sense(tick, at(0.01*float64(tick), 0, 0.1*float64(tick)), w)
		}
	}
	run(a, 0, 55)
	b := New(plain(3), 1) // of another size, to be overwritten
	b.CopyFrom(a)
	before := b.Scan()
	if d := cmp.Diff(a.Scan(), b.Scan()); d != "" {
		t.Fatalf("the copy differs: %s", d)
	}
	run(a, 55, 99) // the copy must not feel it
	run(b, 55, 99)
	if d := cmp.Diff(a.Scan(), b.Scan()); d != "" {
		t.Errorf("the copy went another way: %s", d)
	}
	if before != b.Scan() {
		t.Errorf("the scan moved to other memory")
	}

	// What happens to a copy afterwards leaves the original alone.
	c := New(plain(1), 1)
	c.CopyFrom(a)
	turned := imperfect()
	turned.Bearings, turned.Period = Even(16), 3
	c.Reset(turned, 8)
	run(c, 0, 20)
	run(a, 99, 150)
	alone := New(imperfect(), 9)
	run(alone, 0, 150)
	if d := cmp.Diff(alone.Scan(), a.Scan()); d != "" {
		t.Errorf("the original felt what was done to a copy: %s", d)
	}

	b.Reset(imperfect(), 9)
	fresh := New(imperfect(), 9)
	run(b, 0, 55)
	run(fresh, 0, 55)
	if d := cmp.Diff(fresh.Scan(), b.Scan()); d != "" {
		t.Errorf("a reset ring differs from a new one: %s", d)
	}
	if n := testing.AllocsPerRun(20, func() { b.CopyFrom(a); b.Reset(imperfectConfig, 9) }); n != 0 {
		t.Errorf("copying and resetting allocate %v times", n)
	}
}

var imperfectConfig = imperfect()

func TestSenseDoesNotAllocate(t *testing.T) {
	ideal := imperfect()
	ideal.AllRound, ideal.Noiseless = true, true
	for name, c := range map[string]Config{"imperfect": imperfect(), "ideal": ideal} {
		r := New(c, 1)
		w := ahead()
		tick := int64(0)
		if n := testing.AllocsPerRun(200, func() { r.Sense(tick, at(0, 0, 0.1), w); tick++ }); n != 0 {
			t.Errorf("%s: %v allocations a tick", name, n)
		}
	}
}

func BenchmarkSense(b *testing.B) {
	clean := plain(24)
	noisy := Config{Bearings: Even(24), Mount: 0.19, Min: 0.02, Max: 3, NoiseBase: 0.01, NoiseGain: 0.005,
		Dropout: 0.005, Quantum: 0.001, Period: 1, SubRays: 1}
	turns := noisy
	turns.Period, turns.InTurn = 10, true
	rarely := noisy
	rarely.Period = 10
	ideal := noisy
	ideal.AllRound, ideal.Noiseless = true, true
	for _, x := range []struct {
		name string
		c    Config
	}{
		{"24 beams without noise", clean}, {"24 beams", noisy}, {"24 beams every tenth tick", rarely},
		{"24 beams in turn", turns}, {"all-round ideal", ideal},
	} {
		b.Run(x.name, func(b *testing.B) {
			b.ReportAllocs()
			r := New(x.c, 1)
			var w World = shell(2)
			for tick := int64(0); b.Loop(); tick++ {
				r.Sense(tick, at(0, 0, 0.1), w)
			}
		})
	}
}
