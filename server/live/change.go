package live

import (
	"errors"
	"fmt"
	"strings"
	"time"

	"leeway/sim"
	"leeway/sim/geom"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
)

const fullOfEdits = "this run holds as many changes as a file may; restart it, and they become part of the floor"

// receive does what a viewer wants.
func (s *Session) receive(v *viewer, m *message) {
	now := time.Now()
	if m.Kind == "seek" {
		s.seek(*m.Tick)
		return
	}
	s.goWhereSought()
	if s.speed > 0 {
		s.advance(now) // the change is made in the run where it was made on the clock
	}
	switch m.Kind {
	case "play":
		s.play(now)
	case "pause":
		s.pause()
	case "tick":
		s.forth(v)
	case "back":
		s.back(v)
	case "shadows":
		s.setShadows(v, *m.On)
	case "restart":
		s.restart(v)
	case "speed":
		s.setSpeed(v, m.number, now)
	case "drag":
		s.receiveDrag(v, m)
	case "number":
		s.setNumber(v, m.Path, m.number)
	case "choice":
		s.change(v, m.Path, func(sc *scenario.Scenario) error { return sc.SetChoice(m.Path, m.choice) })
	case "resync":
		v.wantsHello, s.changed = true, true
	}
}

// play sets the run going; one that has ended starts again.
func (s *Session) play(now time.Time) {
	if s.playing {
		return
	}
	if s.tape.Done() {
		if err := s.begin(s.again()); err != nil {
			s.lab.opt.Log.Error("a run cannot start again", "session", s.id, "error", err)
			return
		}
		s.byHand = false
		s.textKept, s.text = false, nil
	}
	s.playing, s.resume = true, false
	s.setClock(now)
	s.changed = true
	s.saveBy(now)
}

func (s *Session) pause() {
	s.playing, s.resume = false, false
	s.changed = true
	s.saveBy(time.Now())
}

// The speeds: times real time.
const slowest, fastest = 0.25, 64

func (s *Session) setSpeed(v *viewer, x float64, now time.Time) {
	if x != 0 && !(x >= slowest && x <= fastest) {
		v.putNote(problem("speed", fmt.Sprintf("the speed is between %g and %g times real time, or 0 for as fast as it goes", slowest, float64(fastest))))
		return
	}
	s.speed = x
	s.setClock(now)
	s.changed = true
	s.saveBy(now.Add(saveSoon))
}

// restart puts the run back to tick 0. What has been changed by hand becomes part
// of the floor; if nothing was, the file's own edits come again at their times.
func (s *Session) restart(v *viewer) {
	if s.beginOr(v, "session", s.again()) {
		s.byHand = false
	}
}

// again returns the scenario of the next run.
func (s *Session) again() *scenario.Scenario {
	if !s.byHand {
		return s.sc
	}
	return s.standing()
}

// standing returns the scenario as it stands where the tape is looked at: what has
// been changed so far is part of it, and what the file still has in store remains to
// come. In the past, what came later is left out: another run begins there. A robot
// that was carried starts from the start again.
func (s *Session) standing() *scenario.Scenario {
	all := s.robot().Edits()
	past := s.editsSoFar()
	sc := s.sc.WithEdits(all[:past]).Folded()
	if past < len(all) && s.tape.AtHead() {
		sc.Edits = s.sc.WithEdits(all[past:]).Edits
	}
	return sc
}

// editsSoFar returns how many edits there are up to where the tape is looked at.
func (s *Session) editsSoFar() int {
	all := s.robot().Edits()
	n := len(all)
	for n > 0 && all[n-1].Tick > s.tick() {
		n--
	}
	return n
}

// withEdits returns the scenario as the run began, with all edits of the tape: with
// it, the run is the same again.
func (s *Session) withEdits() *scenario.Scenario { return s.sc.WithEdits(s.robot().Edits()) }

// canonical returns the text of withEdits.
func (s *Session) canonical() []byte {
	if s.text == nil {
		s.text = s.withEdits().Print()
	}
	return s.text
}

// fullOfEdits reports whether the tape can take no further edit. One in the past
// has those after it forgotten.
func (s *Session) fullOfEdits() bool {
	n := len(s.robot().Edits())
	if !s.tape.AtHead() {
		n = s.editsSoFar()
	}
	return n >= scenario.MaxEdits
}

