package scenario

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// everything is a file that uses every form of everything.
const everything = `{
  "leeway": 1, "name": "A bit of everything", "purpose": "To be read back.", "seed": 9007199254740991,
  "floor": {"width_m": 12.5, "height_m": 8, "enclosed": false,
    "walls": [{"points_m": [[2, 1], [2, 4.125], [5, 4]]}, {"id": "w1", "points_m": [[0.1, 0.2], [0.30000000000000004, 0.2]]}],
    "solids": [{"corners_m": [[3, 5], [4, 5], [4, 5.6]]}, {"id": "Säule \"A\"", "center_m": [-0.0, 2], "radius_m": 1e-3}],
    "movers": [{"box_m": [0.8, 0.5], "heading_deg": -90, "route_m": [[1, 6], [9, 6]], "loop": true}, {"radius_m": 0.25, "route_m": [[5, 7]]}]},
  "robot": {"slip_m": 1e-7, "speed_m_s": 0.1e1},
  "ring": {"bearings_deg": [0, 33.3, -90]},
  "logic": {"notice_m": 0.3, "gain_m": 0},
  "start": {"x_m": 1, "y_m": 4, "heading_deg": -0},
  "goal": {"x_m": 11, "y_m": 4},
  "ideal": ["true_position", "no_lag"],
  "edits": [{"tick": 0, "what": "goal", "to_m": [9, 2]}, {"tick": 3, "what": "solid", "id": "w1", "to_m": [3, 5]},
    {"tick": 3, "what": "mover", "id": "m1", "to_m": [2, 2]}, {"tick": 3e2, "what": "robot", "to_m": [2, 2]},
    {"tick": 400, "what": "number", "name": "ring.dropout", "value": 0.25}]
}`

const tableLogic = `{
  "leeway": 1, "floor": {"width_m": 12, "height_m": 8}, "start": {"x_m": 1, "y_m": 1}, "goal": {"x_m": 11, "y_m": 7},
  "logic": {"kind": "table", "name": "There", "start": "go", "sector_deg": 40,
    "modes": [{"name": "go", "behaviour": "goal_seeking", "goal_gain_per_s": 1.5}, {"name": "back", "behaviour": "avoidance", "speed_share": 0.5},
      {"name": "there", "behaviour": "stop", "ending": "arrived"}],
    "transitions": [{"from": "any", "to": "there", "when": [{"reading": "goal_distance_m", "relation": "below", "threshold": 0.15}], "hold_s": 0.1},
      {"from": "go", "to": "back", "when": [{"reading": "nearest_m", "relation": "below", "threshold": 0.1, "band": 0.05},
        {"reading": "free_way_m", "relation": "below", "against": "goal_distance_m"}]},
      {"from": "back", "to": "go", "when": [{"reading": "nearest_m", "relation": "at_least", "threshold": 0.2}], "min_time_s": 0.5, "meet": true}]}
}`

// varied is a file in which everything that can vary does.
const varied = `{
  "leeway": 1, "floor": {"width_m": 12, "height_m": 8, "walls": [{"points_m": [[6, 1], [6, 2]]}],
    "solids": [{"id": "desk", "corners_m": [[3, 5], [4, 5], [4, 5.6]]}, {"id": "post", "center_m": [8, 4], "radius_m": 0.2}],
    "movers": [{"id": "cart", "radius_m": 0.25, "route_m": [[5, 7], [9, 7]]}]},
  "start": {"x_m": 1, "y_m": 1}, "goal": {"x_m": 11, "y_m": 7},
  "asked": {"success": 0.95, "confidence": 0.9},
  "vary": {"start": [{"from_m": [0, 0], "to_m": [3, 4]}, {"center_m": [2, 6], "radius_m": 1}], "turn_deg": 180,
    "goal": [{"from_m": [9, 2], "to_m": [12, 8]}], "margin_m": 0.1, "apart_m": 5,
    "numbers": [{"path": "robot.speed_m_s", "kind": "uniform", "low": 0.2, "high": 0.6}, {"path": "ring.beams", "kind": "list", "values": [8, 16, 24]},
      {"path": "robot.wheel_lag_s", "kind": "normal", "mean": 0.1, "deviation": 0.05}, {"path": "logic.notice_m", "kind": "steps", "low": 0.2, "high": 0.5, "step": 0.1}],
    "solids": [{"id": "desk", "by_m": 0.5}, {"id": "post", "by_m": 0.3}, {"id": "w1", "by_m": 0.25}], "movers": [{"id": "cart", "phase_s": 20}]}
}`

