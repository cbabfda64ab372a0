package floor

import (
	"math"
	"testing"

	"leeway/sim/geom"
)

// question draws a place: anywhere, on the lattice, on a corner or in the middle of an edge of something.
func question(r dice, f plain) geom.Vec {
	switch r.Intn(5) {
	case 0:
		return geom.Vec{X: float64(r.Intn(9)), Y: float64(r.Intn(9))}
	case 1:
		t := f.things[r.Intn(len(f.things))]
		if t.kind == Disc {
			return t.disc.Center.Add(geom.Vec{X: t.disc.Radius})
		}
		e := t.edges[r.Intn(len(t.edges))]
		return e.A.AddScaled(float64(r.Intn(3))/2, e.B.Sub(e.A))
	}
	return geom.Vec{X: r.between(-2, 10), Y: r.between(-2, 10)}
}

func direction(r dice) geom.Vec {
	if r.Intn(3) == 0 {
		return [4]geom.Vec{{X: 1}, {Y: 1}, {X: -1}, {Y: -1}}[r.Intn(4)]
	}
	return geom.Heading(r.span(math.Pi))
}

// same compares two floats by their bits; −0 is not 0.
func same(a, b float64) bool { return math.Float64bits(a) == math.Float64bits(b) }

func sameVec(a, b geom.Vec) bool { return same(a.X, b.X) && same(a.Y, b.Y) }

func sameNear(a, b Near) bool {
	return same(a.Distance, b.Distance) && sameVec(a.Point, b.Point) && a.Ref == b.Ref
}

func sameContact(a, b Contact) bool {
	return same(a.At, b.At) && sameVec(a.Point, b.Point) && sameVec(a.Normal, b.Normal) && a.Ref == b.Ref
}

// compare asks w and the plain reference the same things and fails on the first bit of difference.
func compare(t *testing.T, r dice, w *World, f plain, times int) (hits, insides, nears, touches int) {
	t.Helper()
	for range times {
		p, d := question(r, f), direction(r)
		reach := [5]float64{0, 0.5, 3, 12, math.Inf(1)}[r.Intn(5)]

		var out [1]float64
		w.Cast([]Ray{{p, d}}, reach, out[:])
		if want := f.cast(Ray{p, d}, reach); !same(out[0], want) {
			t.Fatalf("ray from %v along %v within %v: %v, plain %v", p, d, reach, out[0], want)
		}
		if out[0] == 0 {
			insides++
		} else if out[0] < math.Inf(1) {
			hits++
		}

		near, ok := w.Nearest(p, reach)
		want, wantOK := f.nearest(p, reach)
		if ok != wantOK || !sameNear(near, want) {
			t.Fatalf("nearest to %v within %v: %+v %v, plain %+v %v", p, reach, near, ok, want, wantOK)
		}
		if ok {
			nears++
		}

		step := d.Scale([4]float64{0.001, 0.1, 1, 20}[r.Intn(4)])
		radius := [3]float64{0, 0.05, 0.3}[r.Intn(3)]
		end, c, touched := w.Sweep(p, step, radius)
		wantEnd, wantC, wantTouched := f.sweep(p, step, radius)
		if touched != wantTouched || !sameVec(end, wantEnd) || !sameContact(c, wantC) {
			t.Fatalf("sweep of r=%v from %v by %v:\n%v %+v %v, plain\n%v %+v %v", radius, p, step, end, c, touched, wantEnd, wantC, wantTouched)
		}
		if touched {
			touches++
		} else if !sameVec(end, p.Add(step)) {
			t.Fatalf("untouched sweep from %v by %v ends at %v", p, step, end)
		}
	}
	return
}

// Every answer equals the plain reference to the bit, for things in the index, movers, and things moved.
func TestEqualsPlain(t *testing.T) {
	var hits, insides, nears, touches int
	for seed := range int64(400) {
		c := clutter(seed, 3+int(seed%25), int(seed%4))
		r := newDice(seed)
		w := build(t, c, [3]float64{0.5, 3, 50}[seed%3]).NewWorld()
		if seed%3 != 0 {
			w.Advance(r.between(0, 30))
		}
		for range seed % 5 {
			w.MoveSolid(r.Intn(len(c.Solids)), geom.Vec{X: r.between(0, 8), Y: r.between(0, 8)})
		}
		a, b, n, s := compare(t, r, w, plainOf(w), 60)
		hits, insides, nears, touches = hits+a, insides+b, nears+n, touches+s
	}
	t.Logf("24,000 questions of each kind: %d rays met something, %d started in or on something, %d places had something near, %d sweeps touched", hits, insides, nears, touches)
	if min(hits, insides, nears, touches) < 4000 {
		t.Fatal("too few of a kind to mean anything")
	}
}

