package reach_test

import (
	"math"
	"strings"
	"testing"

	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/reach"
	"leeway/sim/truth"
)

func wall(points ...geom.Vec) floor.Solid { return floor.Solid{Kind: floor.Wall, Points: points} }

func polygon(points ...geom.Vec) floor.Solid {
	return floor.Solid{Kind: floor.Polygon, Points: points}
}

func disc(x, y, r float64) floor.Solid {
	return floor.Solid{Kind: floor.Disc, Points: []geom.Vec{{X: x, Y: y}}, Radius: r}
}

func box(x0, y0, x1, y1 float64) floor.Solid {
	return polygon(geom.Vec{X: x0, Y: y0}, geom.Vec{X: x1, Y: y0}, geom.Vec{X: x1, Y: y1}, geom.Vec{X: x0, Y: y1})
}

func on(solids ...floor.Solid) floor.Config { return floor.Config{Solids: solids} }

// ask returns the answer to a question that is known to be a fair one.
func ask(t *testing.T, c floor.Config, hull float64, from, to geom.Vec, goalRadius float64) reach.Result {
	t.Helper()
	r, err := reach.Shortest(c, hull, from, to, goalRadius)
	if err != nil {
		t.Fatal(err)
	}
	if r.Reachable {
		checkWay(t, c, hull, from, to, goalRadius, r)
	} else if r.Reason == "" {
		t.Errorf("not reachable, and no reason given")
	}
	return r
}

func close(t *testing.T, what string, got, want, bound float64) {
	t.Helper()
	if !(math.Abs(got-want) <= bound) {
		t.Errorf("%s: got %.12g, want %.12g, off by %.3g (allowed %.3g)", what, got, want, got-want, bound)
	}
}

// The length of tangent, arc, tangent about a circle of radius R from a point at
// distance d1 to one at distance d2 of its centre that stand at an angle φ seen from it:
// √(d1²−R²) + √(d2²−R²) + R·(φ − acos(R/d1) − acos(R/d2)). Derived.
func aroundCircle(R, d1, d2, phi float64) float64 {
	return math.Sqrt(d1*d1-R*R) + math.Sqrt(d2*d2-R*R) + R*(phi-math.Acos(R/d1)-math.Acos(R/d2))
}

func TestStraightWayOnAnEmptyFloor(t *testing.T) {
	r := ask(t, on(), 0.2, geom.Vec{X: 1, Y: 1}, geom.Vec{X: 4, Y: 5}, 0)
	close(t, "length", r.Length, 5, 1e-15)
	r = ask(t, on(), 0.2, geom.Vec{X: 1, Y: 1}, geom.Vec{X: 4, Y: 5}, 0.15)
	close(t, "length to within 0.15 m", r.Length, 4.85, 1e-14)
	r = ask(t, on(), 0.2, geom.Vec{X: 1, Y: 1}, geom.Vec{X: 1.1, Y: 1}, 0.15)
	close(t, "length from within the goal disc", r.Length, 0, 0)
}

func TestAroundADisc(t *testing.T) {
	// Hull 0.3 about a disc of 0.7: a circle of radius 1 about the origin.
	c := on(disc(0, 0, 0.7))
	r := ask(t, c, 0.3, geom.Vec{X: -3, Y: 0}, geom.Vec{X: 4, Y: 0}, 0)
	close(t, "opposite", r.Length, aroundCircle(1, 3, 4, math.Pi), 1e-12)
	a := 2.5
	r = ask(t, c, 0.3, geom.Vec{X: 2, Y: 0}, geom.Vec{X: 2.5 * math.Cos(a), Y: 2.5 * math.Sin(a)}, 0)
	close(t, "at 2.5 rad", r.Length, aroundCircle(1, 2, 2.5, a), 1e-12)
	// From a place in touch with the disc to another: an arc and nothing else.
	r = ask(t, c, 0.3, geom.Vec{X: 1, Y: 0}, geom.Vec{X: math.Cos(a), Y: math.Sin(a)}, 0)
	close(t, "arc alone", r.Length, a, 1e-12)
	// To within a goal radius: the goal circle is met head-on.
	r = ask(t, c, 0.3, geom.Vec{X: -3, Y: 0}, geom.Vec{X: 4, Y: 0}, 0.25)
	close(t, "to within 0.25 m", r.Length, aroundCircle(1, 3, 4, math.Pi)-0.25, 1e-12)
	// A goal disc so large that the arc itself runs into it: the goal circle of radius 1.9 about (2, 0)
	// meets the unit circle where cos φ = (1 + 4 − 1.9²)/(2·2).
	r = ask(t, c, 0.3, geom.Vec{X: -3, Y: 0}, geom.Vec{X: 2, Y: 0}, 1.9)
	phi := math.Acos((1 + 4 - 3.61) / 4)
	close(t, "ends on the arc", r.Length, math.Sqrt(8)+math.Pi-phi-math.Acos(1.0/3), 1e-9)
}