func shipped(t testing.TB) map[string][]byte {
	t.Helper()
	files, err := filepath.Glob("../../scenarios/*.json")
	if err != nil || len(files) == 0 {
		t.Fatal("no shipped scenarios", err)
	}
	out := map[string][]byte{}
	for _, f := range files {
		if out[f], err = os.ReadFile(f); err != nil {
			t.Fatal(err)
		}
	}
	return out
}

// checkRoundTrip checks what must hold of every accepted text.
func checkRoundTrip(t interface {
	Fatalf(string, ...any)
}, text []byte) {
	s, err := Parse(text)
	if err != nil {
		t.Fatalf("%v\nin:\n%s", err, text)
	}
	printed := s.Print()
	again, err := Parse(printed)
	if err != nil {
		t.Fatalf("its own print is not accepted: %v\nprinted:\n%s", err, printed)
	}
	if d := cmp.Diff(s, again); d != "" {
		t.Fatalf("parse∘print∘parse differs from parse:\n%s\nprinted:\n%s", d, printed)
	}
	if twice := again.Print(); !bytes.Equal(printed, twice) {
		t.Fatalf("print∘parse∘print differs from print:\n%s", cmp.Diff(string(printed), string(twice)))
	}
	for _, c := range []string{"-0,", "-0]", "-0}", "\t", "\r"} {
		if i := bytes.Index(printed, []byte(c)); i >= 0 && !bytes.Contains(printed, []byte(`"`+c)) {
			// A name may hold what looks like it; a number may not.
			t.Fatalf("the print holds %q", c)
		}
	}
	if p := s.Validate(); p != nil {
		t.Fatalf("accepted, but Validate says %v", p)
	}
}

func TestRoundTrip(t *testing.T) {
	for _, text := range []string{plain, everything, tableLogic, varied} {
		checkRoundTrip(t, []byte(text))
	}
	for _, text := range shipped(t) {
		checkRoundTrip(t, text)
	}
}

// TestPrint holds the canonical text of files that use everything, and of one that uses nothing.
func TestPrint(t *testing.T) {
	for name, text := range map[string]string{"plain": plain, "everything": everything, "table": tableLogic, "varied": varied} {
		golden(t, "testdata/"+name+".golden.json", mustParse(t, text).Print())
	}
	if lines := bytes.Split(mustParse(t, everything).Print(), []byte("\n")); len(lines) < 40 {
		t.Error("nothing is spread over lines")
	} else {
		for _, l := range lines {
			if n := len([]rune(string(l))); n > lineWidth+1 { // and a comma
				t.Errorf("a line of %d characters: %s", n, l)
			}
		}
	}
}

func TestPrintFillsLongLists(t *testing.T) {
	s := New(100, 10)
	w := Wall{ID: "long"}
	for i := range 100 {
		w.Points = append(w.Points, Point{float64(i), float64(2 + i%2)})
	}
	s.Floor.Walls = []Wall{w}
	text := s.Print()
	for _, l := range strings.Split(string(text), "\n") {
		if len(l) > lineWidth+1 {
			t.Errorf("a line of %d characters: %s", len(l), l)
		}
	}
	if n := bytes.Count(text, []byte("\n")) - bytes.Count(New(100, 10).Print(), []byte("\n")); n > 20 {
		t.Errorf("100 points take %d lines", n)
	}
	checkRoundTrip(t, text)
}

func TestPrintLeavesOutDerivedNumbers(t *testing.T) {
	text := string(mustParse(t, everything).Print())
	for _, name := range []string{"stand_off_m", "safe_m", "band_m", "min_time_s"} {
		if strings.Contains(text, name) {
			t.Errorf("%s was left out of the file, and is printed", name)
		}
	}
	for _, line := range []string{`"notice_m": 0.3`, `"gain_m": 0,`} {
		if !strings.Contains(text, line) {
			t.Errorf("%s is in the file, and is not printed:\n%s", line, text)
		}
	}
}

