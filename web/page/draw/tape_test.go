package draw

import (
	"bytes"
	"encoding/xml"
	"errors"
	"io"
	"math"
	"strings"
	"testing"
)

func renderTape(t *testing.T, tape *Tape, width float64) string {
	t.Helper()
	var b bytes.Buffer
	if err := TapeSVG(&b, tape, width, Ink); err != nil {
		t.Fatal(err)
	}
	d := xml.NewDecoder(bytes.NewReader(b.Bytes()))
	for {
		if _, err := d.Token(); errors.Is(err, io.EOF) {
			return b.String()
		} else if err != nil {
			t.Fatalf("not well-formed: %v\n%s", err, b.String())
		}
	}
}

// A second is ten units wide in a tape of 100 s and 1,000 units of lanes.
func tapeOf100() *Tape {
	return &Tape{
		Title: "a < b", Length: 100, Asked: 0.25, Top: 1,
		Lanes: []Lane{{
			Name: "robot", End: 60, Ending: "1:00 arrived", EndLook: LookDone,
			Spans: []Span{{0, 20, LookGoal, "goal-seeking"}, {20, 21, LookAvoid, "obstacle avoidance"}, {21, 60, LookWall, "wall-following"}},
		}},
	}
}

const width100 = tapeLeft + 1000 + tapeRight

func TestSpansAreToScale(t *testing.T) {
	s := renderTape(t, tapeOf100(), width100)
	for _, want := range []string{
		`<rect x="78" y="20" width="199.2" height="18" rx="2" fill="#2c5bd4"/>`,
		`<rect x="278" y="20" width="9.2" height="18" rx="2" fill="url(#tape-dots)"/>`,
		`<rect x="288" y="20" width="389.2" height="18" rx="2" fill="url(#tape-hatch)"/>`,
		">goal-seeking</text>", ">wall-following</text>", ">1:00 arrived</text>", ">0.25 asked</text>", ">1:40</text>", "<title>a &lt; b</title>",
	} {
		if !strings.Contains(s, want) {
			t.Errorf("no %s in\n%s", want, s)
		}
	}
	if strings.Contains(s, ">obstacle avoidance</text>") {
		t.Error("a word stands where it has no room")
	}
}

// However many rows there are, the nearest approach is drawn, and at its height.
func TestNearestApproachIsNotLost(t *testing.T) {
	tape := tapeOf100()
	var k Curve
	for i := range 100_000 {
		p := Point{float64(i) / 1000, 0.8}
		if i == 43_210 {
			p.Y = 0.1
		}
		k.Points = append(k.Points, p)
	}
	tape.Gaps = []Curve{k}
	s := renderTape(t, tape, width100)
	// 1 m high are 64 units, from y = 20 + 23 + 8 on.
	if want := "L510 108.6L"; !strings.Contains(s, want) {
		t.Errorf("no %s", want)
	}
	if len(s) > 30_000 {
		t.Errorf("%d bytes", len(s))
	}
}

func TestBadgesDoNotCoverEachOther(t *testing.T) {
	tape := tapeOf100()
	tape.Marks = []Mark{{10, "1"}, {10.1, "2"}, {50, "3"}, {At: 20}}
	s := renderTape(t, tape, width100)
	for _, want := range []string{`<circle cx="178" cy="9"`, `<circle cx="195" cy="9"`, `<circle cx="578" cy="9"`, `<path d="M274.5 111.5l7 7m0-7l-7 7"`} {
		if !strings.Contains(s, want) {
			t.Errorf("no %s in\n%s", want, s)
		}
	}
	f := sample()
	f.Notes = []Note{{Point{5, 5}, "1"}, {Point{5.01, 5}, "2"}, {Point{5.02, 5}, "3"}}
	floor := render(t, f, Options{Longest: 1200, Paint: Ink})
	for _, want := range []string{`<circle cx="506" cy="306" r="7.5"`, `<circle cx="523" cy="306" r="7.5"`, `<circle cx="540" cy="306" r="7.5"`} {
		if !strings.Contains(floor, want) {
			t.Errorf("no %s", want)
		}
	}
}

func TestStrangeTapesStayWellFormed(t *testing.T) {
	for _, tape := range []*Tape{
		{},
		{Length: math.NaN()},
		{Length: 1e-9, Lanes: []Lane{{Spans: []Span{{0, math.Inf(1), "none", "\x00<"}}}}, Gaps: []Curve{{Points: []Point{{math.NaN(), 1}, {0, math.Inf(1)}}}}},
	} {
		if s := renderTape(t, tape, 500); strings.Contains(s, "NaN") || strings.Contains(s, "Inf") {
			t.Error(s)
		}
	}
}
