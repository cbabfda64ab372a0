package live

import (
	"context"
	"encoding/json"
	"sync"
	"testing"
	"time"

	"leeway/server/store"
	"leeway/sim"
	"leeway/sim/scenario"
)

// memory is a Keeper that can be copied as it is at a moment, which is what the
// disk holds after a crash.
type memory struct {
	mu    sync.Mutex
	saved map[string]store.Session
	saves int
	fail  error
}

func (m *memory) Save(_ context.Context, s store.Session) error {
	m.mu.Lock()
	defer m.mu.Unlock()
	if m.fail != nil {
		return m.fail
	}
	if s.Scenario == nil {
		before, ok := m.saved[s.ID]
		if !ok {
			return store.ErrNotFound
		}
		s.Scenario = before.Scenario
	}
	if m.saved == nil {
		m.saved = map[string]store.Session{}
	}
	m.saved[s.ID] = s
	m.saves++
	return nil
}

func (m *memory) Load(_ context.Context, id string) (store.Session, error) {
	m.mu.Lock()
	defer m.mu.Unlock()
	s, ok := m.saved[id]
	if !ok {
		return s, store.ErrNotFound
	}
	return s, nil
}

func (m *memory) crashCopy() *memory {
	m.mu.Lock()
	defer m.mu.Unlock()
	c := &memory{saved: map[string]store.Session{}}
	for k, v := range m.saved {
		c.saved[k] = v
	}
	return c
}

func (m *memory) count() int {
	m.mu.Lock()
	defer m.mu.Unlock()
	return m.saves
}

// bench is a lab with one session and what a test wants of it.
type bench struct {
	t    testing.TB
	lab  *Lab
	keep *memory
	id   string
	s    *Session
}

func newBench(t testing.TB, sc *scenario.Scenario, o Opening) *bench {
	t.Helper()
	keep := &memory{}
	lab := New(Options{Keeper: keep})
	t.Cleanup(lab.Close)
	id, err := lab.Create(context.Background(), sc, o)
	if err != nil {
		t.Fatal(err)
	}
	return reopened(t, lab, keep, id)
}

func reopened(t testing.TB, lab *Lab, keep *memory, id string) *bench {
	t.Helper()
	s, err := lab.session(context.Background(), id)
	if err != nil {
		t.Fatal(err)
	}
	return &bench{t, lab, keep, id, s}
}

// in calls f in the session's loop.
func (b *bench) in(f func()) {
	b.t.Helper()
	if err := b.s.do(context.Background(), f); err != nil {
		b.t.Fatal(err)
	}
}

func (b *bench) tick() (tick int64) {
	b.in(func() { tick = b.s.tick() })
	return tick
}

func (b *bench) length() (length int64) {
	b.in(func() { length = b.s.tape.Length() })
	return length
}

func (b *bench) outcome() (o sim.Outcome) {
	b.in(func() { o = b.s.robot().Outcome() })
	return o
}

// join adds a viewer without a connection.
func (b *bench) join() *viewer {
	v := newViewer()
	b.in(func() { b.s.joins(v) })
	return v
}

// say sends a message as the viewer would.
func (b *bench) say(v *viewer, json string) {
	b.t.Helper()
	m, err := parseMessage([]byte(json))
	if err != nil {
		b.t.Fatalf("%s: %v", json, err)
	}
	b.in(func() { b.s.receive(v, m) })
}

// take empties the outbox.
func (v *viewer) take() (out [][]byte) {
	for {
		b, _ := v.next()
		if b == nil {
			return out
		}
		out = append(out, b)
	}
}

func kindOf(t testing.TB, b []byte) string {
	t.Helper()
	var m struct {
		Kind string `json:"kind"`
	}
	if err := json.Unmarshal(b, &m); err != nil {
		t.Fatalf("%v in %s", err, b)
	}
	return m.Kind
}

// last returns the last message of a kind.
func last(t testing.TB, messages [][]byte, kind string) []byte {
	t.Helper()
	for i := len(messages) - 1; i >= 0; i-- {
		if kindOf(t, messages[i]) == kind {
			return messages[i]
		}
	}
	t.Fatalf("no %s among %d messages", kind, len(messages))
	return nil
}

// greeting is a hello as a client reads it.
type greeting struct {
	hello
	Tape  tapeHeard `json:"tape"`
	Frame heard     `json:"frame"`
}

func greet(t testing.TB, b []byte) greeting {
	t.Helper()
	var g greeting
	if err := json.Unmarshal(b, &g); err != nil {
		t.Fatalf("%v in %.300s", err, b)
	}
	return g
}

// said returns the text of a problem, notice or ended.
func said(t testing.TB, b []byte) note {
	t.Helper()
	var n note
	if err := json.Unmarshal(b, &n); err != nil {
		t.Fatal(err)
	}
	return n
}

// room is a floor for tests: a desk between start and goal, a post, a wall and a cart.
func room(t testing.TB) *scenario.Scenario {
	t.Helper()
	sc, err := scenario.Parse([]byte(`{
		"leeway": 1, "name": "A room", "seed": 3,
		"floor": {"width_m": 8, "height_m": 6,
			"walls": [{"id": "screen", "points_m": [[5, 4], [5, 5.5]]}],
			"solids": [
				{"id": "desk", "corners_m": [[3, 2.5], [3.6, 2.5], [3.6, 3.6], [3, 3.6]]},
				{"id": "post", "center_m": [6, 1.2], "radius_m": 0.2}],
			"movers": [{"id": "cart", "radius_m": 0.2, "route_m": [[1, 5.4], [3, 5.4]], "speed_m_s": 0.3}]},
		"start": {"x_m": 1, "y_m": 3}, "goal": {"x_m": 7, "y_m": 3, "radius_m": 0.3}}`))
	if err != nil {
		t.Fatal(err)
	}
	return sc
}

// finish runs a scenario file alone, without a session.
func finish(t testing.TB, text []byte) sim.Outcome {
	t.Helper()
	sc, err := scenario.Parse(text)
	if err != nil {
		t.Fatalf("%v in\n%s", err, text)
	}
	c, err := sc.Config()
	if err != nil {
		t.Fatal(err)
	}
	r, err := sim.New(c)
	if err != nil {
		t.Fatal(err)
	}
	return r.Finish()
}

// untilEnded plays as fast as it goes and waits until all models have ended. Real
// time or that of a bubble.
func (b *bench) untilEnded(v *viewer) sim.Outcome {
	b.t.Helper()
	b.say(v, `{"kind":"play"}`) // first, for a run that has ended begins again
	b.say(v, `{"kind":"speed","value":0}`)
	for range 10_000 {
		done := false
		b.in(func() { done = b.s.tape.Done() })
		if done {
			return b.outcome()
		}
		time.Sleep(time.Millisecond)
	}
	b.t.Fatal("the run does not end")
	return sim.Outcome{}
}

func (b *bench) text() []byte {
	sc, err := b.lab.Scenario(context.Background(), b.id)
	if err != nil {
		b.t.Fatal(err)
	}
	return sc.Print()
}
