package report_test

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"regexp"
	"slices"
	"strings"
	"testing"
	"time"

	"leeway/scenarios"
	"leeway/server/report"
	"leeway/sim"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
)

func shipped(t testing.TB, slug string) *scenario.Scenario {
	t.Helper()
	e, ok := scenarios.Find(slug)
	if !ok {
		t.Fatalf("no scenario %s", slug)
	}
	sc, err := scenario.Parse(e.Data)
	if err != nil {
		t.Fatal(err)
	}
	return sc
}

var options = report.Options{Base: "http://127.0.0.1:8321", Version: "v1.2.3", Date: time.Date(2031, 4, 3, 23, 59, 0, 0, time.UTC)}

func page(t testing.TB, sc *scenario.Scenario, o report.Options) string {
	t.Helper()
	v, err := report.Build(t.Context(), sc, o)
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	if err := report.Page(&b, v); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

func TestCautionNamesWhoDecides(t *testing.T) {
	for _, s := range []string{"nothing about the safety of people", "ISO 13855", "ISO 3691-4", "ISO 13482", "local codes", "competent people on site"} {
		if !strings.Contains(report.Caution, s) {
			t.Errorf("no %q", s)
		}
	}
}

func TestPageIsAFunctionOfItsArguments(t *testing.T) {
	first := page(t, shipped(t, "lag"), options)
	if again := page(t, shipped(t, "lag"), options); again != first {
		t.Error("the same run and date give other bytes")
	}
	other := options
	other.Date = other.Date.AddDate(0, 0, 1)
	if next := page(t, shipped(t, "lag"), other); next == first || strings.ReplaceAll(next, "4 April 2031", "3 April 2031") != first {
		t.Error("another date changes something else than the date, or nothing")
	}
	if undated := page(t, shipped(t, "lag"), report.Options{}); strings.Contains(undated, "<time") {
		t.Error("a page without a date has one")
	}
}

// noNumber finds what is written of a number that is none; links and fonts hold all letters.
var noNumber = regexp.MustCompile(`[\s">,][-+]?(?:NaN|Inf)[\s"<,]`)

var tag = regexp.MustCompile(`<[^>]*>`)

// words is what a page says: without its style, its tags, and runs of space.
func words(html string) string {
	html = regexp.MustCompile(`(?s)<style>.*</style>`).ReplaceAllString(html, "")
	html = strings.NewReplacer("&#34;", `"`, "&#39;", "'", "&lt;", "<", "&gt;", ">", "&thinsp;", " ", "&amp;", "&").Replace(tag.ReplaceAllString(html, " "))
	return strings.Join(strings.Fields(html), " ")
}

// What a page says of every shipped run is what the run says of itself.
func TestPageSaysWhatHappened(t *testing.T) {
	for _, e := range scenarios.All() {
		sc := shipped(t, e.Slug)
		html := page(t, sc, options)
		said := words(html)
		c, err := sc.Config()
		if err != nil {
			t.Fatal(err)
		}
		set, err := shadow.New(c)
		if err != nil {
			t.Fatal(err)
		}
		set.Finish()
		want := []string{
			sc.Name, sc.Purpose, set.Run(shadow.Robot).Outcome().Reason, report.Caution,
			"3 April 2031", "v1.2.3", fmt.Sprintf("within %g s, keeping %.2f m of leeway", sc.Asked.Within, sc.Asked.Leeway),
			"The seed is " + fmt.Sprint(sc.Seed),
		}
		n := 0
		for w := range shadow.Models {
			want = append(want, fmt.Sprintf("%s %016x", w, set.Run(w).Outcome().Hash))
			if w == shadow.Robot {
				continue
			}
			for _, p := range set.Partings(w) {
				if n++; n <= 12 && len(set.Partings(shadow.Point))+len(set.Partings(shadow.Unicycle)) <= 12 {
					want = append(want, fmt.Sprintf("From the %s. %s", w, p.Text))
				}
			}
			if len(set.Partings(w)) == 0 {
				want = append(want, fmt.Sprintf("It never parted from the %s.", w))
			}
		}
		for _, a := range shadow.Advise(c) {
			want = append(want, a.Text)
		}
		for _, s := range want {
			if !strings.Contains(said, strings.Join(strings.Fields(s), " ")) {
				t.Errorf("%s: it does not say %q", e.Slug, s)
			}
		}
		if strings.Count(html, "<svg") < 3 || noNumber.MatchString(html) {
			t.Errorf("%s: pictures are missing, or hold what is no number", e.Slug)
		}
		if size := len(html); size > 500_000 {
			t.Errorf("%s: %d bytes", e.Slug, size)
		}
		link := regexp.MustCompile(`href="(http://127[^"]*)"`).FindStringSubmatch(html)
		if link == nil {
			t.Errorf("%s: no link", e.Slug)
		} else if back, err := scenario.Decode(link[1]); err != nil || string(back.Print()) != string(e.Data) {
			t.Errorf("%s: the link leads to another scenario (%v)", e.Slug, err)
		}
	}
}

// The short scenarios of the tests below.
func small(t testing.TB, more string) *scenario.Scenario {
	t.Helper()
	sc, err := scenario.Parse([]byte(`{"leeway": 1, "name": "Small", "floor": {"width_m": 5, "height_m": 4},
		"start": {"x_m": 1, "y_m": 2}, "goal": {"x_m": 4, "y_m": 2}` + more + `}`))
	if err != nil {
		t.Fatal(err)
	}
	return sc
}

// loose takes away what keeps numbers and units on one line.
func loose(s string) string { return strings.ReplaceAll(s, "\u00a0", " ") }

// Every idealisation and imperfection is said of the model that has it, and of no other.
func TestAssumptionsAreSaid(t *testing.T) {
	v, err := report.Build(t.Context(), small(t, `, "robot": {"right_wheel_scale": 1.02, "track_scale": 0.97, "slip_m": 0.0001, "fix_every_s": 0, "encoder_counts_per_turn": 512,
		"steering": "look_ahead", "look_ahead_m": 0.12, "wheel_speed_max_rad_s": 11, "wheel_accel_max_rad_s2": 0, "wheel_lag_s": 0.3, "wheel_dead_time_s": 0.07},
		"ring": {"beams": 9, "range_max_m": 2.5, "in_turn": true, "cone_deg": 15, "cone_rays": 3, "dropout": 0.04, "random": 0.02, "step_m": 0.005},
		"on_contact": "end"`), options)
	if err != nil {
		t.Fatal(err)
	}
	cell := func(label string, column int) string {
		for _, r := range v.Traits {
			if r.Label == label {
				return loose(r.Cells[column].Text)
			}
		}
		t.Fatalf("nothing is said of %s", label)
		return ""
	}
	const point, unicycle, robot = 0, 1, 2
	for _, c := range []struct {
		label  string
		column int
		want   []string
	}{
		{"Motion", point, []string{"without turning"}},
		{"Motion", unicycle, []string{"at once", "right wheel 1.02 ×", "track 0.97 ×"}},
		{"Motion", robot, []string{"two driven wheels 0.3 m apart", "right wheel 1.02 ×", "track 0.97 ×"}},
		{"Steering", point, []string{"none"}},
		{"Steering", robot, []string{"0.12 m ahead"}},
		{"Wheels", unicycle, []string{"no limits", "slip by 10 mm"}},
		{"Wheels", robot, []string{"11 rad/s (0.55 m/s)", "keeps the curve", "slip by 10 mm"}},
		{"Delays", unicycle, []string{"none"}},
		{"Delays", robot, []string{"0.3 s", "0.07 s"}},
		{"Sight", point, []string{"all round", "exact distance"}},
		{"Sight", robot, []string{"9 beams", "2.5 m", "one after the other", "15°"}},
		{"Noise", unicycle, []string{"none"}},
		{"Noise", robot, []string{"4 % of echoes lost", "2 % of readings random", "steps of 0.005 m"}},
		{"Position", point, []string{"knows its true pose"}},
		{"Position", robot, []string{"512 counts", "no fix ever"}},
	} {
		for _, s := range c.want {
			if got := cell(c.label, c.column); !strings.Contains(got, s) {
				t.Errorf("%s of the %s: %q, want %q in it", c.label, v.Columns[c.column], got, s)
			}
		}
	}
	if !slices.Contains(v.Shared, "A touch ends the run.") {
		t.Error("it is not said what a touch does")
	}
}

func TestChangesOfADragAreOne(t *testing.T) {
	sc := small(t, `, "edits": [
		{"tick": 100, "what": "goal", "to_m": [4, 2.1]}, {"tick": 110, "what": "goal", "to_m": [4, 2.4]},
		{"tick": 150, "what": "number", "name": "robot.speed_m_s", "value": 0.3},
		{"tick": 160, "what": "goal", "to_m": [4, 3]}, {"tick": 900, "what": "goal", "to_m": [4, 1]},
		{"tick": 1000, "what": "robot", "to_m": [2, 1]}]`)
	var got []string
	for _, c := range report.Changes(sc) {
		got = append(got, c.Text)
	}
	want := []string{
		"From 0:00.5 to 0:00.8 the goal was dragged to 4.00, 3.00.",
		"At 0:00.8 the speed was set to 0.3 m/s.",
		"At 0:04.5 the goal was moved to 4.00, 1.00.",
		"At 0:05.0 the robot was carried to 2.00, 1.00.",
	}
	if !slices.Equal(got, want) {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
	v, err := report.Build(t.Context(), sc, options)
	if err != nil {
		t.Fatal(err)
	}
	for i := range v.Changes {
		v.Changes[i] = loose(v.Changes[i])
	}
	if !slices.Equal(v.Changes, want) || !strings.Contains(strings.Join(v.Ways, " "), "the goal was moved while it ran") {
		t.Errorf("the page says %q and %q", v.Changes, v.Ways)
	}
}

func TestHeadlineTellsNumbersApart(t *testing.T) {
	f, err := report.Finish(t.Context(), small(t, ""), nil)
	if err != nil {
		t.Fatal(err)
	}
	leeway := f.Run.Outcome().Leeway
	sc := f.Scenario.Clone()
	sc.Asked.Leeway = leeway + 0.0004
	if f, err = report.Finish(t.Context(), sc, nil); err != nil {
		t.Fatal(err)
	}
	if h := f.Headline(); !h.Short || strings.Contains(h.Of, h.Big) {
		t.Errorf("%+v", h)
	}
	sc.Floor.Enclosed = false
	if f, err = report.Finish(t.Context(), sc, nil); err != nil {
		t.Fatal(err)
	}
	if h := f.Headline(); h.Big != "–" || h.Short {
		t.Errorf("on an empty floor: %+v", h)
	}
}

func TestNobodyWaits(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	n := 0
	_, err := report.Finish(ctx, shipped(t, "office"), func(*sim.Run) {
		if n++; n == 100 {
			cancel()
		}
	})
	if !errors.Is(err, context.Canceled) || n > 2000 {
		t.Errorf("%v after %d ticks", err, n)
	}
}
