package gen_test

import (
	"encoding/binary"
	"fmt"
	"hash/fnv"
	"math"
	"testing"

	"leeway/sim/floor"
	"leeway/sim/gen"
	"leeway/sim/geom"
	"leeway/sim/reach"
)

const many = 150 // floors of each kind in a test

// each calls f with many floors of every kind.
func each(t *testing.T, o gen.Options, f func(t *testing.T, kind gen.Kind, s *gen.Scene)) {
	for _, kind := range gen.Kinds() {
		t.Run(kind.String(), func(t *testing.T) {
			t.Parallel()
			for seed := range uint64(many) {
				s, err := gen.Floor(seed, kind, o)
				if err != nil {
					t.Fatal(err)
				}
				f(t, kind, &s)
			}
		})
	}
}

// fingerprint hashes every number of a scene.
func fingerprint(s *gen.Scene) uint64 {
	h := fnv.New64a()
	put := func(x ...float64) {
		for _, x := range x {
			binary.Write(h, binary.LittleEndian, math.Float64bits(x))
		}
	}
	put(s.Width, s.Height, s.Hull, s.Margin, s.GoalRadius, s.Start.Pos.X, s.Start.Pos.Y, s.Start.Theta, s.Goal.X, s.Goal.Y)
	for _, o := range s.Floor.Solids {
		fmt.Fprint(h, o.ID, o.Kind, len(o.Points))
		put(o.Radius)
		for _, p := range o.Points {
			put(p.X, p.Y)
		}
	}
	return h.Sum64()
}

// The prints are those of this generator when it was first written; a change of
// the generator changes them, a change of machine must not.
func TestSameFloorEverywhere(t *testing.T) {
	golden := map[gen.Kind]uint64{
		gen.Scattered: 0xc6afac65f75bfaa2,
		gen.Rooms:     0x8d197ee473364ab3,
		gen.Pockets:   0x59bb5acb90114375,
		gen.Mazes:     0xf3acb64637ce00aa,
	}
	for _, kind := range gen.Kinds() {
		h := fnv.New64a()
		for seed := range uint64(20) {
			s, err := gen.Floor(seed, kind, gen.Options{})
			if err != nil {
				t.Fatal(err)
			}
			again, _ := gen.Floor(seed, kind, gen.Options{})
			if fingerprint(&s) != fingerprint(&again) {
				t.Errorf("%s: drawn twice, and not the same", s.Name)
			}
			binary.Write(h, binary.LittleEndian, fingerprint(&s))
		}
		if got := h.Sum64(); got != golden[kind] {
			t.Errorf("%v: the first 20 floors have the print %#x, want %#x", kind, got, golden[kind])
		}
	}
}

func TestPromises(t *testing.T) {
	each(t, gen.Options{}, checkPromises)
}

func TestPromisesOfOtherSizes(t *testing.T) {
	each(t, gen.Options{Hull: 0.12, Margin: 0.15, GoalRadius: 0.3, Width: 8, Height: 8}, checkPromises)
	each(t, gen.Options{Hull: 0.4, Margin: 0.3, Width: 16, Height: 12}, checkPromises)
}

func checkPromises(t *testing.T, kind gen.Kind, s *gen.Scene) {
	clear := 2*s.Hull + s.Margin
	grown, err := reach.New(s.Floor, s.Hull+s.Margin)
	if err != nil {
		t.Fatalf("%s: %v", s.Name, err)
	}
	if !grown.Free(s.Start.Pos) || !grown.Free(s.Goal) {
		t.Errorf("%s: start or goal is not free by the margin", s.Name)
	}
	if d := s.Start.Pos.Sub(s.Goal).Norm(); d < s.Width/3 {
		t.Errorf("%s: start and goal are %g m apart on a floor %g m wide", s.Name, d, s.Width)
	}
	for i := range s.Floor.Solids {
		a := &s.Floor.Solids[i]
		for _, p := range a.Points {
			if p.X < a.Radius || p.Y < a.Radius || p.X > s.Width-a.Radius || p.Y > s.Height-a.Radius {
				t.Errorf("%s: %q leaves the floor at %v", s.Name, a.ID, p)
			}
		}
		for j := range i {
			if g := gapBetween(a, &s.Floor.Solids[j]); g > 1e-12 && g < clear-1e-12 {
				t.Errorf("%s: %q and %q leave a gap of %g m, neither closed nor %g m", s.Name, a.ID, s.Floor.Solids[j].ID, g, clear)
			}
		}
	}
	tight, err1 := s.Shortest()
	roomy, err2 := reach.Shortest(s.Floor, s.Hull+s.Margin/2, s.Start.Pos, s.Goal, s.GoalRadius)
	if err1 != nil || err2 != nil || tight.Reachable != roomy.Reachable {
		t.Errorf("%s: a way for the hull: %v %v; one with room: %v %v", s.Name, tight.Reachable, err1, roomy.Reachable, err2)
	}
}

func TestAboutATenthHasNoWay(t *testing.T) {
	for _, kind := range gen.Kinds() {
		none, detour := 0, 0.0
		for seed := range uint64(many) {
			s, err := gen.Floor(1000+seed, kind, gen.Options{})
			if err != nil {
				t.Fatal(err)
			}
			r, err := s.Shortest()
			if err != nil {
				t.Fatal(err)
			}
			if !r.Reachable {
				none++
				continue
			}
			detour += r.Length/(s.Start.Pos.Sub(s.Goal).Norm()-s.GoalRadius) - 1
		}
		t.Logf("%v: %d of %d without a way, shortest ways %.0f %% longer than straight on average", kind, none, many, 100*detour/float64(many-none))
		if none < many/40 || none > many/4 {
			t.Errorf("%v: %d of %d floors have no way", kind, none, many)
		}
		if detour == 0 {
			t.Errorf("%v: every way is straight", kind)
		}
	}
}

