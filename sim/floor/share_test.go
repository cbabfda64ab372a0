package floor

import (
	"math"
	"testing"

	"leeway/sim/geom"
)

// A map that borrows another's index answers as one built from scratch, and
// leaves the other as it was.
func TestWithMovers(t *testing.T) {
	solids := []Solid{
		{Kind: Wall, Points: []geom.Vec{{X: 0, Y: 0}, {X: 6, Y: 0}, {X: 6, Y: 4}}},
		{Kind: Disc, Points: []geom.Vec{{X: 3, Y: 2}}, Radius: 0.4},
	}
	early := []Mover{{Radius: 0.2, Route: []geom.Vec{{X: 1, Y: 1}, {X: 5, Y: 1}}, Speed: 0.5}}
	late := []Mover{early[0]}
	late[0].Offset = 3.3
	a, err := NewMap(Config{Solids: solids, Movers: early}, 2)
	if err != nil {
		t.Fatal(err)
	}
	b, err := a.WithMovers(late)
	if err != nil {
		t.Fatal(err)
	}
	whole, err := NewMap(Config{Solids: solids, Movers: late}, 2)
	if err != nil {
		t.Fatal(err)
	}
	w, v := b.NewWorld(), whole.NewWorld()
	for i := range 200 {
		at := geom.Vec{X: math.Mod(0.37*float64(i), 6), Y: math.Mod(0.23*float64(i), 4)}
		w.Advance(0.1 * float64(i))
		v.Advance(0.1 * float64(i))
		n, ok := w.Nearest(at, 9)
		if m, also := v.Nearest(at, 9); n != m || ok != also {
			t.Fatalf("at %v: %v, want %v", at, n, m)
		}
	}
	if got := a.NewWorld().MoverAt(0); got != early[0].Route[0] {
		t.Errorf("the first map's mover is at %v now", got)
	}
	w.MoveSolid(1, geom.Vec{X: 1, Y: 3})
	w.ResetOn(a)
	if n, _ := w.Nearest(geom.Vec{X: 3, Y: 2}, 9); n != first(a.NewWorld().Nearest(geom.Vec{X: 3, Y: 2}, 9)) {
		t.Errorf("after ResetOn the nearest is %v", n)
	}
	if _, err := a.WithMovers([]Mover{{Radius: -1, Route: []geom.Vec{{}}}}); err == nil {
		t.Error("a mover of negative radius was taken")
	}
}

func first(n Near, _ bool) Near { return n }
