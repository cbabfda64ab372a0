package logic

import (
	"math"

	"leeway/sim/geom"
)

// wall is the place on the followed wall that the robot keeps on its side.
type wall struct {
	at     geom.Vec // in the frame of the belief
	known  bool
	since  float64  // when it was last seen, s
	travel geom.Vec // direction last taken along it; zero before the first
}

// followWall goes along the wall on the side.
func (e *Engine) followWall(in *Input, m *Mode, top float64) geom.Vec {
	s, t := &e.see, &e.track
	side := t.side
	if side == NoSide {
		side = LeftSide
	}
	if !e.holdWall(in, m) {
		return t.goalDir.Scale(top)
	}
	into := e.wall.at.Sub(s.pos).Unit()
	if (into == geom.Vec{}) {
		into = s.head
	}
	dir, ok := e.alongWall(in, into, side, m.StandOff)
	if !ok {
		return geom.Vec{}
	}
	e.wall.travel = dir
	e.moveAlong(in, into, dir, m.StandOff)
	return dir.Scale(e.paced(in, dir, top))
}

// alongWall returns the direction that follows the wall.
func (e *Engine) alongWall(in *Input, into geom.Vec, side Side, standOff float64) (geom.Vec, bool) {
	s := &e.see
	nearest := math.Inf(1)
	for i := range s.points {
		nearest = math.Min(nearest, s.points[i].rho)
	}
	w := math.Max(in.Hull, math.Min(in.Hull+e.l.Margin, nearest))
	aim := math.Max(standOff, in.Hull/2)
	var dir geom.Vec
	ok := false
	// Where a long strip leaves nothing but to turn back, a shorter one may still
	// find the way round a tight bend.
	for reach := 2 * w; reach > w/4; reach /= 2 {
		first, free := e.sweep(into, side, w, reach)
		if !free {
			continue
		}
		d := e.standOff(into, first, e.middle(first, side, w, reach), side, in.Hull+standOff, aim)
		back := e.turnsBack(d)
		if !ok || !back {
			dir, ok = d, true
		}
		if !back {
			break
		}
	}
	return dir, ok
}

// turnsBack reports whether dir is more than 100° off the way the robot is going.
func (e *Engine) turnsBack(dir geom.Vec) bool {
	const back = -0.17364817766693033 // cosine of 100°
	return dir.Dot(e.wall.travel) < back
}

// sweep turns a ray from the direction from, away from a wall on the given side
// (clockwise for a wall on the left), until the strip of half width w along it
// is free for the length reach, and returns that direction; ok is false when no direction is free.
func (e *Engine) sweep(from geom.Vec, side Side, w, reach float64) (geom.Vec, bool) {
	points := e.see.points
	dir := from
	turned := 0.0
	for {
		moved := false
		for i := range points {
			p := &points[i]
			if p.rho >= reach+w || p.rho == 0 {
				continue
			}
			cos := cosBlocked(p.rho, w, reach)
			if p.v.Dot(dir) <= float64(cos*p.rho)+1e-12 {
				continue
			}
			next := edge(p, cos, side)
			// Only ever forward.
			at := turn(from, next, side)
			if at < turned {
				return geom.Vec{}, false
			}
			dir, turned = next, at
			moved = true
		}
		if !moved {
			return dir, true
		}
	}
}

// cosBlocked returns the cosine of the angle on either side of a point at
// distance rho within which a strip of half width w and length reach meets it.
func cosBlocked(rho, w, reach float64) float64 {
	switch {
	case rho <= w:
		// Inside already: every direction that comes nearer is blocked.
		return -math.Min(0.5, (w-rho)/reach)
	case float64(rho*rho) <= float64(reach*reach)+float64(w*w):
		return math.Sqrt(1 - float64((w/rho)*(w/rho)))
	default:
		return (float64(rho*rho) + float64(reach*reach) - float64(w*w)) / (2 * rho * reach)
	}
}

