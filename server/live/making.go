package live

import (
	"reflect"
	"slices"
	"time"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
)

// laid is a tape of a scenario, and what a session keeps beside it.
type laid struct {
	sc      *scenario.Scenario
	shadows bool
	tape    *shadow.Tape
	dt      float64
	onMap   *floor.Map
	floor   floor.Config
}

// lay returns a tape of a valid scenario at tick 0.
func (s *Session) lay(sc *scenario.Scenario, shadows bool) (*laid, error) {
	c, err := sc.Config()
	if err != nil {
		return nil, err
	}
	m := s.onMap
	if m == nil || !reflect.DeepEqual(s.floor, c.Floor) {
		if m, err = floor.NewMap(c.Floor, c.Ring.Mount+c.Ring.Max); err != nil {
			return nil, err
		}
	}
	tape, err := shadow.NewTape(m, c, shadows)
	if err != nil {
		return nil, err
	}
	return &laid{sc, shadows, tape, c.Tick, m, c.Floor}, nil
}

// install puts a tape in place of the present one.
func (s *Session) install(l *laid) {
	s.sc, s.shadows, s.tape, s.dt, s.onMap, s.floor = l.sc, l.shadows, l.tape, l.dt, l.onMap, l.floor
	s.making, s.sought = nil, -1
	s.tapes++
	s.pieces = piecesOf(l.floor.Solids)
	s.noteMoved()
	s.anew = true
	s.setClock(time.Now())
}

// noteMoved finds out which solids the edits of the tape move.
func (s *Session) noteMoved() {
	s.moved = s.moved[:0]
	for _, e := range s.robot().Edits() {
		if e.Kind == sim.MoveSolid {
			s.moved = append(s.moved, e.Index)
		}
	}
	slices.Sort(s.moved)
	s.moved = slices.Compact(s.moved)
}

// making is a tape that is being computed: of the same run, but with other models,
// or with something else asked. Until it is as long as the present one, that one
// is shown, and does not go on.
type making struct {
	*laid
	length int64 // of the present one
}

// slow is how many slices a tape may take that people are not told of.
const slow = 20

// remake begins to compute the present run anew. What takes no longer than a slice
// is done at once.
func (s *Session) remake(sc *scenario.Scenario, shadows bool) error {
	l, err := s.lay(sc, shadows)
	if err != nil {
		return err
	}
	s.sc = sc // it differs from the present one in what is asked, no more
	s.making = &making{l, s.tape.Length()}
	s.makeOn(time.Now())
	s.saySlow()
	return nil
}

// saySlow tells everybody when the tape in the making takes long: its first slice has
// been computed.
func (s *Session) saySlow() {
	if m := s.making; m != nil && m.length > slow*m.tape.Length() {
		s.note(notice("this run is computed anew from its start; that takes a moment"))
	}
}

// makeOn goes on with the tape in the making for a slice. Once it is as long as the
// present one, or cannot become so, it takes its place.
func (s *Session) makeOn(now time.Time) {
	m := s.making
	if m == nil {
		return
	}
	for n := 1; m.tape.Length() < m.length && !m.tape.Done(); n++ {
		m.tape.Step()
		if n%64 == 0 && (n >= sliceTicks || time.Since(now) > sliceTime) {
			return
		}
	}
	s.goWhereSought()
	tick := s.tick()
	s.install(m.laid)
	s.lookAt(tick)
	s.setClock(time.Now())
	s.playing, s.resume = s.playing || s.resume, false
	s.stopAtEnd()
	s.textKept, s.text = false, nil
	s.saveBy(time.Now())
}

// wantsShadows reports whether shadows are computed, or will be.
func (s *Session) wantsShadows() bool {
	if s.making != nil {
		return s.making.shadows
	}
	return s.shadows
}

// setShadows has the shadows computed, from the start of the tape on, or no longer.
func (s *Session) setShadows(v *viewer, on bool) {
	switch {
	case on == s.wantsShadows():
	case on || s.making != nil:
		if err := s.remake(s.withEdits(), on); err != nil {
			s.refuse(v, "shadows", err)
		}
	default:
		s.tape.DropShadows()
		s.shadows = false
		s.anew = true
	}
	s.saveBy(time.Now())
}
