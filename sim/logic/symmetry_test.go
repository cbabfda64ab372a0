package logic_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
)

// walk is a random drive past random things: what the ring reads at each tick, as
// places on the floor, and where the robot believes to be.
type walk struct {
	bearings []float64
	poses    []geom.Pose
	ranges   [][]float64
	goals    []geom.Vec
}

// drawWalk draws one from a seed: the numbers are in general position, so that
// nothing hangs on a tie, which rounding may break either way.
func drawWalk(t *rapid.T, dense bool) *walk {
	r := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 3))
	between := func(a, b float64) float64 { return a + (b-a)*r.Float64() }
	n := 1 + r.IntN(24)
	if dense {
		n = 90
	}
	w := &walk{}
	for i := range n {
		w.bearings = append(w.bearings, geom.Wrap(2*math.Pi*float64(i)/float64(n)+between(0, 0.05)))
	}
	p := geom.Pose{Pos: v(between(-2, 2), between(-2, 2)), Theta: between(-3, 3)}
	goal := v(between(-4, 4), between(-4, 4))
	base := make([]float64, n)
	for i := range base {
		base[i] = between(0.02, 3.5)
		if r.IntN(3) > 0 {
			base[i] = between(0.1, 0.8)
		}
	}
	for range 1 + r.IntN(40) {
		ranges := make([]float64, n)
		for i := range base {
			base[i] = 0.03 + math.Abs(base[i]-0.03+between(-0.05, 0.05))
			ranges[i] = base[i]
		}
		p.Theta += between(-0.1, 0.1)
		p.Pos = p.Pos.AddScaled(0.01, geom.Heading(p.Theta))
		if r.IntN(20) == 0 {
			goal = v(between(-4, 4), between(-4, 4))
		}
		w.poses, w.ranges, w.goals = append(w.poses, p), append(w.ranges, ranges), append(w.goals, goal)
	}
	return w
}

// decisions runs the default logic along the walk as it looks when every pose,
// goal and bearing is mapped, and returns what it decided.
func (w *walk) decisions(pose func(geom.Pose) geom.Pose, goal func(geom.Vec) geom.Vec, dirs []geom.Vec, order []int) (out []logic.Decision, all [][logic.NumReadings]float64) {
	e := logic.New(defaults())
	s := &ring.Scan{Mount: 0.19, Max: 3, Dir: dirs}
	n := len(dirs)
	s.Bearing, s.Range, s.Hit, s.Tick = make([]float64, n), make([]float64, n), make([]bool, n), make([]int64, n)
	for k := range w.poses {
		for i, j := range order {
			s.Range[i], s.Hit[i], s.Tick[i] = math.Min(3, w.ranges[k][j]), w.ranges[k][j] < 3, int64(k)
		}
		p := pose(w.poses[k])
		in := at(p.Pos.X, p.Pos.Y, p.Theta, goal(w.goals[k]), s)
		in.Tick, in.Time, in.Ahead = int64(k), float64(k)*0.1, 0.05
		out = append(out, e.Decide(in))
		all = append(all, *e.Readings())
	}
	return out, all
}

func identity(n int) []int {
	order := make([]int, n)
	for i := range order {
		order[i] = i
	}
	return order
}

// A mirrored input gives the mirrored decision to the last bit, also when the
// beams come in the opposite order, as those of a mirrored even ring do.
func TestMirror(t *testing.T) {
	walks, ties := 0, 0
	for _, dense := range []bool{false, true} {
		rapid.Check(t, func(t *rapid.T) {
			w := drawWalk(t, dense)
			walks++
			n := len(w.bearings)
			dirs, flipped, reversed := make([]geom.Vec, n), make([]geom.Vec, n), make([]int, n)
			for i, b := range w.bearings {
				dirs[i] = geom.Heading(b)
			}
			for i := range dirs {
				reversed[i] = n - 1 - i
				d := dirs[n-1-i]
				flipped[i] = v(d.X, -d.Y)
			}
			same := func(p geom.Pose) geom.Pose { return p }
			a, ra := w.decisions(same, func(g geom.Vec) geom.Vec { return g }, dirs, identity(n))
			b, rb := w.decisions(func(p geom.Pose) geom.Pose {
				return geom.Pose{Pos: v(p.Pos.X, -p.Pos.Y), Theta: -p.Theta}
			}, func(g geom.Vec) geom.Vec { return v(g.X, -g.Y) }, flipped, reversed)
			for k := range a {
				if a[k].Side == logic.LeftSide && b[k].Side == logic.LeftSide && a[k].Fired >= 0 {
					ties++ // neither side is better, and the left is taken
					return
				}
				if a[k].U.X != b[k].U.X || a[k].U.Y != -b[k].U.Y || a[k].Mode != b[k].Mode || a[k].Side != -b[k].Side || a[k].Fired != b[k].Fired {
					t.Fatalf("tick %d: %+v, and in the mirror %+v", k, a[k], b[k])
				}
				ra[k][logic.Left], ra[k][logic.Right] = ra[k][logic.Right], ra[k][logic.Left]
				if ra[k] != rb[k] {
					t.Fatalf("tick %d: readings %v, and in the mirror %v", k, ra[k], rb[k])
				}
			}
		})
	}
	if 10*ties > walks {
		t.Errorf("%d ties on %d walks: the side does not mirror", ties, walks)
	}
}

// Turning and shifting the frame of the belief leaves the decisions as they are.
func TestFrameDoesNotMatter(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		w := drawWalk(t, rapid.Bool().Draw(t, "dense"))
		turn := rapid.Float64Range(-3, 3).Draw(t, "turn of the frame")
		sin, cos := geom.Sincos(turn)
		shift := v(rapid.Float64Range(-5, 5).Draw(t, "dx"), rapid.Float64Range(-5, 5).Draw(t, "dy"))
		move := func(p geom.Vec) geom.Vec { return p.Rotate(sin, cos).Add(shift) }
		dirs := make([]geom.Vec, len(w.bearings))
		for i, b := range w.bearings {
			dirs[i] = geom.Heading(b)
		}
		a, _ := w.decisions(func(p geom.Pose) geom.Pose { return p }, func(g geom.Vec) geom.Vec { return g }, dirs, identity(len(dirs)))
		b, _ := w.decisions(func(p geom.Pose) geom.Pose { return geom.Pose{Pos: move(p.Pos), Theta: p.Theta + turn} }, move, dirs, identity(len(dirs)))
		for k := range a {
			if a[k].Mode != b[k].Mode || a[k].Side != b[k].Side || a[k].Fired != b[k].Fired || a[k].U.Rotate(sin, cos).Sub(b[k].U).Norm() > 1e-9 {
				t.Fatalf("tick %d: %+v, and in the turned frame %+v", k, a[k], b[k])
			}
		}
	})
}