func TestAllThingsAppear(t *testing.T) {
	seen := map[gen.Kind]map[floor.Kind]int{}
	convex, notConvex := 0, 0
	for _, kind := range gen.Kinds() {
		seen[kind] = map[floor.Kind]int{}
		for seed := range uint64(40) {
			s, err := gen.Floor(seed, kind, gen.Options{})
			if err != nil {
				t.Fatal(err)
			}
			for _, o := range s.Floor.Solids {
				seen[kind][o.Kind]++
				if o.Kind == floor.Polygon {
					if isConvex(o.Points) {
						convex++
					} else {
						notConvex++
					}
				}
			}
		}
	}
	for kind, want := range map[gen.Kind][]floor.Kind{
		gen.Scattered: {floor.Wall, floor.Polygon, floor.Disc}, gen.Rooms: {floor.Wall, floor.Polygon, floor.Disc},
		gen.Pockets: {floor.Wall, floor.Polygon, floor.Disc}, gen.Mazes: {floor.Wall},
	} {
		for _, k := range want {
			if seen[kind][k] < 10 {
				t.Errorf("%v: solids of kind %d appear %d times in 40 floors", kind, k, seen[kind][k])
			}
		}
	}
	if convex < 50 || notConvex < 50 {
		t.Errorf("%d polygons are convex, %d are not", convex, notConvex)
	}
}

func isConvex(p []geom.Vec) bool {
	left, right := false, false
	for i := range p {
		a, b, c := p[i], p[(i+1)%len(p)], p[(i+2)%len(p)]
		x := b.Sub(a).Cross(c.Sub(b))
		left, right = left || x > 1e-12, right || x < -1e-12
	}
	return !(left && right)
}

// gapBetween is the distance of two solids, the plain way.
func gapBetween(a, b *floor.Solid) float64 {
	least := math.Inf(1)
	for _, e := range edges(a) {
		for _, f := range edges(b) {
			if e.Cross(f) {
				return 0
			}
			for _, d := range []float64{
				geom.DistanceToSegment(e.A, f), geom.DistanceToSegment(e.B, f), geom.DistanceToSegment(f.A, e), geom.DistanceToSegment(f.B, e),
			} {
				least = math.Min(least, d-a.Radius-b.Radius)
			}
		}
	}
	for _, x := range [2][2]*floor.Solid{{a, b}, {b, a}} {
		if x[0].Kind == floor.Polygon && geom.Polygon(x[0].Points).Contains(x[1].Points[0]) {
			return 0
		}
	}
	return math.Max(0, least)
}

func edges(s *floor.Solid) (out []geom.Segment) {
	n := len(s.Points)
	for i := 1; i < n; i++ {
		out = append(out, geom.Segment{A: s.Points[i-1], B: s.Points[i]})
	}
	if s.Kind != floor.Wall {
		out = append(out, geom.Segment{A: s.Points[n-1], B: s.Points[0]})
	}
	return out
}

func TestOffice(t *testing.T) {
	for n := gen.MinOffice; n < 5000; n += 1 + n/30 {
		s, err := gen.Office(uint64(n), n, gen.Options{})
		if err != nil {
			t.Fatal(err)
		}
		got := 0
		for i := range s.Floor.Solids {
			got += len(edges(&s.Floor.Solids[i]))
		}
		if got != n {
			t.Errorf("%s has %d segments", s.Name, got)
		}
		if n > 400 {
			continue // to check the promises takes the square of n
		}
		checkPromises(t, gen.Rooms, &s)
		r, err := s.Shortest()
		if err != nil || !r.Reachable {
			t.Errorf("%s: no way: %s %v", s.Name, r.Reason, err)
		}
	}
	s, err := gen.Office(1, 50000, gen.Options{})
	if err != nil {
		t.Fatal(err)
	}
	y, err := reach.New(s.Floor, s.Hull+s.Margin)
	if err != nil || !y.Free(s.Start.Pos) || !y.Free(s.Goal) {
		t.Errorf("%s: start or goal is not free: %v", s.Name, err)
	}
}

func TestImpossibleOptions(t *testing.T) {
	for _, o := range []gen.Options{
		{Hull: -1}, {Hull: math.NaN()}, {Margin: -0.1}, {Width: math.Inf(1)}, {Height: -3}, {GoalRadius: math.NaN()}, {Hull: 4, Width: 8, Height: 8},
	} {
		for _, kind := range gen.Kinds() {
			if _, err := gen.Floor(1, kind, o); err == nil {
				t.Errorf("%v with %+v: no error", kind, o)
			}
		}
	}
	if _, err := gen.Floor(1, 99, gen.Options{}); err == nil {
		t.Error("a kind that there is not: no error")
	}
	if _, err := gen.Office(1, 10, gen.Options{}); err == nil {
		t.Error("an office of ten segments: no error")
	}
	if _, err := gen.Office(1, 100, gen.Options{Hull: 0.6}); err == nil {
		t.Error("a hull wider than the doors: no error")
	}
}

func BenchmarkFloor(b *testing.B) {
	for _, kind := range gen.Kinds() {
		b.Run(kind.String(), func(b *testing.B) {
			seed := uint64(0)
			for b.Loop() {
				if _, err := gen.Floor(seed, kind, gen.Options{}); err != nil {
					b.Fatal(err)
				}
				seed++
			}
		})
	}
}
