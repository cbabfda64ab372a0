// Package store keeps sessions in a SQLite file, so that a page finds its bench
// again after the server was stopped, even by force.
//
// A session is kept as what it is a function of: the scenario with the edits so
// far, how far it had been computed, and where in that it was looked at. Nothing of
// the simulation's state is written; whoever loads a session steps it there again.
//
// A [Store] may be used by any number of goroutines. Two servers may share a
// file; a session should be open in one of them at a time.
package store

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"net/url"
	"os"
	"path/filepath"
	"time"

	_ "modernc.org/sqlite" // the driver called "sqlite"
)

// ErrNotFound says that there is no session of that id.
var ErrNotFound = errors.New("no such session")

// Session is one kept session.
type Session struct {
	ID       string
	Scenario []byte // canonical text, edits so far included; a nil keeps what is there
	Tick     int64  // where its tape is looked at
	Length   int64  // of the tape, ticks
	Shadows  bool   // whether they are computed
	Playing  bool
	Speed    float64 // 0: as fast as it goes
	ByHand   bool    // a person has changed something since the run began
	Updated  time.Time
}

// Store is an open file of sessions.
type Store struct{ db *sql.DB }

// Open opens the file, creating it and its folder when needed, and brings it to
// the newest version.
func Open(ctx context.Context, path string) (*Store, error) {
	if err := os.MkdirAll(filepath.Dir(path), 0o700); err != nil {
		return nil, fmt.Errorf("the data folder cannot be made: %w", err)
	}
	// Pragmas go into the name: executed as statements they would reach one
	// connection of the pool only.
	name := "file:" + (&url.URL{Path: filepath.ToSlash(path)}).EscapedPath() +
		"?_pragma=busy_timeout(5000)&_pragma=journal_mode(WAL)&_pragma=synchronous(FULL)&_txlock=immediate"
	db, err := sql.Open("sqlite", name)
	if err != nil {
		return nil, fmt.Errorf("%s cannot be opened: %w", path, err)
	}
	db.SetMaxOpenConns(4)
	if err := migrate(ctx, db); err != nil {
		return nil, errors.Join(fmt.Errorf("%s: %w", path, err), db.Close())
	}
	return &Store{db}, nil
}

// Close closes the file.
func (s *Store) Close() error { return s.db.Close() }

// migrations[i] leads from version i to i+1. They are never changed once
// released, only added to.
var migrations = []string{
	`CREATE TABLE sessions (
		id       TEXT    PRIMARY KEY,
		scenario BLOB    NOT NULL,
		tick     INTEGER NOT NULL,
		playing  INTEGER NOT NULL,
		speed    REAL    NOT NULL,
		by_hand  INTEGER NOT NULL,
		updated  INTEGER NOT NULL -- Unix time, ms
	) STRICT;
	CREATE INDEX sessions_by_age ON sessions (updated);`,
	// What was kept before tapes stood at their end.
	`ALTER TABLE sessions ADD COLUMN length INTEGER NOT NULL DEFAULT 0;
	ALTER TABLE sessions ADD COLUMN shadows INTEGER NOT NULL DEFAULT 1;
	UPDATE sessions SET length = tick;`,
}

func migrate(ctx context.Context, db *sql.DB) error {
	tx, err := db.BeginTx(ctx, nil)
	if err != nil {
		return err
	}
	defer tx.Rollback()
	var version int
	if err := tx.QueryRowContext(ctx, `PRAGMA user_version`).Scan(&version); err != nil {
		return err
	}
	if version > len(migrations) {
		return fmt.Errorf("it was written by a newer Leeway (version %d; this one knows %d)", version, len(migrations))
	}
	if version == len(migrations) {
		return nil
	}
	for _, m := range migrations[version:] {
		if _, err := tx.ExecContext(ctx, m); err != nil {
			return err
		}
	}
	if _, err := tx.ExecContext(ctx, fmt.Sprintf(`PRAGMA user_version = %d`, len(migrations))); err != nil {
		return err
	}
	return tx.Commit()
}

// Save writes a session, new or known. A known one with a nil Scenario keeps its
// text: most saves are only of the tick.
func (s *Store) Save(ctx context.Context, v Session) error {
	if v.Scenario == nil {
		res, err := s.db.ExecContext(ctx,
			`UPDATE sessions SET tick = ?, length = ?, shadows = ?, playing = ?, speed = ?, by_hand = ?, updated = ? WHERE id = ?`,
			v.Tick, v.Length, v.Shadows, v.Playing, v.Speed, v.ByHand, v.Updated.UnixMilli(), v.ID)
		if err != nil {
			return fmt.Errorf("a session could not be saved: %w", err)
		}
		if n, err := res.RowsAffected(); err != nil || n == 0 {
			return errors.Join(ErrNotFound, err)
		}
		return nil
	}
	_, err := s.db.ExecContext(ctx,
		`INSERT INTO sessions (id, scenario, tick, length, shadows, playing, speed, by_hand, updated) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)
		 ON CONFLICT (id) DO UPDATE SET scenario = excluded.scenario, tick = excluded.tick, length = excluded.length,
		 shadows = excluded.shadows, playing = excluded.playing, speed = excluded.speed, by_hand = excluded.by_hand, updated = excluded.updated`,
		v.ID, v.Scenario, v.Tick, v.Length, v.Shadows, v.Playing, v.Speed, v.ByHand, v.Updated.UnixMilli())
	if err != nil {
		return fmt.Errorf("a session could not be saved: %w", err)
	}
	return nil
}

// Load reads a session. The error is ErrNotFound when there is none of that id.
func (s *Store) Load(ctx context.Context, id string) (Session, error) {
	v := Session{ID: id}
	var ms int64
	err := s.db.QueryRowContext(ctx,
		`SELECT scenario, tick, length, shadows, playing, speed, by_hand, updated FROM sessions WHERE id = ?`, id).
		Scan(&v.Scenario, &v.Tick, &v.Length, &v.Shadows, &v.Playing, &v.Speed, &v.ByHand, &ms)
	if errors.Is(err, sql.ErrNoRows) {
		return Session{}, ErrNotFound
	}
	if err != nil {
		return Session{}, fmt.Errorf("a session could not be read: %w", err)
	}
	v.Updated = time.UnixMilli(ms)
	return v, nil
}

// Prune forgets the sessions that were last changed before the given time, and
// returns how many.
func (s *Store) Prune(ctx context.Context, before time.Time) (int, error) {
	res, err := s.db.ExecContext(ctx, `DELETE FROM sessions WHERE updated < ?`, before.UnixMilli())
	if err != nil {
		return 0, fmt.Errorf("old sessions could not be removed: %w", err)
	}
	n, err := res.RowsAffected()
	return int(n), err
}