func TestAroundTheEndOfOneWall(t *testing.T) {
	// A long wall along x ≤ 0; the way goes about its end at the origin.
	c := on(wall(geom.Vec{X: -20}, geom.Vec{}))
	r := ask(t, c, 0.2, geom.Vec{X: -3, Y: -2}, geom.Vec{X: -1, Y: 2}, 0)
	d1, d2 := math.Hypot(3, 2), math.Hypot(1, 2)
	phi := 2*math.Pi - math.Atan2(2, 3) - math.Atan2(2, 1)
	close(t, "length", r.Length, aroundCircle(0.2, d1, d2, phi), 1e-12)
	// Straight past the end, grazing it exactly.
	r = ask(t, c, 0.2, geom.Vec{X: 0.2, Y: -3}, geom.Vec{X: 0.2, Y: 3}, 0)
	close(t, "grazing", r.Length, 6, 1e-12)
}

// A goal disc that pokes through a wall: the way runs along the wall and ends
// where the goal circle comes out of what the hull cannot enter.
func TestGoalDiscBehindAWall(t *testing.T) {
	c := on(wall(geom.Vec{X: -20}, geom.Vec{X: 20}))
	r := ask(t, c, 0.2, geom.Vec{X: 3, Y: 0.2}, geom.Vec{Y: -0.1}, 0.35)
	close(t, "along the wall", r.Length, 3-math.Sqrt(0.35*0.35-0.3*0.3), 1e-9)
	// From straight above the goal circle is met head-on.
	r = ask(t, c, 0.2, geom.Vec{Y: 3}, geom.Vec{Y: -0.1}, 0.35)
	close(t, "from above", r.Length, 3.1-0.35, 1e-12)
	// A goal disc that does not reach through is to be entered from below, round the end.
	r = ask(t, c, 0.2, geom.Vec{X: 3, Y: 0.2}, geom.Vec{Y: -0.4}, 0.35)
	if !r.Reachable || r.Length < 37 {
		t.Errorf("round the end of the wall: %v %g m", r.Reachable, r.Length)
	}
}

// Two bitangents, each kind: about two discs on the same side (outer), and between them (inner).
func TestBitangents(t *testing.T) {
	c := on(disc(0, 0, 0.3), disc(4, 0, 0.3), wall(geom.Vec{X: 0, Y: 0}, geom.Vec{X: 0, Y: -50}), wall(geom.Vec{X: 4, Y: 0}, geom.Vec{X: 4, Y: 50}))
	// From under the left disc, over it, between the two, under the right one and up behind it.
	const R = 0.5
	r := ask(t, c, 0.2, geom.Vec{X: -R, Y: -3}, geom.Vec{X: 4 + R, Y: 3}, 0)
	// The inner tangent of two circles of radius R at distance 4 leans by asin(2R/4) and is √(16 − 4R²) long.
	lean := math.Asin(2 * R / 4)
	close(t, "inner", r.Length, 3+3+math.Sqrt(16-4*R*R)+2*R*(math.Pi/2+lean), 1e-9)

	c = on(disc(0, 0, 0.3), disc(4, 0, 0.8), wall(geom.Vec{X: 0, Y: 0}, geom.Vec{X: 0, Y: -50}), wall(geom.Vec{X: 4, Y: 0}, geom.Vec{X: 4, Y: -50}))
	r = ask(t, c, 0.2, geom.Vec{X: -R, Y: -3}, geom.Vec{X: 5, Y: -3}, 0)
	lean = math.Asin(R / 4)
	close(t, "outer", r.Length, 3+3+math.Sqrt(16-R*R)+R*(math.Pi/2-lean)+1*(math.Pi/2+lean), 1e-9)
}

// H-01 of the published values: LS87 and Lum06, the shortest way of a point round a rectangle.
func TestShortestRoundTheRectangle(t *testing.T) {
	want := truth.Values(t, "H-01", "")[3]
	for _, hull := range []float64{1e-5, reach.MinHull} {
		r := ask(t, on(box(4, -1, 6, 3)), hull, geom.Vec{}, geom.Vec{X: 10}, 0)
		// The hull turns by 2·atan(1/4) in all and adds its radius times that.
		close(t, "H-01", r.Length, want, math.Max(1e-6*want, 2*hull))
	}
	// With a real hull there is a closed form too: three lines and two arcs. Derived.
	r := ask(t, on(box(4, -1, 6, 3)), 0.5, geom.Vec{}, geom.Vec{X: 10}, 0)
	d := math.Hypot(4, 1)
	close(t, "hull 0.5", r.Length, 2+2*math.Sqrt(d*d-0.25)+2*0.5*(math.Asin(0.5/d)+math.Atan2(1, 4)), 1e-12)
}

