package reach_test

import (
	"container/heap"
	"math"
	"math/rand/v2"
	"testing"

	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/reach"
)

// scatter draws n solids of all kinds, which may overlap, inside four border
// walls of the given size, and a start and a goal.
func scatter(rng *rand.Rand, n int, width, height float64) (c floor.Config, from, to geom.Vec) {
	place := func() geom.Vec { return geom.Vec{X: width * rng.Float64(), Y: height * rng.Float64()} }
	for range n {
		p := place()
		size := 0.15 + 0.6*rng.Float64()
		star := func(k int, least float64) (points []geom.Vec) {
			turn := rng.Float64()
			for i := range k {
				s, co := math.Sincos(2 * math.Pi * (float64(i) + turn) / float64(k))
				r := size * (least + (1-least)*rng.Float64())
				points = append(points, p.Add(geom.Vec{X: r * co, Y: r * s}))
			}
			return points
		}
		switch rng.IntN(4) {
		case 0:
			c.Solids = append(c.Solids, floor.Solid{Kind: floor.Disc, Points: []geom.Vec{p}, Radius: size / 2})
		case 1:
			c.Solids = append(c.Solids, polygon(star(3+rng.IntN(3), 1)...))
		case 2:
			c.Solids = append(c.Solids, polygon(star(5+rng.IntN(4), 0.3)...))
		case 3:
			c.Solids = append(c.Solids, wall(star(2+rng.IntN(3), 0.8)...))
		}
	}
	a, b := geom.Vec{}, geom.Vec{X: width, Y: height}
	c.Solids = append(c.Solids, wall(a, geom.Vec{X: b.X}, b, geom.Vec{Y: b.Y}, a))
	return c, place(), place()
}

// freeScatter is scatter with a start and a goal at which the hull is free.
func freeScatter(rng *rand.Rand, n int, width, height, hull float64) (floor.Config, geom.Vec, geom.Vec) {
	for {
		c, from, to := scatter(rng, n, width, height)
		for range 50 {
			if gapOf(c, geom.Segment{A: from, B: from}) > hull && gapOf(c, geom.Segment{A: to, B: to}) > hull {
				return c, from, to
			}
			from = geom.Vec{X: width * rng.Float64(), Y: height * rng.Float64()}
			to = geom.Vec{X: width * rng.Float64(), Y: height * rng.Float64()}
		}
	}
}

// queue is a plain priority queue of nodes by cost.
type queue []struct {
	node int
	cost float64
}

func (q queue) Len() int           { return len(q) }
func (q queue) Less(i, j int) bool { return q[i].cost < q[j].cost }
func (q queue) Swap(i, j int)      { q[i], q[j] = q[j], q[i] }
func (q *queue) Push(x any) {
	*q = append(*q, x.(struct {
		node int
		cost float64
	}))
}
func (q *queue) Pop() any {
	old := *q
	x := old[len(old)-1]
	*q = old[:len(old)-1]
	return x
}

// walk is Dijkstra's method; neighbours calls visit for every neighbour of a node. +Inf when the goal is not reached.
func walk(n, from, to int, neighbours func(node int, visit func(next int, cost float64))) float64 {
	best := make([]float64, n)
	for i := range best {
		best[i] = math.Inf(1)
	}
	best[from] = 0
	q := queue{{from, 0}}
	for len(q) > 0 {
		it := heap.Pop(&q).(struct {
			node int
			cost float64
		})
		if it.node == to {
			return it.cost
		}
		if it.cost > best[it.node] {
			continue
		}
		neighbours(it.node, func(next int, cost float64) {
			if g := it.cost + cost; g < best[next] {
				best[next] = g
				heap.Push(&q, struct {
					node int
					cost float64
				}{next, g})
			}
		})
	}
	return math.Inf(1)
}

