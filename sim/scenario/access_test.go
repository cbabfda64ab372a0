package scenario

import (
	"math"
	"reflect"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"leeway/sim"
)

// TestEveryPlaceHasARule: a number, text or list without a rule would be accepted whatever it holds.
func TestEveryPlaceHasARule(t *testing.T) {
	used := map[string]bool{}
	var walk func(s *spec, at string)
	walk = func(s *spec, at string) {
		switch s.typ.Kind() {
		case reflect.Struct:
			for _, f := range s.fields {
				walk(f.spec, strings.TrimPrefix(at+"."+f.name, "."))
			}
			return
		case reflect.Slice:
			walk(s.elem, at+"[]")
		case reflect.Array:
			walk(s.elem, at+"[]")
			return
		case reflect.Pointer:
			walk(s.elem, at)
			return
		}
		r := s.rule
		if r == nil {
			if s.typ.Kind() != reflect.Bool {
				t.Errorf("%s has no rule", at)
			}
			return
		}
		used[at] = true
		if r.Label == "" {
			t.Errorf("%s has no label", at)
		}
		switch s.typ.Kind() {
		case reflect.Slice:
			if !r.items {
				t.Errorf("%s: the rule of a list must count", at)
			}
		case reflect.String:
			if (r.chars > 0) == (r.Options != nil) {
				t.Errorf("%s: a text has a length or choices", at)
			}
		case reflect.Bool:
			if len(r.Options) != 2 {
				t.Errorf("%s: two options", at)
			}
		default:
			if !(r.Min <= r.Max) || r.Max > maxSeed {
				t.Errorf("%s: no range", at)
			}
		}
	}
	walk(root(), "")
	for _, r := range rules() {
		if !used[r.Path] {
			t.Errorf("the rule for %s belongs to nothing", r.Path)
		}
	}
}

func TestFields(t *testing.T) {
	s := New(12, 8)
	all := Fields()
	if len(all) < 50 {
		t.Fatalf("%d fields", len(all))
	}
	live := map[sim.Number]string{}
	for _, f := range all {
		if g, ok := FieldAt(f.Path); !ok || !cmp.Equal(f, g) {
			t.Errorf("%s: FieldAt gives %v", f.Path, g)
		}
		if f.Live {
			live[f.Number] = f.Path
		}
		if f.Options != nil {
			now, err := s.ChoiceAt(f.Path)
			if err != nil {
				t.Error(err)
			}
			if _, err := s.NumberAt(f.Path); err == nil {
				t.Errorf("%s: a choice read as a number", f.Path)
			}
			for _, o := range f.Options {
				c := s.Clone()
				if err := c.SetChoice(f.Path, o.Value); err != nil {
					t.Errorf("%s = %s: %v", f.Path, o.Value, err)
				}
				if got, _ := c.ChoiceAt(f.Path); got != o.Value {
					t.Errorf("%s: set %s, got %s", f.Path, o.Value, got)
				}
				if o.Label == "" {
					t.Errorf("%s: %s has no label", f.Path, o.Value)
				}
			}
			c := s.Clone()
			if err := c.SetChoice(f.Path, "nonsense"); err == nil || !strings.Contains(err.Error(), "must be one of") {
				t.Errorf("%s: %v", f.Path, err)
			}
			if got, _ := c.ChoiceAt(f.Path); got != now {
				t.Errorf("%s: a refused change left %s", f.Path, got)
			}
			continue
		}
		if f.Step <= 0 || math.Abs(f.Step*math.Pow10(f.Decimals)-math.Round(f.Step*math.Pow10(f.Decimals))) > 1e-9 {
			t.Errorf("%s: steps of %v are not shown with %d decimals", f.Path, f.Step, f.Decimals)
		}
		now, err := s.NumberAt(f.Path)
		if err != nil {
			t.Error(err)
		}
		if now < f.Min || now > f.Max {
			t.Errorf("%s: the default %v is out of range", f.Path, now)
		}
		if _, err := s.ChoiceAt(f.Path); err == nil {
			t.Errorf("%s: a number read as a choice", f.Path)
		}
		for _, bad := range []float64{f.Min - f.Step, f.Max + f.Step, math.NaN(), math.Inf(1), math.Inf(-1)} {
			if err := s.SetNumber(f.Path, bad); err == nil || !strings.Contains(err.Error(), "between") {
				t.Errorf("%s = %v: %v", f.Path, bad, err)
			}
			if got, _ := s.NumberAt(f.Path); got != now {
				t.Errorf("%s: a refused change left %v", f.Path, got)
			}
		}
	}
	if len(live) != 6 {
		t.Errorf("live numbers: %v", live)
	}
	want := map[sim.Number]string{
		sim.SpeedNumber: "robot.speed_m_s", sim.LagNumber: "robot.wheel_lag_s", sim.GainNumber: "robot.steering_gain_per_s",
		sim.NoiseNumber: "ring.noise_m", sim.NoiseGainNumber: "ring.noise_per_m", sim.DropoutNumber: "ring.dropout",
	}
	if d := cmp.Diff(want, live); d != "" {
		t.Error(d)
	}
	all[0].Path = "spoilt"
	for _, f := range all {
		for i := range f.Options {
			f.Options[i].Value = "spoilt"
		}
	}
	if Fields()[0].Path == "spoilt" || FieldAtOption(t) == "spoilt" {
		t.Error("Fields hands out its own memory")
	}
}

func FieldAtOption(t *testing.T) string {
	f, ok := FieldAt("robot.motion")
	if !ok {
		t.Fatal("no field robot.motion")
	}
	return f.Options[0].Value
}

