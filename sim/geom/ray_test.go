package geom

import (
	"math"
	"testing"

	"leeway/sim/truth"
)

const printed = 1e-6 // relative: the tables print seven significant digits

func v(x, y float64) Vec { return Vec{x, y} }

func TestRaySegmentPublished(t *testing.T) {
	// G-01 (cross products)
	want := truth.Values(t, "G-01", "")
	r, f, ok := RaySegment(v(0, 0), v(math.Sqrt(3)/2, 0.5), Segment{v(2, -1), v(2, 3)})
	if !ok {
		t.Fatal("G-01: no meeting")
	}
	truth.Close(t, "G-01 range", r, want[0], printed)
	truth.Close(t, "G-01 fraction", f, want[1], printed)

	// G-02 (degenerate): "miss; 2; miss"
	if got := truth.Text(t, "G-02", ""); got != "miss; 2; miss" {
		t.Fatalf("G-02 reads %q", got)
	}
	if _, _, ok := RaySegment(v(0, 0), v(1, 0), Segment{v(1, 1), v(3, 1)}); ok {
		t.Error("G-02: a parallel segment was met")
	}
	if r, f, ok := RaySegment(v(0, 0), v(1, 0), Segment{v(2, 0), v(2, 1)}); !ok || r != 2 || f != 0 {
		t.Errorf("G-02: end touched at %v, fraction %v, %v; want 2, 0, true", r, f, ok)
	}
	if _, _, ok := RaySegment(v(0, 0), v(1, 0), Segment{v(-2, -1), v(-2, 1)}); ok {
		t.Error("G-02: a segment behind was met")
	}
}

func TestRayCirclePublished(t *testing.T) {
	// G-03 (quadratic)
	want := truth.Values(t, "G-03", "")
	near, far, ok := RayCircle(v(0, 0), v(1, 0), Disc{v(3, 0.6), 1})
	if !ok {
		t.Fatal("G-03: no meeting")
	}
	truth.Close(t, "G-03 near root", near, want[0], printed)
	truth.Close(t, "G-03 far root", far, want[1], printed)
	near, far, ok = RayCircle(v(0, 0), v(1, 0), Disc{v(3, 1), 1})
	if !ok || near != far {
		t.Errorf("G-03: tangent roots %v, %v, %v; want twice the same", near, far, ok)
	}
	truth.Close(t, "G-03 tangent", near, want[2], printed)
	near, far, ok = RayCircle(v(0, 0), v(1, 0), Disc{v(0.2, 0), 1})
	if !ok || near >= 0 {
		t.Errorf("G-03: from inside, near root %v, %v; want one behind", near, ok)
	}
	truth.Close(t, "G-03 exit range", far, want[3], printed)
	if r, ok := RayDisc(v(0, 0), v(1, 0), Disc{v(0.2, 0), 1}); !ok || r != 0 {
		t.Errorf("a ray that starts in a disc reads %v, %v; want 0", r, ok)
	}
}

func TestDiscTouchPublished(t *testing.T) {
	// G-05 (Minkowski sum)
	want := truth.Values(t, "G-05", "")
	at, ok := DiscTouchesSegment(v(0, 0), v(1, 0.5), 0.2, Segment{v(2, 0), v(2, 3)})
	if !ok {
		t.Fatal("G-05: no touch of the side")
	}
	truth.Close(t, "G-05 side", at, want[0], printed)
	at, ok = DiscTouchesSegment(v(0, 1.1), v(1, 0), 0.2, Segment{v(1, -1), v(1, 1)})
	if !ok {
		t.Fatal("G-05: no touch of the end cap")
	}
	truth.Close(t, "G-05 cap", at, want[1], printed)

	// G-06 (derived): 2 m/s for 0.1 s
	at, ok = DiscTouchesSegment(v(0.9, 0), v(0.2, 0), 0.05, Segment{v(1, -1), v(1, 1)})
	if !ok {
		t.Fatal("G-06: the disc passed through the wall")
	}
	truth.Close(t, "G-06 time", at*0.1, truth.Value(t, "G-06", ""), printed)
}

