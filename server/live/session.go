package live

import (
	"context"
	"errors"
	"math"
	"sync/atomic"
	"time"

	"leeway/server/store"
	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
)

const (
	// frameEvery is the time between frames: more often than this nobody sees.
	frameEvery = time.Second / 30
	// unseenEvery is how often a run that nobody watches is brought up to date.
	unseenEvery = 250 * time.Millisecond
	// A session steps for at most sliceTime, or sliceTicks, before it looks at
	// what its viewers want: half a frame, so that a drag stays smooth at any speed.
	sliceTime  = 15 * time.Millisecond
	sliceTicks = 20_000
	// A run that has fallen this far behind its clock goes on from where it is: to
	// catch up, it would have to go faster than it just could not.
	letGo = 250 * time.Millisecond
	// While a run goes on, its tick is saved this often: what a crash can cost.
	saveEvery = 2 * time.Second
	// A change is saved after this, together with those that follow at once.
	saveSoon = 300 * time.Millisecond
)

var errEnded = errors.New("the session has ended")

// Session is one run that is stepped in real time. Everything below "owned by the
// loop" is touched by its goroutine alone; others use do and post.
type Session struct {
	id    string
	lab   *Lab
	calls chan func()
	done  chan struct{} // closed when the loop has ended and all is saved

	aloneSince atomic.Int64 // Unix ns; 0 while it has viewers

	// Owned by the loop from here on.
	sc     *scenario.Scenario // as the run began, with the edits it began with
	byHand bool               // somebody has changed something since the run began
	tape   *shadow.Tape
	dt     float64
	onMap  *floor.Map // of floor; kept while the floor stays as it is
	floor  floor.Config
	pieces int     // of the floor's solids
	tapes  uint64  // how many there have been
	moved  []int   // solids that an edit of the tape moves, in order
	making *making // the tape that is to come in place of this one, or nil
	sought int64   // where somebody wants to look at the tape; −1: where it is looked at

	shadows   bool // wanted
	playing   bool
	resume    bool // it was playing when the run ended: goes on when the run does
	speed     float64
	clock     time.Time // at which the run was
	clockTick int64     // at this tick

	viewers map[*viewer]struct{}
	retire  bool // end as soon as nobody watches
	broken  bool // not where it ought to be: must not be saved

	told      told // what frames have carried of the tape
	era       int  // see Session.eraNow; that of the last hello to all
	eraAt     time.Time
	changed   bool // there is something for a frame to say
	anew      bool // every viewer needs a hello
	nextFrame time.Time
	shown     frame // the memory of the last frame

	grips map[thing]*grip
	way   measured

	saveAt   time.Time // zero: all is saved
	textKept bool      // the store has the text as it is
	text     []byte    // canonical, with the edits; nil: not made yet
}

// newSession returns a session that stands at tick 0 and has no loop yet.
func newSession(l *Lab, sc *scenario.Scenario, kept store.Session) (*Session, error) {
	s := &Session{
		id: kept.ID, lab: l, calls: make(chan func()), done: make(chan struct{}),
		byHand: kept.ByHand, playing: kept.Playing, speed: kept.Speed, shadows: kept.Shadows, sought: -1,
		viewers: map[*viewer]struct{}{},
		// A session that was loaded has its text in the store.
		textKept: kept.Scenario != nil,
	}
	s.aloneSince.Store(time.Now().UnixNano())
	if err := s.begin(sc); err != nil {
		return nil, err
	}
	s.saveBy(time.Now()) // one that was loaded is not old any more
	return s, nil
}

// begin puts the run of a valid scenario in place of the present one, at tick 0.
// On an error everything stays as it was.
func (s *Session) begin(sc *scenario.Scenario) error {
	l, err := s.lay(sc, s.shadows)
	if err != nil {
		return err
	}
	s.resume = false
	s.grips = map[thing]*grip{}
	s.install(l)
	return nil
}

// set returns the models where the tape is looked at.
func (s *Session) set() *shadow.Set { return s.tape.Now() }

// robot returns the robot where the tape is looked at.
func (s *Session) robot() *sim.Run { return s.set().Run(shadow.Robot) }

// tick returns where the tape is looked at.
func (s *Session) tick() int64 { return s.set().Tick() }

// do calls f in the session's goroutine and waits until it has returned. The
// error is errEnded, or that of ctx; then f has not been called.
func (s *Session) do(ctx context.Context, f func()) error {
	called := make(chan struct{})
	if err := s.post(ctx, func() { f(); close(called) }); err != nil {
		return err
	}
	<-called
	return nil
}

// post has f called in the session's goroutine.
func (s *Session) post(ctx context.Context, f func()) error {
	select {
	case s.calls <- f: // not buffered: what is handed over is called
		return nil
	case <-s.done:
		return errEnded
	case <-ctx.Done():
		return ctx.Err()
	}
}

// loop runs the session from where it was kept, until ctx ends or nobody has
// watched for long.
func (s *Session) loop(ctx context.Context, kept store.Session) {
	s.stepTo(ctx, kept)
	s.setClock(time.Now())
	timer := time.NewTimer(time.Hour)
	defer timer.Stop()
	for ctx.Err() == nil && !s.deserted(time.Now()) {
		now := time.Now()
		s.makeOn(now)
		s.advance(now)
		s.seekOn(now)
		s.measure(now)
		s.tell(now)
		s.save(now)

		var ring <-chan time.Time
		if wake, ok := s.nextWake(now); ok {
			timer.Reset(wake.Sub(now))
			ring = timer.C
		}
		select {
		case f := <-s.calls:
			f()
		case <-ring:
		case <-ctx.Done():
		}
		timer.Stop()
	}
	s.end()
}

