package floor

import (
	"fmt"
	"math"
	"sync"
	"testing"

	"leeway/sim/geom"
)

// answers asks a world many things and writes down every bit.
func answers(w *World) string {
	r := newDice(99)
	s := ""
	for range 200 {
		p, d := geom.Vec{X: r.between(-1, 9), Y: r.between(-1, 9)}, geom.Heading(r.span(math.Pi))
		var out [1]float64
		w.Cast([]Ray{{p, d}}, 6, out[:])
		n, ok := w.Nearest(p, 3)
		e, c, touched := w.Sweep(p, d, 0.2)
		g, b, shoved := w.Shove(p, 0.2)
		s += fmt.Sprintf("%x %+v %v %x %+v %v %x %+v %v\n", out, n, ok, e, c, touched, g, b, shoved)
	}
	for i := range w.m.movers {
		s += fmt.Sprintf("%x\n", w.MoverAt(i))
	}
	for i := range w.m.solids {
		s += fmt.Sprintf("%x\n", w.SolidAt(i).Points)
	}
	return s
}

// Edits of one world are nothing to another, nor to a reset one; a copy is the same in every
// answer and then its own.
func TestWorldsAreApart(t *testing.T) {
	m := build(t, clutter(5, 15, 3), 3)
	a, b := m.NewWorld(), m.NewWorld()
	fresh := answers(a)
	a.Advance(1)
	a.MoveSolid(3, at(1, 2))
	a.MoveSolid(7, at(6, 5))
	a.MoveSolid(3, at(4, 4))
	a.MoveMover(1, at(2, 7))
	a.Advance(1.5)
	edited := answers(a)
	if edited == fresh {
		t.Fatal("the edits changed nothing")
	}
	if got := answers(b); got != fresh {
		t.Error("edits of one world reached another")
	}
	other := build(t, clutter(6, 30, 5), 1).NewWorld()
	other.MoveSolid(2, at(3, 3))
	for _, w := range []*World{b, other, m.NewWorld()} {
		w.CopyFrom(a)
		if got := answers(w); got != edited {
			t.Error("a copy answers differently")
		}
		w.MoveSolid(3, at(0, 0))
		w.MoveSolid(11, at(2, 2))
		w.Advance(9)
	}
	if got := answers(a); got != edited {
		t.Error("edits of a copy reached the original")
	}
	a.CopyFrom(a)
	if got := answers(a); got != edited {
		t.Error("copying a world onto itself changed it")
	}
	a.Reset()
	if got := answers(a); got != fresh {
		t.Error("a reset world is not as new")
	}
	a.MoveSolid(7, at(6, 5))
	a.MoveSolid(3, at(4, 4))
	a.Advance(1)
	a.MoveMover(1, at(2, 7))
	a.Advance(1.5)
	if got := answers(a); got != edited {
		t.Error("the same places reached another way answer differently")
	}
}

func TestSolidAt(t *testing.T) {
	c := Config{Solids: []Solid{
		{ID: "w", Kind: Wall, Points: []geom.Vec{at(1, 1), at(2, 1), at(2, 3)}},
		{ID: "p", Kind: Polygon, Points: []geom.Vec{at(5, 5), at(6, 5), at(5, 6)}},
		{ID: "d", Kind: Disc, Points: []geom.Vec{at(8, 1)}, Radius: 0.5},
	}}
	w := build(t, c, 3).NewWorld()
	for i, s := range c.Solids {
		if got := w.SolidAt(i); fmt.Sprint(got) != fmt.Sprint(s) {
			t.Errorf("solid %d is %v, want %v", i, got, s)
		}
		w.MoveSolid(i, at(0.1, 0.2))
		w.MoveSolid(i, at(math.NaN(), 0)) // ignored
		w.MoveSolid(i, at(0, 2*Limit))
		got := w.SolidAt(i)
		if got.ID != s.ID || got.Kind != s.Kind || got.Radius != s.Radius || len(got.Points) != len(s.Points) || got.Points[0] != at(0.1, 0.2) {
			t.Errorf("moved, solid %d is %v", i, got)
		}
		for k := range s.Points {
			if want := at(0.1, 0.2).Add(s.Points[k].Sub(s.Points[0])); got.Points[k] != want {
				t.Errorf("moved, point %d of solid %d is %v, want %v", k, i, got.Points[k], want)
			}
		}
	}
	// The map keeps what it was given, also when the caller changes its own slices.
	c.Solids[0].Points[0] = at(50, 50)
	w.Reset()
	if got := w.SolidAt(0).Points[0]; got != at(1, 1) {
		t.Errorf("the map's point became %v", got)
	}
}