// edit enters a change into the run, where the tape is looked at.
func (s *Session) edit(e sim.Edit) error {
	if s.fullOfEdits() {
		return errors.New(fullOfEdits)
	}
	told := s.era == s.eraNow()
	cut, err := s.tape.Edit(e)
	if err != nil {
		return err
	}
	if told { // whoever makes this change sees to it that it is told
		s.era = s.eraNow()
	}
	if cut {
		s.note(notice(fmt.Sprintf("changed at %s: what had come after is another future now", shadow.Clock(float64(s.tick())*s.dt))))
		s.anew = true
	}
	if cut || e.Kind == sim.MoveSolid {
		s.noteMoved()
	}
	s.edited()
	if s.resume && !s.tape.Done() {
		s.playing, s.resume = true, false
		s.setClock(time.Now())
	}
	if s.making != nil { // of another run than this has just become
		return s.remake(s.withEdits(), s.making.shadows)
	}
	return nil
}

// edited notes that the scenario is another than before.
func (s *Session) edited() {
	s.byHand = true
	s.textKept, s.text = false, nil
	s.changed = true
	s.saveBy(time.Now().Add(saveSoon))
}

// beginOr begins the run of another scenario. When it is none that can be run, it
// tells the viewer why and returns false, and everything stays as it was. A run
// that was playing, or had played to its end, plays.
func (s *Session) beginOr(v *viewer, about string, sc *scenario.Scenario) bool {
	playing := s.playing || s.resume
	if problems := sc.Validate(); len(problems) > 0 {
		s.refuse(v, about, problems)
		return false
	}
	if err := s.begin(sc); err != nil {
		s.refuse(v, about, err)
		return false
	}
	s.playing = playing
	s.textKept, s.text = false, nil
	s.saveBy(time.Now())
	return true
}

// refuse tells a viewer why its change was not made, and what is the case instead.
func (s *Session) refuse(v *viewer, about string, why error) {
	text := why.Error()
	var problems scenario.Problems
	if errors.As(why, &problems) && len(problems) > 0 {
		text = problems[0].Text
	}
	if f, ok := scenario.FieldAt(about); ok {
		text = strings.ReplaceAll(text, f.Path, "the "+f.Label) // viewers see the label, not the path
	}
	v.putNote(problem(about, text))
	s.putBack(v)
}

// putBack tells a viewer everything anew, soon, so that what it shows by its own
// doing is shown as it is.
func (s *Session) putBack(v *viewer) {
	v.wantsHello, v.helloAt = true, time.Time{}
	s.changed = true
}

// setNumber changes a number: in the running robot where that can be done.
func (s *Session) setNumber(v *viewer, path string, x float64) {
	f, ok := scenario.FieldAt(path)
	set := func(sc *scenario.Scenario) error { return sc.SetNumber(path, x) }
	switch {
	case ok && f.Asked:
		s.ask(v, path, set)
	case ok && f.Live:
		sc := s.standing()
		if err := set(sc); err != nil {
			s.refuse(v, path, err)
			return
		}
		if err := s.edit(sim.Edit{Kind: sim.SetNumber, Number: f.Number, Value: x}); err != nil {
			s.refuse(v, path, err)
			return
		}
		s.anew = true
	default:
		s.change(v, path, set)
	}
}

// ask changes what is asked. That changes nothing about the run but when it ends:
// it is run anew with its edits, as far as it had been.
func (s *Session) ask(v *viewer, path string, set func(*scenario.Scenario) error) {
	sc := s.withEdits()
	if err := set(sc); err != nil {
		s.refuse(v, path, err)
		return
	}
	if problems := sc.Validate(); len(problems) > 0 {
		s.refuse(v, path, problems)
		return
	}
	if err := s.remake(sc, s.wantsShadows()); err != nil {
		s.refuse(v, path, err)
	}
}

// change makes a change that no running robot can take: the run begins again, on
// the floor as it stands.
func (s *Session) change(v *viewer, path string, set func(*scenario.Scenario) error) {
	before := s.standing()
	sc := before.Clone()
	if err := set(sc); err != nil {
		s.refuse(v, path, err)
		return
	}
	if string(sc.Print()) == string(before.Print()) {
		s.putBack(v)
		return
	}
	if !s.beginOr(v, path, sc) {
		return
	}
	s.byHand = false
	if f, ok := scenario.FieldAt(path); ok {
		s.note(notice(fmt.Sprintf("another %s takes effect from the start: the run begins again", f.Label)))
	}
}

// moveStart puts the start elsewhere: the run begins again there.
func (s *Session) moveStart(v *viewer, at geom.Vec) {
	sc := s.standing()
	if sc.Start.X == at.X && sc.Start.Y == at.Y {
		return
	}
	if !s.onFloor(at, at) {
		s.refuse(v, "drag", errors.New("the start must be on the floor"))
		return
	}
	sc.Start.X, sc.Start.Y = at.X, at.Y
	if !s.beginOr(v, "drag", sc) {
		return
	}
	s.byHand = false
	s.note(notice("the run begins again from the new start"))
}

// note tells all viewers.
func (s *Session) note(b []byte) {
	for v := range s.viewers {
		v.putNote(b)
	}
}
