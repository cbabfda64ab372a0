package floor

import (
	"math"
	"testing"

	"leeway/sim/geom"
)

func TestTimetable(t *testing.T) {
	shuttle := Mover{Radius: 0.2, Route: []geom.Vec{at(0, 0), at(4, 0), at(4, 2)}, Speed: 2, Pause: 1}
	loop := shuttle
	loop.Loop = true
	loop.Route = []geom.Vec{at(0, 0), at(4, 0), at(4, 3)}
	late := shuttle
	late.Offset = 2
	early := shuttle
	early.Offset = -1
	for _, c := range []struct {
		name string
		m    Mover
		time float64
		want geom.Vec
	}{
		// There: rest 0–1, way 1–3, rest 3–4, way 4–5, rest 5–6, and back: way 6–7, rest 7–8, way 8–10.
		{"rests first", shuttle, 0.5, at(0, 0)},
		{"on the first leg", shuttle, 1.5, at(1, 0)},
		{"rests in the middle", shuttle, 3.5, at(4, 0)},
		{"on the second leg", shuttle, 4.5, at(4, 1)},
		{"rests at the end once", shuttle, 5.5, at(4, 2)},
		{"back on the second leg", shuttle, 6.25, at(4, 1.5)},
		{"rests in the middle again", shuttle, 7.5, at(4, 0)},
		{"back on the first leg", shuttle, 9, at(2, 0)},
		{"next round", shuttle, 10.5, at(0, 0)},
		{"a thousand rounds on", shuttle, 10004.5, at(4, 1)},
		{"before its begin", shuttle, -1, at(2, 0)},
		{"with an offset", late, 2.5, at(4, 1)},
		{"with an offset back", early, 2.5, at(1, 0)},
		// Round: 0–1, 1–3, 3–4, 4–5.5, 5.5–6.5, 6.5–9
		{"closing leg", loop, 7.5, at(2.4, 1.8)},
		{"second round", loop, 9.5, at(0, 0)},
		{"no speed", Mover{Radius: 1, Route: shuttle.Route, Offset: 3}, 5, at(0, 0)},
		{"one place", Mover{Radius: 1, Route: []geom.Vec{at(7, 7)}, Speed: 1}, 5, at(7, 7)},
	} {
		if err := CheckMover(c.m); err != nil {
			t.Fatalf("%s: %v", c.name, err)
		}
		w := build(t, Config{Movers: []Mover{c.m}}, 3).NewWorld()
		w.Advance(123.4)
		w.Advance(c.time) // whatever came before
		if got := w.MoverAt(0); got.Sub(c.want).Norm() > 1e-9 {
			t.Errorf("%s: at %v s it is at %v, want %v", c.name, c.time, got, c.want)
		}
	}
}

// cartAt is a cart that drives along x through a floor of these solids.
func cartAt(t testing.TB, from, to geom.Vec, speed float64, solids ...Solid) *World {
	return build(t, Config{Solids: solids, Movers: []Mover{
		{Half: at(0.4, 0.25), Route: []geom.Vec{from, to}, Speed: speed},
	}}, 3).NewWorld()
}

// A cart that jumps over the robot within a tick has pushed it along.
func TestFastCartPushes(t *testing.T) {
	for _, speed := range []float64{0.5, 5, 100, 1000} {
		w := cartAt(t, at(0, 0), at(50, 0), speed)
		p := at(3, 0)
		const dt = 0.005
		var first *Contact
		for k := 1; float64(k)*dt*speed < 20; k++ {
			w.Advance(float64(k) * dt)
			end, c, touched := w.Shove(p, 0.2)
			if touched && first == nil {
				first = &c
			}
			p = end
			front := w.MoverAt(0).X + 0.4
			if front > 3-0.2 && (p.X < front+0.2 || p.X > front+0.2+10*Skin) {
				t.Fatalf("speed %v: the cart's front is at %v, the hull at %v", speed, front, p)
			}
		}
		if first == nil {
			t.Fatalf("speed %v: no touch", speed)
		}
		if first.Ref != (Ref{Mover: true}) || first.Normal != at(1, 0) || math.Abs(first.Point.X-2.8) > 1e-8 || !(first.At >= 0 && first.At <= 1) {
			t.Errorf("speed %v: first touch %+v", speed, *first)
		}
	}
}

