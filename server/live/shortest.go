package live

import (
	"math"
	"time"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/reach"
	"leeway/sim/steer"
)

const (
	// shortestEvery is how often the shortest way is worked out while it changes.
	shortestEvery = 200 * time.Millisecond
	// Floors of more pieces of wall than this are not measured anew while something
	// is being dragged, and those of more than the second not at all: that takes
	// seconds, and gigabytes before long.
	followPieces, mostPieces = 3_000, 10_000
)

// piecesOf counts straight pieces of wall and sides, and discs.
func piecesOf(solids []floor.Solid) (n int) {
	for i := range solids {
		if s := &solids[i]; s.Kind == floor.Polygon {
			n += len(s.Points)
		} else {
			n += max(1, len(s.Points)-1)
		}
	}
	return n
}

// Why no shortest way is known.
const (
	waySoon     = "it is being worked out"
	wayAtRest   = "it is worked out when nothing is being moved"
	wayTooLarge = "it is not worked out on floors of more than 10,000 pieces of wall"
)

// measured is what a session knows of the shortest way of the hull from the start to
// the goal, on the floor as it stands where the tape is looked at. It is worked
// out in a goroutine of its own, one question at a time.
type measured struct {
	length float64 // m; NaN: there is none
	why    string  // then, why there is none
	of     uint64  // what it was worked out of, see Session.wayKey; 0: nothing yet
	busy   bool
	next   time.Time // not before
	again  time.Time // when there is something to do, if that is not zero
}

// wayKey tells apart what the shortest way depends on: the tape's floor, and the
// edits of goal and solids up to where it is looked at. It is never 0.
func (s *Session) wayKey() uint64 {
	h := s.tapes
	mix := func(x uint64) { h = (h ^ x) * 0x9e3779b97f4a7c15; h ^= h >> 29 }
	for _, e := range s.robot().Edits()[:s.editsSoFar()] {
		if e.Kind == sim.MoveGoal || e.Kind == sim.MoveSolid {
			mix(uint64(e.Kind)<<32 | uint64(e.Index))
			mix(math.Float64bits(e.Pos.X))
			mix(math.Float64bits(e.Pos.Y))
		}
	}
	return h | 1
}

// shortestNow returns the shortest way, m, or NaN and why there is none. On a small
// floor, what was true a moment ago stands in for what is being worked out.
func (s *Session) shortestNow() (length float64, why string) {
	w := &s.way
	switch {
	case s.pieces > mostPieces:
		return math.NaN(), wayTooLarge
	case w.of == s.wayKey(), w.of != 0 && s.pieces <= followPieces:
		return w.length, w.why
	case len(s.grips) > 0 && s.pieces > followPieces:
		return math.NaN(), wayAtRest
	}
	return math.NaN(), waySoon
}

// measure has the shortest way worked out, for whoever watches, when it is another
// than the known one.
func (s *Session) measure(now time.Time) {
	w := &s.way
	w.again = time.Time{}
	switch key := s.wayKey(); {
	case w.busy || w.of == key || s.pieces > mostPieces || s.pieces > followPieces && len(s.grips) > 0 || len(s.viewers) == 0:
	case now.Before(w.next):
		w.again = w.next
	default:
		w.busy, w.next = true, now.Add(shortestEvery)
		q := s.question()
		go func() {
			length, why, ok := s.lab.measure(q)
			if ok {
				s.post(s.lab.ctx, func() {
					w.length, w.why, w.of, w.busy = length, why, key, false
					s.changed = true
				})
			}
		}()
	}
}

// question is one question for the shortest way.
type question struct {
	solids   []floor.Solid
	hull     float64
	from, to geom.Vec
	within   float64
}

// question returns that of now. It shares nothing that changes.
func (s *Session) question() question {
	c := s.robot().Config()
	q := question{append([]floor.Solid(nil), s.floor.Solids...), c.Hull, c.Start.Pos, c.Goal, c.GoalRadius}
	for _, e := range s.robot().Edits()[:s.editsSoFar()] {
		switch e.Kind {
		case sim.MoveGoal:
			q.to = e.Pos
		case sim.MoveSolid:
			solid := &q.solids[e.Index]
			shift := e.Pos.Sub(solid.Points[0])
			points := make([]geom.Vec, len(solid.Points))
			for i, p := range solid.Points {
				points[i] = p.Add(shift)
			}
			points[0] = e.Pos
			solid.Points = points
		}
	}
	if c.Steer.Rule == steer.LookAhead && c.Drive.Model != drive.Point {
		q.within += c.Steer.Ahead // what has to come to the goal is a point ahead of the hull's centre
	}
	return q
}

// measure works out the shortest way, one question of the whole lab at a time. ok is
// false when the lab has closed.
func (l *Lab) measure(q question) (length float64, why string, ok bool) {
	select {
	case l.measuring <- struct{}{}:
	case <-l.ctx.Done():
		return 0, "", false
	}
	defer func() { <-l.measuring }()
	r, err := reach.Shortest(floor.Config{Solids: q.solids}, q.hull, q.from, q.to, q.within)
	switch {
	case err != nil:
		return math.NaN(), err.Error(), true
	case !r.Reachable:
		return math.NaN(), r.Reason, true
	}
	return r.Length, "", true
}
