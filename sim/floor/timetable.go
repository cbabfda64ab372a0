package floor

import (
	"math"

	"leeway/sim/geom"
)

// timetable is a mover made ready: where its centre is at a time, and its shape.
type timetable struct {
	Mover
	corners []geom.Vec // of a box, from its centre; nil for a disc
	legs    []leg
	period  float64 // seconds of one round; 0 when it stands still
}

// leg is a rest at one way point and the way to the next.
type leg struct {
	arrive, leave, end float64 // seconds from the begin of the round
	from, way          geom.Vec
}

// newTimetable lays out one round. It begins with the rest at the first way
// point; a loop goes on from the last to the first, another route goes back the way it came.
func newTimetable(m Mover) timetable {
	m.Route = append([]geom.Vec(nil), m.Route...)
	tt := timetable{Mover: m}
	if m.Radius == 0 {
		// Turned to the right, the corners are those of the box turned to the left,
		// mirrored: then a mirrored floor has the same edges in every bit.
		sin, cos := geom.Sincos(math.Abs(m.Heading))
		for _, c := range [4]geom.Vec{{X: 1, Y: 1}, {X: -1, Y: 1}, {X: -1, Y: -1}, {X: 1, Y: -1}} {
			p := geom.Vec{X: c.X * m.Half.X, Y: c.Y * m.Half.Y}.Rotate(sin, cos)
			if m.Heading < 0 {
				p.Y = -p.Y
			}
			tt.corners = append(tt.corners, p)
		}
	}
	n := len(m.Route)
	if n == 1 || m.Speed == 0 {
		return tt
	}
	stops := append([]geom.Vec(nil), m.Route...)
	if !m.Loop {
		for i := n - 2; i > 0; i-- {
			stops = append(stops, m.Route[i])
		}
	}
	t := 0.0
	for i, from := range stops {
		way := stops[(i+1)%len(stops)].Sub(from)
		l := leg{arrive: t, leave: t + m.Pause, from: from, way: way}
		l.end = l.leave + way.Norm()/m.Speed
		t = l.end
		tt.legs = append(tt.legs, l)
	}
	// A speed or a pause beyond what a number can hold leaves no round to follow.
	if t > 0 && !math.IsInf(t, 0) {
		tt.period = t
	}
	return tt
}

// at returns the place of the centre at t seconds, before any edit.
func (tt *timetable) at(t float64) geom.Vec {
	if tt.period == 0 {
		return tt.Route[0]
	}
	t = math.Mod(t+tt.Offset, tt.period) // exact, so the same everywhere
	if t < 0 {
		t += tt.period
	}
	lo, hi := 0, len(tt.legs) // the last leg that has begun
	for hi-lo > 1 {
		if mid := (lo + hi) / 2; tt.legs[mid].arrive <= t {
			lo = mid
		} else {
			hi = mid
		}
	}
	l := &tt.legs[lo]
	if !(t > l.leave) || !(l.end > l.leave) {
		return l.from
	}
	return l.from.AddScaled(min((t-l.leave)/(l.end-l.leave), 1), l.way)
}
