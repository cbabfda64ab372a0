package live

import "time"

// forth goes on by one tick.
func (s *Session) forth(v *viewer) {
	s.pause()
	if !s.tape.AtHead() {
		s.lookAt(s.tick() + 1)
	} else if !s.step() {
		v.putNote(notice("the run has ended; restart it to see it again"))
	}
}

// back goes back by one tick.
func (s *Session) back(v *viewer) {
	s.pause()
	if s.tick() == 0 {
		v.putNote(notice("this is where the run starts"))
		return
	}
	s.lookAt(s.tick() - 1)
}

// lookAt looks at a tick of the tape, or at its end.
func (s *Session) lookAt(tick int64) {
	s.tape.LookAt(tick)
	s.changed = true
	for _, g := range s.grips { // what is in a hand may move at once
		g.last = longAgo
	}
}

// seek has the tape looked at elsewhere, as soon as it is time for a frame: of
// what a hand that draws along the tape asks for, only the newest is worked out.
func (s *Session) seek(tick int64) {
	s.playing, s.resume = false, false
	s.sought = min(max(tick, 0), s.tape.Length())
	s.changed = true
	s.saveBy(time.Now().Add(saveSoon))
}

// seekOn goes where somebody wants to look when it is time for a frame, or nobody
// waits for one.
func (s *Session) seekOn(now time.Time) {
	if len(s.viewers) == 0 || !now.Before(s.nextFrame) {
		s.goWhereSought()
	}
}

// goWhereSought looks at the tape where it was last sought.
func (s *Session) goWhereSought() {
	if s.sought < 0 {
		return
	}
	s.lookAt(s.sought)
	s.sought = -1
}
