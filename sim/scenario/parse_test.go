package scenario

import (
	"bytes"
	"fmt"
	"os"
	"strings"
	"testing"
)

const plain = `{
  "leeway": 1,
  "floor": {"width_m": 12, "height_m": 8},
  "start": {"x_m": 1, "y_m": 1},
  "goal": {"x_m": 11, "y_m": 7}
}
`

// extended returns the plain scenario with more members.
func extended(members string) string {
	return strings.Replace(plain, "\n}\n", ",\n  "+members+"\n}\n", 1)
}

func mustParse(t testing.TB, text string) *Scenario {
	t.Helper()
	s, err := Parse([]byte(text))
	if err != nil {
		t.Fatalf("%v\nin:\n%s", err, text)
	}
	return s
}

type badFile struct{ name, text string }

// badFiles reads testdata/bad.txt: "=== name" before each file; a file that begins with + only adds members to a plain one.
func badFiles(t testing.TB) []badFile {
	t.Helper()
	all, err := os.ReadFile("testdata/bad.txt")
	if err != nil {
		t.Fatal(err)
	}
	var out []badFile
	for _, part := range strings.Split(string(all), "=== ")[1:] {
		name, text, _ := strings.Cut(part, "\n")
		if more, ok := strings.CutPrefix(text, "+ "); ok {
			text = extended(strings.TrimSuffix(more, "\n"))
		}
		out = append(out, badFile{name, text})
	}
	return out
}

// TestBadFiles holds every problem that is reported for each of many bad files: all of them at once, where they are.
func TestBadFiles(t *testing.T) {
	files := badFiles(t)
	if len(files) < 60 {
		t.Fatalf("%d files", len(files))
	}
	var got bytes.Buffer
	for _, f := range files {
		s, err := Parse([]byte(f.text))
		if s != nil || err == nil {
			t.Errorf("%s: accepted", f.name)
			continue
		}
		fmt.Fprintf(&got, "=== %s\n", f.name)
		for _, p := range err.(Problems) {
			fmt.Fprintf(&got, "%d:%d %s: %s\n", p.Line, p.Column, p.Path, p.Text)
		}
	}
	golden(t, "testdata/bad.golden", got.Bytes())
}
