package logic

import (
	"math"

	"leeway/sim/geom"
)

// read works out every reading.
func (e *Engine) read(in *Input) {
	s, t, r := &e.see, &e.track, &e.readings
	r[GoalDistance] = t.distance
	toGoal := in.Goal.Sub(t.plan)
	r[GoalBearing] = math.Abs(geom.Atan2(s.head.Cross(toGoal), s.head.Dot(toGoal)))
	r[Nearest] = s.nearest
	r[Front], r[Left], r[Right] = s.front.value(), s.left.value(), s.right.value()
	e.readWay(in)
	r[BestDistance] = t.best
	r[Gain] = t.best - (t.distance - r[FreeWay])
	r[Alignment] = 1
	if out := e.push(in, e.reachOfPush(in)).Unit(); out != (geom.Vec{}) {
		r[Alignment] = out.Dot(t.goalDir)
	}
	r[TimeInMode] = in.Time - e.since
	r[WayInMode] = t.way - e.sinceAt
	r[Closed] = 0
	if t.loop.closed {
		r[Closed] = 1
	}
	r[MeetDistance] = t.metDistance
	r[TimeSinceMeeting] = in.Time - t.metAt
	line := in.Goal.Sub(t.origin).Unit()
	r[LineOffset] = math.Abs(line.Cross(t.plan.Sub(t.origin)))
}

// readWay looks along the strip that the hull, with the logic's margin on either
// side, sweeps on its straight way to the goal. FreeWay is how far it gets before
// it touches anything known; Ahead is the smallest gap among all that it would
// touch before it is well inside the goal. Beside a wall the strip is a margin
// wider: a way that is only just free is not worth leaving the wall for.
//
// The two beams on either side of the way always count, even where they meet
// something outside the strip: what stands there may reach into the strip between them.
func (e *Engine) readWay(in *Input) {
	s, t := &e.see, &e.track
	w := in.Hull + e.l.Margin
	if besideWall(e.l.Modes[e.mode].Behaviour) {
		w += e.l.Margin
	}
	enough := math.Max(0, t.goalFarness-in.GoalRadius/2)
	free, ahead := math.Inf(1), s.limit
	meet := func(touch, rho float64) {
		if touch < enough {
			free = math.Min(free, touch)
			ahead = math.Min(ahead, rho-in.Hull)
		}
	}
	for i := range s.points {
		p := &s.points[i]
		if touch, ok := touchAt(p.v, t.goalDir, w); ok {
			meet(touch, p.rho)
		}
	}
	for _, side := range [...]Side{LeftSide, RightSide} {
		if rho, ok := e.beside(in, side); ok {
			meet(math.Max(0, rho-w), rho)
		}
	}
	if math.IsInf(free, 1) && s.limit < enough {
		free = s.limit
	}
	e.readings[FreeWay] = math.Min(free, t.distance)
	e.readings[Ahead] = ahead
}

// beside returns the distance from the hull's centre to what the beam next to the
// way to the goal, on the given side of it, has met; ok is false when it has met nothing.
func (e *Engine) beside(in *Input, side Side) (rho float64, ok bool) {
	s := &e.see
	way := e.track.goalDir.Rotate(-s.head.Y, s.head.X)
	best := -2.0
	for i := range s.beams {
		b := &s.beams[i]
		dir := in.Scan.Dir[i]
		if b.tick < 0 || way.Cross(dir)*float64(side) < 0 {
			continue
		}
		if c := way.Dot(dir); c > best {
			best, ok = c, b.hit
			rho = b.at.Sub(s.pos).Norm()
		}
	}
	return rho, ok
}

// touchAt returns how far a disc of radius w, centred at the origin, moves along
// the unit vector dir until it touches the point p; ok is false when it never
// does. A disc that overlaps p already touches at 0, unless it moves away.
func touchAt(p, dir geom.Vec, w float64) (distance float64, ok bool) {
	along := p.Dot(dir)
	if along <= 0 {
		return 0, false
	}
	side := dir.Cross(p)
	left := float64(w*w) - float64(side*side)
	if left <= 0 {
		return 0, false
	}
	return math.Max(0, along-math.Sqrt(left)), true
}
