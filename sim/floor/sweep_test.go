package floor

import (
	"math"
	"testing"

	"leeway/sim/geom"
	"leeway/sim/truth"
)

func wallOf(points ...geom.Vec) Solid { return Solid{Kind: Wall, Points: points} }

func at(x, y float64) geom.Vec { return geom.Vec{X: x, Y: y} }

// worldOf is a world of these solids.
func worldOf(t testing.TB, solids ...Solid) *World {
	return build(t, Config{Solids: solids}, 3).NewWorld()
}

func TestSweepPublished(t *testing.T) {
	const printed = 1e-6
	// G-05 (Minkowski sum), the motions long enough to get there
	want := truth.Values(t, "G-05", "")
	_, c, ok := worldOf(t, wallOf(at(2, 0), at(2, 3))).Sweep(at(0, 0), at(2, 1), 0.2)
	if !ok {
		t.Fatal("G-05: no touch of the side")
	}
	truth.Close(t, "G-05 side", c.At*2, want[0], printed)
	_, c, ok = worldOf(t, wallOf(at(1, -1), at(1, 1))).Sweep(at(0, 1.1), at(2, 0), 0.2)
	if !ok {
		t.Fatal("G-05: no touch of the cap")
	}
	truth.Close(t, "G-05 cap", c.At*2, want[1], printed)

	// G-06 (derived): 2 m/s for 0.1 s
	end, c, ok := worldOf(t, wallOf(at(1, -1), at(1, 1))).Sweep(at(0.9, 0), at(0.2, 0), 0.05)
	if !ok {
		t.Fatal("G-06: the hull passed through the wall")
	}
	truth.Close(t, "G-06 time", c.At*0.1, truth.Value(t, "G-06", ""), printed)
	if gap := 1 - end.X - 0.05; gap < 0 || gap > 2*Skin {
		t.Errorf("the hull stops %g before the wall", gap)
	}
}

// Whatever the speed: after any number of sweeps the hull overlaps nothing, and on no leg of its
// way did its centre cross a wall or enter a disc.
func TestSweepNeverPasses(t *testing.T) {
	legs, touches := 0, 0
	for seed := range int64(120) {
		c := clutter(seed, 5+int(seed%30), 0)
		w := build(t, c, 3).NewWorld()
		f := plainOf(w)
		r := newDice(seed)
		radius := r.between(0.02, 0.3)
		p := at(r.between(-1, 9), r.between(-1, 9))
		if f.gap(p, radius) < 2*Skin {
			continue
		}
		for range 150 {
			d := r.vec(1).Unit().Scale(math.Pow(10, r.between(-4, 2)))
			if out := p.Norm(); out > 15 {
				d = p.Scale(-d.Norm() / out) // back to where things are
			}
			path, _, _ := f.path(p, d, radius)
			end, _, touched := w.Sweep(p, d, radius)
			if !sameVec(end, path[len(path)-1]) {
				t.Fatalf("sweep from %v by %v ends at %v, the plain one at %v", p, d, end, path[len(path)-1])
			}
			for i := range path[1:] {
				leg := geom.Segment{A: path[i], B: path[i+1]}
				legs++
				for k := range f.things {
					th := &f.things[k]
					for _, e := range th.edges {
						if leg.Cross(e) {
							t.Fatalf("seed %d: leg %v crosses %v", seed, leg, e)
						}
					}
					if th.kind == Disc && geom.DistanceToSegment(th.disc.Center, leg) < th.disc.Radius {
						t.Fatalf("seed %d: leg %v enters disc %v", seed, leg, th.disc)
					}
				}
			}
			if gap := f.gap(end, radius); gap < -1e-12 {
				t.Fatalf("seed %d: sweep from %v by %v ends at %v, gap %g", seed, p, d, end, gap)
			}
			if touched {
				touches++
			}
			p = end
		}
	}
	t.Logf("%d legs, %d sweeps touched", legs, touches)
	if touches < 1500 {
		t.Fatal("too few touches to mean anything")
	}
}

// A hull that overlaps gets no deeper into anything, and into nothing else.
func TestSweepFromOverlapping(t *testing.T) {
	out := 0
	for seed := range int64(600) {
		w := build(t, clutter(seed, 12, 2), 3).NewWorld()
		f := plainOf(w)
		r := newDice(seed)
		p, radius := at(r.between(0, 8), r.between(0, 8)), r.between(0.05, 0.4)
		if f.gap(p, radius) > 0 {
			continue
		}
		for range 60 {
			d := r.vec(0.1)
			end, _, _ := w.Sweep(p, d, radius)
			for i := range f.things {
				th := &f.things[i]
				before, after := th.gap(p, radius), th.gap(end, radius)
				if after < min(before, 0)-2*Skin {
					t.Fatalf("seed %d: sweep from %v by %v to %v, radius %v: gap to %v from %g to %g", seed, p, d, end, radius, th.ref, before, after)
				}
			}
			p = end
		}
		if f.gap(p, radius) >= 0 {
			out++
		}
	}
	t.Logf("%d hulls got free", out)
	if out < 30 {
		t.Fatal("hardly any hull got free")
	}
}

