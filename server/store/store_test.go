package store

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
)

func open(t *testing.T, path string) *Store {
	t.Helper()
	s, err := Open(context.Background(), path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { s.Close() })
	return s
}

var when = time.UnixMilli(1_700_000_000_123)

func one() Session {
	return Session{ID: "abc", Scenario: []byte(`{"leeway":1}`), Tick: 42, Length: 99, Shadows: true, Playing: true, Speed: 0.25, ByHand: true, Updated: when}
}

func TestSavedSessionComesBackFromAnotherOpen(t *testing.T) {
	path := filepath.Join(t.TempDir(), "a folder #1", "made when needed", "leeway.db")
	s := open(t, path)
	want := one()
	if err := s.Save(t.Context(), want); err != nil {
		t.Fatal(err)
	}
	if err := s.Close(); err != nil {
		t.Fatal(err)
	}
	got, err := open(t, path).Load(t.Context(), "abc")
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

func TestSaveWithoutTextKeepsTheText(t *testing.T) {
	s := open(t, filepath.Join(t.TempDir(), "s.db"))
	v := one()
	v.Scenario = nil
	if err := s.Save(t.Context(), v); !errors.Is(err, ErrNotFound) {
		t.Fatalf("saving the tick of an unknown session: %v", err)
	}
	if err := s.Save(t.Context(), one()); err != nil {
		t.Fatal(err)
	}
	v.Tick, v.Length, v.Shadows, v.Playing = 99, 120, false, false
	if err := s.Save(t.Context(), v); err != nil {
		t.Fatal(err)
	}
	got, err := s.Load(t.Context(), "abc")
	if err != nil {
		t.Fatal(err)
	}
	v.Scenario = one().Scenario
	if d := cmp.Diff(v, got); d != "" {
		t.Error(d)
	}
}

// A file of the first version, which knew of no tapes: a session stood at its end.
func TestFileOfTheFirstVersionIsBroughtUpToDate(t *testing.T) {
	path := filepath.Join(t.TempDir(), "s.db")
	db, err := sql.Open("sqlite", path)
	if err != nil {
		t.Fatal(err)
	}
	for _, q := range []string{
		migrations[0], `PRAGMA user_version = 1`,
		`INSERT INTO sessions (id, scenario, tick, playing, speed, by_hand, updated) VALUES ('abc', x'7b7d', 42, 1, 2, 1, 1700000000123)`,
	} {
		if _, err := db.Exec(q); err != nil {
			t.Fatal(err)
		}
	}
	if err := db.Close(); err != nil {
		t.Fatal(err)
	}
	got, err := open(t, path).Load(t.Context(), "abc")
	if err != nil {
		t.Fatal(err)
	}
	want := Session{ID: "abc", Scenario: []byte("{}"), Tick: 42, Length: 42, Shadows: true, Playing: true, Speed: 2, ByHand: true, Updated: when}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

func TestUnknownSession(t *testing.T) {
	s := open(t, filepath.Join(t.TempDir(), "s.db"))
	if _, err := s.Load(t.Context(), "nobody"); !errors.Is(err, ErrNotFound) {
		t.Fatal(err)
	}
}

func TestPruneForgetsOnlyTheOld(t *testing.T) {
	s := open(t, filepath.Join(t.TempDir(), "s.db"))
	for i := range 5 {
		v := one()
		v.ID, v.Updated = fmt.Sprint(i), when.Add(time.Duration(i)*time.Hour)
		if err := s.Save(t.Context(), v); err != nil {
			t.Fatal(err)
		}
	}
	n, err := s.Prune(t.Context(), when.Add(2*time.Hour))
	if err != nil || n != 2 {
		t.Fatalf("pruned %d, %v; want 2", n, err)
	}
	if _, err := s.Load(t.Context(), "2"); err != nil {
		t.Errorf("the session of that very moment is gone: %v", err)
	}
	if _, err := s.Load(t.Context(), "1"); !errors.Is(err, ErrNotFound) {
		t.Errorf("the older session is still there: %v", err)
	}
}

func TestFileOfANewerVersionIsRefusedAndLeftAlone(t *testing.T) {
	path := filepath.Join(t.TempDir(), "s.db")
	open(t, path).Close()
	db, err := sql.Open("sqlite", path)
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	if _, err := db.Exec(`PRAGMA user_version = 1000`); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(t.Context(), path); err == nil || !strings.Contains(err.Error(), "newer Leeway") {
		t.Fatalf("a file from the future was opened: %v", err)
	}
	var v int
	if err := db.QueryRow(`PRAGMA user_version`).Scan(&v); err != nil || v != 1000 {
		t.Errorf("version is now %d (%v)", v, err)
	}
}

func TestPragmasHoldOnEveryConnection(t *testing.T) {
	s := open(t, filepath.Join(t.TempDir(), "s.db"))
	var conns []*sql.Conn
	for range 4 {
		c, err := s.db.Conn(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		conns = append(conns, c)
		var timeout, sync int
		var mode string
		for q, into := range map[string]any{`PRAGMA busy_timeout`: &timeout, `PRAGMA synchronous`: &sync, `PRAGMA journal_mode`: &mode} {
			if err := c.QueryRowContext(t.Context(), q).Scan(into); err != nil {
				t.Fatal(err)
			}
		}
		if timeout != 5000 || sync != 2 || mode != "wal" {
			t.Errorf("busy_timeout %d, synchronous %d, journal_mode %s", timeout, sync, mode)
		}
	}
	for _, c := range conns {
		c.Close()
	}
}

func TestManyWritersAtOnce(t *testing.T) {
	s := open(t, filepath.Join(t.TempDir(), "s.db"))
	var wg sync.WaitGroup
	for w := range 8 {
		wg.Go(func() {
			for i := range 10 {
				v := one()
				v.ID, v.Tick = fmt.Sprint(w), int64(i)
				if err := s.Save(context.Background(), v); err != nil {
					t.Error(err)
				}
			}
		})
	}
	wg.Wait()
	for w := range 8 {
		v, err := s.Load(t.Context(), fmt.Sprint(w))
		if err != nil || v.Tick != 9 {
			t.Errorf("session %d: tick %d, %v", w, v.Tick, err)
		}
	}
}

func TestUnwritablePlaceIsAnError(t *testing.T) {
	if _, err := Open(t.Context(), filepath.Join("store.go", "s.db")); err == nil {
		t.Error("a store inside a file")
	}
}