// Degenerate rays whose right answer needs no arithmetic.
func TestRaySegmentDegenerate(t *testing.T) {
	inf := math.Inf(1)
	x := v(1, 0)
	for _, c := range []struct {
		name string
		o, d Vec
		s    Segment
		want float64 // +Inf: a miss
	}{
		{"along, ahead", v(0, 0), x, Segment{v(2, 0), v(3, 0)}, 2},
		{"along, ahead, turned round", v(0, 0), x, Segment{v(3, 0), v(2, 0)}, 2},
		{"along, behind", v(0, 0), x, Segment{v(-3, 0), v(-2, 0)}, inf},
		{"along, starts within", v(0, 0), x, Segment{v(-3, 0), v(2, 0)}, 0},
		{"along, starts at the near end", v(0, 0), x, Segment{v(0, 0), v(2, 0)}, 0},
		{"along, starts at the far end", v(0, 0), x, Segment{v(-2, 0), v(0, 0)}, 0},
		{"starts on it, crossing", v(0, 0), x, Segment{v(0, -1), v(0, 1)}, 0},
		{"starts on its end, leaving", v(0, 0), x, Segment{v(0, 0), v(-1, 1)}, 0},
		{"far end touched", v(0, 0), x, Segment{v(2, 1), v(2, 0)}, 2},
		{"passes beside", v(0, 0), x, Segment{v(2, 1e-9), v(2, 1)}, inf},
		{"point ahead", v(0, 0), x, Segment{v(2, 0), v(2, 0)}, 2},
		{"point behind", v(0, 0), x, Segment{v(-2, 0), v(-2, 0)}, inf},
		{"point beside", v(0, 0), x, Segment{v(2, 1), v(2, 1)}, inf},
		{"on its line, not along", v(0, 0), x, Segment{v(1, 1), v(2, 2)}, inf},
		{"not a number", v(0, 0), x, Segment{v(math.NaN(), 0), v(2, 2)}, inf},
		{"all not a number", v(0, 0), x, Segment{v(math.NaN(), math.NaN()), v(math.NaN(), math.NaN())}, inf},
		{"infinite origin", v(inf, 0), x, Segment{v(1, -1), v(1, 1)}, inf},
		{"huge origin", v(-1e300, 1e300), x, Segment{v(1, -1), v(1, 1)}, inf},
	} {
		r, f, ok := RaySegment(c.o, c.d, c.s)
		if !ok {
			r = inf
		}
		if r != c.want || !(f >= 0 && f <= 1) {
			t.Errorf("%s: range %v, fraction %v; want range %v", c.name, r, f, c.want)
		}
	}
}

// A ray that runs along a slanted wall, to the last bit of a rounded direction, must not
// report a place outside it.
func TestRaySegmentEdgeOn(t *testing.T) {
	for i := range 2000 {
		d := Heading(float64(i) * 0.00314)
		o := v(float64(i%7)*0.1, float64(i%11)*0.1)
		s := Segment{o.AddScaled(1.5, d), o.AddScaled(2.5, d)}
		if r, _, ok := RaySegment(o, d, s); ok && !(r >= 1.5-1e-9 && r <= 2.5+1e-9) {
			t.Fatalf("direction %v: range %v is outside the wall [1.5, 2.5]", d, r)
		}
		s = Segment{o.AddScaled(-1, d), o.AddScaled(1, d)}
		if r, _, ok := RaySegment(o, d, s); ok && !(r <= 1+1e-9) {
			t.Fatalf("direction %v: range %v is beyond the wall's end at 1", d, r)
		}
	}
}

// Two walls that share a corner leave no gap, however the ray is aimed at it.
func TestRaySegmentNoGapAtSharedEnd(t *testing.T) {
	r := newRand(3)
	for range 20000 {
		o, c := r.vec(5), r.vec(5)
		d := c.Sub(o).Unit()
		d = Vec{d.X + r.span(3e-16), d.Y + r.span(3e-16)}
		side := d.Perp().Scale(0.5)
		a, b := c.Add(side).AddScaled(r.span(0.4), d), c.Sub(side).AddScaled(r.span(0.4), d)
		_, _, ok1 := RaySegment(o, d, Segment{a, c})
		_, _, ok2 := RaySegment(o, d, Segment{c, b})
		if !ok1 && !ok2 {
			t.Fatalf("ray from %v along %v slips between %v, %v and %v", o, d, a, c, b)
		}
	}
}

