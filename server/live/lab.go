package live

import (
	"context"
	"crypto/rand"
	"encoding/base32"
	"errors"
	"fmt"
	"log/slog"
	"strings"
	"sync"
	"time"

	"leeway/server/brief"
	"leeway/server/store"
	"leeway/sim/scenario"
)

// Errors that callers tell apart.
var (
	ErrNotFound = errors.New("there is no such session, or it was too long ago")
	ErrFull     = errors.New("as many sessions are being watched as this server allows; close one or try again later")
	ErrClosed   = errors.New("the server is stopping")
)

// Keeper keeps sessions beyond the life of the server. *store.Store is one.
type Keeper interface {
	Save(ctx context.Context, s store.Session) error
	// Load returns store.ErrNotFound for a session it does not have.
	Load(ctx context.Context, id string) (store.Session, error)
}

// Options are the settings of a Lab. Zero values mean the defaults.
type Options struct {
	Keeper   Keeper        // required
	Log      *slog.Logger  // default: none
	Idle     time.Duration // a session without viewers ends after it; default 30 min
	Sessions int           // at most this many at once; default 200
	Viewers  int           // at most this many on one session; default 1,000
}

func (o *Options) defaults() {
	if o.Log == nil {
		o.Log = slog.New(slog.DiscardHandler)
	}
	if o.Idle == 0 {
		o.Idle = 30 * time.Minute
	}
	if o.Sessions == 0 {
		o.Sessions = 200
	}
	if o.Viewers == 0 {
		o.Viewers = 1000
	}
}

// Lab holds the sessions of a server. Its methods may be called by any goroutine.
type Lab struct {
	opt    Options
	ctx    context.Context // ends when the lab closes
	cancel context.CancelFunc
	loops  sync.WaitGroup // of sessions
	conns  sync.WaitGroup // of viewers
	saver  *saver

	measuring chan struct{} // of capacity 1: held by who works out a shortest way

	mu       sync.Mutex
	closed   bool
	sessions map[string]*Session
	loading  map[string]chan struct{} // closed when the load has ended
}

// New returns a lab without sessions. Close it.
func New(o Options) *Lab {
	o.defaults()
	ctx, cancel := context.WithCancel(context.Background())
	l := &Lab{
		opt: o, ctx: ctx, cancel: cancel,
		sessions: map[string]*Session{}, loading: map[string]chan struct{}{},
		measuring: make(chan struct{}, 1),
	}
	l.saver = newSaver(o.Keeper, o.Log, l.saveWhole)
	return l
}

// goodbye is how long a closing lab waits for its viewers to hear of it.
const goodbye = 2 * time.Second

// Close ends every session: each is saved, and its viewers' connections closed. It
// returns when all is saved, and has given the viewers a moment to hear of it.
func (l *Lab) Close() {
	l.mu.Lock()
	l.closed = true
	l.mu.Unlock()
	l.cancel()
	l.loops.Wait()
	l.saver.close()
	gone := make(chan struct{})
	go func() {
		l.conns.Wait()
		close(gone)
	}()
	select {
	case <-gone:
	case <-time.After(goodbye):
	}
}

// Opening says how a new session begins.
type Opening struct {
	Tick    int64 // stepped to at once
	Playing bool
}

// Create begins a session with a valid scenario, which becomes the lab's own, and
// returns its id. The error is ErrFull, ErrClosed, scenario.Problems, or internal.
func (l *Lab) Create(ctx context.Context, s *scenario.Scenario, o Opening) (id string, err error) {
	id, err = newID()
	if err != nil {
		return "", err
	}
	kept := store.Session{ID: id, Tick: o.Tick, Playing: o.Playing, Speed: 1, Shadows: true}
	if err := l.begin(ctx, s, kept); err != nil {
		return "", err
	}
	return id, nil
}

func newID() (string, error) {
	var b [10]byte
	if _, err := rand.Read(b[:]); err != nil {
		return "", fmt.Errorf("no random numbers: %w", err)
	}
	return strings.ToLower(base32.StdEncoding.EncodeToString(b[:])), nil
}

const idLength = 16

// looksLikeID keeps made-up ids from reaching the store.
func looksLikeID(id string) bool {
	if len(id) != idLength {
		return false
	}
	for i := range len(id) {
		if c := id[i]; !('a' <= c && c <= 'z' || '2' <= c && c <= '7') {
			return false
		}
	}
	return true
}

// begin starts the loop of a session.
func (l *Lab) begin(ctx context.Context, sc *scenario.Scenario, kept store.Session) error {
	var s *Session
	for {
		if err := l.makeRoom(ctx); err != nil {
			return err
		}
		if s == nil { // made only when there is room: a large floor takes its time
			made, err := newSession(l, sc, kept)
			if err != nil {
				return err
			}
			s = made
		}
		l.mu.Lock()
		switch {
		case l.closed:
			l.mu.Unlock()
			return ErrClosed
		case len(l.sessions) < l.opt.Sessions:
			l.sessions[kept.ID] = s
			l.loops.Go(func() { s.loop(l.ctx, kept) })
			l.mu.Unlock()
			return nil
		}
		l.mu.Unlock() // somebody else took the room
	}
}

