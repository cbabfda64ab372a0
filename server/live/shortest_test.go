package live

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/reach"
	"leeway/sim/scenario"
)

// shortestOf works the shortest way of a scenario out, on the floor that the scenario has when all its edits are done.
func shortestOf(t testing.TB, text []byte) *float64 {
	t.Helper()
	sc, err := scenario.Parse(text)
	if err != nil {
		t.Fatal(err)
	}
	c, err := sc.Folded().Config()
	if err != nil {
		t.Fatal(err)
	}
	r, err := reach.Shortest(c.Floor, c.Hull, c.Start.Pos, c.Goal, c.GoalRadius)
	if err != nil {
		t.Fatal(err)
	}
	if !r.Reachable {
		return nil
	}
	return maybe(r.Length)
}

// verdictNow waits until all has been worked out, and returns what the newest message says.
func (b *bench) verdictNow(v *viewer) (f verdictHeard) {
	b.t.Helper()
	b.in(func() { b.s.changed = true })
	time.Sleep(time.Second)
	synctest.Wait()
	for _, m := range v.take() {
		switch kindOf(b.t, m) {
		case "frame":
			f = hear(b.t, m).Verdict
		case "hello":
			f = greet(b.t, m).Frame.Verdict
		}
	}
	return f
}

func same(a, b *float64) bool { return a == b || a != nil && b != nil && math.Abs(*a-*b) < 1e-4 }

func show(v *float64) string {
	if v == nil {
		return "none"
	}
	return fmt.Sprint(*v)
}

func TestTheShortestWayIsOfTheFloorAsItStands(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 400})
		v := b.join()
		expect := func(when string) float64 {
			t.Helper()
			f := b.verdictNow(v)
			want := shortestOf(t, b.text())
			if !same(f.Shortest, want) || f.Why != "" || want == nil {
				t.Errorf("%s: %s, want %s (%s)", when, show(f.Shortest), show(want), f.Why)
				return 0
			}
			return *want
		}
		first := expect("at first")
		b.say(v, `{"kind":"drag","what":"solid","id":"desk","x":3,"y":2,"done":true}`)
		moved := expect("desk moved")
		b.say(v, `{"kind":"drag","what":"goal","x":6.5,"y":5,"done":true}`)
		goal := expect("goal moved")
		b.say(v, `{"kind":"drag","what":"robot","x":4.5,"y":1,"done":true}`)
		if carried := expect("robot carried"); carried != goal || first == moved || moved == goal {
			t.Errorf("%v, desk moved %v, goal moved %v, robot carried %v", first, moved, goal, carried)
		}
		// In the past the floor stands as it stood.
		b.say(v, `{"kind":"seek","tick":399}`)
		if f := b.verdictNow(v); f.Shortest == nil || math.Abs(*f.Shortest-first) > 1e-4 {
			t.Errorf("in the past %s, want %v", show(f.Shortest), first)
		}
		b.say(v, `{"kind":"drag","what":"start","x":1,"y":1,"done":true}`)
		expect("start moved")
		b.say(v, `{"kind":"number","path":"robot.radius_m","value":0.3}`)
		expect("larger hull")
		// Under the look-ahead rule the point that must come to the goal is ahead of the hull's centre.
		before := *shortestOf(t, b.text())
		b.say(v, `{"kind":"choice","path":"robot.steering","value":"look_ahead"}`)
		if f := b.verdictNow(v); f.Shortest == nil || math.Abs(*f.Shortest-(before-0.1)) > 1e-3 {
			t.Errorf("look-ahead: %s, want about %v less 0.1", show(f.Shortest), before)
		}
	})
}

func TestNoWayIsSaid(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		sc := room(t)
		sc.Floor.Walls = append(sc.Floor.Walls, scenario.Wall{ID: "shut", Points: []scenario.Point{{6, 2}, {6, 4}, {7.9, 4}, {7.9, 2}, {6, 2}}})
		b := newBench(t, sc, Opening{})
		v := b.join()
		if f := b.verdictNow(v); f.Shortest != nil || !strings.HasPrefix(f.Why, "No way:") {
			t.Errorf("%s, %q", show(f.Shortest), f.Why)
		}
		b.say(v, `{"kind":"drag","what":"solid","id":"shut","x":4.5,"y":2,"done":true}`)
		if f := b.verdictNow(v); f.Shortest == nil || f.Why != "" {
			t.Errorf("%s, %q", show(f.Shortest), f.Why)
		}
	})
}

// A dragged wall is followed: a few times a second, and once more at the end.
func TestTheShortestWayFollowsADrag(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{})
		v := b.join()
		b.verdictNow(v)
		values := map[string]bool{}
		for i := range 100 { // two seconds
			b.say(v, fmt.Sprintf(`{"kind":"drag","what":"solid","id":"desk","x":3,"y":%.3f}`, 2+0.01*float64(i)))
			time.Sleep(20 * time.Millisecond)
			synctest.Wait()
			for _, m := range v.take() {
				if kindOf(t, m) == "frame" {
					f := hear(t, m)
					if f.Verdict.Shortest == nil {
						t.Fatalf("nothing known: %s", f.Verdict.Why)
					}
					values[show(f.Verdict.Shortest)] = true
				}
			}
		}
		if n := len(values); n < 8 || n > 12 {
			t.Errorf("%d shortest ways in two seconds; five a second are meant", n)
		}
		b.say(v, `{"kind":"drag","what":"solid","id":"desk","x":3,"y":3,"done":true}`)
		if f, want := b.verdictNow(v), shortestOf(t, b.text()); !same(f.Shortest, want) {
			t.Errorf("%s in the end, want %s", show(f.Shortest), show(want))
		}
	})
}

