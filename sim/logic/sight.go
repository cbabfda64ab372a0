package logic

import (
	"math"

	"leeway/sim/geom"
)

// sight is what the engine knows of the floor: the last return of every beam,
// kept as a place in the frame of the belief, so that a return stays where it
// was while the robot drives on and turns until the beam is read again. For
// rings with wide gaps between the beams it also keeps, for a moment, places
// that the beams have swept over; they stand in for the wall between the beams.
type sight struct {
	beams []beam
	exact geom.Vec // nearest place of all, in the frame of the belief
	sharp bool     // exact is known

	wide     bool // the ring has gaps wide enough to need the memory
	cosine   float64
	measured bool

	// What is seen at this tick, from the hull's centre, in the frame of the belief.
	pos                geom.Vec
	head               geom.Vec
	points             []point
	current            int     // points[:current] are returns, the rest memory
	limit              float64 // largest gap that can be seen
	nearest            float64
	front, left, right sector
}

// beam is the last return of one beam, and what it has swept over before.
type beam struct {
	at   geom.Vec
	tick int64
	hit  bool
	kept [keptPlaces]place
}

// place is a place kept in memory since a time, s; full says that there is one.
type place struct {
	at    geom.Vec
	since float64
	full  bool
}

// point is a place on something solid.
type point struct {
	v     geom.Vec // from the hull's centre
	rho   float64  // |v|
	since float64  // when it was last seen, s
}

const (
	keptPlaces = 4    // of each beam
	keptTime   = 4.0  // s that a place stays in memory
	keptReach  = 1.2  // m from the robot, beyond which nothing is kept
	keptApart  = 0.12 // m between the kept places of one beam
	wideGap    = 0.1  // rad between neighbouring beams, beyond which memory is used
)

// sector is the smallest gap about one direction. A sparse ring may have no beam
// in it; then the beams nearest in angle are looked at.
type sector struct {
	gap     float64
	hasBeam bool
	best    float64 // largest cosine seen outside the sector
	instead float64 // smallest gap of the beams with that cosine
}

func (s *sector) start(limit float64) { *s = sector{gap: limit, best: -2, instead: limit} }

func (s *sector) add(cos, min, gap float64) {
	const same = 1e-9
	switch {
	case cos >= min:
		s.hasBeam = true
		s.gap = math.Min(s.gap, gap)
	case cos > s.best+same:
		s.best, s.instead = cos, gap
	case cos >= s.best-same:
		s.instead = math.Min(s.instead, gap)
	}
}

func (s *sector) value() float64 {
	if s.hasBeam {
		return s.gap
	}
	return math.Min(s.gap, s.instead)
}

func (s *sight) forget() {
	s.beams = s.beams[:0]
	s.measured, s.sharp = false, false
	s.forgetPlaces()
}

func (s *sight) forgetPlaces() {
	for i := range s.beams {
		s.beams[i].kept = [keptPlaces]place{}
	}
}

func (s *sight) copyFrom(src *sight) {
	beams, points := s.beams, s.points
	*s = *src
	s.beams = append(beams[:0], src.beams...)
	s.points = append(points[:0], src.points...)
}

// look takes in what the ring knows.
func (e *Engine) look(in *Input) {
	s := &e.see
	scan := in.Scan
	n := len(scan.Range)
	if !s.measured || len(s.beams) != n {
		s.measure(in, e.l.Sector)
	}
	s.pos = geom.Vec{X: in.Belief.X, Y: in.Belief.Y}
	s.head = geom.Heading(in.Belief.Theta)
	s.limit = math.Max(0, scan.Mount+scan.Max-in.Hull)
	s.points = s.points[:0]
	s.nearest = s.limit
	s.front.start(s.limit)
	s.left.start(s.limit)
	s.right.start(s.limit)
	fresh := false
	for i := range s.beams {
		b := &s.beams[i]
		dir := scan.Dir[i]
		if b.tick != scan.Tick[i] {
			fresh = true
			s.update(b, in, i)
		}
		if b.tick < 0 {
			continue
		}
		gap := s.limit
		if b.hit {
			v := b.at.Sub(s.pos)
			rho := v.Norm()
			s.points = append(s.points, point{v, rho, in.Time})
			gap = math.Min(gap, rho-in.Hull)
			s.nearest = math.Min(s.nearest, gap)
		}
		s.front.add(dir.X, s.cosine, gap)
		s.left.add(dir.Y, s.cosine, gap)
		s.right.add(-dir.Y, s.cosine, gap)
	}
	if fresh {
		s.sharp = scan.Exact && scan.Gap <= scan.Mount+scan.Max
		if s.sharp {
			s.exact = s.pos.Add(scan.Toward.Rotate(s.head.Y, s.head.X).Scale(scan.Gap))
		}
	}
	if s.sharp {
		v := s.exact.Sub(s.pos)
		p := point{v, v.Norm(), in.Time}
		s.points = append(s.points, p)
		s.nearest = math.Min(s.nearest, p.rho-in.Hull)
	}
	s.current = len(s.points)
	if s.wide {
		e.recall(in)
	}
}