func TestGeneratedIDs(t *testing.T) {
	s := mustParse(t, `{"leeway": 1, "floor": {"width_m": 12, "height_m": 8,
		"walls": [{"points_m": [[2, 2], [3, 2]]}, {"id": "w1", "points_m": [[2, 3], [3, 3]]}, {"points_m": [[2, 4], [3, 4]]}, {"id": "w2", "points_m": [[2, 5], [3, 5]]}],
		"solids": [{"id": "m1", "center_m": [5, 5], "radius_m": 0.1}, {"center_m": [6, 5], "radius_m": 0.1}],
		"movers": [{"radius_m": 0.1, "route_m": [[8, 5]]}]},
		"start": {"x_m": 1, "y_m": 1}, "goal": {"x_m": 11, "y_m": 7}}`)
	var got []string
	for _, id := range s.ids() {
		got = append(got, *id)
	}
	if d := cmp.Diff([]string{"w3", "w1", "w4", "w2", "m1", "s2", "m2"}, got); d != "" {
		t.Error(d)
	}
}

// anyScenario draws a valid scenario: every editable number and choice at random, and things on its floor.
func anyScenario(t *rapid.T) *Scenario {
	s := New(rapid.Float64Range(4, 40).Draw(t, "width"), rapid.Float64Range(4, 40).Draw(t, "height"))
	s.Name = rapid.StringMatching(`[ -~äöß–]{0,40}`).Draw(t, "name")
	for _, f := range Fields() {
		if strings.HasPrefix(f.Path, "floor.") || !rapid.Bool().Draw(t, f.Path+"?") {
			continue
		}
		if f.Options != nil {
			_ = s.SetChoice(f.Path, rapid.SampledFrom(f.Options).Draw(t, f.Path).Value) // refused when it does not go with the rest
			continue
		}
		v := rapid.Float64Range(f.Min, f.Max).Draw(t, f.Path)
		if f.Step == 1 {
			v = float64(int64(v))
		}
		_ = s.SetNumber(f.Path, v)
	}
	place := func() Point {
		return Point{rapid.Float64Range(0, s.Floor.Width).Draw(t, "x"), rapid.Float64Range(0, s.Floor.Height).Draw(t, "y")}
	}
	for range rapid.IntRange(0, 5).Draw(t, "things") {
		was := s.Clone()
		switch rapid.IntRange(0, 4).Draw(t, "thing") {
		case 0:
			s.Floor.Walls = append(s.Floor.Walls, Wall{Points: []Point{place(), place(), place()}})
		case 1:
			s.Floor.Solids = append(s.Floor.Solids, Solid{Corners: []Point{place(), place(), place(), place()}})
		case 2:
			s.Floor.Solids = append(s.Floor.Solids, Solid{Center: place(), Radius: rapid.Float64Range(0.001, 2).Draw(t, "r")})
		case 3:
			s.Floor.Movers = append(s.Floor.Movers, Mover{Box: [2]float64{0.5, 0.25}, Route: []Point{place(), place()}, Speed: 0.5})
		case 4:
			s.Edits = append(s.Edits, Edit{What: "goal", Tick: 100, To: place()})
		}
		s.normalise()
		if s.Validate() != nil {
			s = was
		}
	}
	return s
}

func TestRoundTripOfAnyScenario(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := anyScenario(t)
		if p := s.Validate(); p != nil {
			t.Fatalf("the generator makes bad scenarios: %v", p)
		}
		text := s.Print()
		checkRoundTrip(t, text)
		if again, _ := Parse(text); !cmp.Equal(s, again) {
			t.Fatalf("parse∘print is not the identity:\n%s", cmp.Diff(s, again))
		}
		checkLink(t, s)
	})
}

// FuzzParse: no text makes the parser panic, and an accepted one keeps its meaning in print.
func FuzzParse(f *testing.F) {
	for _, text := range shipped(f) {
		f.Add(text)
	}
	for _, text := range []string{plain, everything, tableLogic, varied} {
		f.Add([]byte(text))
	}
	for _, b := range badFiles(f) {
		f.Add([]byte(b.text))
	}
	f.Fuzz(func(t *testing.T, text []byte) {
		s, err := Parse(text)
		if err != nil {
			if p, ok := err.(Problems); !ok || len(p) == 0 || len(p) > MaxProblems+1 || s != nil {
				t.Fatalf("%T with %d problems", err, len(p))
			}
			return
		}
		checkRoundTrip(t, text)
	})
}