// latticeWay is the length of the shortest way over a fine square lattice with
// 16 directions, every step of which keeps the hull's radius from everything:
// an upper bound of the shortest way, at most 2.8 % above it where there is room.
func latticeWay(c floor.Config, hull float64, from, to geom.Vec, width, height, h float64) float64 {
	segs, thick := segmentsOf(c)
	free := func(a, b geom.Vec) bool {
		for i := range segs {
			if segmentGap(geom.Segment{A: a, B: b}, segs[i]) < hull+thick[i] {
				return false
			}
		}
		return true
	}
	cols, rows := int(width/h)+1, int(height/h)+1
	at := func(i int) geom.Vec { return geom.Vec{X: float64(i%cols) * h, Y: float64(i/cols) * h} }
	n := cols * rows
	near := func(p geom.Vec, visit func(int, float64)) {
		for i := range n {
			if d := at(i).Sub(p).Norm(); d < 2.5*h && free(p, at(i)) {
				visit(i, d)
			}
		}
	}
	ends := make(map[int]float64)
	near(to, func(i int, d float64) { ends[i] = d })
	open := make([]bool, n)
	for i := range open {
		open[i] = free(at(i), at(i))
	}
	moves := [][2]int{{1, 0}, {1, 1}, {2, 1}, {1, 2}}
	return walk(n+2, n, n+1, func(node int, visit func(int, float64)) {
		if node == n {
			near(from, visit)
			return
		}
		if d, ok := ends[node]; ok {
			visit(n+1, d)
		}
		x, y := node%cols, node/cols
		for _, m := range moves {
			for turn := 0; turn < 4; turn++ {
				m[0], m[1] = -m[1], m[0]
				i, j := x+m[0], y+m[1]
				if i < 0 || i >= cols || j < 0 || j >= rows || !open[j*cols+i] {
					continue
				}
				if k := j*cols + i; free(at(node), at(k)) {
					visit(k, at(k).Sub(at(node)).Norm())
				}
			}
		}
	})
}

func TestAgainstAFineLattice(t *testing.T) {
	const width, height, h = 5, 4, 0.1
	rng := rand.New(rand.NewPCG(7, 1))
	closed, roundabout := 0, 0
	for i := range 60 {
		hull := 0.08 + 0.2*rng.Float64()
		c, from, to := freeScatter(rng, 6+rng.IntN(20), width, height, hull)
		r := ask(t, c, hull, from, to, 0)
		up := latticeWay(c, hull, from, to, width, height, h)
		if !r.Reachable {
			closed++
			if !math.IsInf(up, 1) {
				t.Errorf("floor %d: the lattice has a way of %g m, and reach says %q", i, up, r.Reason)
			}
			continue
		}
		if r.Length > 1.05*from.Sub(to).Norm() {
			roundabout++
		}
		if r.Length > up+1e-9 {
			t.Errorf("floor %d: the lattice has a way of %g m, reach only one of %g m", i, up, r.Length)
		}
		// Where even a slightly larger hull has a way, the lattice has one that is not much longer.
		wide := ask(t, c, hull+0.75*h, from, to, 0)
		if wide.Reachable && up > 1.06*wide.Length+4*h {
			t.Errorf("floor %d: reach has a way of %g m, for a hull larger by %g m one of %g m, the lattice only one of %g m", i, r.Length, 0.75*h, wide.Length, up)
		}
	}
	if closed < 4 || roundabout < 10 {
		t.Errorf("only %d floors without a way and %d with a detour: the test shows too little", closed, roundabout)
	}
}

// sampledWay is the shortest way over the corners of 40-sided polygons drawn
// about the circles of the hull at all corners: an upper bound that is close to
// the shortest way, found by trying every pair of corners.
func sampledWay(c floor.Config, hull float64, from, to geom.Vec) float64 {
	const corners = 40
	segs, thick := segmentsOf(c)
	free := func(a, b geom.Vec) bool {
		for i := range segs {
			if segmentGap(geom.Segment{A: a, B: b}, segs[i]) < hull+thick[i]-1e-9 {
				return false
			}
		}
		return true
	}
	places := []geom.Vec{from, to}
	for i, s := range segs {
		for _, p := range []geom.Vec{s.A, s.B} {
			for k := range corners {
				sin, cos := math.Sincos(2 * math.Pi * float64(k) / corners)
				r := (hull + thick[i]) / math.Cos(math.Pi/corners)
				if q := p.Add(geom.Vec{X: r * cos, Y: r * sin}); free(q, q) {
					places = append(places, q)
				}
			}
			if s.A == s.B {
				break
			}
		}
	}
	return walk(len(places), 0, 1, func(node int, visit func(int, float64)) {
		for k, q := range places {
			if k != node && free(places[node], q) {
				visit(k, q.Sub(places[node]).Norm())
			}
		}
	})
}

func TestAgainstSampledCorners(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 2))
	tight := 0
	for i := range 100 {
		hull := 0.1 + 0.15*rng.Float64()
		c, from, to := freeScatter(rng, 1+rng.IntN(5), 3, 2.5, hull)
		r := ask(t, c, hull, from, to, 0)
		up := sampledWay(c, hull, from, to)
		if !r.Reachable {
			if !math.IsInf(up, 1) {
				t.Errorf("floor %d: there is a way of %g m, and reach says %q", i, up, r.Reason)
			}
			continue
		}
		if r.Length > up+1e-9 {
			t.Errorf("floor %d: there is a way of %g m, reach has only one of %g m", i, up, r.Length)
		}
		// The polygons stand off the circles by 0.3 % of the radius at most. A
		// larger hull for which the same way is open shows that the samples do reach it.
		wide := ask(t, c, 1.01*hull, from, to, 0)
		if !wide.Reachable {
			continue
		}
		if up > wide.Length+0.004 {
			t.Errorf("floor %d: reach has a way of %g m, the samples have only one of %g m", i, r.Length, up)
		}
		if r.Length > 1.001*from.Sub(to).Norm() && wide.Length-r.Length < 0.01 {
			tight++
		}
	}
	if tight < 10 {
		t.Errorf("only %d floors with a detour whose length is held from both sides", tight)
	}
}