// edge returns the direction at which a blocked interval about p ends, turning away from a wall on the side.
func edge(p *point, cos float64, side Side) geom.Vec {
	sin := math.Sqrt(math.Max(0, 1-float64(cos*cos)))
	if side == LeftSide {
		sin = -sin
	}
	return p.v.Scale(1/p.rho).Rotate(sin, cos)
}

// turn measures how far b is turned from a, away from a wall on the side: a number
// in [0, 4) that grows with the angle and is 0 at none, 1 at a right angle, 2 at a half turn.
func turn(a, b geom.Vec, side Side) float64 {
	x, y := a.Dot(b), a.Cross(b)
	if side == LeftSide {
		y = -y
	}
	n := math.Abs(x) + math.Abs(y)
	if n == 0 {
		return 0
	}
	switch {
	case y >= 0 && x >= 0:
		return y / n
	case y >= 0:
		return 1 - x/n
	case x < 0:
		return 2 - y/n
	default:
		return 3 + x/n
	}
}

// middle returns the direction in the middle of the opening that begins at first;
// a right angle beyond first when the opening is wider than a half turn.
func (e *Engine) middle(first geom.Vec, side Side, w, reach float64) geom.Vec {
	points := e.see.points
	other := Side(-side)
	open := 2.0
	end := first.Scale(-1)
	for i := range points {
		p := &points[i]
		if p.rho >= reach+w || p.rho == 0 {
			continue
		}
		cos := cosBlocked(p.rho, w, reach)
		if p.v.Dot(first) > float64(cos*p.rho)-1e-9 && turn(first, p.v, side) > 2 {
			continue // this one ends where the opening begins
		}
		start := edge(p, cos, other)
		if a := turn(first, start, side); a < open {
			open, end = a, start
		}
	}
	if open >= 2 {
		if side == LeftSide {
			return geom.Vec{X: first.Y, Y: -first.X}
		}
		return first.Perp()
	}
	m := first.Add(end)
	if m.Norm() < 1e-6 {
		if side == LeftSide {
			return geom.Vec{X: first.Y, Y: -first.X}
		}
		return first.Perp()
	}
	return m.Unit()
}

// standOff turns on from first, at most to middle, until the place at distance
// aim is farther than w from everything on the wall's side of first.
func (e *Engine) standOff(into, first, middle geom.Vec, side Side, w, aim float64) geom.Vec {
	points := e.see.points
	limit := turn(into, first, side)
	dir := first
	room := turn(first, middle, side)
	for pass := 0; pass < 8; pass++ {
		moved := false
		for i := range points {
			p := &points[i]
			if p.rho >= aim+w || p.rho == 0 {
				continue
			}
			if a := turn(into, p.v, side); a > limit && a < 3 {
				continue
			}
			cos := (float64(p.rho*p.rho) + float64(aim*aim) - float64(w*w)) / (2 * p.rho * aim)
			if cos >= 1 || p.v.Dot(dir) <= float64(cos*p.rho)+1e-12 {
				continue
			}
			if cos <= -1 {
				return middle
			}
			next := edge(p, cos, side)
			if turn(first, next, side) >= room {
				return middle
			}
			dir, moved = next, true
		}
		if !moved {
			break
		}
	}
	return dir
}

// holdWall keeps the followed place on the wall: the nearest place to the robot
// among those so near to the last one that the hull cannot pass between. It must
// lie on the wall's side of the way that the robot is going. Where it does not, the
// robot has turned back at a dead end, and what it follows now is the nearest
// place on that side.
func (e *Engine) holdWall(in *Input, m *Mode) bool {
	if !e.wall.known {
		return e.findWall(in, m)
	}
	s := &e.see
	w := in.Hull + e.l.Margin
	last := e.wall.at.Sub(s.pos)
	join := 4 * w * w
	var joined, any *point
	for i := range s.points {
		p := &s.points[i]
		if !e.onSide(p.v, p.rho) {
			continue
		}
		if any == nil || p.rho < any.rho {
			any = p
		}
		if (joined == nil || p.rho < joined.rho) && p.v.Sub(last).Norm2() <= join {
			joined = p
		}
	}
	far := in.Hull + m.StandOff + 1.5
	switch {
	case joined != nil && joined.rho < far:
		e.take(joined)
	case in.Time-e.wall.since <= keptTime && e.onSide(last, last.Norm()) && last.Norm() < far:
		// Nothing is seen there now: go on about the place where the wall was.
	case any != nil && any.rho < far:
		e.take(any)
	default:
		return e.findWall(in, m)
	}
	return true
}

