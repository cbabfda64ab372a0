package logic

import (
	"math"

	"leeway/sim/geom"
)

// sight is what the engine knows of the floor: the last return of every beam,
// kept as a place in the frame of the belief, so that a return stays where it
// was while the robot drives on and turns until the beam is read again. For
// rings with wide gaps between the beams it also keeps, for a while, near places
// that the beams have swept over; they stand in for the wall between the beams.
type sight struct {
	measured bool
	wide     bool // the ring has gaps wide enough to need the memory
	beams    []beam
	kept     []place  // keptPlaces of each beam
	exact    geom.Vec // nearest place of all, in the frame of the belief
	sharp    bool     // exact is known

	// What is seen at this tick.
	pos     geom.Vec // hull's centre, in the frame of the belief
	head    geom.Vec // unit vector of the heading
	points  []point
	current int                 // points[:current] are returns, the rest memory
	limit   float64             // largest gap that can be seen, m
	nearest float64             // smallest gap, m
	sector  [numSectors]float64 // smallest gap in each, m
	blocks  []block             // see block
}

// beam is the last return of one beam.
type beam struct {
	at      geom.Vec
	tick    int64
	hit     bool
	sectors uint8 // bit k: the beam is looked at for sector k
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

// The sectors that have a reading of their own.
const (
	frontSector = iota
	leftSector
	rightSector
	numSectors
)

const (
	keptPlaces = 4   // of each beam
	keptTime   = 4.0 // s that a place stays in memory
	keptReach  = 6.0 // hull radii from the robot, beyond which nothing is kept
	keptApart  = 0.6 // hull radii between the kept places of one beam
	wideGap    = 0.1 // rad between neighbouring beams, beyond which memory is used
)

func (s *sight) forget() {
	s.beams = s.beams[:0]
	s.measured, s.sharp = false, false
}

func (s *sight) forgetPlaces() { clear(s.kept) }

func (s *sight) copyFrom(src *sight) {
	beams, kept, points, blocks := s.beams, s.kept, s.points, s.blocks
	*s = *src
	s.beams = append(beams[:0], src.beams...)
	s.kept = append(kept[:0], src.kept...)
	s.points = append(points[:0], src.points...)
	s.blocks = append(blocks[:0], src.blocks...)
}

// look takes in what the ring knows.
func (e *Engine) look(in *Input) {
	s, scan := &e.see, in.Scan
	if !s.measured || len(s.beams) != len(scan.Range) {
		s.measure(scan.Dir, e.l.Sector)
	}
	s.pos = geom.Vec{X: in.Belief.X, Y: in.Belief.Y}
	s.head = geom.Heading(in.Belief.Theta)
	s.limit = math.Max(0, scan.Mount+scan.Max-in.Hull)
	s.nearest = s.limit
	s.sector = [numSectors]float64{s.limit, s.limit, s.limit}
	points, fresh := s.points[:0], false
	for i := range s.beams {
		b := &s.beams[i]
		if b.tick != scan.Tick[i] {
			fresh = true
			s.update(in, i)
		}
		if !b.hit {
			continue
		}
		v := b.at.Sub(s.pos)
		rho := v.Norm()
		points = append(points, point{v, rho, in.Time})
		gap := rho - in.Hull
		if gap < s.nearest {
			s.nearest = gap
		}
		if b.sectors == 0 {
			continue
		}
		for k := range s.sector {
			if b.sectors>>k&1 != 0 && gap < s.sector[k] {
				s.sector[k] = gap
			}
		}
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
		points = append(points, p)
		s.nearest = math.Min(s.nearest, p.rho-in.Hull)
	}
	s.points, s.current = points, len(points)
	if s.wide {
		e.recall(in)
	}
}

// update takes in a new reading of beam i.
func (s *sight) update(in *Input, i int) {
	b, scan := &s.beams[i], in.Scan
	if s.wide && b.hit {
		s.keep(i, in)
	}
	b.tick, b.hit = scan.Tick[i], scan.Hit[i]
	if b.hit {
		b.at = s.pos.Add(scan.Dir[i].Rotate(s.head.Y, s.head.X).Scale(scan.Mount + scan.Range[i]))
		b.hit = b.at.Finite()
	}
}

// keep puts the place that beam i has looked at last into its memory: not where
// it has a place close by, and otherwise instead of its farthest, for near places matter most.
func (s *sight) keep(i int, in *Input) {
	at := s.beams[i].at
	far := at.Sub(s.pos).Norm2()
	if far > float64(keptReach*in.Hull)*float64(keptReach*in.Hull) {
		return
	}
	var slot *place
	kept := s.kept[i*keptPlaces : (i+1)*keptPlaces]
	for j := range kept {
		k := &kept[j]
		if !k.full {
			far, slot = math.Inf(1), k
			continue
		}
		if k.at.Sub(at).Norm2() < float64(keptApart*in.Hull)*float64(keptApart*in.Hull) {
			k.since = in.Time
			return
		}
		if r := k.at.Sub(s.pos).Norm2(); r > far {
			far, slot = r, k
		}
	}
	if slot != nil {
		*slot = place{at, in.Time, true}
	}
}

// recall adds the remembered places to what is seen, and the followed place on a wall.
func (e *Engine) recall(in *Input) {
	s := &e.see
	reach := float64(keptReach*in.Hull) * float64(keptReach*in.Hull)
	for i := range s.kept {
		k := &s.kept[i]
		if !k.full {
			continue
		}
		v := k.at.Sub(s.pos)
		r2 := v.Norm2()
		if in.Time-k.since > keptTime || r2 > reach {
			k.full = false
			continue
		}
		s.points = append(s.points, point{v, math.Sqrt(r2), k.since})
	}
	if e.wall.known && in.Time-e.wall.since <= keptTime {
		v := e.wall.at.Sub(s.pos)
		s.points = append(s.points, point{v, v.Norm(), e.wall.since})
	}
}

// measure sizes the memory for a ring with these directions, and sorts its beams
// into the sectors, of the given half width.
func (s *sight) measure(dir []geom.Vec, half float64) {
	n := len(dir)
	s.measured = true
	s.wide = widestGap(dir) > wideGap
	s.beams = resize(s.beams, n)
	s.kept = s.kept[:0]
	if s.wide {
		s.kept = resize(s.kept, n*keptPlaces)
		clear(s.kept)
	}
	most := n + len(s.kept) + 2
	s.points, s.blocks = resize(s.points, most)[:0], resize(s.blocks, most)[:0]
	for i := range s.beams {
		s.beams[i] = beam{tick: -1}
	}
	_, cosine := geom.Sincos(math.Min(half, math.Pi))
	for k, axis := range [numSectors]geom.Vec{{X: 1}, {Y: 1}, {Y: -1}} {
		s.fill(k, axis, cosine, dir)
	}
}

// fill marks the beams of sector k: those within it, or, where a sparse ring has
// none there, those nearest in angle, so that something is always looked at.
func (s *sight) fill(k int, axis geom.Vec, cosine float64, dir []geom.Vec) {
	best := -2.0
	for _, d := range dir {
		best = math.Max(best, d.Dot(axis))
	}
	// A beam on the very edge belongs to the sector, and beams equally near count alike.
	least := math.Min(cosine, best) - 1e-9
	for i, d := range dir {
		if d.Dot(axis) >= least {
			s.beams[i].sectors |= 1 << k
		}
	}
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
