package cli

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"leeway/scenarios"
	"leeway/sim/geom"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
)

// jsonOf runs a command line and reads the object that it prints.
func jsonOf(t *testing.T, in string, args ...string) map[string]any {
	t.Helper()
	_, out, errs := leeway(t, in, args...)
	var o map[string]any
	if err := json.Unmarshal([]byte(out), &o); err != nil {
		t.Fatalf("%v: %s", err, errs)
	}
	return o
}

// What run prints of the models is what a Set stepped by hand says of them.
func TestModelsAreThoseOfASet(t *testing.T) {
	for _, slug := range []string{"wall", "lag", "passage", "cart", "drift"} {
		e, _ := scenarios.Find(slug)
		sc, err := scenario.Parse(e.Data)
		if err != nil {
			t.Fatal(err)
		}
		c, err := sc.Config()
		if err != nil {
			t.Fatal(err)
		}
		set, err := shadow.New(c)
		if err != nil {
			t.Fatal(err)
		}
		// Every 0.1 s, up to the first such moment after the end.
		every := int64(math.Round(0.1 / c.Tick))
		var ways [shadow.Models][]geom.Vec
		var ended [shadow.Models]bool
		for {
			for w := range shadow.Models {
				if set.Tick()%every == 0 && !ended[w] {
					ways[w] = append(ways[w], set.Run(w).Pose().Pos)
					ended[w] = set.Run(w).Outcome().Status.String() != "running"
				}
			}
			if set.Done() {
				break
			}
			set.Step()
		}

		o := jsonOf(t, "", "run", "shipped:"+slug, "--json")
		models := o["models"].(map[string]any)
		if len(models) != int(shadow.Models) {
			t.Errorf("%s: %d models", slug, len(models))
		}
		for w := range shadow.Models {
			m := models[w.String()].(map[string]any)
			want, d := set.Run(w).Outcome(), set.Deviation(w)
			number := func(name string, v float64) {
				t.Helper()
				if m[name] != v {
					t.Errorf("%s, %s: %s is %v, want %v", slug, w, name, m[name], v)
				}
			}
			number("time_s", want.Time)
			number("leeway_m", want.Leeway)
			number("way_m", want.Way)
			number("switches", float64(want.Switches))
			number("contacts", float64(want.Contacts))
			if m["status"] != want.Status.String() || m["reason"] != want.Reason || m["hash"] != fmt.Sprintf("%016x", want.Hash) {
				t.Errorf("%s, %s: %v %v %v, want %+v", slug, w, m["status"], m["reason"], m["hash"], want)
			}
			if s := m["shortest_m"].(float64); s < c.Goal.Sub(c.Start.Pos).Norm()-c.GoalRadius-1e-9 || want.Way < s*0.98 {
				t.Errorf("%s, %s: a shortest way of %v m, straight it is %v m, driven were %v m", slug, w, s, c.Goal.Sub(c.Start.Pos).Norm(), want.Way)
			}
			partings := m["partings"].([]any)
			if w == shadow.Robot {
				for _, name := range []string{"deviation_max_m", "deviation_max_at_s", "deviation_rms_m", "frechet_m"} {
					if v, ok := m[name]; !ok || v != nil {
						t.Errorf("%s: the robot has %s %v", slug, name, v)
					}
				}
				if len(partings) != 0 {
					t.Errorf("%s: the robot parts from itself", slug)
				}
				continue
			}
			number("deviation_max_m", d.Largest)
			number("deviation_max_at_s", d.At)
			number("deviation_rms_m", d.RMS)
			number("frechet_m", shadow.Frechet(shadow.Resample(ways[shadow.Robot], 1000), shadow.Resample(ways[w], 1000)))
			if all := set.Partings(w); len(all) != len(partings) {
				t.Errorf("%s, %s: %d partings, want %d", slug, w, len(partings), len(all))
			} else {
				for i, p := range all {
					kind := map[bool]string{true: "drift", false: "decision"}[p.Drifted]
					got := partings[i].(map[string]any)
					if got["t_s"] != p.Time || got["kind"] != kind || got["reason"] != p.Text {
						t.Errorf("%s, %s: parting %v, want %+v", slug, w, got, p)
					}
				}
			}
		}
		// The robot does not know of its shadows.
		alone := jsonOf(t, "", "run", "shipped:"+slug, "--json", "--no-shadows")
		for name, v := range alone {
			if o[name] != v {
				t.Errorf("%s: %s is %v alone and %v with shadows", slug, name, v, o[name])
			}
		}
		if alone["models"] != nil || alone["advice"] != nil || len(o["advice"].([]any)) == 0 {
			t.Errorf("%s: alone it has models %v and advice %v, with shadows advice %v", slug, alone["models"], alone["advice"], o["advice"])
		}
	}
}