// end saves the session, lets its viewers go, and makes room for it to be
// loaded again.
func (s *Session) end() {
	for v := range s.viewers {
		v.leave()
	}
	s.goWhereSought()
	if !s.saveAt.IsZero() {
		s.save(s.saveAt)
	}
	s.lab.saver.flush()
	s.lab.forget(s)
	close(s.done)
}

// deserted reports whether nobody has watched for so long that the session ends.
func (s *Session) deserted(now time.Time) bool {
	if len(s.viewers) > 0 {
		s.retire = false
		return false
	}
	return s.retire || now.Sub(time.Unix(0, s.aloneSince.Load())) >= s.lab.opt.Idle
}

// nextWake returns when there is something to do again, if ever. A paused
// session that nobody watches sleeps until it ends.
func (s *Session) nextWake(now time.Time) (wake time.Time, ok bool) {
	sooner := func(t time.Time) {
		if !ok || t.Before(wake) {
			wake, ok = t, true
		}
	}
	if !s.saveAt.IsZero() {
		sooner(s.saveAt)
	}
	if len(s.viewers) == 0 {
		sooner(time.Unix(0, s.aloneSince.Load()).Add(s.lab.opt.Idle))
	} else if s.changed || s.anew {
		sooner(s.nextFrame)
	}
	if !s.way.again.IsZero() {
		sooner(s.way.again)
	}
	switch {
	case s.making != nil:
		sooner(now)
	case !s.playing:
	case s.speed == 0 || s.target(now) > s.tick():
		sooner(now)
	case len(s.viewers) == 0:
		sooner(now.Add(unseenEvery))
	default:
		t := s.tickDue()
		if s.nextFrame.After(t) {
			t = s.nextFrame
		}
		sooner(t)
	}
	return wake, ok
}

// setClock makes now the time at which the run is where it is.
func (s *Session) setClock(now time.Time) { s.clock, s.clockTick = now, s.tick() }

// target returns the tick at which a playing run with a speed ought to be.
func (s *Session) target(now time.Time) int64 {
	return s.clockTick + int64(now.Sub(s.clock).Seconds()*s.speed/s.dt)
}

// tickDue returns when a playing run with a speed ought to step next: a moment
// later than that, so that no rounding can have target disagree.
func (s *Session) tickDue() time.Time {
	ticks := float64(s.tick() + 1 - s.clockTick)
	return s.clock.Add(time.Duration(math.Ceil(ticks*s.dt/s.speed*1e9)) + time.Microsecond)
}

// advance steps a playing run up to where it ought to be, or for one slice. The
// target is always reckoned from the same moment, so that no rounding adds up.
func (s *Session) advance(now time.Time) {
	if !s.playing {
		return
	}
	if s.making != nil { // the clock waits for the other tape
		s.setClock(now)
		return
	}
	s.pullGrips()
	limit := s.tick() + sliceTicks
	target := limit
	if s.speed > 0 {
		target = s.target(now)
		limit = min(limit, target)
	}
	if !s.tape.AtHead() && s.tick() < limit {
		s.lookAt(limit)
	}
	for n := 1; s.tick() < limit; n++ {
		if !s.step() {
			s.playing, s.resume = false, true
			s.changed = true
			s.saveBy(now)
			return
		}
		if n%64 == 0 && time.Since(now) > sliceTime {
			break
		}
	}
	if s.speed > 0 {
		behind := float64(target-s.tick()) * s.dt / s.speed
		if behind > letGo.Seconds() {
			s.setClock(now)
		}
	}
	s.saveBy(now.Add(saveEvery))
}

// step goes on by one tick. It returns false when all models have ended for good:
// then nothing has changed.
func (s *Session) step() bool {
	if s.tape.Done() {
		return false
	}
	s.tape.Step()
	s.changed = true
	return true
}

// stepTo computes the tape of a session that was kept, and looks at where it was
// looked at.
func (s *Session) stepTo(ctx context.Context, kept store.Session) {
	length := max(kept.Length, kept.Tick)
	for n := 1; s.tape.Length() < length; n++ {
		if !s.step() {
			break
		}
		if n%4096 == 0 && ctx.Err() != nil {
			s.broken = true
			return
		}
	}
	s.lookAt(kept.Tick)
	s.stopAtEnd()
}

// stopAtEnd stops a run that has nowhere to go on to.
func (s *Session) stopAtEnd() {
	if s.tape.Done() {
		s.resume = s.resume || s.playing
		s.playing = false
	}
}

// saveBy sees to it that the session is saved at the latest at t.
func (s *Session) saveBy(t time.Time) {
	if s.saveAt.IsZero() || t.Before(s.saveAt) {
		s.saveAt = t
	}
}

// save hands the session to the saver when that is due.
func (s *Session) save(now time.Time) {
	if s.saveAt.IsZero() || s.saveAt.After(now) || s.broken {
		return
	}
	s.saveAt = time.Time{}
	kept := store.Session{
		ID: s.id, Tick: s.tick(), Length: s.tape.Length(), Shadows: s.wantsShadows(), Playing: s.playing || s.resume, Speed: s.speed, ByHand: s.byHand, Updated: now,
	}
	if !s.textKept {
		kept.Scenario = s.canonical()
		s.textKept = true
	}
	s.lab.saver.keep(kept)
}