// A large floor is measured only when nothing is in a hand, and a very large one never.
func TestLargeFloorsAreMeasuredAtRest(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{})
		v := b.join()
		first := b.verdictNow(v)
		b.in(func() { b.s.pieces = followPieces + 1 })
		b.say(v, `{"kind":"drag","what":"solid","id":"desk","x":3,"y":2}`)
		if f := b.verdictNow(v); f.Shortest != nil || !strings.Contains(f.Why, "when nothing is being moved") {
			t.Errorf("%s, %q", show(f.Shortest), f.Why)
		}
		b.say(v, `{"kind":"drag","what":"solid","id":"desk","x":3,"y":2,"done":true}`)
		if f, want := b.verdictNow(v), shortestOf(t, b.text()); !same(f.Shortest, want) || same(f.Shortest, first.Shortest) {
			t.Errorf("%s, want %s", show(f.Shortest), show(want))
		}
		b.in(func() { b.s.pieces = mostPieces + 1 })
		if f := b.verdictNow(v); f.Shortest != nil || !strings.Contains(f.Why, "more than 10,000 pieces") {
			t.Errorf("%s, %q", show(f.Shortest), f.Why)
		}
	})
}

func TestPiecesAreCounted(t *testing.T) {
	s := []floor.Solid{
		{Kind: floor.Wall, Points: make([]geom.Vec, 4)}, {Kind: floor.Polygon, Points: make([]geom.Vec, 5)}, {Kind: floor.Disc, Points: make([]geom.Vec, 1)},
	}
	if n := piecesOf(s); n != 3+5+1 {
		t.Errorf("%d pieces", n)
	}
}

func TestBeamsOverTime(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 2000})
		ctx := context.Background()
		all, err := b.lab.Beams(ctx, b.id, 0, math.MaxInt64-1)
		if err != nil || len(all.Ticks) != 101 || len(all.Ranges) != 101 {
			t.Fatalf("%d ticks, %v", len(all.Ticks), err)
		}
		set := setOf(t, b.text(), 0)
		for i, tick := range all.Ticks {
			for set.Tick() < tick {
				set.Step()
			}
			if tick != int64(20*i) {
				t.Fatalf("moment %d is of tick %d", i, tick)
			}
			for k, x := range set.Run(0).Scan().Range {
				if all.Ranges[i][k] != float32(x) {
					t.Fatalf("tick %d, beam %d: %v, want %v", tick, k, all.Ranges[i][k], x)
				}
			}
		}
		for _, c := range []struct{ from, to, first, last, n int64 }{
			{0, 0, 0, 0, 1}, {1, 19, 0, 0, 0}, {1, 20, 20, 20, 1}, {30, 99, 40, 80, 3}, {1990, 5000, 2000, 2000, 1}, {2001, 5000, 0, 0, 0}, {50, 40, 0, 0, 0}, {-5, 20, 0, 20, 2},
		} {
			got, err := b.lab.Beams(ctx, b.id, c.from, c.to)
			if err != nil || int64(len(got.Ticks)) != c.n || len(got.Ranges) != len(got.Ticks) {
				t.Errorf("%+v: %v, %v", c, got.Ticks, err)
			} else if c.n > 0 && (got.Ticks[0] != c.first || got.Ticks[c.n-1] != c.last) {
				t.Errorf("%+v: %v", c, got.Ticks)
			}
		}
		if _, err := b.lab.Beams(ctx, "aaaaaaaaaaaaaaaa", 0, 1); err != ErrNotFound {
			t.Error(err)
		}
	})
}

func TestManyBeamsAreThinned(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 1})
		r := b.recordOf()
		for i := 1; i < 10_000; i++ {
			row := r.Rows[0]
			row.Tick = int64(i) * r.Every
			r.Rows, r.Ranges = append(r.Rows, row), append(r.Ranges, r.Ranges[0])
		}
		for _, c := range []struct {
			beams          int
			from, to, n, k int64 // k rows of the tape from one moment to the next
		}{
			{16, 0, 1 << 40, 2500, 4}, {16, 20_000, 1 << 40, 2250, 4}, {16, 0, 3999 * 20, 4000, 1}, {16, 0, 4000 * 20, 2001, 2}, {16, 20, 3999*20 + 20, 4000, 1},
			{720, 0, 1 << 40, 313, 32},
		} {
			for i := range r.Ranges {
				r.Ranges[i] = make([]float32, c.beams)[:c.beams:c.beams]
			}
			got := beamsOf(&r, c.from, c.to)
			if int64(len(got.Ticks)) != c.n || got.Ticks[1]-got.Ticks[0] != c.k*r.Every || got.Ticks[0]%(c.k*r.Every) != 0 {
				t.Errorf("%+v: %d moments, from %d to %d", c, len(got.Ticks), got.Ticks[0], got.Ticks[1])
			}
			if n := len(got.Ticks) * c.beams; n > maxBeamNumbers {
				t.Errorf("%+v: %d numbers", c, n)
			}
		}
	})
}

func TestBeamsAsJSON(t *testing.T) {
	b := Beams{Ticks: []int64{0, 20}, Ranges: [][]float32{{1.23456, 3}, {0, float32(math.NaN())}}}
	if got := string(b.JSON()); got != `{"ticks":[0,20],"ranges":[[1.2346,3],[0,null]]}` {
		t.Error(got)
	}
	if got := string(new(Beams).JSON()); got != `{"ticks":[],"ranges":[]}` {
		t.Error(got)
	}
}
