//lint:file-ignore SA1019 nhooyr.io/websocket is marked deprecated for having moved to another name, not for a fault.

package live

import (
	"context"
	"errors"
	"net/http"
	"sync"
	"time"

	"golang.org/x/time/rate"
	"nhooyr.io/websocket"
)

const (
	// maxMessage is the longest message a viewer may send, bytes: a drag has
	// about a hundred.
	maxMessage = 4 << 10
	// A message that cannot be written in this time finds nobody at the other end.
	writeTimeout = 10 * time.Second
	// The buffers between swallow megabytes before a write blocks, so that a
	// write's timeout alone does not find a dead connection: a ping does.
	pingEvery   = 20 * time.Second
	pingTimeout = 10 * time.Second
	// A viewer's messages are read at this rate at most, and wait beyond it.
	messageRate, messageBurst = 200, 400
	// maxNotes is how many problems and notices wait for a slow viewer.
	maxNotes = 32
)

// viewer is what a session knows of one connection: an outbox. A hello makes
// everything before it void, and a frame the frame before it, so there is room for
// one of each.
type viewer struct {
	wake chan struct{} // of capacity 1

	mu           sync.Mutex
	hello, frame []byte
	notes        [][]byte
	left         bool // the session is done with it

	// Owned by the session's loop.
	wantsHello bool
	helloAt    time.Time
}

func newViewer() *viewer { return &viewer{wake: make(chan struct{}, 1)} }

func (v *viewer) change(f func()) {
	v.mu.Lock()
	f()
	v.mu.Unlock()
	select {
	case v.wake <- struct{}{}:
	default:
	}
}

func (v *viewer) putHello(b []byte) { v.change(func() { v.hello, v.frame = b, nil }) }
func (v *viewer) putFrame(b []byte) { v.change(func() { v.frame = b }) }
func (v *viewer) putNote(b []byte) {
	v.change(func() {
		if len(v.notes) == maxNotes {
			v.notes = v.notes[1:]
		}
		v.notes = append(v.notes, b)
	})
}

// leave has the connection closed once the outbox is empty.
func (v *viewer) leave() { v.change(func() { v.left = true }) }

// next takes the next message out of the outbox; nil: there is none.
func (v *viewer) next() (b []byte, left bool) {
	v.mu.Lock()
	defer v.mu.Unlock()
	switch {
	case v.hello != nil:
		b, v.hello = v.hello, nil
	case len(v.notes) > 0:
		b, v.notes = v.notes[0], v.notes[1:]
	case v.frame != nil:
		b, v.frame = v.frame, nil
	}
	return b, v.left
}

// Watch serves the websocket of one viewer until it leaves. It answers the
// request in every case. The caller has checked that the request's host is one of
// its own names: here only its origin is compared with that host.
func (l *Lab) Watch(w http.ResponseWriter, r *http.Request, id string) {
	conn, err := websocket.Accept(w, r, &websocket.AcceptOptions{CompressionMode: websocket.CompressionDisabled})
	if err != nil {
		return // Accept has answered
	}
	defer conn.CloseNow()
	conn.SetReadLimit(maxMessage)
	ctx, cancel := context.WithCancel(r.Context())
	defer cancel()
	if !l.enter() {
		l.turnAway(ctx, conn, ErrClosed)
		return
	}
	defer l.conns.Done()

	v := newViewer()
	s, err := l.join(ctx, id, v)
	if err != nil {
		l.turnAway(ctx, conn, err)
		return
	}
	defer s.post(context.WithoutCancel(ctx), func() { s.leaves(v) })

	go func() {
		defer cancel()
		v.write(ctx, conn)
	}()
	go func() {
		defer cancel()
		ping(ctx, conn)
	}()
	read(ctx, conn, s, v)
}

// enter counts a connection, unless the lab is closed.
func (l *Lab) enter() bool {
	l.mu.Lock()
	defer l.mu.Unlock()
	if !l.closed {
		l.conns.Add(1)
	}
	return !l.closed
}

var errCrowded = errors.New("as many people watch this session as this server allows")

// join enters a viewer into the session, which is loaded if need be.
func (l *Lab) join(ctx context.Context, id string, v *viewer) (joined *Session, err error) {
	full := false
	err = l.ask(ctx, id, func(s *Session) {
		if full = len(s.viewers) >= l.opt.Viewers; !full {
			s.joins(v)
			joined = s
		}
	})
	if err == nil && full {
		err = errCrowded
	}
	return joined, err
}

// statusUnknown is the close code that says that there is no such session.
const statusUnknown = websocket.StatusCode(4404)

// turnAway says why there is nothing to watch. The websocket is open already, for
// a browser does not tell a page why one could not be opened.
func (l *Lab) turnAway(ctx context.Context, conn *websocket.Conn, why error) {
	text, code := "Something went wrong on the server; its log says more.", websocket.StatusInternalError
	switch {
	case errors.Is(why, ErrClosed):
		conn.Close(websocket.StatusGoingAway, "")
		return
	case errors.Is(why, ErrNotFound):
		text, code = why.Error(), statusUnknown
	case errors.Is(why, ErrFull), errors.Is(why, errCrowded):
		text, code = why.Error(), websocket.StatusTryAgainLater
	default:
		l.opt.Log.Error("a session cannot be watched", "error", why)
	}
	ctx, cancel := context.WithTimeout(ctx, writeTimeout)
	defer cancel()
	if conn.Write(ctx, websocket.MessageText, ended(text)) == nil {
		conn.Close(code, "")
	}
}

// write sends what comes into the outbox.
func (v *viewer) write(ctx context.Context, conn *websocket.Conn) {
	for {
		b, left := v.next()
		if b == nil {
			if left {
				conn.Close(websocket.StatusGoingAway, "")
				return
			}
			select {
			case <-v.wake:
				continue
			case <-ctx.Done():
				return
			}
		}
		wctx, cancel := context.WithTimeout(ctx, writeTimeout)
		err := conn.Write(wctx, websocket.MessageText, b)
		cancel()
		if err != nil {
			return
		}
	}
}

func ping(ctx context.Context, conn *websocket.Conn) {
	t := time.NewTicker(pingEvery)
	defer t.Stop()
	for {
		select {
		case <-t.C:
		case <-ctx.Done():
			return
		}
		pctx, cancel := context.WithTimeout(ctx, pingTimeout)
		err := conn.Ping(pctx)
		cancel()
		if err != nil {
			return
		}
	}
}

// read takes messages until the connection ends.
func read(ctx context.Context, conn *websocket.Conn, s *Session, v *viewer) {
	limit := rate.NewLimiter(messageRate, messageBurst)
	for {
		kind, data, err := conn.Read(ctx)
		if err != nil {
			return
		}
		if limit.Wait(ctx) != nil {
			return
		}
		m, err := parseMessage(data)
		if kind != websocket.MessageText {
			err = errors.New("messages are JSON texts")
		}
		if err != nil {
			v.putNote(problem("message", err.Error()))
			continue
		}
		if s.post(ctx, func() { s.receive(v, m) }) != nil {
			return
		}
	}
}