// The way straight out is always open.
func TestSweepOut(t *testing.T) {
	box := Solid{Kind: Polygon, Points: []geom.Vec{at(0, 0), at(2, 0), at(2, 1), at(0, 1)}}
	w := worldOf(t, box)
	end, _, touched := w.Sweep(at(0.5, 0.4), at(0, -3), 0.2)
	if touched || end != at(0.5, 0.4).Add(at(0, -3)) {
		t.Errorf("the way out ends at %v, touched %v", end, touched)
	}
	end, c, touched := w.Sweep(at(0.5, 0.4), at(0.1, 0.2), 0.2)
	if !touched || math.Abs(end.X-0.6) > 1e-12 || math.Abs(end.Y-0.4) > 1e-12 || c.Normal != at(0, -1) || c.At != 0 || c.Point != at(0.5, 0) {
		t.Errorf("further in: ends at %v with %+v", end, c)
	}
	disc := worldOf(t, Solid{Kind: Disc, Points: []geom.Vec{at(0, 0)}, Radius: 1})
	if end, _, touched := disc.Sweep(at(0.5, 0), at(2, 1), 0.2); touched || end != at(2.5, 1) {
		t.Errorf("out of a disc: ends at %v, touched %v", end, touched)
	}
	if end, _, touched := disc.Sweep(at(0.5, 0), at(-0.2, 0), 0.2); !touched || end.Sub(at(0.5, 0)).Norm() > 1e-12 {
		t.Errorf("into a disc: ends at %v, touched %v", end, touched)
	}
}

// A hull that is driven slantwise into a wall for a long time keeps its speed along it, sticks
// to no joint of its pieces, and neither creeps in nor drifts away.
func TestScrapeForHours(t *testing.T) {
	for _, angle := range []float64{0, 0.3, math.Pi / 2, 2.5} {
		along := geom.Heading(angle)
		base := at(120, -80)
		points := make([]geom.Vec, 41)
		for i := range points {
			points[i] = base.AddScaled(float64(i)*5, along)
		}
		w := worldOf(t, wallOf(points...))
		const radius, ticks, step = 0.2, 100_000, 0.002
		p := base.AddScaled(0.5, along).AddScaled(radius+Skin, along.Perp())
		d := along.Sub(along.Perp()).Scale(step / math.Sqrt2)
		start := p
		for range ticks {
			p, _, _ = w.Sweep(p, d, radius)
		}
		way := p.Sub(start).Dot(along)
		if want := ticks * step / math.Sqrt2; math.Abs(way-want) > 1e-6 {
			t.Errorf("at %v rad: scraped %v m, want %v", angle, way, want)
		}
		gap := p.Sub(base).Dot(along.Perp()) - radius
		if gap < 0 || gap > 2*Skin {
			t.Errorf("at %v rad: gap %g after %d ticks", angle, gap, ticks)
		}
	}
}

// In a corner, sharp or square, the hull comes to rest and does not leak out.
func TestCornersDoNotLeak(t *testing.T) {
	for _, opening := range []float64{0.2, 0.7, math.Pi / 2, 2, 3} {
		a, b := geom.Heading(opening/2), geom.Heading(-opening/2)
		w := worldOf(t, wallOf(a.Scale(4), at(0, 0), b.Scale(4)))
		const radius = 0.1
		p := at(radius/math.Sin(opening/2)+0.3, 0.01)
		for range 20_000 {
			p, _, _ = w.Sweep(p, at(-0.003, 0.0001), radius)
		}
		near, _ := w.Nearest(p, 1)
		if gap := near.Distance - radius; gap < 0 || gap > 10*Skin {
			t.Errorf("opening %v: gap %g at rest", opening, gap)
		}
		if rest := radius / math.Sin(opening/2); math.Abs(p.X-rest) > 1e-6 {
			t.Errorf("opening %v: rests at %v, want x = %v", opening, p, rest)
		}
	}
}

// Round the outside of a corner a hull slides on in one sweep.
func TestSlideRoundTheEnd(t *testing.T) {
	w := worldOf(t, wallOf(at(0, 0), at(0, -5)))
	end, c, _ := w.Sweep(at(-1, 0.05), at(2, 0), 0.1)
	if end.X < 0.1 || end.Y < 0.2 || c.Ref != (Ref{Index: 0}) || c.Point.Sub(at(0, 0)).Norm() > 1e-9 {
		t.Errorf("ends at %v after touching %+v", end, c)
	}
}

func TestSweepOddNumbers(t *testing.T) {
	w := worldOf(t, wallOf(at(1, -1), at(1, 1)))
	nan, inf := math.NaN(), math.Inf(1)
	for _, c := range []struct {
		p, d   geom.Vec
		radius float64
	}{
		{at(nan, 0), at(1, 0), 0.1}, {at(0, 0), at(nan, 0), 0.1}, {at(0, 0), at(inf, 0), 0.1}, {at(0, 0), at(1, 0), nan},
		{at(0, 0), at(1, 0), -1}, {at(0, 0), at(0, 0), 0.1}, {at(1e300, 0), at(1, 0), 0.1},
	} {
		end, _, touched := w.Sweep(c.p, c.d, c.radius)
		if touched || !(sameVec(end, c.p)) {
			t.Errorf("from %v by %v with radius %v: %v, touched %v", c.p, c.d, c.radius, end, touched)
		}
	}
	if end, _, touched := w.Sweep(at(0, 0), at(1e300, 0), 0.1); !touched || math.Abs(end.X-0.9) > 1e-8 {
		t.Errorf("a monstrous motion ends at %v, touched %v", end, touched)
	}
}
