package geom

import (
	"math"
	"math/rand"
	"testing"

	"leeway/sim/truth"
)

// testRand draws what the tests need, the same every time.
type testRand struct{ *rand.Rand }

func newRand(seed int64) testRand { return testRand{rand.New(rand.NewSource(seed))} }

// span draws from (−x, x).
func (r testRand) span(x float64) float64 { return x * (2*r.Float64() - 1) }

func (r testRand) vec(x float64) Vec { return Vec{r.span(x), r.span(x)} }

func TestDistancePublished(t *testing.T) {
	// G-04 (projection)
	want := truth.Values(t, "G-04", "")
	s, dot := Segment{v(0, 0), v(2, 0)}, Segment{v(1, 1), v(1, 1)}
	truth.Close(t, "G-04 beyond the end", DistanceToSegment(v(3, 4), s), want[0], printed)
	truth.Close(t, "G-04 beside", DistanceToSegment(v(1, 2), s), want[1], printed)
	truth.Close(t, "G-04 before the start", DistanceToSegment(v(-1, -1), s), want[2], printed)
	truth.Close(t, "G-04 zero length", DistanceToSegment(v(4, 5), dot), want[3], printed)
}

func TestFromSegmentAgreesWithNearest(t *testing.T) {
	r := newRand(1)
	for range 20000 {
		s := Segment{r.vec(3), r.vec(3)}
		p := r.vec(4)
		q, f := NearestOnSegment(p, s)
		if got, want := FromSegment(p, s), p.Sub(q); got.Sub(want).Norm() > 1e-14 {
			t.Fatalf("from %v to %v: %v, but the nearest point gives %v", s, p, got, want)
		}
		if !(f >= 0 && f <= 1) {
			t.Fatalf("fraction %v", f)
		}
	}
	// Beside an axis-parallel wall the direction is exact, however close.
	s := Segment{v(7.3, -2), v(7.3, 5)}
	if got := FromSegment(v(7.3-1e-12, 0.1), s); got.Y != 0 || !(got.X < 0) {
		t.Errorf("displacement %v is not along x", got)
	}
}

func TestPolygon(t *testing.T) {
	ell := Polygon{v(0, 0), v(4, 0), v(4, 1), v(1, 1), v(1, 3), v(0, 3)}
	for _, c := range []struct {
		p    Vec
		want float64
	}{
		{v(0.5, 0.5), -0.5}, {v(3, 0.75), -0.25}, {v(2, 2), 1}, {v(5, 0.5), 1}, {v(-3, -4), 5}, {v(0.5, 2), -0.5},
	} {
		if got := ell.Distance(c.p); math.Abs(got-c.want) > 1e-15 {
			t.Errorf("distance of %v = %v, want %v", c.p, got, c.want)
		}
		if got := ell.Contains(c.p); got != (c.want < 0) {
			t.Errorf("contains %v: %v", c.p, got)
		}
	}
	if got := ell.Area(); got != 6 {
		t.Errorf("area %v, want 6", got)
	}
	far := make(Polygon, len(ell))
	for i, p := range ell {
		far[len(ell)-1-i] = p.Add(v(1e5, -1e5))
	}
	if got := far.Area(); got != -6 {
		t.Errorf("area far out and clockwise %v, want -6", got)
	}
}

func TestSimple(t *testing.T) {
	for _, c := range []struct {
		name string
		g    Polygon
		want bool
	}{
		{"triangle", Polygon{v(0, 0), v(1, 0), v(0, 1)}, true},
		{"clockwise", Polygon{v(0, 0), v(0, 1), v(1, 0)}, true},
		{"square with a corner in the middle of a side", Polygon{v(0, 0), v(1, 0), v(2, 0), v(2, 2), v(0, 2)}, true},
		{"ell", Polygon{v(0, 0), v(4, 0), v(4, 1), v(1, 1), v(1, 3), v(0, 3)}, true},
		{"two corners", Polygon{v(0, 0), v(1, 0)}, false},
		{"none", nil, false},
		{"flat triangle", Polygon{v(0, 0), v(1, 0), v(2, 0)}, false},
		{"bow tie", Polygon{v(0, 0), v(1, 1), v(1, 0), v(0, 1)}, false},
		{"spike", Polygon{v(0, 0), v(2, 0), v(3, 0), v(2, 0), v(2, 2)}, false},
		{"folded", Polygon{v(0, 0), v(3, 0), v(1, 0), v(1, 2)}, false},
		{"folded at the seam", Polygon{v(1, 0), v(1, 2), v(0, 0), v(3, 0)}, false},
		{"repeated corner", Polygon{v(0, 0), v(1, 0), v(1, 0), v(0, 1)}, false},
		{"last is first", Polygon{v(0, 0), v(1, 0), v(0, 1), v(0, 0)}, false},
		{"corner on a far edge", Polygon{v(0, 0), v(4, 0), v(4, 4), v(2, 0), v(0, 4)}, false},
		{"two squares joined at a corner", Polygon{v(0, 0), v(1, 0), v(1, 1), v(2, 1), v(2, 2), v(1, 2), v(1, 1), v(0, 1)}, false},
		{"a side over a side", Polygon{v(0, 0), v(3, 0), v(3, 1), v(2, 0), v(1, 0), v(0, 1)}, false},
	} {
		if got := c.g.Simple(); got != c.want {
			t.Errorf("%s: simple %v, want %v", c.name, got, c.want)
		}
		// It must not matter where the list begins.
		for k := 1; k < len(c.g); k++ {
			turned := append(append(Polygon{}, c.g[k:]...), c.g[:k]...)
			if got := turned.Simple(); got != c.want {
				t.Errorf("%s, begun at corner %d: simple %v, want %v", c.name, k, got, c.want)
			}
		}
	}
}

// Two edges in line, apart from each other on a slanted line: the rounded cross
// products of this pair have opposite signs.
func TestSegmentsApartOnOneLineDoNotCross(t *testing.T) {
	s := Segment{Vec{4.087729633363474, 5.284297319857221}, Vec{3.7754691639180917, 5.399253032187515}}
	u := Segment{Vec{5.916125267001206, 4.61119091333788}, Vec{5.603864797555824, 4.726146625668173}}
	if s.Cross(u) || u.Cross(s) {
		t.Error("two segments 1.6 m apart are said to cross")
	}
	if !s.Cross(Segment{s.B, u.A}) || !s.Cross(s) {
		t.Error("segments that share a point are said not to")
	}
}