// Against a wall there is nowhere to go: the cart overlaps the hull, the hull not the wall.
func TestCartPinsAgainstWall(t *testing.T) {
	w := cartAt(t, at(0, 0), at(50, 0), 1, wallOf(at(4, -3), at(4, 3)))
	p := at(3, 0)
	overlapped := false
	for k := 1; k < 1500; k++ {
		w.Advance(float64(k) * 0.01)
		p, _, _ = w.Shove(p, 0.2)
		if p.X > 4-0.2 && p.X < 4.2 {
			t.Fatalf("the hull was pushed into the wall: %v", p)
		}
		if p.X > 4 {
			t.Fatalf("the hull was pushed through the wall: %v", p)
		}
		near, _ := w.Nearest(p, 1)
		overlapped = overlapped || near.Distance < 0.19
	}
	if !overlapped {
		t.Error("the cart never overlapped the hull")
	}
	// Then it can still drive away along the wall and back, not on into it.
	end, _, _ := w.Sweep(p, at(0, 5), 0.2)
	if end.Sub(p).Norm() < 4.9 {
		t.Errorf("pinned for good: %v to %v", p, end)
	}
}

// A hull beside the middle of the cart's nose is brushed aside by its corner, and not carried.
func TestCartBrushesPast(t *testing.T) {
	w := cartAt(t, at(0, 0), at(50, 0), 2)
	p := at(3, 0.35)
	for k := 1; k < 1000; k++ {
		w.Advance(float64(k) * 0.005)
		p, _, _ = w.Shove(p, 0.2)
		if gap := plainOf(w).gap(p, 0.2); gap < -1e-12 {
			t.Fatalf("gap %g at tick %d", gap, k)
		}
	}
	if p.Y < 0.45-1e-9 || p.X > 4 {
		t.Errorf("the hull is at %v after the cart has passed", p)
	}
}

// With room to give way, no mover ever overlaps a hull, at any speed; and no standing solid ever does.
func TestShoveNeverOverlaps(t *testing.T) {
	touches := 0
	for seed := range int64(600) {
		c := clutter(seed, 0, 1)
		c.Movers[0].Speed = math.Pow(10, newDice(seed).between(-2, 3))
		c.Movers[0].Pause = 0
		w := build(t, c, 3).NewWorld()
		r := newDice(seed + 1000)
		f := plainOf(w)
		p := at(r.between(0, 8), r.between(0, 8))
		if f.gap(p, 0.2) < 2*Skin {
			continue
		}
		for k := 1; k < 300; k++ {
			w.Advance(float64(k) * 0.01)
			end, contact, touched := w.Shove(p, 0.2)
			if !touched && end != p {
				t.Fatalf("moved without a touch: %v to %v", p, end)
			}
			if touched {
				touches++
				if !(contact.At >= 0 && contact.At <= 1) || math.Abs(contact.Normal.Norm()-1) > 1e-12 || contact.Ref != (Ref{Mover: true}) {
					t.Fatalf("contact %+v", contact)
				}
			}
			p = end
			if gap := plainOf(w).gap(p, 0.2); gap < -1e-12 {
				t.Fatalf("seed %d: gap %g at tick %d", seed, gap, k)
			}
		}
	}
	t.Logf("%d touches", touches)
	if touches < 200 {
		t.Fatal("too few touches")
	}
}

func TestShoveAmongSolids(t *testing.T) {
	touches := 0
	for seed := range int64(200) {
		c := clutter(seed, 10, 3)
		w := build(t, c, 3).NewWorld()
		standing := plain{plainOf(w).things[:10]}
		r := newDice(seed)
		p := at(r.between(0, 8), r.between(0, 8))
		if standing.gap(p, 0.15) < 2*Skin {
			continue
		}
		for k := 1; k < 300; k++ {
			w.Advance(float64(k) * 0.03)
			end, _, touched := w.Shove(p, 0.15)
			if touched {
				touches++
			}
			if gap := standing.gap(end, 0.15); gap < -1e-12 {
				t.Fatalf("seed %d: shoved from %v to %v, gap to what stands %g", seed, p, end, gap)
			}
			p = end
		}
	}
	t.Logf("%d touches", touches)
	if touches < 500 {
		t.Fatal("too few touches")
	}
}

// A mover that a person drags jumps; that is no displacement.
func TestMoveMoverDoesNotShove(t *testing.T) {
	w := cartAt(t, at(0, 0), at(50, 0), 1)
	w.Advance(0.01)
	w.MoveMover(0, at(2, 0))
	if got := w.MoverAt(0); got.Sub(at(2.01, 0)).Norm() > 1e-12 {
		t.Errorf("moved to %v", got)
	}
	w.Advance(0.02)
	if end, _, touched := w.Shove(at(1, 0), 0.2); touched || end != at(1, 0) {
		t.Errorf("the jump shoved the hull to %v", end)
	}
	if got := w.MoverAt(0); got.Sub(at(2.02, 0)).Norm() > 1e-12 {
		t.Errorf("goes on at %v", got)
	}
	still := build(t, Config{Movers: []Mover{{Radius: 0.3, Route: []geom.Vec{at(5, 5)}}}}, 3).NewWorld()
	still.MoveMover(0, at(1, 2))
	still.Advance(3)
	if got := still.MoverAt(0); got != at(1, 2) {
		t.Errorf("a standing mover is at %v, want (1, 2)", got)
	}
}