// makeRoom ends the session that has been without viewers for longest when the
// lab is full.
func (l *Lab) makeRoom(ctx context.Context) error {
	for {
		l.mu.Lock()
		if l.closed {
			l.mu.Unlock()
			return ErrClosed
		}
		if len(l.sessions) < l.opt.Sessions {
			l.mu.Unlock()
			return nil
		}
		var oldest *Session
		var since int64
		for _, s := range l.sessions {
			if at := s.aloneSince.Load(); at != 0 && (oldest == nil || at < since) {
				oldest, since = s, at
			}
		}
		l.mu.Unlock()
		if oldest == nil {
			return ErrFull
		}
		if err := oldest.do(ctx, func() { oldest.retire = len(oldest.viewers) == 0 }); err == nil {
			select {
			case <-oldest.done:
			case <-ctx.Done():
				return ctx.Err()
			case <-time.After(time.Second): // a viewer came in between
			}
		} else if !errors.Is(err, errEnded) {
			return err
		}
	}
}

// session returns the running session of that id, loading it when it is not
// running. The error is ErrNotFound, ErrFull, ErrClosed, or internal.
func (l *Lab) session(ctx context.Context, id string) (*Session, error) {
	if !looksLikeID(id) {
		return nil, ErrNotFound
	}
	for {
		l.mu.Lock()
		if l.closed {
			l.mu.Unlock()
			return nil, ErrClosed
		}
		if s := l.sessions[id]; s != nil {
			l.mu.Unlock()
			return s, nil
		}
		other := l.loading[id]
		if other == nil {
			mine := make(chan struct{})
			l.loading[id] = mine
			l.mu.Unlock()
			err := l.load(ctx, id)
			l.mu.Lock()
			delete(l.loading, id)
			l.mu.Unlock()
			close(mine)
			if err != nil {
				return nil, err
			}
			continue
		}
		l.mu.Unlock()
		select {
		case <-other:
		case <-ctx.Done():
			return nil, ctx.Err()
		}
	}
}

func (l *Lab) load(ctx context.Context, id string) error {
	kept, err := l.opt.Keeper.Load(ctx, id)
	if errors.Is(err, store.ErrNotFound) {
		return ErrNotFound
	}
	if err != nil {
		return err
	}
	sc, err := scenario.Parse(kept.Scenario)
	if err != nil {
		return fmt.Errorf("session %s in the store cannot be read: %w", id, err)
	}
	return l.begin(ctx, sc, kept)
}

// saveWhole has a session saved with its text, which the keeper has forgotten:
// it was open for so long that it was taken for an old one.
func (l *Lab) saveWhole(id string) {
	l.mu.Lock()
	s := l.sessions[id]
	l.mu.Unlock()
	if s == nil {
		return
	}
	go s.post(l.ctx, func() {
		s.textKept = false
		s.saveBy(time.Now())
	})
}

// forget removes an ended session, so that whoever asks for it next loads it.
func (l *Lab) forget(s *Session) {
	l.mu.Lock()
	defer l.mu.Unlock()
	delete(l.sessions, s.id)
}

// ask calls f in the goroutine of the session and waits for it. A session that
// ends just then is loaded again.
func (l *Lab) ask(ctx context.Context, id string, f func(*Session)) error {
	for {
		s, err := l.session(ctx, id)
		if err != nil {
			return err
		}
		err = s.do(ctx, func() { s.goWhereSought(); f(s) })
		if !errors.Is(err, errEnded) {
			return err
		}
	}
}

// Scenario returns the scenario of a session with the edits so far; it is the
// caller's own.
func (l *Lab) Scenario(ctx context.Context, id string) (sc *scenario.Scenario, err error) {
	err = l.ask(ctx, id, func(s *Session) { sc = s.withEdits() })
	return sc, err
}

// Bench is what the page of a session says before its stream is connected.
type Bench struct {
	Name, Purpose string
	Brief         []brief.Part
	Hello         []byte // the first message of the stream
}

// Bench returns what the page of a session says.
func (l *Lab) Bench(ctx context.Context, id string) (b Bench, err error) {
	err = l.ask(ctx, id, func(s *Session) {
		b = Bench{Name: s.sc.Name, Purpose: s.sc.Purpose, Brief: brief.Of(s.standing()), Hello: s.hello()}
	})
	return b, err
}

// Running returns how many sessions are running.
func (l *Lab) Running() int {
	l.mu.Lock()
	defer l.mu.Unlock()
	return len(l.sessions)
}