func TestInsideReadsZero(t *testing.T) {
	ell := Solid{Kind: Polygon, Points: []geom.Vec{at(0, 0), at(4, 0), at(4, 1), at(1, 1), at(1, 3), at(0, 3)}}
	disc := Solid{Kind: Disc, Points: []geom.Vec{at(6, 6)}, Radius: 1}
	for _, lifted := range []bool{false, true} {
		w := worldOf(t, ell, disc)
		if lifted {
			w.MoveSolid(0, at(0, 0))
			w.MoveSolid(1, at(6, 6))
		}
		for _, c := range []struct {
			p, d geom.Vec
			want float64
		}{
			{at(0.5, 0.5), at(1, 0), 0}, {at(0.5, 2.9), at(0, -1), 0}, {at(3.9, 0.5), at(-1, 0), 0},
			{at(2, 2), at(0, -1), 1}, {at(2, 2), at(-1, 0), 1}, {at(2, 2), at(1, 0), math.Inf(1)}, // in the notch, outside
			{at(6.5, 6), at(1, 0), 0}, {at(7, 6), at(1, 0), 0}, {at(7.5, 6), at(-1, 0), 0.5}, {at(7.5, 6), at(1, 0), math.Inf(1)},
		} {
			var out [1]float64
			w.Cast([]Ray{{c.p, c.d}}, 10, out[:])
			if out[0] != c.want {
				t.Errorf("lifted %v: from %v along %v reads %v, want %v", lifted, c.p, c.d, out[0], c.want)
			}
		}
		n, ok := w.Nearest(at(0.5, 0.25), 0.01)
		if !ok || n.Distance != -0.25 || n.Point != at(0.5, 0) || n.Ref != (Ref{Index: 0}) {
			t.Errorf("lifted %v: inside the polygon %+v, %v", lifted, n, ok)
		}
		n, ok = w.Nearest(at(6, 6), 0)
		if !ok || n.Distance != -1 || n.Ref != (Ref{Index: 1}) {
			t.Errorf("lifted %v: at the centre of the disc %+v, %v", lifted, n, ok)
		}
		if n, ok := w.Nearest(at(2, 2), 0.5); ok || n.Ref.Index != -1 {
			t.Errorf("lifted %v: something within 0.5 of (2, 2): %+v", lifted, n)
		}
		if n, ok := w.Nearest(at(2, 2), 1); !ok || n.Distance != 1 {
			t.Errorf("lifted %v: at exactly the distance: %+v, %v", lifted, n, ok)
		}
	}
}

// Floors of odd shape: nothing at all, one wall, one wall far from all others, only movers.
func TestOddFloors(t *testing.T) {
	inf := math.Inf(1)
	for name, c := range map[string]Config{
		"empty":           {},
		"one wall":        {Solids: []Solid{wallOf(at(2, -1), at(2, 1))}},
		"flat":            {Solids: []Solid{wallOf(at(2, 0), at(3, 0)), wallOf(at(5, 0), at(9, 0))}},
		"far apart":       {Solids: []Solid{wallOf(at(2, -1), at(2, 1)), wallOf(at(99999, 99999), at(99998, 99999))}},
		"long and thin":   {Solids: []Solid{wallOf(at(-99999, 1), at(99999, 1)), wallOf(at(-99999, -1), at(99999, -1))}},
		"only movers":     {Movers: []Mover{{Radius: 0.5, Route: []geom.Vec{at(3, 0)}}}},
		"enormous disc":   {Solids: []Solid{{Kind: Disc, Points: []geom.Vec{at(0, 2e4)}, Radius: 1.9e4}}},
		"many in a point": {Solids: repeat(wallOf(at(1, 1), at(1.001, 1)), 3000)},
	} {
		for _, reach := range []float64{0, 1e-3, 3, 1e9, inf, math.NaN(), -1} {
			w := build(t, c, reach).NewWorld()
			f := plainOf(w)
			r := newDice(1)
			for range 40 {
				p, d := r.vec(6), geom.Heading(r.span(math.Pi))
				within := [3]float64{2, 50, inf}[r.Intn(3)]
				var out [1]float64
				w.Cast([]Ray{{p, d}}, within, out[:])
				near, ok := w.Nearest(p, within)
				want, wantOK := f.nearest(p, within)
				end, _, _ := w.Sweep(p, d.Scale(30), 0.1)
				wantEnd, _, _ := f.sweep(p, d.Scale(30), 0.1)
				if got := f.cast(Ray{p, d}, within); !same(got, out[0]) || ok != wantOK || !sameNear(near, want) || !sameVec(end, wantEnd) {
					t.Fatalf("%s: from %v along %v: %v %+v %v, plain %v %+v %v", name, p, d, out[0], near, end, got, want, wantEnd)
				}
			}
		}
	}
}