// update takes a new reading of beam i.
func (s *sight) update(b *beam, in *Input, i int) {
	scan := in.Scan
	was, looked := b.at, b.hit && b.tick >= 0
	b.tick, b.hit = scan.Tick[i], scan.Hit[i]
	if b.hit {
		b.at = s.pos.Add(scan.Dir[i].Rotate(s.head.Y, s.head.X).Scale(scan.Mount + scan.Range[i]))
	}
	if s.wide && looked {
		s.keep(b, was, in.Time)
	}
}

// keep puts a place that the beam has looked at into its memory: not where it
// has a place close by, and otherwise instead of the farthest, for near places matter most.
func (s *sight) keep(b *beam, at geom.Vec, time float64) {
	d := at.Sub(s.pos).Norm2()
	if d > keptReach*keptReach {
		return
	}
	far, slot := d, -1
	for i := range b.kept {
		k := &b.kept[i]
		if !k.full {
			far, slot = math.Inf(1), i
			continue
		}
		if k.at.Sub(at).Norm2() < keptApart*keptApart {
			k.since = time
			return
		}
		if r := k.at.Sub(s.pos).Norm2(); r > far {
			far, slot = r, i
		}
	}
	if slot >= 0 {
		b.kept[slot] = place{at, time, true}
	}
}

// recall adds the remembered places to what is seen, and the followed place on a wall.
func (e *Engine) recall(in *Input) {
	s := &e.see
	for i := range s.beams {
		kept := &s.beams[i].kept
		for j := range kept {
			m := &kept[j]
			if !m.full {
				continue
			}
			v := m.at.Sub(s.pos)
			r2 := v.Norm2()
			if in.Time-m.since > keptTime || r2 > keptReach*keptReach {
				m.full = false
				continue
			}
			s.points = append(s.points, point{v, math.Sqrt(r2), m.since})
		}
	}
	if e.wall.known && in.Time-e.wall.since <= keptTime {
		v := e.wall.at.Sub(s.pos)
		s.points = append(s.points, point{v, v.Norm(), e.wall.since})
	}
}

// measure sizes the memory for the ring, once.
func (s *sight) measure(in *Input, half float64) {
	n := len(in.Scan.Range)
	s.measured = true
	s.beams = resize(s.beams, n)
	for i := range s.beams {
		s.beams[i] = beam{tick: -1}
	}
	if most := n*(keptPlaces+1) + 2; cap(s.points) < most {
		s.points = make([]point, 0, most)
	}
	_, s.cosine = geom.Sincos(math.Min(half, math.Pi))
	s.cosine -= 1e-9 // a beam on the very edge of a sector belongs to it
	s.wide = widestGap(in.Scan.Dir) > wideGap
}

// widestGap returns the widest angle between neighbouring beams, rad; a full
// turn for fewer than two beams.
func widestGap(dir []geom.Vec) float64 {
	if len(dir) < 2 {
		return 2 * math.Pi
	}
	widest := 0.0
	for i, a := range dir {
		next := 2 * math.Pi
		for j, b := range dir {
			if i == j {
				continue
			}
			turn := geom.Atan2(a.Cross(b), a.Dot(b))
			if turn <= 0 {
				turn += 2 * math.Pi
			}
			next = math.Min(next, turn)
		}
		widest = math.Max(widest, next)
	}
	return widest
}
