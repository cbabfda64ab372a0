package floor

import "leeway/sim/geom"

// Map is the standing part of a floor with an index over it. It never changes
// once built and may be shared by any number of runs and goroutines.
type Map struct {
	solids []Solid
	movers []timetable

	// The primitives of all solids, in the order of the solids. firstSeg[i] and
	// firstDisc[i] are where those of solid i begin, with one more entry at the end.
	segs      []geom.Segment
	segOwner  []int32
	firstSeg  []int32
	discs     []geom.Disc
	discOwner []int32
	firstDisc []int32

	grid  grid
	sight sight
}

// NewMap checks the floor and builds the index. reach is the range (m) within
// which rays and distances will mostly be asked; it tunes the index, never the answers.
// The error is [Faults], all of them at once.
func NewMap(c Config, reach float64) (*Map, error) {
	if err := check(c); err != nil {
		return nil, err
	}
	m := &Map{solids: make([]Solid, len(c.Solids)), movers: make([]timetable, len(c.Movers))}
	for i, s := range c.Solids {
		s.Points = append([]geom.Vec(nil), s.Points...)
		m.solids[i] = s
		m.firstSeg = append(m.firstSeg, int32(len(m.segs)))
		m.firstDisc = append(m.firstDisc, int32(len(m.discs)))
		if s.Kind == Disc {
			m.discs = append(m.discs, geom.Disc{Center: s.Points[0], Radius: s.Radius})
			m.discOwner = append(m.discOwner, int32(i))
		}
		for k := range edgeCount(s.Kind, len(s.Points)) {
			m.segs = append(m.segs, geom.Polygon(s.Points).Edge(k))
			m.segOwner = append(m.segOwner, int32(i))
		}
	}
	m.firstSeg = append(m.firstSeg, int32(len(m.segs)))
	m.firstDisc = append(m.firstDisc, int32(len(m.discs)))
	for i, v := range c.Movers {
		m.movers[i] = newTimetable(v)
	}
	m.grid = newGrid(m)
	m.sight = newSight(m, reach)
	return m, nil
}

// edgeCount returns how many segments a solid of n points has.
func edgeCount(k Kind, n int) int {
	switch k {
	case Wall:
		return n - 1
	case Polygon:
		return n
	}
	return 0
}

// Answers that tie go to the lower owner: solids count from 0 in their order, movers go on after them.
func (m *Map) ref(owner int32) Ref {
	if n := len(m.solids); int(owner) >= n {
		return Ref{Mover: true, Index: int(owner) - n}
	}
	return Ref{Index: int(owner)}
}
