package live

import (
	"context"
	"errors"
	"log/slog"
	"sync"
	"time"

	"leeway/server/store"
)

// saver writes sessions to the keeper in a goroutine of its own: a commit waits
// for the disk, and a session that waited with it would show a jerk. A session
// that is handed in again before it was written is written once.
type saver struct {
	keeper Keeper
	log    *slog.Logger
	lost   func(id string) // called when the keeper has forgotten a session
	wake   chan struct{}   // of capacity 1
	done   chan struct{}

	mu      sync.Mutex
	closed  bool
	waiting map[string]store.Session
	order   []string // of the keys of waiting, oldest first
	writing sync.Mutex
}

// A write that takes longer has hung.
const saveTimeout = 30 * time.Second

func newSaver(k Keeper, log *slog.Logger, lost func(id string)) *saver {
	v := &saver{keeper: k, log: log, lost: lost, wake: make(chan struct{}, 1), done: make(chan struct{}), waiting: map[string]store.Session{}}
	go v.loop()
	return v
}

// keep hands in a session and returns at once.
func (v *saver) keep(s store.Session) {
	v.mu.Lock()
	if before, ok := v.waiting[s.ID]; !ok {
		v.order = append(v.order, s.ID)
	} else if s.Scenario == nil {
		s.Scenario = before.Scenario
	}
	v.waiting[s.ID] = s
	v.mu.Unlock()
	select {
	case v.wake <- struct{}{}:
	default:
	}
}

func (v *saver) loop() {
	defer close(v.done)
	for range v.wake {
		v.flush()
		v.mu.Lock()
		closed := v.closed
		v.mu.Unlock()
		if closed {
			v.flush()
			return
		}
	}
}

// flush writes all that is waiting, and returns when it is written.
func (v *saver) flush() {
	v.writing.Lock()
	defer v.writing.Unlock()
	var failed []store.Session
	for {
		v.mu.Lock()
		if len(v.order) == 0 {
			for _, s := range failed {
				v.putBack(s)
			}
			v.mu.Unlock()
			return
		}
		id := v.order[0]
		v.order = v.order[1:]
		s := v.waiting[id]
		delete(v.waiting, id)
		v.mu.Unlock()

		ctx, cancel := context.WithTimeout(context.Background(), saveTimeout)
		err := v.keeper.Save(ctx, s)
		cancel()
		if errors.Is(err, store.ErrNotFound) {
			v.lost(id)
		} else if err != nil {
			v.log.Error("a session was not saved", "session", s.ID, "error", err)
			failed = append(failed, s)
		}
	}
}

// putBack keeps what could not be written for the next flush; v.mu is held.
func (v *saver) putBack(s store.Session) {
	newer, ok := v.waiting[s.ID]
	if !ok {
		v.order = append(v.order, s.ID)
		v.waiting[s.ID] = s
	} else if newer.Scenario == nil {
		newer.Scenario = s.Scenario
		v.waiting[s.ID] = newer
	}
}

// close writes all that is waiting and ends the goroutine.
func (v *saver) close() {
	v.mu.Lock()
	v.closed = true
	v.mu.Unlock()
	select {
	case v.wake <- struct{}{}:
	default:
	}
	<-v.done
}
