package report_test

import (
	"bytes"
	"fmt"
	"math"
	"strings"
	"testing"

	"leeway/scenarios"
	"leeway/server/report"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
	"leeway/web/replay"
)

func film(t testing.TB, sc *scenario.Scenario) *report.Film {
	t.Helper()
	f, err := report.BuildFilm(t.Context(), sc, options)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func size(t testing.TB, f *report.Film) int {
	t.Helper()
	var b bytes.Buffer
	if err := report.Replay(&b, f); err != nil {
		t.Fatal(err)
	}
	return b.Len()
}

// Every frame of a film is the state of a Set stepped by hand to that tick, movers
// and edits included, and every switch is told when it happened.
func TestFilmIsTheRun(t *testing.T) {
	sc := shipped(t, "cart")
	sc.Edits = []scenario.Edit{
		{Tick: 400, What: "mover", ID: sc.Floor.Movers[0].ID, To: scenario.Point{4, 4}},
		{Tick: 1000, What: "goal", To: scenario.Point{9, 5}},
		{Tick: 1500, What: "robot", To: scenario.Point{2, 2}},
	}
	c, err := sc.Config()
	if err != nil {
		t.Fatal(err)
	}
	set, err := shadow.New(c)
	if err != nil {
		t.Fatal(err)
	}
	f := film(t, sc)
	if f.Length == 0 || f.Frames[0].Tick != 0 || f.Frames[len(f.Frames)-1].Tick != f.Length {
		t.Fatalf("frames from %d to %d of %d", f.Frames[0].Tick, f.Frames[len(f.Frames)-1].Tick, f.Length)
	}
	modes := [shadow.Models]int{-1, -1, -1}
	sides := [shadow.Models]int{}
	told := map[string]bool{}
	for _, s := range f.Spans {
		told[fmt.Sprint(s.Who, s.Tick, s.Mode, s.Side)] = true
	}
	why := map[string]string{}
	for _, w := range f.Whys {
		why[fmt.Sprint(w.Who, w.Tick, w.Mode)] = w.Text
	}
	next, spans, switches := 0, 0, 0
	for {
		if next < len(f.Frames) && f.Frames[next].Tick == set.Tick() {
			k := f.Frames[next]
			next++
			for w := range shadow.Models {
				p := set.Run(w).Pose()
				if b := k.Models[w]; b.X != p.Pos.X || b.Y != p.Pos.Y || b.Heading != p.Theta || math.Abs(b.Gap-min(set.Run(w).Gap(), shadow.GapSight)) > 1e-9 {
					t.Fatalf("tick %d: the %s is at %+v, was at %+v", k.Tick, w, b, p)
				}
			}
			robot := set.Run(shadow.Robot)
			if e := robot.Belief(); k.Belief != [3]float64{e.X, e.Y, e.Theta} {
				t.Fatalf("tick %d: it believes %v, believed %v", k.Tick, k.Belief, e)
			}
			for i, at := range k.Movers {
				if was := robot.World().MoverAt(i); math.Hypot(at[0]-was.X, at[1]-was.Y) > 1e-4 {
					t.Fatalf("tick %d: mover %d is at %v, was at %v", k.Tick, i, at, was)
				}
			}
			for i, r := range robot.Scan().Range {
				if k.Ranges[i] != float32(r) {
					t.Fatalf("tick %d: beam %d reads %v, read %v", k.Tick, i, k.Ranges[i], r)
				}
			}
		}
		for w := range shadow.Models {
			e := set.Run(w).Engine()
			if e.Mode() == modes[w] && int(e.Side()) == sides[w] {
				continue
			}
			spans++
			if !told[fmt.Sprint(int(w), set.Tick(), e.Mode(), int(e.Side()))] {
				t.Fatalf("tick %d: the %s went into mode %d, which is not told", set.Tick(), w, e.Mode())
			}
			if e.Mode() != modes[w] && modes[w] >= 0 {
				switches++
				if got := why[fmt.Sprint(int(w), set.Tick(), e.Mode())]; got != set.Run(w).Why() {
					t.Fatalf("tick %d: the %s switched because %q; it is told %q", set.Tick(), w, set.Run(w).Why(), got)
				}
			}
			modes[w], sides[w] = e.Mode(), int(e.Side())
		}
		if set.Done() {
			break
		}
		set.Step()
	}
	if next != len(f.Frames) || spans != len(f.Spans) || switches < 3 {
		t.Errorf("%d of %d frames, %d of %d spans, %d switches", next, len(f.Frames), spans, len(f.Spans), switches)
	}
	if f.Hash != fmt.Sprintf("%016x", set.Run(shadow.Robot).Outcome().Hash) {
		t.Errorf("the hash is %s", f.Hash)
	}
	partings, changes := 0, 0
	for _, m := range f.Marks {
		switch m.Kind {
		case "parting":
			partings++
		case "change":
			changes++
		}
	}
	if want := len(set.Partings(shadow.Point)) + len(set.Partings(shadow.Unicycle)); partings != want || changes != 3 {
		t.Errorf("%d partings of %d, %d changes of 3", partings, want, changes)
	}
}

func TestEveryShippedReplayIsSmall(t *testing.T) {
	for _, e := range scenarios.All() {
		f := film(t, shipped(t, e.Slug))
		if n := size(t, f); n > 400_000 {
			t.Errorf("%s: %d bytes", e.Slug, n)
		}
		if back, err := scenario.Decode(f.Link); err != nil || string(back.Print()) != string(e.Data) {
			t.Errorf("%s: the link leads to another scenario (%v)", e.Slug, err)
		}
	}
}

// The long office for ten minutes, with nothing left out.
func TestTenMinutesOfTheLongOfficeFit(t *testing.T) {
	sc := shipped(t, "office")
	sc.Asked.Within = 600
	// A goal that moves away, so that the run lasts.
	for i := range 60 {
		sc.Edits = append(sc.Edits, scenario.Edit{Tick: int64(i) * 2000, What: "goal", To: scenario.Point{[]float64{20, 2}[i%2], 9.5}})
	}
	f := film(t, sc)
	if minutes := float64(f.Length) * f.Tick / 60; minutes < 9.9 {
		t.Fatalf("it lasted %v minutes", minutes)
	}
	if n := size(t, f); n > replay.MaxBytes {
		t.Errorf("%d bytes", n)
	} else {
		t.Logf("%d bytes for %d frames, %d beams, %d spans, %d marks", n, len(f.Frames), len(f.Bearings), len(f.Spans), len(f.Marks))
	}
}

func TestReplayIsAFunctionOfItsArguments(t *testing.T) {
	var a, b bytes.Buffer
	for _, w := range []*bytes.Buffer{&a, &b} {
		if err := report.Replay(w, film(t, shipped(t, "lag"))); err != nil {
			t.Fatal(err)
		}
	}
	if !bytes.Equal(a.Bytes(), b.Bytes()) {
		t.Error("the same run gives other bytes")
	}
	if !strings.Contains(a.String(), "Heavy on its wheels") {
		t.Error("it does not say what it is")
	}
}

// The sentence of an ending speaks of the model that ended.
func TestEndingsNameTheirModel(t *testing.T) {
	ends := map[int]string{}
	for _, m := range film(t, shipped(t, "wall")).Marks {
		if m.Kind == "end" {
			ends[m.Who] = m.Text
		}
	}
	for who, name := range []string{"robot", "point", "unicycle"} {
		if !strings.Contains(ends[who], "The "+name+" ") {
			t.Errorf("of the %s it is said: %q", name, ends[who])
		}
	}
}

// An ideal ring has no beams worth drawing, a unicycle no wheels, an empty floor no
// closest place.
func TestFilmLeavesOutWhatIsNotThere(t *testing.T) {
	f := film(t, small(t, `, "ideal": ["all_round_sight"], "robot": {"motion": "unicycle"}`))
	if len(f.Bearings) > 0 || len(f.Frames[0].Ranges) > 0 || f.Track != 0 {
		t.Errorf("%d beams, a track of %v m", len(f.Bearings), f.Track)
	}
	size(t, f)
	sc := small(t, "")
	sc.Floor.Enclosed = false
	if f := film(t, sc); f.Pin != nil || f.Big != "–" {
		t.Errorf("pinned at %+v: %s", f.Pin, f.Big)
	} else {
		size(t, f)
	}
}
