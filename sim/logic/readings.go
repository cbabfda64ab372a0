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
	r[Front], r[Left], r[Right] = s.sector[frontSector], s.sector[leftSector], s.sector[rightSector]
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
// something outside the strip: what stands there may reach into the strip between
// them. (Beams as close as those of the ideal fan leave no room for that.)
func (e *Engine) readWay(in *Input) {
	s, t := &e.see, &e.track
	w := in.Hull + e.l.Margin
	if besideWall(e.l.Modes[e.mode].Behaviour) {
		w += e.l.Margin
	}
	enough := math.Max(0, t.goalFarness-float64(in.GoalRadius/2))
	free, ahead := math.Inf(1), s.limit
	for i := range s.points {
		p := &s.points[i]
		if touch, ok := touchAt(p.v, t.goalDir, w); ok && touch < enough {
			free = math.Min(free, touch)
			ahead = math.Min(ahead, p.rho-in.Hull)
		}
	}
	if s.wide {
		for _, rho := range e.besideWay(in) {
			if touch := math.Max(0, rho-w); touch < enough {
				free = math.Min(free, touch)
				ahead = math.Min(ahead, rho-in.Hull)
			}
		}
	}
	if math.IsInf(free, 1) && s.limit < enough {
		free = s.limit
	}
	e.readings[FreeWay] = math.Min(free, t.distance)
	e.readings[Ahead] = ahead
}

// besideWay returns the distances from the hull's centre to what the beams next to
// the way to the goal, on either side of it, have met; +Inf for nothing.
func (e *Engine) besideWay(in *Input) (rho [2]float64) {
	s := &e.see
	way := e.track.goalDir.Rotate(-s.head.Y, s.head.X)
	beams, best := [2]*beam{}, [2]float64{-2, -2}
	for i := range s.beams {
		dir := in.Scan.Dir[i]
		c, side := way.Dot(dir), way.Cross(dir)
		if side >= 0 && c > best[0] {
			best[0], beams[0] = c, &s.beams[i]
		}
		if side <= 0 && c > best[1] {
			best[1], beams[1] = c, &s.beams[i]
		}
	}
	for k, b := range beams {
		rho[k] = math.Inf(1)
		if b != nil && b.hit {
			rho[k] = b.at.Sub(s.pos).Norm()
		}
	}
	return rho
}
