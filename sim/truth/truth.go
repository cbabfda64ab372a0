// Package truth holds known answers that the tests of several packages share:
// the published and closed-form values of testdata/published.json, each under
// the id of its row (K-01, S-08, …).
//
// A test asks for a value by row and name, computes its own, and compares the
// two with [Close]:
//
//	// K-01 (Dudek & Jenkin; Siegwart & Nourbakhsh)
//	truth.Close(t, "v", v, truth.Value(t, "K-01", "v"), 1e-6)
//
// A name that the row does not have fails the test and lists those it has. Only
// tests import this package; it reads a file, which nothing in a run may do.
package truth

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
)

// row is one line of the tables. Of its fields only what tests use is read.
type row struct {
	ID       string
	Expected []struct {
		Name  string
		Value any
	}
}

// load reads testdata/published.json, which it finds by walking up from the
// working directory to the folder that holds go.mod.
var load = sync.OnceValues(func() (map[string]row, error) {
	dir, err := os.Getwd()
	if err != nil {
		return nil, err
	}
	for {
		if _, err := os.Stat(filepath.Join(dir, "go.mod")); err == nil {
			break
		}
		up := filepath.Dir(dir)
		if up == dir {
			return nil, fmt.Errorf("no go.mod above the working directory")
		}
		dir = up
	}
	text, err := os.ReadFile(filepath.Join(dir, "testdata", "published.json"))
	if err != nil {
		return nil, err
	}
	var list []row
	if err := json.Unmarshal(text, &list); err != nil {
		return nil, fmt.Errorf("published.json: %w", err)
	}
	rows := make(map[string]row, len(list))
	for _, r := range list {
		rows[r.ID] = r
	}
	return rows, nil
})

// find returns the raw value called name in the row called id.
func find(t testing.TB, id, name string) any {
	t.Helper()
	rows, err := load()
	if err != nil {
		t.Fatalf("published values: %v", err)
	}
	r, ok := rows[id]
	if !ok {
		t.Fatalf("published values have no row %s", id)
	}
	names := make([]string, len(r.Expected))
	for i, e := range r.Expected {
		if e.Name == name {
			return e.Value
		}
		names[i] = fmt.Sprintf("%q", e.Name)
	}
	t.Fatalf("row %s has no value %q; it has %s", id, name, strings.Join(names, ", "))
	return nil
}

// Value returns the single number called name in the row called id. Rows with
// one unnamed expectation have the name "".
func Value(t testing.TB, id, name string) float64 {
	t.Helper()
	v := Values(t, id, name)
	if len(v) != 1 {
		t.Fatalf("row %s, %q: %d numbers where one was asked for", id, name, len(v))
	}
	return v[0]
}

// Values returns the numbers called name in the row called id, in reading
// order: a single number gives one element, nested lists are flattened.
func Values(t testing.TB, id, name string) []float64 {
	t.Helper()
	v, ok := flatten(nil, find(t, id, name))
	if !ok {
		t.Fatalf("row %s, %q is not made of numbers", id, name)
	}
	return v
}

// Text returns the words called name in the row called id.
func Text(t testing.TB, id, name string) string {
	t.Helper()
	s, ok := find(t, id, name).(string)
	if !ok {
		t.Fatalf("row %s, %q is not text", id, name)
	}
	return s
}

func flatten(to []float64, v any) ([]float64, bool) {
	switch v := v.(type) {
	case float64:
		return append(to, v), true
	case []any:
		ok := true
		for _, e := range v {
			if to, ok = flatten(to, e); !ok {
				return nil, false
			}
		}
		return to, true
	}
	return nil, false
}

// Close reports an error unless got is within rel·|want| of want. Where want is
// zero to within 1e-12 (some rows are zero by cancellation, and print as 1e-17)
// a relative error has no meaning, and rel is taken as an absolute bound. NaN is
// never close.
func Close(t testing.TB, what string, got, want, rel float64) {
	t.Helper()
	limit := rel * math.Abs(want)
	if math.Abs(want) < 1e-12 {
		limit = rel
	}
	if !(math.Abs(got-want) <= limit) {
		t.Errorf("%s = %.10g, want %.10g (off by %.3g, allowed %.3g)", what, got, want, got-want, limit)
	}
}
