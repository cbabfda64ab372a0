package scenario

import (
	"fmt"
	"sort"
	"strings"
	"unicode/utf8"
)

// Problem is one fault of a file: where and what. Line and Column count from 1
// (0: not from a file); Column counts characters.
type Problem struct {
	Line   int    `json:"line,omitempty"`
	Column int    `json:"column,omitempty"`
	Path   string `json:"path,omitempty"` // "robot.radius_m", "floor.walls[3].points_m[1]"
	Text   string `json:"text"`
}

// Problems is an error that holds every fault found, in the order of the file.
type Problems []Problem

// Error returns the problems, one a line.
func (p Problems) Error() string {
	var b strings.Builder
	for i, q := range p {
		if i > 0 {
			b.WriteByte('\n')
		}
		if q.Line > 0 {
			fmt.Fprintf(&b, "line %d, column %d: ", q.Line, q.Column)
		}
		b.WriteString(q.Text)
	}
	return b.String()
}

// problemf is one problem without a place.
func problemf(format string, args ...any) Problems {
	return Problems{{Text: fmt.Sprintf(format, args...)}}
}

// finding is a problem on its way into a report.
type finding struct {
	Problem
	at     int      // byte offset in the file; −1: not known yet
	found  bool     // at is that of the value itself, not of what it is missing from
	clash  []string // what it does not go with: where to look when the value is not in the file
	beyond bool     // a JSON Schema cannot say it
}

// keep bounds how many findings are held; what is beyond it is only counted.
const keep = 1000

// report collects findings.
type report struct {
	list []finding
	more int
	bad  map[string]bool // paths with a finding
	over map[string]bool // paths with a finding at or below them
}

func (r *report) add(path string, at int, beyond bool, text string) {
	if r.full() {
		return
	}
	r.list = append(r.list, finding{Problem: Problem{Path: path, Text: text}, at: at, found: at >= 0, beyond: beyond})
	r.distrust(path)
}

// distrust makes what is at a path unsound.
func (r *report) distrust(path string) {
	if r.bad == nil {
		r.bad, r.over = map[string]bool{}, map[string]bool{}
	}
	r.bad[path] = true
	for p := path; p != ""; p = parent(p) {
		r.over[p] = true
	}
}

// full reports, and counts, a finding that there is no room for.
func (r *report) full() bool {
	if len(r.list) < keep {
		return false
	}
	r.more++
	return true
}

// sound reports whether nothing has been found at, below or above any of the paths,
// so that checks that rest on several values do not complain about values that are known to be wrong.
func (r *report) sound(paths ...string) bool {
	if len(r.list) == 0 {
		return true
	}
	for _, p := range paths {
		if r.over[p] {
			return false
		}
		for ; p != ""; p = parent(p) {
			if r.bad[p] {
				return false
			}
		}
	}
	return true
}

// parent returns the path of what holds the thing at path: "a.b[2]" → "a.b" → "a" → "".
func parent(path string) string {
	return path[:max(strings.LastIndexAny(path, ".["), 0)]
}

// problems returns the findings in the order of the file, with lines and columns if there is a text,
// at most MaxProblems of them and then a count of the others.
func (r *report) problems(text []byte) Problems {
	if len(r.list) == 0 {
		return nil
	}
	sort.SliceStable(r.list, func(i, j int) bool { return r.list[i].at < r.list[j].at })
	var out Problems
	line, start, at := 1, 0, 0 // of the line that holds byte at
	for _, f := range r.list[:min(len(r.list), MaxProblems)] {
		p := f.Problem
		if f.at >= 0 {
			for ; at < f.at; at++ {
				if text[at] == '\n' {
					line, start = line+1, at+1
				}
			}
			p.Line, p.Column = line, 1+utf8.RuneCount(text[start:f.at])
		}
		out = append(out, p)
	}
	if n := len(r.list) - len(out) + r.more; n > 0 {
		out = append(out, Problem{Text: fmt.Sprintf("and %d more", n)})
	}
	return out
}

// path is a place in a file on the way down to it; it is written out only where something is wrong.
type path struct {
	up    *path
	name  string // of a field, or
	index int    // of an element
}

func (p *path) String() string {
	if p == nil {
		return ""
	}
	up := p.up.String()
	switch {
	case p.name == "":
		return fmt.Sprintf("%s[%d]", up, p.index)
	case up == "":
		return p.name
	}
	return up + "." + p.name
}
