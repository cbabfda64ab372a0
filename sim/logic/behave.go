package logic

import (
	"math"

	"leeway/sim/geom"
)

// behave returns the velocity that the current mode wants.
func (e *Engine) behave(in *Input) geom.Vec {
	m := &e.l.Modes[e.mode]
	top := in.Speed * m.share()
	var u geom.Vec
	switch m.Behaviour {
	case GoalSeeking:
		u = e.seek(in, m, top)
	case WallFollowing:
		u = e.followWall(in, m, top)
	case Avoidance:
		u = e.avoid(in, m, top)
	}
	return atMost(u, top)
}

// atMost shortens u to the length top, and makes it zero should it not be finite.
func atMost(u geom.Vec, top float64) geom.Vec {
	n := u.Norm()
	switch {
	case !(n <= math.MaxFloat64) || top <= 0:
		return geom.Vec{}
	case n <= top:
		return u
	}
	u = u.Scale(top / n)
	if u.Norm() > top { // by rounding
		u = u.Scale(1 - 1e-15)
	}
	if u.Norm() > top { // numbers too small to shorten
		return geom.Vec{}
	}
	return u
}

// headway is the time that lies between the robot and what it drives toward: the
// speed is no more than the free way ahead divided by it, s.
const headway = 1.0

// creep is the least share of the speed at which a robot goes on where its way is free but short.
const creep = 0.1

// paced returns top, or less where the way along dir is short.
func (e *Engine) paced(in *Input, dir geom.Vec, top float64) float64 {
	free := math.Inf(1)
	for i := range e.see.points {
		if d, ok := touchAt(e.see.points[i].v, dir, in.Hull); ok && d < free {
			free = d
		}
	}
	return math.Min(top, math.Max(creep*top, free/headway))
}

// seek drives straight to the goal, with v = min(v0, GoalGain·distance). Where
// something beside the way is nearer than StandOff, it turns by as little as
// keeps clear of that, as long as a small turn will do: the goal distance goes on falling.
func (e *Engine) seek(in *Input, m *Mode, top float64) geom.Vec {
	t := &e.track
	toGoal := in.Goal.Sub(t.plan)
	dir := toGoal.Unit()
	v := top
	if m.GoalGain > 0 {
		v = math.Min(v, m.GoalGain*t.distance)
	}
	if m.StandOff > 0 {
		dir = e.clearOf(dir, in.Hull+m.StandOff, math.Min(m.StandOff, t.distance))
	}
	return dir.Scale(math.Min(v, e.paced(in, dir, top)))
}

// clearOf returns the direction nearest to dir along which a strip of half width w
// is free for the length reach, if it is within 30° of dir; else dir itself.
func (e *Engine) clearOf(dir geom.Vec, w, reach float64) geom.Vec {
	const most = 0.8660254037844387 // cosine of 30°
	e.see.blockStrips(w, reach)
	best, near := dir, -1.0
	for _, side := range [...]Side{RightSide, LeftSide} { // to the left first: it wins a tie
		if d, ok := e.see.sweep(dir, side); ok && d.Dot(dir) >= most && d.Dot(dir) > near {
			best, near = d, d.Dot(dir)
		}
	}
	return best
}

// reachOfPush is the gap within which returns push the robot away.
func (e *Engine) reachOfPush(in *Input) float64 {
	if m := &e.l.Modes[e.mode]; m.Behaviour == Avoidance && m.StandOff > 0 {
		return m.StandOff
	}
	return in.Hull
}

// avoid moves away from what is near, the faster the nearer it is; between two
// things that stand equally near, not at all. Along a wall that is on a side it
// goes on at the same time, slowly, and the push only moves it aside: a push
// against the way would hold it for ever where a passage is narrow.
func (e *Engine) avoid(in *Input, m *Mode, top float64) geom.Vec {
	reach := e.reachOfPush(in)
	push := e.push(in, reach)
	push = push.Scale(top * math.Min(1, math.Max(0, (reach-e.see.nearest)/reach)))
	if e.track.side == NoSide {
		return push
	}
	on := e.followWall(in, m, top/2)
	if dir := on.Unit(); push.Dot(dir) < 0 {
		push = push.AddScaled(-push.Dot(dir), dir)
	}
	return push.Add(on)
}

// grain is the step of the sums over returns: whole numbers of it add up to the
// same in any order, so that a mirrored ring, whose beams come in another order,
// gives the mirrored sum.
const grain = 1 << 40

// push returns the mean, over the returns with gap < reach, of the unit vectors
// away from them, weighted (1 − gap/reach)²; its length is at most 1, and it is
// zero when nothing is that near.
func (e *Engine) push(in *Input, reach float64) geom.Vec {
	var x, y, total int64
	s := &e.see
	for i := range s.points[:s.current] {
		p := &s.points[i]
		gap := p.rho - in.Hull
		if gap >= reach || p.rho == 0 {
			continue
		}
		k := math.Min(2, 1-gap/reach)
		k *= k * grain
		total += int64(k)
		k /= p.rho
		x -= int64(k * p.v.X)
		y -= int64(k * p.v.Y)
	}
	if total == 0 {
		return geom.Vec{}
	}
	return geom.Vec{X: float64(x) / float64(total), Y: float64(y) / float64(total)}
}
