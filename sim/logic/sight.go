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

	kept     [memorySize]memory
	next     int
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

// beam is the last return of one beam.
type beam struct {
	at   geom.Vec
	tick int64
	hit  bool
}

type memory struct {
	at   geom.Vec
	time float64
	full bool
}

// point is a place on something solid.
type point struct {
	v   geom.Vec // from the hull's centre
	rho float64  // |v|
}

const (
	memorySize  = 48
	memoryTime  = 2.5  // s that a place stays in memory
	memoryReach = 1.5  // m from the robot, beyond which nothing is kept
	memoryApart = 0.08 // m between the kept places of one beam
	wideGap     = 0.1  // rad between neighbouring beams, beyond which memory is used
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
	s.kept = [memorySize]memory{}
	s.next = 0
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
			s.points = append(s.points, point{v, rho})
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
		p := point{v, v.Norm()}
		s.points = append(s.points, p)
		s.nearest = math.Min(s.nearest, p.rho-in.Hull)
	}
	s.current = len(s.points)
	if s.wide {
		s.recall(in)
	}
}

// update takes a new reading of beam i.
func (s *sight) update(b *beam, in *Input, i int) {
	scan := in.Scan
	old := *b
	b.tick, b.hit = scan.Tick[i], scan.Hit[i]
	if b.hit {
		b.at = s.pos.Add(scan.Dir[i].Rotate(s.head.Y, s.head.X).Scale(scan.Mount + scan.Range[i]))
	}
	if !s.wide || !old.hit || old.tick < 0 {
		return
	}
	if b.hit && b.at.Sub(old.at).Norm2() < memoryApart*memoryApart {
		// The beam still looks at the same place: remember where it came from
		// only once it has moved on.
		return
	}
	if old.at.Sub(s.pos).Norm2() > memoryReach*memoryReach {
		return
	}
	s.kept[s.next] = memory{old.at, in.Time, true}
	s.next = (s.next + 1) % memorySize
}

// recall adds the remembered places to what is seen.
func (s *sight) recall(in *Input) {
	for i := range s.kept {
		m := &s.kept[i]
		if !m.full {
			continue
		}
		if in.Time-m.time > memoryTime {
			m.full = false
			continue
		}
		v := m.at.Sub(s.pos)
		if r2 := v.Norm2(); r2 <= memoryReach*memoryReach {
			s.points = append(s.points, point{v, math.Sqrt(r2)})
		}
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
	if cap(s.points) < n+memorySize+1 {
		s.points = make([]point, 0, n+memorySize+1)
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
