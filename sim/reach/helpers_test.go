package reach_test

import (
	"math"
	"testing"

	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/reach"
)

// segmentsOf takes a floor apart the plain way: every wall, polygon side and disc as a segment with a thickness.
func segmentsOf(c floor.Config) (segs []geom.Segment, thick []float64) {
	for _, s := range c.Solids {
		n := len(s.Points)
		switch s.Kind {
		case floor.Disc:
			segs, thick = append(segs, geom.Segment{A: s.Points[0], B: s.Points[0]}), append(thick, s.Radius)
		case floor.Polygon:
			for i := range s.Points {
				segs, thick = append(segs, geom.Segment{A: s.Points[i], B: s.Points[(i+1)%n]}), append(thick, 0)
			}
		case floor.Wall:
			for i := 1; i < n; i++ {
				segs, thick = append(segs, geom.Segment{A: s.Points[i-1], B: s.Points[i]}), append(thick, 0)
			}
		}
	}
	return segs, thick
}

func pointGap(p geom.Vec, s geom.Segment) float64 {
	d := s.B.Sub(s.A)
	f := 0.0
	if n := d.Norm2(); n > 0 {
		f = math.Max(0, math.Min(1, p.Sub(s.A).Dot(d)/n))
	}
	return p.Sub(s.A.AddScaled(f, d)).Norm()
}

// segmentGap is the distance of two segments.
func segmentGap(s, r geom.Segment) float64 {
	ab, cd := s.B.Sub(s.A), r.B.Sub(r.A)
	o1, o2 := ab.Cross(r.A.Sub(s.A)), ab.Cross(r.B.Sub(s.A))
	o3, o4 := cd.Cross(s.A.Sub(r.A)), cd.Cross(s.B.Sub(r.A))
	if o1*o2 < 0 && o3*o4 < 0 {
		return 0
	}
	return math.Min(math.Min(pointGap(s.A, r), pointGap(s.B, r)), math.Min(pointGap(r.A, s), pointGap(r.B, s)))
}

// inside is the winding number of the polygon about p, by angles.
func inside(p geom.Vec, corners []geom.Vec) bool {
	sum := 0.0
	for i, a := range corners {
		b := corners[(i+1)%len(corners)]
		a, b = a.Sub(p), b.Sub(p)
		sum += math.Atan2(a.Cross(b), a.Dot(b))
	}
	return math.Abs(sum) > math.Pi
}

// gapOf is the distance of the straight line s to the nearest solid, by trying them all.
func gapOf(c floor.Config, s geom.Segment) float64 {
	segs, thick := segmentsOf(c)
	least := math.Inf(1)
	for i := range segs {
		least = math.Min(least, segmentGap(s, segs[i])-thick[i])
	}
	for _, o := range c.Solids {
		if o.Kind == floor.Polygon && inside(s.A, o.Points) {
			return -1
		}
	}
	return least
}

// checkWay holds the way of an answer against the floor: it starts and ends
// where it should, keeps the hull's radius from everything, and is as long as it is said to be.
func checkWay(t *testing.T, c floor.Config, hull float64, from, to geom.Vec, goalRadius float64, r reach.Result) {
	t.Helper()
	w := r.Way
	if len(w) == 0 || w[0] != from {
		t.Fatalf("the way does not begin at the start: %v", w)
	}
	if d := w[len(w)-1].Sub(to).Norm(); d > goalRadius+1e-9 {
		t.Errorf("the way ends %.3g m from the goal, not within %g m", d, goalRadius)
	}
	if r.Length < from.Sub(to).Norm()-goalRadius-1e-9 {
		t.Errorf("length %g is below the straight distance %g", r.Length, from.Sub(to).Norm()-goalRadius)
	}
	long := 0.0
	turned := 0.0
	for i := 1; i < len(w); i++ {
		s := geom.Segment{A: w[i-1], B: w[i]}
		long += s.B.Sub(s.A).Norm()
		if g := gapOf(c, s); g < hull-reach.Flatness-2*reach.Skin {
			t.Errorf("the way comes within %g m of a solid between %v and %v; the hull's radius is %g", g, s.A, s.B, hull)
		}
		if i > 1 {
			a, b := w[i-1].Sub(w[i-2]), s.B.Sub(s.A)
			turned += math.Abs(math.Atan2(a.Cross(b), a.Dot(b)))
		}
	}
	// A chord over the angle φ is shorter than its arc by at most rφ³/24, and φ² ≤ 8·Flatness/r.
	// An arc at an end of the way turns up to one chord more than its corners show.
	if long > r.Length+1e-9 || long < r.Length-reach.Flatness/3*(turned+2)-1e-9 {
		t.Errorf("the way is %.9g m long, and said to be %.9g", long, r.Length)
	}
}