func repeat(s Solid, n int) (list []Solid) {
	for range n {
		list = append(list, s)
	}
	return list
}

// Many worlds of one map at once answer as one alone.
func TestMapIsShared(t *testing.T) {
	m := build(t, clutter(8, 20, 2), 3)
	want := answers(m.NewWorld())
	var group sync.WaitGroup
	for k := range 4 {
		group.Go(func() {
			w := m.NewWorld()
			if k%2 == 0 {
				w.MoveSolid(k, at(3, 3))
				w.Reset()
			}
			if got := answers(w); got != want {
				t.Errorf("world %d answers differently", k)
			}
		})
	}
	group.Wait()
}

func TestNoAllocations(t *testing.T) {
	m := build(t, clutter(4, 40, 6), 3)
	w, spare := m.NewWorld(), m.NewWorld()
	w.MoveSolid(2, at(1, 1))
	rays := make([]Ray, 24)
	for i := range rays {
		rays[i] = Ray{at(4, 4), geom.Heading(float64(i))}
	}
	out := make([]float64, 24)
	now := 0.0
	for name, f := range map[string]func(){
		"Cast":      func() { w.Cast(rays, 3, out) },
		"Nearest":   func() { w.Nearest(at(4, 4), 2) },
		"Sweep":     func() { w.Sweep(at(4, 4), at(3, 1), 0.2) },
		"Shove":     func() { w.Shove(at(4, 4), 0.2) },
		"Advance":   func() { now += 0.01; w.Advance(now) },
		"MoveSolid": func() { w.MoveSolid(2, at(2, 1)) },
		"CopyFrom":  func() { spare.CopyFrom(w) },
		"Reset":     func() { spare.Reset(); spare.MoveSolid(2, at(1, 2)) },
	} {
		f()
		if n := testing.AllocsPerRun(200, f); n != 0 {
			t.Errorf("%s allocates %v times", name, n)
		}
	}
}

// Whatever the numbers, nothing becomes NaN, no hull flies off, and no answer misses its own terms.
func FuzzWorld(f *testing.F) {
	f.Add(4.0, 4.0, 1.0, 0.5, 0.2, 3.0, uint8(0))
	f.Add(0.0, 0.0, -1e-300, 0.0, 0.0, 0.0, uint8(1))
	f.Add(3.0, 3.0, 1e9, -1e9, 0.5, math.Inf(1), uint8(2))
	f.Add(1e6, -1e6, -1e6, 1e6, 0.3, 1e9, uint8(3))
	f.Add(math.Inf(1), math.NaN(), 1.0, 1.0, -1.0, math.NaN(), uint8(4))
	maps := make([]*Map, 6)
	for i := range maps {
		maps[i] = build(f, clutter(int64(i), 10, 2), 3)
	}
	f.Fuzz(func(t *testing.T, x, y, dx, dy, radius, within float64, which uint8) {
		w := maps[int(which)%len(maps)].NewWorld()
		w.MoveSolid(int(which)%10, at(dx, dy))
		w.Advance(within)
		p, d := at(x, y), at(dx, dy)
		var out [1]float64
		w.Cast([]Ray{{p, d.Unit()}}, within, out[:])
		if !(out[0] >= 0) || out[0] > within && out[0] != math.Inf(1) {
			t.Fatalf("range %v within %v", out[0], within)
		}
		n, ok := w.Nearest(p, within)
		if ok && (math.IsNaN(n.Distance) || !n.Point.Finite() || n.Distance > max(within, 0) || n.Ref.Index < 0) {
			t.Fatalf("nearest to %v within %v: %+v", p, within, n)
		}
		for _, shove := range []bool{false, true} {
			end, c, touched := w.Sweep(p, d, radius)
			if shove {
				end, c, touched = w.Shove(p, radius)
			}
			if p.Finite() && !end.Finite() {
				t.Fatalf("from %v by %v radius %v to %v", p, d, radius, end)
			}
			if touched && (!(c.At >= 0 && c.At <= 1) || !c.Point.Finite() || !c.Normal.Finite() || c.Ref.Index < 0) {
				t.Fatalf("contact %+v", c)
			}
			if !shove && p.Finite() && d.Finite() && end.Sub(p).Norm() > (d.Norm()+1e-6)*(1+1e-9) {
				t.Fatalf("from %v by %v radius %v as far as %v", p, d, radius, end)
			}
		}
	})
}
