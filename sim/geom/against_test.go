package geom

// Rays and distances against two general-purpose geometry libraries that share
// no code with this one or with each other: simplefeatures (a port of JTS-style
// overlay) for intersection, containment and distance, orb for distance.

import (
	"math"
	"testing"

	"github.com/paulmach/orb"
	"github.com/paulmach/orb/planar"
	sf "github.com/peterstace/simplefeatures/geom"
)

func sfLine(points ...Vec) sf.LineString {
	var xy []float64
	for _, p := range points {
		xy = append(xy, p.X, p.Y)
	}
	return sf.NewLineString(sf.NewSequence(xy, sf.DimXY))
}

func sfPoint(p Vec) sf.Geometry { return (sf.XY{X: p.X, Y: p.Y}).AsPoint().AsGeometry() }

func sfPolygon(g Polygon) sf.Polygon {
	return sf.NewPolygon([]sf.LineString{sfLine(append(append(Polygon{}, g...), g[0])...)})
}

// tossed draws points anywhere, or (half the time) on a coarse lattice, where ends are touched, lines
// are parallel or the same, and distances are zero.
type tossed struct {
	testRand
	lattice bool
}

func (r tossed) point() Vec {
	if r.lattice {
		return Vec{float64(r.Intn(5)), float64(r.Intn(5))}
	}
	return r.vec(3)
}

func (r tossed) segment() Segment {
	for {
		if s := (Segment{r.point(), r.point()}); s.A != s.B {
			return s
		}
	}
}

func TestRaysAgainstSimplefeatures(t *testing.T) {
	hits, misses, edge := 0, 0, 0
	for i := range 12000 {
		r := tossed{newRand(int64(i)), i%2 == 0}
		s, o, reach := r.segment(), r.point(), 4.0
		d := Heading(r.span(math.Pi))
		if r.lattice { // the four exact directions
			d = [4]Vec{{1, 0}, {0, 1}, {-1, 0}, {0, -1}}[r.Intn(4)]
		}
		got, _, ok := RaySegment(o, d, s)
		ok = ok && got <= reach

		ray := sfLine(o, o.AddScaled(reach, d)).AsGeometry()
		wall := sfLine(s.A, s.B).AsGeometry()
		meet, err := sf.Intersection(ray, wall)
		if err != nil {
			t.Fatal(err)
		}
		if !ok && meet.IsEmpty() {
			misses++
			continue
		}
		if ok != !meet.IsEmpty() {
			// Only where the answer hangs on the last digits.
			apart, _ := sf.Distance(ray, wall)
			if margin := margin(o, d, reach, s); apart > 1e-12 || margin > 1e-9 {
				t.Fatalf("ray %v along %v, wall %v: %v %v, but the library says empty=%v (%g apart, margin %g)", o, d, s, got, ok, meet.IsEmpty(), apart, margin)
			}
			edge++
			continue
		}
		hits++
		want, _ := sf.Distance(sfPoint(o), meet)
		if math.Abs(got-want) > 1e-9 {
			t.Fatalf("ray %v along %v, wall %v: range %v, library %v", o, d, s, got, want)
		}
	}
	t.Logf("%d hits, %d misses, %d undecided at the last digits", hits, misses, edge)
	if hits < 2000 || misses < 2000 || edge > 50 {
		t.Fatalf("%d hits, %d misses, %d undecided", hits, misses, edge)
	}
}

// margin returns how clearly the ray meets or misses the wall: how far the ends of each are
// from the other.
func margin(o, d Vec, reach float64, s Segment) float64 {
	end := o.AddScaled(reach, d)
	ray := Segment{o, end}
	return min(DistanceToSegment(s.A, ray), DistanceToSegment(s.B, ray), DistanceToSegment(o, s), DistanceToSegment(end, s))
}

func TestDistancesAgainstLibraries(t *testing.T) {
	zero := 0
	for i := range 12000 {
		r := tossed{newRand(int64(i)), i%2 == 0}
		s, p := r.segment(), r.point()
		if i%10 == 0 {
			s.B = s.A
		}
		got := DistanceToSegment(p, s)
		if got == 0 {
			zero++
		}
		want := planar.DistanceFromSegment(orb.Point{s.A.X, s.A.Y}, orb.Point{s.B.X, s.B.Y}, orb.Point{p.X, p.Y})
		if math.Abs(got-want) > 1e-12 {
			t.Fatalf("point %v, segment %v: %v, orb %v", p, s, got, want)
		}
		if s.A != s.B {
			want, _ = sf.Distance(sfPoint(p), sfLine(s.A, s.B).AsGeometry())
			if math.Abs(got-want) > 1e-12 {
				t.Fatalf("point %v, segment %v: %v, simplefeatures %v", p, s, got, want)
			}
		}
	}
	if zero < 100 {
		t.Fatalf("only %d zero distances", zero)
	}
}

func repeats(g Polygon) bool {
	for i := range g {
		if e := g.Edge(i); e.A == e.B {
			return true
		}
	}
	return false
}

func TestPolygonsAgainstSimplefeatures(t *testing.T) {
	simple, inside := 0, 0
	for i := range 10000 {
		r := tossed{newRand(int64(i)), i%2 == 0}
		g := make(Polygon, 3+r.Intn(4))
		for k := range g {
			g[k] = r.point()
		}
		if repeats(g) {
			continue // the library allows them
		}
		ring := sfPolygon(g)
		want := ring.Validate() == nil
		if got := g.Simple(); got != want {
			t.Fatalf("%v: simple %v, library valid %v (%v)", g, got, want, ring.Validate())
		}
		if !want {
			continue
		}
		simple++
		if d := math.Abs(math.Abs(g.Area()) - ring.Area()); d > 1e-12 {
			t.Fatalf("%v: area %v, library %v", g, g.Area(), ring.Area())
		}
		p := r.point()
		got := g.Distance(p)
		edge, _ := sf.Distance(sfPoint(p), ring.Boundary().AsGeometry())
		if math.Abs(math.Abs(got)-edge) > 1e-12 {
			t.Fatalf("%v from %v: %v, library %v", g, p, got, edge)
		}
		if edge > 1e-12 {
			in, err := sf.Contains(ring.AsGeometry(), sfPoint(p))
			if err != nil || in != (got < 0) {
				t.Fatalf("%v, %v: distance %v, but the library says inside %v (%v)", g, p, got, in, err)
			}
			if in {
				inside++
			}
		}
	}
	if simple < 2000 || inside < 300 {
		t.Fatalf("only %d simple polygons, %d points inside", simple, inside)
	}
}
