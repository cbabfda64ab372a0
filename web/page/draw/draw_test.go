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

func sample() *Floor {
	return &Floor{
		Title: "A desk & a <post>", Note: "two things",
		Max: Point{12, 8}, Start: Point{1, 4}, Goal: Point{11, 4}, Reach: 0.15, Hull: 0.21,
		Solids: []Solid{
			{Shape: Wall, Points: []Point{{2, 1}, {2, 4}, {5, 4}}},
			{Shape: Polygon, Points: []Point{{3, 3}, {4, 3}, {4, 3.6}}},
			{Shape: Disc, Points: []Point{{6, 2}}, Radius: 0.3},
		},
		Movers: []Mover{{Points: []Point{{7, 7}}, Radius: 0.2, Route: []Point{{7, 7}, {9, 7}}}},
		Way: []Leg{
			{Look: LookGoal, Points: []Point{{1, 4}, {1.7, 4}}},
			{Look: LookWall, Points: []Point{{1.7, 4}, {1.7, 5}}},
			{Look: LookAvoid, Points: []Point{{1.7, 5}, {1.6, 5.2}}},
		},
		Pin: &Pin{Hull: Point{1.7, 4}, Solid: Point{2, 4}, Text: "0.09 m", Bad: true},
	}
}

func render(t *testing.T, f *Floor, o Options) string {
	t.Helper()
	var b bytes.Buffer
	if err := SVG(&b, f, o); err != nil {
		t.Fatal(err)
	}
	d := xml.NewDecoder(bytes.NewReader(b.Bytes()))
	for {
		_, err := d.Token()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			t.Fatalf("not well-formed: %v\n%s", err, b.String())
		}
	}
	return b.String()
}

func TestPlacesAreToScale(t *testing.T) {
	s := render(t, sample(), Options{Longest: 1200, Paint: Ink})
	for _, want := range []string{
		`viewBox="0 0 1212 812"`,
		`<circle cx="606" cy="606" r="30"/>`,        // the disc at (6, 2): 100 units a metre, y down, a margin of 6
		`<polyline points="206,706 206,406 506,406`, // the wall
		`<title>A desk &amp; a &lt;post&gt;</title>`,
		`>0.09 m</text>`,
		`stroke="#b3261e"`,
	} {
		if !strings.Contains(s, want) {
			t.Errorf("no %s in\n%s", want, s)
		}
	}
	if strings.Contains(s, "var(") || strings.Contains(s, "xmlns") {
		t.Errorf("a drawing in ink for a page should have neither custom properties nor a namespace:\n%s", s)
	}
}

func TestModesDifferInMoreThanColour(t *testing.T) {
	s := render(t, sample(), Options{Paint: Paper})
	if !strings.Contains(s, `stroke="var(--avoidance,#a5195c)" stroke-width="4" stroke-dasharray="0 6"`) {
		t.Error("avoidance is not dotted")
	}
	if strings.Count(s, `stroke="var(--wall-following,#b96d00)"`) != 2 {
		t.Error("wall-following has no hatches")
	}
}

func TestLongWaysAreThinnedWhereNobodySees(t *testing.T) {
	f := sample()
	var way []Point
	for i := range 5000 { // a quarter turn of 3 m radius about (6, 4), then straight
		a := math.Pi / 2 * float64(i) / 4999
		way = append(way, Point{6 + 3*math.Cos(a), 4 + 3*math.Sin(a)})
	}
	for i := range 5000 {
		way = append(way, Point{6 - 0.001*float64(i), 7})
	}
	f.Way = []Leg{{Look: LookGoal, Points: way}}
	c := &canvas{f: f, scale: 100}
	kept := c.thin(way)
	if n := len(kept); n < 5 || n > 60 {
		t.Errorf("%d points kept", n)
	}
	for _, p := range way {
		least := math.Inf(1)
		for i := 1; i < len(kept); i++ {
			least = min(least, distance(p, kept[i-1], kept[i]))
		}
		if least*c.scale > 0.4001 {
			t.Fatalf("%v is %v drawing units from what is drawn", p, least*c.scale)
		}
	}
}

func TestAloneIsAFileOfItsOwn(t *testing.T) {
	s := render(t, sample(), Options{Paint: Ink, Alone: true})
	for _, want := range []string{`xmlns="http://www.w3.org/2000/svg"`, `width="812"`, ">start</text>", ">goal</text>", ">1 m</text>"} {
		if !strings.Contains(s, want) {
			t.Errorf("no %s", want)
		}
	}
}

func TestStrangeInputStaysWellFormed(t *testing.T) {
	f := sample()
	f.Title = "a\x00b\x1b ]]> \xff"
	f.Max = Point{}
	f.Way = append(f.Way, Leg{Look: "none", Points: []Point{{math.NaN(), math.Inf(1)}}})
	f.Solids = append(f.Solids, Solid{Shape: Disc})
	s := render(t, f, Options{Paint: Ink, Alone: true})
	if strings.Contains(s, "NaN") || strings.Contains(s, "Inf") {
		t.Error(s)
	}
}