func mapped(c floor.Config, f func(geom.Vec) geom.Vec) floor.Config {
	var out floor.Config
	for _, s := range c.Solids {
		points := make([]geom.Vec, len(s.Points))
		for i, p := range s.Points {
			points[i] = f(p)
		}
		s.Points = points
		out.Solids = append(out.Solids, s)
	}
	return out
}

func TestSameWayInOtherFrames(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 3))
	for i := range 150 {
		hull := 0.05 + 0.25*rng.Float64()
		goalRadius := 0.0
		if i%2 == 1 {
			goalRadius = 0.5 * rng.Float64()
		}
		c, from, to := freeScatter(rng, 3+rng.IntN(20), 8, 6, hull)
		want := ask(t, c, hull, from, to, goalRadius)
		same := func(what string, got reach.Result) {
			t.Helper()
			if got.Reachable != want.Reachable || math.Abs(got.Length-want.Length) > 1e-9 {
				t.Errorf("floor %d %s: %v %.12g, want %v %.12g", i, what, got.Reachable, got.Length, want.Reachable, want.Length)
			}
		}
		s, co := math.Sincos(7 * rng.Float64())
		shift := geom.Vec{X: 20*rng.Float64() - 10, Y: 20*rng.Float64() - 10}
		for what, f := range map[string]func(geom.Vec) geom.Vec{
			"turned and shifted": func(p geom.Vec) geom.Vec { return p.Rotate(s, co).Add(shift) },
			"mirrored":           func(p geom.Vec) geom.Vec { return geom.Vec{X: -p.X, Y: p.Y} },
			"quarter turn":       geom.Vec.Perp,
		} {
			same(what, ask(t, mapped(c, f), hull, f(from), f(to), goalRadius))
		}
		if goalRadius == 0 {
			same("backwards", ask(t, c, hull, to, from, 0))
		}
		other := mapped(c, func(p geom.Vec) geom.Vec { return p })
		rng.Shuffle(len(other.Solids), func(i, j int) { other.Solids[i], other.Solids[j] = other.Solids[j], other.Solids[i] })
		same("in another order", ask(t, other, hull, from, to, goalRadius))
	}
}

func TestLongerForALargerHull(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 4))
	for i := range 60 {
		c, from, to := freeScatter(rng, 3+rng.IntN(20), 8, 6, 0.3)
		last := from.Sub(to).Norm()
		open := true
		for _, hull := range []float64{1e-3, 0.05, 0.1, 0.15, 0.2, 0.25, 0.3} {
			r := ask(t, c, hull, from, to, 0)
			if r.Reachable && !open {
				t.Errorf("floor %d: open to a hull of %g m, and not to a smaller one", i, hull)
			}
			if r.Reachable && r.Length < last-1e-9 {
				t.Errorf("floor %d: %.12g m for a hull of %g m, and %.12g for a smaller one", i, r.Length, hull, last)
			}
			if open = r.Reachable; open {
				last = r.Length
			}
		}
	}
}

// A Yard that has been asked before answers as a fresh one does.
func TestAskedAgain(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 5))
	for range 10 {
		c, _, _ := freeScatter(rng, 15, 8, 6, 0.2)
		y, err := reach.New(c, 0.2)
		if err != nil {
			t.Fatal(err)
		}
		for range 30 {
			from := geom.Vec{X: 8 * rng.Float64(), Y: 6 * rng.Float64()}
			to := geom.Vec{X: 8 * rng.Float64(), Y: 6 * rng.Float64()}
			if got, want := y.Free(from), gapOf(c, geom.Segment{A: from, B: from}) >= 0.2; got != want {
				t.Errorf("free at %v: %v, want %v", from, got, want)
			}
			got, err := y.Shortest(from, to, 0.1)
			if err != nil {
				t.Fatal(err)
			}
			want := ask(t, c, 0.2, from, to, 0.1)
			if got.Reachable != want.Reachable || got.Reason != want.Reason || math.Abs(got.Length-want.Length) > 1e-12 {
				t.Errorf("from %v to %v: %+v, a fresh yard says %+v", from, to, got, want)
			}
		}
	}
}
