package scenarios_test

import (
	"bytes"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"leeway/scenarios"
	"leeway/sim/scenario"
)

var update = flag.Bool("update", false, "write the files in canonical form, and the office floor anew")

// TestFiles: all files are listed, each reads without fault, is in canonical form, and says in a line what it is for.
func TestFiles(t *testing.T) {
	if *update {
		write(t, "office.json", office().Print())
	}
	listed := map[string]bool{}
	names := map[string]bool{}
	for _, e := range scenarios.All() {
		listed[e.Slug+".json"] = true
		s, err := scenario.Parse(e.Data)
		if err != nil {
			t.Errorf("%s:\n%v", e.Slug, err)
			continue
		}
		if text := s.Print(); !bytes.Equal(text, e.Data) {
			if *update {
				write(t, e.Slug+".json", text)
			} else {
				t.Errorf("%s is not in canonical form (go test ./scenarios -update):\n%s", e.Slug, cmp.Diff(string(text), string(e.Data)))
			}
		}
		if s.Name == "" || len(s.Name) > 40 || names[s.Name] {
			t.Errorf("%s: name %q", e.Slug, s.Name)
		}
		names[s.Name] = true
		if s.Purpose == "" || len(s.Purpose) > 110 || strings.Contains(s.Purpose, "\n") {
			t.Errorf("%s: purpose %q", e.Slug, s.Purpose)
		}
		if len(s.Edits) > 0 {
			t.Errorf("%s has edits", e.Slug)
		}
	}
	files, err := filepath.Glob("*.json")
	if err != nil || len(files) != len(listed) {
		t.Errorf("%d files, %d listed, %v", len(files), len(listed), err)
	}
	for _, f := range files {
		if !listed[f] {
			t.Errorf("%s is not listed", f)
		}
	}
	if e, ok := scenarios.Find("nowhere"); ok {
		t.Errorf("found %v", e)
	}
}

func TestOfficeIsAsDrawn(t *testing.T) {
	e, _ := scenarios.Find("office")
	if d := cmp.Diff(string(office().Print()), string(e.Data)); d != "" {
		t.Errorf("office.json is not what office draws:\n%s", d)
	}
	s, err := scenario.Parse(e.Data)
	if err != nil {
		t.Fatal(err)
	}
	pieces := 0
	for _, w := range s.Floor.Walls {
		pieces += len(w.Points) - 1
	}
	for _, o := range s.Floor.Solids {
		pieces += len(o.Corners)
	}
	t.Logf("%d walls, %d solids, %d straight pieces", len(s.Floor.Walls), len(s.Floor.Solids), pieces)
	if pieces < 300 {
		t.Errorf("%d straight pieces are no long office", pieces)
	}
}

func write(t *testing.T, file string, text []byte) {
	t.Helper()
	if err := os.WriteFile(file, text, 0o644); err != nil {
		t.Fatal(err)
	}
}