// Exchanging the ends and mirroring change no bit.
func TestRaySegmentSymmetry(t *testing.T) {
	r := newRand(4)
	for range 20000 {
		o, d := r.vec(5), Heading(r.span(4))
		s := Segment{r.vec(5), r.vec(5)}
		t0, _, ok0 := RaySegment(o, d, s)
		t1, _, ok1 := RaySegment(o, d, Segment{s.B, s.A})
		m := func(p Vec) Vec { return Vec{p.X, -p.Y} }
		t2, _, ok2 := RaySegment(m(o), m(d), Segment{m(s.A), m(s.B)})
		if t0 != t1 || t0 != t2 || ok0 != ok1 || ok0 != ok2 {
			t.Fatalf("ray from %v along %v on %v: %v %v; ends exchanged %v %v; mirrored %v %v", o, d, s, t0, ok0, t1, ok1, t2, ok2)
		}
	}
}

// At the touch found, the disc is at distance r; before it, farther. Found by stepping, not by the formulas.
func TestDiscTouchesSegmentIsFirst(t *testing.T) {
	r := newRand(5)
	touched := 0
	for range 6000 {
		s := Segment{r.vec(2), r.vec(2)}
		if r.Intn(10) == 0 {
			s.B = s.A
		}
		p, d, rad := r.vec(4), r.vec(6), math.Abs(r.span(0.5))
		at, ok := DiscTouchesSegment(p, d, rad, s)
		gap := func(k float64) float64 { return DistanceToSegment(p.AddScaled(k, d), s) - rad }
		end := 1.0
		if ok && at < 1 {
			end = at
			touched++
			if g := gap(at); at > 0 && math.Abs(g) > 1e-9 {
				t.Fatalf("gap %g at the touch", g)
			}
		}
		if !ok && gap(0) <= 0 {
			continue // overlapping and leaving
		}
		for k := range 200 {
			if g := gap(end * float64(k) / 200); g < -1e-9 && at > 0 {
				t.Fatalf("disc %v r=%v moving %v at %v: gap %g at %v, before the touch at %v (%v)", p, rad, d, s, g, end*float64(k)/200, at, ok)
			}
		}
	}
	if touched < 500 {
		t.Fatalf("only %d touches", touched)
	}
}

func TestDiscTouchesDegenerate(t *testing.T) {
	wall := Segment{v(1, -1), v(1, 1)}
	for _, c := range []struct {
		name string
		p, d Vec
		r    float64
		want float64 // −1: never
	}{
		{"standing still", v(0, 0), v(0, 0), 0.5, -1},
		{"standing still, overlapping", v(0.8, 0), v(0, 0), 0.5, -1},
		{"overlapping, going in", v(0.8, 0), v(0.1, 0), 0.5, 0},
		{"overlapping, going out", v(0.8, 0), v(-5, 0), 0.5, -1},
		{"touching, going along", v(0.5, 0), v(0, 5), 0.5, -1},
		{"touching, going in", v(0.5, 0), v(1e-300, 0), 0.5, 0},
		{"centre on the wall", v(1, 0), v(1, 0), 0.5, -1},
		{"along the line of the wall", v(1, -5), v(0, 1), 0.5, 3.5},
		{"grazing the end", v(0, 1.5), v(1, 0), 0.5, 1},
		{"a point against the wall", v(0, 0), v(1, 0), 0, 1},
		{"away", v(0, 0), v(-1, 0), 0.5, -1},
		{"not a number", v(math.NaN(), 0), v(1, 0), 0.5, -1},
	} {
		at, ok := DiscTouchesSegment(c.p, c.d, c.r, wall)
		if !ok {
			at = -1
		}
		if math.Abs(at-c.want) > 1e-12 {
			t.Errorf("%s: touches at %v, want %v", c.name, at, c.want)
		}
	}
	if at, ok := DiscTouchesDisc(v(0, 0), v(2, 0), 0.5, Disc{v(3, 0), 0.5}); !ok || at != 1 {
		t.Errorf("disc against disc: %v, %v; want 1", at, ok)
	}
}
