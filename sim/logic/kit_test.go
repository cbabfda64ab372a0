package logic_test

import (
	"math"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
)

const (
	hull  = 0.21
	speed = 0.45
	ticks = 0.02 // s between decisions
)

func v(x, y float64) geom.Vec { return geom.Vec{X: x, Y: y} }

// wall, box and post are short names for what stands on the tests' floors.
func wall(p ...geom.Vec) floor.Solid { return floor.Solid{Kind: floor.Wall, Points: p} }

func box(x0, y0, x1, y1 float64) floor.Solid {
	return floor.Solid{Kind: floor.Polygon, Points: []geom.Vec{v(x0, y0), v(x1, y0), v(x1, y1), v(x0, y1)}}
}

func post(x, y, r float64) floor.Solid {
	return floor.Solid{Kind: floor.Disc, Points: []geom.Vec{v(x, y)}, Radius: r}
}

func room(x0, y0, x1, y1 float64) floor.Solid {
	return wall(v(x0, y0), v(x1, y0), v(x1, y1), v(x0, y1), v(x0, y0))
}

// fan is the all-round ideal ring, beams a noiseless one of n beams.
var fan = ring.Config{Bearings: ring.Even(24), AllRound: true, Noiseless: true, Mount: 0.19, Max: 3, Period: 1, SubRays: 1}

func beams(n int) ring.Config {
	return ring.Config{Bearings: ring.Even(n), Noiseless: true, Mount: 0.19, Max: 3, Period: 1, SubRays: 1}
}

func defaults() *logic.Logic { return logic.Default(logic.DefaultNumbers(hull, speed, 0.15)) }

// scan returns what a ring with these bearings (rad) reads; a range at or beyond max is no echo.
func scan(mount, max float64, bearings, ranges []float64) *ring.Scan {
	s := &ring.Scan{Bearing: bearings, Range: ranges, Mount: mount, Max: max}
	for i, b := range bearings {
		s.Dir = append(s.Dir, geom.Heading(b))
		s.Hit = append(s.Hit, ranges[i] < max)
		s.Tick = append(s.Tick, 0)
	}
	return s
}

// at returns the input of one tick.
func at(x, y, theta float64, goal geom.Vec, s *ring.Scan) *logic.Input {
	return &logic.Input{Belief: drive.Estimate{X: x, Y: y, Theta: theta}, Goal: goal, GoalRadius: 0.15, Scan: s, Hull: hull, Speed: speed}
}

// course is a point that does exactly what the logic wants, on a floor.
type course struct {
	t     testing.TB
	world *floor.World
	ring  *ring.Ring
	l     *logic.Logic
	e     *logic.Engine
	in    logic.Input
	pose  geom.Pose // believed and true
	every int       // ticks between scans
	k     int64
	last  logic.Decision
	way   float64
	gap   float64 // smallest so far, hull to solid
}

func newCourse(t testing.TB, l *logic.Logic, c ring.Config, start geom.Pose, goal geom.Vec, solids ...floor.Solid) *course {
	t.Helper()
	m, err := floor.NewMap(floor.Config{Solids: solids}, 3.2)
	if err != nil {
		t.Fatal(err)
	}
	r := ring.New(c, 1)
	return &course{t: t, world: m.NewWorld(), ring: r, l: l, e: logic.New(l), pose: start, every: 3, gap: math.Inf(1),
		in: logic.Input{Goal: goal, GoalRadius: 0.15, Scan: r.Scan(), Hull: hull, Speed: speed}}
}

// step decides once and moves; it reports whether the run goes on.
func (c *course) step() bool {
	if c.k%int64(c.every) == 0 {
		c.ring.Sense(c.k, c.pose, c.world)
	}
	c.in.Tick, c.in.Time = c.k, float64(c.k)*ticks
	c.in.Belief = drive.Estimate{X: c.pose.Pos.X, Y: c.pose.Pos.Y, Theta: c.pose.Theta}
	c.last = c.e.Decide(&c.in)
	if n := c.last.U.Norm(); !(n <= speed) {
		c.t.Fatalf("at %.2f s the wanted speed is %v", c.in.Time, n)
	}
	c.k++
	end, _, _ := c.world.Sweep(c.pose.Pos, c.last.U.Scale(ticks), c.in.Hull)
	c.way += end.Sub(c.pose.Pos).Norm()
	c.pose.Pos = end
	if n, ok := c.world.Nearest(end, 4); ok {
		c.gap = min(c.gap, n.Distance-c.in.Hull)
	}
	return c.l.Modes[c.e.Mode()].Ending == logic.GoesOn
}

// run goes on until the logic ends the run, for at most so many seconds, and returns how it ended.
func (c *course) run(most float64) logic.Ending {
	for c.step() && c.in.Time < most {
	}
	return c.l.Modes[c.e.Mode()].Ending
}

func near(t testing.TB, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s is %.12g, want %.12g", what, got, want)
	}
}