// take makes p the followed place.
func (e *Engine) take(p *point) {
	e.wall.at, e.wall.since, e.wall.known = e.see.pos.Add(p.v), p.since, true
}

// moveAlong moves the followed place on to the nearest one that lies between it
// and the direction taken.
func (e *Engine) moveAlong(in *Input, into, dir geom.Vec, standOff float64) {
	s, side := &e.see, e.track.side
	limit := turn(into, dir, side)
	var best *point
	for i := range s.points {
		p := &s.points[i]
		if p.rho > 2*in.Hull+standOff || best != nil && p.rho >= best.rho {
			continue
		}
		if e.onSide(p.v, p.rho) && turn(into, p.v, side) <= limit {
			best = p
		}
	}
	if best != nil {
		e.take(best)
	}
}

// onSide reports whether v lies on the wall's side of the way that the robot is going.
func (e *Engine) onSide(v geom.Vec, length float64) bool {
	c := e.wall.travel.Cross(v)
	if e.track.side == RightSide {
		c = -c
	}
	return c >= -0.1*length
}

// findWall takes up a wall: what stands in the way to the goal if it is near,
// else what is nearest.
func (e *Engine) findWall(in *Input, m *Mode) bool {
	s, t := &e.see, &e.track
	w := in.Hull + e.l.Margin
	near := 2 * (in.Hull + m.StandOff)
	touch := math.Inf(1)
	var nearest, ahead *point
	for i := range s.points {
		p := &s.points[i]
		if nearest == nil || p.rho < nearest.rho {
			nearest = p
		}
		if d, ok := touchAt(p.v, t.goalDir, w); ok && d < touch {
			touch, ahead = d, p
		}
	}
	e.wall.known = false
	e.wall.travel = geom.Vec{}
	switch {
	case touch < near:
		e.take(ahead)
	case nearest != nil && nearest.rho < in.Hull+m.StandOff+1.5:
		e.take(nearest)
	}
	return e.wall.known
}

// chooseSide decides on which side mode m keeps the wall: as its rule says, or
// where the way along the wall points more toward the goal; the left on a tie.
func (e *Engine) chooseSide(in *Input, m *Mode) {
	t := &e.track
	switch m.Side {
	case KeepLeft:
		t.side = LeftSide
		return
	case KeepRight:
		t.side = RightSide
		return
	}
	t.side = LeftSide
	if !e.findWall(in, m) {
		return
	}
	into := e.wall.at.Sub(e.see.pos).Unit()
	left, okL := e.wayOn(in, into, LeftSide)
	right, okR := e.wayOn(in, into, RightSide)
	const tie = 1e-9
	if okR && (!okL || t.goalDir.Dot(right) > t.goalDir.Dot(left)+tie) {
		t.side = RightSide
	}
}

// foresight is how far, in hull radii, the ways along either side of a wall are
// looked at before one is chosen. On random floors of mazes and rooms, eight gave
// ways a fifth to a third shorter than two, and fourteen no better than eight.
const foresight = 8

// wayOn returns the direction of the first way past the wall, kept on the given
// side, that is free for as far as it is looked at.
func (e *Engine) wayOn(in *Input, into geom.Vec, side Side) (geom.Vec, bool) {
	w := in.Hull + e.l.Margin
	for reach := math.Min(foresight*in.Hull, e.track.goalFarness); reach > w/4; reach /= 2 {
		if dir, ok := e.sweep(into, side, w, reach); ok {
			return dir, true
		}
	}
	return geom.Vec{}, false
}