// The same on an office floor, where the index matters and reach is shorter than the floor.
func TestEqualsPlainInAnOffice(t *testing.T) {
	c, side := office(500)
	w := build(t, c, 3).NewWorld()
	f := plainOf(w)
	r := newDice(1)
	rays := make([]Ray, 24)
	out := make([]float64, len(rays))
	for range 500 {
		at := geom.Vec{X: r.between(-1, side+1), Y: r.between(-1, side+1)}
		turn := r.span(math.Pi)
		for i := range rays {
			rays[i] = Ray{at, geom.Heading(turn + 2*math.Pi*float64(i)/24)}
		}
		reach := [3]float64{1, 3, 30}[r.Intn(3)]
		w.Cast(rays, reach, out)
		for i := range rays {
			if want := f.cast(rays[i], reach); !same(out[i], want) {
				t.Fatalf("ray %v within %v: %v, plain %v", rays[i], reach, out[i], want)
			}
		}
		near, ok := w.Nearest(at, reach)
		if want, wantOK := f.nearest(at, reach); ok != wantOK || !sameNear(near, want) {
			t.Fatalf("nearest to %v: %+v, plain %+v", at, near, want)
		}
		step := r.vec(4)
		end, touch, _ := w.Sweep(at, step, 0.2)
		if want, wantTouch, _ := f.sweep(at, step, 0.2); !sameVec(end, want) || !sameContact(touch, wantTouch) {
			t.Fatalf("sweep from %v by %v: %v %+v, plain %v %+v", at, step, end, touch, want, wantTouch)
		}
	}
}

// A solid that was moved to a place answers as one that stood there from the beginning.
func TestMovedAsIfItStoodThere(t *testing.T) {
	for seed := range int64(100) {
		c := clutter(seed, 12, 1)
		r := newDice(seed)
		moved := build(t, c, 3).NewWorld()
		for range 6 {
			moved.MoveSolid(r.Intn(len(c.Solids)), geom.Vec{X: float64(r.Intn(9)), Y: r.between(0, 8)})
		}
		for i := range c.Solids {
			c.Solids[i] = moved.SolidAt(i)
		}
		stood := build(t, c, 3).NewWorld()
		moved.Advance(3)
		stood.Advance(3)
		f := plainOf(stood)
		for range 100 {
			p, d := question(r, f), direction(r)
			var a, b [1]float64
			moved.Cast([]Ray{{p, d}}, 5, a[:])
			stood.Cast([]Ray{{p, d}}, 5, b[:])
			na, oka := moved.Nearest(p, 2)
			nb, okb := stood.Nearest(p, 2)
			ea, ca, ta := moved.Sweep(p, d, 0.2)
			eb, cb, tb := stood.Sweep(p, d, 0.2)
			if !same(a[0], b[0]) || oka != okb || !sameNear(na, nb) || !sameVec(ea, eb) || !sameContact(ca, cb) || ta != tb {
				t.Fatalf("from %v along %v: moved %v %+v %v %+v; stood %v %+v %v %+v", p, d, a, na, ea, ca, b, nb, eb, cb)
			}
		}
	}
}

// A mirrored floor gives mirrored answers, to the bit.
func TestMirrored(t *testing.T) {
	touches := 0
	for seed := int64(1); seed < 120; seed += 2 { // off the lattice, where nothing ties
		c := clutter(seed, 15, 2)
		for _, m := range []func(geom.Vec) geom.Vec{
			func(p geom.Vec) geom.Vec { return geom.Vec{X: p.X, Y: -p.Y} },
			func(p geom.Vec) geom.Vec { return geom.Vec{X: -p.X, Y: p.Y} },
		} {
			var mirrored Config
			for _, s := range c.Solids {
				s.Points = append([]geom.Vec(nil), s.Points...)
				for k := range s.Points {
					s.Points[k] = m(s.Points[k])
				}
				mirrored.Solids = append(mirrored.Solids, s)
			}
			for _, v := range c.Movers {
				v.Heading = -v.Heading // a box looks the same turned by half a turn
				v.Route = append([]geom.Vec(nil), v.Route...)
				for k := range v.Route {
					v.Route[k] = m(v.Route[k])
				}
				mirrored.Movers = append(mirrored.Movers, v)
			}
			a, b := build(t, c, 3).NewWorld(), build(t, mirrored, 3).NewWorld()
			a.Advance(2.5)
			b.Advance(2.5)
			r := newDice(seed + 5000)
			for range 60 {
				p, d := geom.Vec{X: r.between(0, 8), Y: r.between(0, 8)}, geom.Heading(r.span(math.Pi))
				var x, y [1]float64
				a.Cast([]Ray{{p, d}}, 4, x[:])
				b.Cast([]Ray{{m(p), m(d)}}, 4, y[:])
				na, oka := a.Nearest(p, 2)
				nb, okb := b.Nearest(m(p), 2)
				ea, ca, ta := a.Sweep(p, d, 0.2)
				eb, cb, tb := b.Sweep(m(p), m(d), 0.2)
				if x != y || oka != okb || na.Distance != nb.Distance || na.Ref != nb.Ref || na.Point != m(nb.Point) ||
					ea != m(eb) || ta != tb || ca.At != cb.At || ca.Point != m(cb.Point) || ca.Normal != m(cb.Normal) || ca.Ref != cb.Ref {
					t.Fatalf("from %v along %v: %v %+v %v %+v; mirrored %v %+v %v %+v", p, d, x, na, ea, ca, y, nb, eb, cb)
				}
				if ta {
					touches++
				}
			}
		}
	}
	if touches < 1000 {
		t.Fatalf("only %d touches", touches)
	}
}