func TestNoShortestWaySaysWhy(t *testing.T) {
	if m := jsonOf(t, shut, "run", "-", "--json")["models"].(map[string]any)["robot"].(map[string]any); m["shortest_m"] != nil ||
		!strings.Contains(m["shortest_reason"].(string), "closed to a hull") {
		t.Errorf("%v: %v", m["shortest_m"], m["shortest_reason"])
	}
	moved := strings.Replace(open, `"leeway": 1,`, `"leeway": 1, "edits": [{"tick": 100, "what": "goal", "to_m": [4, 1]}],`, 1)
	for name, m := range jsonOf(t, moved, "run", "-", "--json")["models"].(map[string]any) {
		m := m.(map[string]any)
		if m["shortest_m"] != nil || !strings.Contains(m["shortest_reason"].(string), "goal was moved") {
			t.Errorf("%s: %v: %v", name, m["shortest_m"], m["shortest_reason"])
		}
	}
	if m := jsonOf(t, open, "run", "-", "--json")["models"].(map[string]any)["point"].(map[string]any); m["shortest_m"] != 2.85 || m["shortest_reason"] != nil {
		t.Errorf("3 m straight to a goal of 0.15 m: %v, %v", m["shortest_m"], m["shortest_reason"])
	}
}

// Under the look-ahead rule it is the point ahead of the axle that must arrive: the
// hull's centre goes ℓ less, and the point robot starts ℓ ahead.
func TestShortestWayUnderTheLookAheadRule(t *testing.T) {
	ahead := strings.Replace(open, `"leeway": 1,`, `"leeway": 1, "robot": {"steering": "look_ahead", "look_ahead_m": 0.25},`, 1)
	m := jsonOf(t, ahead, "run", "-", "--json")["models"].(map[string]any)
	for name := range m {
		if got := m[name].(map[string]any)["shortest_m"].(float64); math.Abs(got-2.6) > 1e-9 {
			t.Errorf("%s: %v m", name, got)
		}
	}
}

func TestRunInWords(t *testing.T) {
	_, out, _ := leeway(t, "", "run", "shipped:lag")
	lines := strings.Split(out, "\n")
	find := func(start string) string {
		t.Helper()
		for _, l := range lines {
			if strings.HasPrefix(l, start) {
				return l
			}
		}
		t.Fatalf("no line %q in\n%s", start, out)
		return ""
	}
	width := len([]rune(find("                               point   unicycle      robot")))
	for _, row := range []string{"arrives after", "leeway    ", "way against shortest", "mode switches   ", "farthest from the point", "wheels at their limit", "lost track by"} {
		found := false
		for _, l := range lines {
			found = found || strings.HasPrefix(l, "  "+row) && len([]rune(l)) == width
		}
		if !found {
			t.Errorf("no aligned row %q in\n%s", row, out)
		}
	}
	find("Parts from the point: ")
	find("! A gain of ")
	if !strings.Contains(find("A simulation says nothing"), "ISO 13855") {
		t.Error("the caution names no standard")
	}
	if _, alone, _ := leeway(t, "", "run", "shipped:lag", "--no-shadows"); strings.Contains(alone, "unicycle") || !strings.HasPrefix(out, alone) {
		t.Errorf("alone:\n%s", alone)
	}
}

func TestPictureHasTheShadows(t *testing.T) {
	with, alone := filepath.Join(t.TempDir(), "with.svg"), filepath.Join(t.TempDir(), "alone.svg")
	leeway(t, "", "run", "shipped:wall", "--svg", with)
	leeway(t, "", "run", "shipped:wall", "--svg", alone, "--no-shadows")
	for _, dash := range []string{`stroke-dasharray="0 4.6"`, `stroke-dasharray="7 5"`} {
		a, err := os.ReadFile(with)
		if err != nil {
			t.Fatal(err)
		}
		b, err := os.ReadFile(alone)
		if err != nil {
			t.Fatal(err)
		}
		if !strings.Contains(string(a), dash) || strings.Contains(string(b), dash) {
			t.Errorf("%s: %v with shadows, %v alone", dash, strings.Contains(string(a), dash), strings.Contains(string(b), dash))
		}
	}
}

// The table of a run has the robot's rows only, however long its shadows take.
func TestTableEndsWithTheRobot(t *testing.T) {
	path := filepath.Join(t.TempDir(), "way.csv")
	with, alone := filepath.Join(t.TempDir(), "with.csv"), path
	leeway(t, "", "run", "shipped:drift", "--csv", with)
	leeway(t, "", "run", "shipped:drift", "--csv", alone, "--no-shadows")
	a, err := os.ReadFile(with)
	if err != nil {
		t.Fatal(err)
	}
	b, err := os.ReadFile(alone)
	if err != nil {
		t.Fatal(err)
	}
	if string(a) != string(b) {
		t.Errorf("%d bytes with shadows, %d alone", len(a), len(b))
	}
}