// TestSetNumber: a change within its range is made, or refused with a reason and without a trace.
func TestSetNumber(t *testing.T) {
	s := New(12, 8)
	for _, f := range Fields() {
		if f.Options != nil {
			continue
		}
		for _, v := range []float64{f.Min, f.Max, (f.Min + f.Max) / 2} {
			if f.Decimals == 0 {
				v = math.Round(v)
			}
			c := s.Clone()
			err := c.SetNumber(f.Path, v)
			if err != nil {
				if d := cmp.Diff(s, c); d != "" {
					t.Errorf("%s = %v: refused (%v), but\n%s", f.Path, v, err, d)
				}
				continue
			}
			if got, _ := c.NumberAt(f.Path); got != v {
				t.Errorf("%s: set %v, got %v", f.Path, v, got)
			}
			if p := c.Validate(); p != nil {
				t.Errorf("%s = %v: accepted, but %v", f.Path, v, p)
			}
			if again := mustParse(t, string(c.Print())); !cmp.Equal(again, c) {
				t.Errorf("%s = %v does not survive a file", f.Path, v)
			}
		}
	}
	for _, c := range []struct {
		path  string
		value float64
		want  string
	}{
		{"robot.track_m", 0.6, "wider than the hull"},
		{"robot.radius_m", 0.1, "wider than the hull"},
		{"robot.radius_m", 1.5, "no room"},
		{"ring.beams", 8.5, "whole number"},
		{"floor.width_m", 4, "the goal is not on the floor"},
		{"timing.tick_s", 0.007, "whole multiple"},
		{"robot.weight_kg", 3, "there is no field"},
		{"floor.walls", 3, "there is no field"},
		{"leeway", 1, "there is no field"},
	} {
		if err := s.SetNumber(c.path, c.value); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s = %v: %v, want %q", c.path, c.value, err, c.want)
		}
	}
	if d := cmp.Diff(New(12, 8), s); d != "" {
		t.Errorf("refused changes left traces:\n%s", d)
	}
}

func TestSetNumberCarriesAlong(t *testing.T) {
	s := New(12, 8)
	if err := s.SetNumber("robot.radius_m", 0.16); err != nil {
		t.Fatal(err)
	}
	if s.Ring.Mount != 0.16 {
		t.Errorf("a hull of 0.16 m with a ring at %v m", s.Ring.Mount)
	}
	s.Ring.Bearings, s.Ring.Beams = []float64{0, 20}, 2
	if err := s.SetNumber("ring.beams", 12); err != nil {
		t.Fatal(err)
	}
	if s.Ring.Bearings != nil {
		t.Error("twelve beams on two bearings")
	}
}

// TestSetNumberOfABadScenario: what was wrong before does not keep other numbers from changing.
func TestSetNumberOfABadScenario(t *testing.T) {
	s := New(12, 8)
	s.Goal.X = 13
	if err := s.SetNumber("robot.speed_m_s", 0.3); err != nil {
		t.Error(err)
	}
	if err := s.SetNumber("goal.x_m", 11); err != nil {
		t.Error(err)
	}
	if p := s.Validate(); p != nil {
		t.Error(p)
	}
}

func TestNumbersOfTheDefaultLogic(t *testing.T) {
	s := New(12, 8)
	derived, err := s.NumberAt("logic.notice_m")
	if err != nil || derived <= 0 {
		t.Fatal(derived, err)
	}
	if err := s.SetNumber("logic.notice_m", 0.7); err != nil {
		t.Fatal(err)
	}
	if got, _ := s.NumberAt("logic.notice_m"); got != 0.7 || *s.Logic.Notice != 0.7 || s.Logic.Safe != nil {
		t.Errorf("%v, %+v", got, s.Logic)
	}
	c := s.Clone()
	*c.Logic.Notice = 0.5
	if *s.Logic.Notice != 0.7 {
		t.Error("a clone shares the numbers of the logic")
	}
	table := mustParse(t, tableLogic)
	if _, err := table.NumberAt("logic.notice_m"); err == nil {
		t.Error("a table has a number of the default logic")
	}
	if err := table.SetNumber("logic.notice_m", 0.3); err == nil {
		t.Error("a table takes a number of the default logic")
	}
	if err := table.SetChoice("logic.side", "left"); err == nil {
		t.Error("a table takes the side of the default logic")
	}
}

// TestClone spoils every place of a clone and looks whether the original notices.
func TestClone(t *testing.T) {
	for _, text := range []string{everything, tableLogic} {
		s, want := mustParse(t, text), mustParse(t, text)
		c := s.Clone()
		if d := cmp.Diff(s, c); d != "" {
			t.Fatalf("a clone differs:\n%s", d)
		}
		var spoil func(v reflect.Value)
		spoil = func(v reflect.Value) {
			switch v.Kind() {
			case reflect.Struct:
				for i := range v.NumField() {
					spoil(v.Field(i))
				}
			case reflect.Slice, reflect.Array:
				for i := range v.Len() {
					spoil(v.Index(i))
				}
			case reflect.Pointer:
				if !v.IsNil() {
					spoil(v.Elem())
				}
			case reflect.String:
				v.SetString("spoilt")
			case reflect.Bool:
				v.SetBool(!v.Bool())
			case reflect.Float64:
				v.SetFloat(-77)
			default:
				v.SetInt(-77)
			}
		}
		spoil(reflect.ValueOf(c).Elem())
		if d := cmp.Diff(want, s); d != "" {
			t.Errorf("spoiling a clone spoilt the original:\n%s", d)
		}
	}
}
