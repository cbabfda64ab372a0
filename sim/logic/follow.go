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

// followWall goes along the wall on the side; straight to the goal where there is none.
func (e *Engine) followWall(in *Input, m *Mode, top float64) geom.Vec {
	s, t := &e.see, &e.track
	if !e.holdWall(in, m) {
		return t.goalDir.Scale(top)
	}
	into := e.wall.at.Sub(s.pos).Unit()
	if (into == geom.Vec{}) {
		into = s.head
	}
	dir, ok := e.alongWall(in, into, t.side, m.StandOff)
	if !ok {
		return geom.Vec{}
	}
	e.wall.travel = dir
	e.moveAlong(in, into, dir, m.StandOff)
	return dir.Scale(e.paced(in, dir, top))
}

// alongWall returns the direction in which to go along a wall that stands in the
// direction into and shall be kept on a side; ok is false when no direction is free.
func (e *Engine) alongWall(in *Input, into geom.Vec, side Side, standOff float64) (dir geom.Vec, ok bool) {
	s := &e.see
	nearest := math.Inf(1)
	for i := range s.points {
		if s.points[i].rho < nearest {
			nearest = s.points[i].rho
		}
	}
	w := math.Max(in.Hull, math.Min(in.Hull+e.l.Margin, nearest))
	aim := math.Max(standOff, in.Hull/2)
	// Where a long strip leaves nothing but to turn back, a shorter one may still
	// find the way round a tight bend.
	for reach := 2 * w; reach > w/4; reach /= 2 {
		s.blockStrips(w, reach)
		first, free := s.sweep(into, side)
		if !free {
			continue
		}
		d := e.standOff(into, first, s.middle(first, side), side, in.Hull+standOff, aim)
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

// standOff turns on from first, at most to middle, until the place at distance
// aim is farther than w from everything on the wall's side of first. To aim at a place
// ahead instead of keeping off each return by itself makes a noisy wall look smooth.
func (e *Engine) standOff(into, first, middle geom.Vec, side Side, w, aim float64) geom.Vec {
	s := &e.see
	limit, room := turn(into, first, side)+alike, turn(first, middle, side)
	far, rest := aim+w, float64(aim*aim)-float64(w*w)
	dir, turned := first, 0.0
	for range maxPasses {
		moved := false
		for i := range s.points {
			p := &s.points[i]
			if p.rho >= far || p.rho == 0 {
				continue
			}
			// |p − aim·dir| < w
			if float64(p.rho*p.rho)+rest >= float64(2*aim*p.v.Dot(dir))-1e-12 {
				continue
			}
			if a := turn(into, p.v, side); a > limit && a < 3 {
				continue // beyond the opening
			}
			cos := (float64(p.rho*p.rho) + rest) / (2 * p.rho * aim)
			b := block{p.v.Scale(1 / p.rho), math.Max(-1, cos)}
			if !b.covers(dir) {
				continue
			}
			next := b.end(side)
			at := turn(first, next, side)
			if at >= room || at < turned {
				return middle
			}
			dir, turned, moved = next, at, true
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
		if any != nil && p.rho >= any.rho && joined != nil && p.rho >= joined.rho || !e.onSide(p.v, p.rho) {
			continue
		}
		if any == nil || p.rho < any.rho {
			any = p
		}
		if (joined == nil || p.rho < joined.rho) && p.v.Sub(last).Norm2() <= join {
			joined = p
		}
	}
	far := farthestWall(in, m)
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

// farthestWall is how far from the hull's centre a place on a followed wall may be, m.
func farthestWall(in *Input, m *Mode) float64 { return m.StandOff + float64(8*in.Hull) }

// take makes p the followed place.
func (e *Engine) take(p *point) {
	e.wall.at, e.wall.since, e.wall.known = e.see.pos.Add(p.v), p.since, true
}

// moveAlong moves the followed place on to the nearest one that lies between it
// and the direction taken.
func (e *Engine) moveAlong(in *Input, into, dir geom.Vec, standOff float64) {
	s, side := &e.see, e.track.side
	limit := turn(into, dir, side) + alike
	var best *point
	for i := range s.points {
		p := &s.points[i]
		if p.rho > float64(2*in.Hull)+standOff || best != nil && p.rho >= best.rho {
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
		d, ok := touchAt(p.v, t.goalDir, w)
		if ok && (d < touch || d == touch && p.rho < ahead.rho) { // several may touch at once
			touch, ahead = d, p
		}
	}
	e.wall.known = false
	e.wall.travel = geom.Vec{}
	switch {
	case touch < near:
		e.take(ahead)
	case nearest != nil && nearest.rho < farthestWall(in, m):
		e.take(nearest)
	}
	return e.wall.known
}

// chooseSide decides on which side mode m keeps the wall: as its rule says, or
// where the way along the wall points more toward the goal; the left on a tie.
func (e *Engine) chooseSide(in *Input, m *Mode) {
	t, before := &e.track, e.track.side
	switch m.Side {
	case KeepLeft:
		t.side = LeftSide
	case KeepRight:
		t.side = RightSide
	default:
		t.side = e.betterSide(in, m)
	}
	if t.side != before {
		e.wall.known = false
	}
}

// betterSide is the side of the better way; of two equal ones, or where there is
// neither, the side of the goal line on which the wall is; else the left.
func (e *Engine) betterSide(in *Input, m *Mode) Side {
	if !e.findWall(in, m) {
		return LeftSide
	}
	goal, into := e.track.goalDir, e.wall.at.Sub(e.see.pos).Unit()
	left, okL := e.wayOn(in, into, LeftSide)
	right, okR := e.wayOn(in, into, RightSide)
	gain := 0.0
	switch {
	case okL && okR:
		gain = goal.Dot(left) - goal.Dot(right)
	case okL:
		gain = 1
	case okR:
		gain = -1
	}
	if math.Abs(gain) < alike {
		gain = goal.Cross(into)
	}
	if gain < -alike {
		return RightSide
	}
	return LeftSide
}

// foresight is how far, in hull radii, the ways along either side of a wall are
// looked at before one is chosen. On random floors of mazes and rooms, eight gave
// ways a fifth to a third shorter than two, and fourteen no better than eight.
const foresight = 8

// wayOn returns the direction of the first way past the wall, kept on the given
// side, that is free for as far as it is looked at.
func (e *Engine) wayOn(in *Input, into geom.Vec, side Side) (geom.Vec, bool) {
	s, w := &e.see, in.Hull+e.l.Margin
	for reach := math.Min(foresight*in.Hull, e.track.goalFarness); reach > w/4; reach /= 2 {
		s.blockStrips(w, reach)
		if dir, ok := s.sweep(into, side); ok {
			return dir, true
		}
	}
	return geom.Vec{}, false
}