// A door of a width just above and just below the hull's, and just so.
func TestDoorWidth(t *testing.T) {
	const r = 0.21
	for _, tc := range []struct {
		width float64
		pass  bool
	}{{2*r + 1e-6, true}, {2 * r, true}, {2*r - 2.5*reach.Skin, false}, {2*r - 1e-6, false}, {2*r + 1, true}} {
		for _, angle := range []float64{0, 0.3, 1, 2.2, -1.3} {
			s, c := math.Sincos(angle)
			at := func(x, y float64) geom.Vec { return geom.Vec{X: x, Y: y}.Rotate(s, c).Add(geom.Vec{X: 3.3, Y: -1.7}) }
			w := tc.width / 2
			door := on(wall(at(0, -100), at(0, -w)), wall(at(0, w), at(0, 100)))
			got := ask(t, door, r, at(-2, 0), at(2, 0), 0)
			pass := got.Reachable && got.Length < 5
			if pass != tc.pass {
				t.Errorf("door of 2r%+.3g at %g rad: passes %v, want %v", tc.width-2*r, angle, pass, tc.pass)
			}
			if pass {
				close(t, "straight through", got.Length, 4, 1e-8)
			}
			// A corridor between two long blocks of the same width.
			corridor := on(
				polygon(at(-1, w), at(1, w), at(1, 100), at(-1, 100)),
				polygon(at(-1, -w), at(1, -w), at(1, -100), at(-1, -100)))
			got = ask(t, corridor, r, at(-2, 0), at(2, 0), 0)
			if pass := got.Reachable && got.Length < 5; pass != tc.pass {
				t.Errorf("corridor of 2r%+.3g at %g rad: passes %v, want %v", tc.width-2*r, angle, pass, tc.pass)
			}
		}
	}
}

func TestReasons(t *testing.T) {
	ring := on(box(0, 0, 4, 4), floor.Solid{ID: "post", Kind: floor.Disc, Points: []geom.Vec{{X: 8, Y: 2}}, Radius: 0.5},
		wall(geom.Vec{X: 10, Y: 0}, geom.Vec{X: 14, Y: 0}, geom.Vec{X: 14, Y: 4}, geom.Vec{X: 10, Y: 4}, geom.Vec{X: 10, Y: 0}))
	for _, tc := range []struct {
		name     string
		from, to geom.Vec
		radius   float64
		want     string
	}{
		{"start in a polygon", geom.Vec{X: 2, Y: 2}, geom.Vec{X: 6, Y: 2}, 0, "the start overlaps"},
		{"start near a disc", geom.Vec{X: 8.65, Y: 2}, geom.Vec{X: 6, Y: 2}, 0, `touches "post"`},
		{"goal in a polygon", geom.Vec{X: 6, Y: 2}, geom.Vec{X: 2, Y: 2}, 0.1, "the goal overlaps"},
		{"goal near a wall", geom.Vec{X: 6, Y: 2}, geom.Vec{X: 9.9, Y: 2}, 0, "touches solid 2"},
		{"goal walled in", geom.Vec{X: 6, Y: 2}, geom.Vec{X: 12, Y: 2}, 0.1, "no way"},
		{"start walled in", geom.Vec{X: 12, Y: 2}, geom.Vec{X: 6, Y: 2}, 0.1, "no way"},
	} {
		r := ask(t, ring, 0.2, tc.from, tc.to, tc.radius)
		if r.Reachable || !strings.Contains(r.Reason, tc.want) {
			t.Errorf("%s: %+v, want a reason with %q", tc.name, r, tc.want)
		}
	}
	// The goal's centre overlaps, its disc does not.
	r := ask(t, ring, 0.2, geom.Vec{X: 6, Y: 2}, geom.Vec{X: 8, Y: 2}, 0.8)
	close(t, "short of the post", r.Length, 1.2, 1e-9)
}

func TestImpossibleQuestions(t *testing.T) {
	nan := math.NaN()
	for name, f := range map[string]func() error{
		"no hull":         func() error { _, err := reach.New(on(), 0); return err },
		"NaN hull":        func() error { _, err := reach.New(on(), nan); return err },
		"endless hull":    func() error { _, err := reach.New(on(), math.Inf(1)); return err },
		"short wall":      func() error { _, err := reach.New(on(wall(geom.Vec{})), 0.2); return err },
		"flat polygon":    func() error { _, err := reach.New(on(polygon(geom.Vec{}, geom.Vec{X: 1})), 0.2); return err },
		"NaN point":       func() error { _, err := reach.New(on(wall(geom.Vec{}, geom.Vec{X: nan})), 0.2); return err },
		"negative disc":   func() error { _, err := reach.New(on(disc(0, 0, -1)), 0.2); return err },
		"unknown kind":    func() error { _, err := reach.New(on(floor.Solid{Kind: 9, Points: []geom.Vec{{}}}), 0.2); return err },
		"NaN start":       func() error { _, err := reach.Shortest(on(), 0.2, geom.Vec{X: nan}, geom.Vec{}, 0); return err },
		"negative radius": func() error { _, err := reach.Shortest(on(), 0.2, geom.Vec{}, geom.Vec{}, -1); return err },
	} {
		if f() == nil {
			t.Errorf("%s: no error", name)
		}
	}
}
