package studies

import (
	"bytes"
	"context"
	"encoding/csv"
	"encoding/json"
	"encoding/xml"
	"io"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"leeway/scenarios"
	"leeway/sim"
	"leeway/sim/scenario"
	"leeway/sim/study"
	"leeway/sim/study/stat"
)

var ctx = context.Background()

func subject(t testing.TB, slug string) *Subject {
	t.Helper()
	e, ok := scenarios.Find(slug)
	if !ok {
		t.Fatal(slug)
	}
	sc, err := scenario.Parse(e.Data)
	if err != nil {
		t.Fatal(err)
	}
	sc.Timing.Tick, sc.Timing.DecideEvery, sc.Ring.Period = 0.01, 0.02, 0.05 // half the work
	s, err := New(sc)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func table(t *testing.T, r *Rows, axes []study.Axis) (head []string, rows [][]string) {
	t.Helper()
	var b bytes.Buffer
	if err := r.WriteCSV(&b, axes); err != nil {
		t.Fatal(err)
	}
	all, err := csv.NewReader(&b).ReadAll() // which insists on rows of one length
	if err != nil {
		t.Fatal(err)
	}
	return all[0], all[1:]
}

// wellFormed checks that a picture is XML, holds a text, and has no number that a
// drawing program would choke on.
func wellFormed(t *testing.T, what string, picture []byte, words ...string) {
	t.Helper()
	for d := xml.NewDecoder(bytes.NewReader(picture)); ; {
		if _, err := d.Token(); err == io.EOF {
			break
		} else if err != nil {
			t.Fatalf("%s: %v", what, err)
		}
	}
	for _, w := range words {
		if !bytes.Contains(picture, []byte(w)) {
			t.Errorf("%s does not say %q", what, w)
		}
	}
	if bytes.Contains(picture, []byte("NaN")) || bytes.Contains(picture, []byte("Inf")) {
		t.Errorf("%s holds what is not a number", what)
	}
}

// keys returns the names of a JSON object, and fails on text that is none.
func object(t *testing.T, view any) map[string]any {
	t.Helper()
	b, err := JSON(view)
	if err != nil {
		t.Fatal(err)
	}
	var m map[string]any
	if err := json.Unmarshal(b, &m); err != nil {
		t.Fatal(err)
	}
	return m
}

// The table of trials is the same however they were run, holds a row for each, and the
// link of a trial leads to the very run.
func TestTrialsOnPaper(t *testing.T) {
	s := subject(t, "sparse")
	var first string
	for _, workers := range []int{1, 3} {
		var rows Rows
		r := study.Runner{Workers: workers, Keep: rows.Keep, Grid: s.Grid()}
		x, err := study.RunTrials(ctx, &r, s.Trials, study.TrialsPlan{N: 12, Confidence: 0.95})
		if err != nil {
			t.Fatal(err)
		}
		var b bytes.Buffer
		if err := rows.WriteCSV(&b, nil); err != nil {
			t.Fatal(err)
		}
		if first == "" {
			first = b.String()
		} else if b.String() != first {
			t.Error("three workers write another table than one")
		}
		head, body := table(t, &rows, nil)
		if len(body) != 12 || head[0] != "trial" || body[3][0] != "3" {
			t.Errorf("%v, %d rows", head, len(body))
		}
		v := s.TrialsView(s.Head("trials", true, 12, 0.95), x)
		m := object(t, v)
		for _, name := range []string{"study", "name", "seed", "complete", "runs_done", "runs", "successes", "success", "leeway_m", "time_s", "groups", "worst"} {
			if _, ok := m[name]; !ok {
				t.Errorf("JSON has no %s", name)
			}
		}
		look := v.Worst[0]
		sc, err := scenario.Decode(look.Link)
		if err != nil {
			t.Fatal(err)
		}
		one, err := New(sc) // its own trial, with its seed as it is
		if err != nil {
			t.Fatal(err)
		}
		one.Scenario.Vary.SameSeed = true
		if one, err = New(one.Scenario); err != nil {
			t.Fatal(err)
		}
		alone, err := study.RunTrials(ctx, &study.Runner{}, one.Trials, study.TrialsPlan{N: 1, Confidence: 0.95})
		if err != nil || alone.Results[0].Hash != x.Results[look.Trial].Hash {
			t.Errorf("trial %d by its link: %v", look.Trial, err)
		}
		picture, err := s.TrialsChart(x, r.Grid)
		if err != nil {
			t.Fatal(err)
		}
		wellFormed(t, "trials", picture, "of 12 trials")
	}
}

func TestSweepOnPaper(t *testing.T) {
	s := subject(t, "sparse")
	axis := func(path string, low, high float64, steps int) study.Axis {
		a, err := s.Axis(path, low, high, steps)
		if err != nil {
			t.Fatal(err)
		}
		return a
	}
	beams, speed := axis("ring.beams", 8, 24, 2), axis("robot.speed_m_s", 0.3, 0.6, 2)
	for name, p := range map[string]study.SweepPlan{
		"curve":                  {Axes: []study.Axis{beams}},
		"map":                    {Axes: []study.Axis{beams, speed}},
		"cloud":                  {Axes: []study.Axis{beams, speed}, Layout: study.LatinHypercube, Points: 3},
		"shares of the variance": {Axes: []study.Axis{beams, speed}, Layout: study.SobolIndices, Points: 2},
	} {
		p.N, p.Confidence = 3, 0.95
		var rows Rows
		x, err := study.RunSweep(ctx, &study.Runner{Keep: rows.Keep}, s.Family(p.Axes), p)
		if err != nil {
			t.Fatal(err)
		}
		wellFormed(t, name, s.SweepChart(x), "Under the canteen tables")
		m := object(t, s.SweepView(s.Head("sweep", true, 9, 0.95), x))
		if len(m["cells"].([]any)) != p.Settings() {
			t.Errorf("%s: %d cells", name, len(m["cells"].([]any)))
		}
		head, body := table(t, &rows, p.Axes)
		if head[0] != "ring_beams" || len(p.Axes) == 2 && head[1] != "robot_speed_m_s" {
			t.Errorf("%s: %v", name, head)
		}
		for _, r := range body {
			if b, err := strconv.Atoi(r[0]); err != nil || b < 8 || b > 24 {
				t.Errorf("%s: %v beams", name, r[0])
			}
		}
	}
	if _, err := s.Axis("robot.speed_m_s", 0, 1, 2); err == nil {
		t.Error("a speed of 0 was taken")
	}
	if _, err := s.Axis("robot.motion", 0, 1, 2); err == nil {
		t.Error("a choice was taken for a number")
	}
}

func TestOthersOnPaper(t *testing.T) {
	s := subject(t, "sparse")
	var rows Rows
	a, err := study.RunAudit(ctx, &study.Runner{Keep: rows.Keep}, s.Trials, 2, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	wellFormed(t, "audit", s.AuditChart(a), "What costs only together", "delay and lag")
	if m := object(t, s.AuditView(s.Head("audit", true, 80, 0.95), a)); len(m["success_by_set"].([]any)) != 64 || m["sentence"] == "" {
		t.Error("the audit in JSON is not whole")
	}
	if head, body := table(t, &rows, nil); len(body) != 80 || head[2] != "delay_and_lag_real" || body[0][2] != "0" && body[0][2] != "1" {
		t.Errorf("audit: %d rows, %v", len(body), head)
	}
	wellFormed(t, "no audit", s.AuditChart(&study.Audit{Assumptions: study.Assumptions()}), "Nothing is known yet")

	axis, _ := s.Axis("ring.beams", 6, 36, 0)
	l, err := study.RunLimit(ctx, &study.Runner{}, s.Family([]study.Axis{axis}), study.LimitPlan{Axis: axis, Smallest: true, Target: 0.5, Confidence: 0.9, N: 8, Scan: 3, Tolerance: 8})
	if err != nil {
		t.Fatal(err)
	}
	wellFormed(t, "limit", s.LimitChart(l), "beams")
	if m := object(t, s.LimitView(s.Head("limit", true, 24, 0.9), l)); m["found"] != true || m["value"] == nil {
		t.Errorf("limit: %v", m)
	}

	c, err := study.RunCompare(ctx, &study.Runner{}, []string{"a", "b"}, []study.Source{s.Trials, s.Trials}, 4, 0.95)
	if err != nil {
		t.Fatal(err)
	}
	if m := object(t, s.CompareView(s.Head("compare", true, 8, 0.95), []string{"a", "b"}, c)); len(m["pairs"].([]any)) != 1 {
		t.Errorf("compare: %v", m)
	}
	tune, err := study.RunTune(ctx, &study.Runner{}, s.Family([]study.Axis{axis}), []float64{10}, study.TunePlan{Axes: []study.Axis{axis}, N: 3, Fresh: 3, Settings: 3, Confidence: 0.95})
	if err != nil {
		t.Fatal(err)
	}
	if m := object(t, s.TuneView(s.Head("tune", true, 15, 0.95), tune)); m["best"] == nil || m["best_on_fresh_trials"] == nil {
		t.Errorf("tune: %v", m)
	}
}

// JUnit XML has a case a file: failed, skipped or neither.
func TestJUnit(t *testing.T) {
	s := subject(t, "sparse")
	var list []Checked
	for _, v := range []stat.Verdict{stat.Accept, stat.Reject, stat.Undecided} {
		c := &study.Check{Verdict: v, Plan: study.CheckPlan{Target: 0.9}, Bounds: stat.Interval{Low: 0.2, High: 0.95}, Trials: &study.Trials{
			Groups: []study.Group{{Why: `too <close> & "tight"`, Count: 3, Example: 7}},
		}}
		list = append(list, Checked{File: "a b.json", View: s.CheckView(s.Head("check", true, 1, 0.95), c), Seconds: 1.5})
	}
	b, err := JUnit(list)
	if err != nil {
		t.Fatal(err)
	}
	var got junitSuites
	if err := xml.Unmarshal(b, &got); err != nil {
		t.Fatal(err)
	}
	if got.Tests != 3 || got.Failures != 1 || got.Skipped != 1 || len(got.Suites) != 3 {
		t.Errorf("%+v", got)
	}
	if f := got.Suites[1].Cases[0].Failure; f == nil || !strings.Contains(f.Text, `too <close> & "tight" near`) || !strings.Contains(f.Message, "90 % is asked") {
		t.Errorf("%s", b)
	}
}

// Generated floors are the same for all designs, differ from trial to trial, and a trial
// printed as a scenario is the run of the study.
func TestFloors(t *testing.T) {
	a, b := subject(t, "sparse").Scenario, subject(t, "pocket").Scenario
	for _, kind := range []string{"scattered", "rooms", "pockets", "mazes"} {
		f, err := NewFloors(kind, 5, a, b)
		if err != nil {
			t.Fatal(err)
		}
		var last string
		for i := range 3 {
			x, err := f.On(a).Trial(i)
			if err != nil {
				t.Fatal(err)
			}
			y, err := f.On(b).Trial(i)
			if err != nil {
				t.Fatal(err)
			}
			if d := cmp.Diff(x.Floor, y.Floor); d != "" || x.Start != y.Start || x.Seed != y.Seed || x.Name == last {
				t.Errorf("%s: trial %d differs between designs, or not from the one before:\n%s", kind, i, d)
			}
			last = x.Name
			again, err := scenario.Parse(x.Print())
			if err != nil {
				t.Fatalf("%s: %v", kind, err)
			}
			one, err := again.Config()
			if err != nil {
				t.Fatal(err)
			}
			two, m, err := f.On(a).Config(i)
			if err != nil {
				t.Fatal(err)
			}
			one.Asked.Within, two.Asked.Within = 10, 10
			r, err := sim.New(one)
			if err != nil {
				t.Fatal(err)
			}
			q, err := sim.NewOn(m, two)
			if err != nil {
				t.Fatal(err)
			}
			if o, p := r.Finish(), q.Finish(); o != p {
				t.Errorf("%s: trial %d alone %+v, in the study %+v", kind, i, o, p)
			}
		}
	}
	if _, err := NewFloors("wet", 5, a); err == nil {
		t.Error("wet floors")
	}
}

// A study that is taken up from its parts, in any order, is the one that was not
// interrupted, and runs nothing twice.
func TestParts(t *testing.T) {
	s := subject(t, "sparse")
	p := study.TrialsPlan{N: 12, Confidence: 0.95}
	parts := make([]Part, 3)
	n := 0
	want, err := study.RunTrials(ctx, &study.Runner{Grid: s.Grid(), Keep: func(k study.Key, r study.Result) {
		if n < 10 {
			parts[n%3].Add(k, r)
		}
		n++
	}}, s.Trials, p)
	if err != nil {
		t.Fatal(err)
	}
	var data [][]byte
	for i := range parts {
		b, err := parts[2-i].Encode()
		if err != nil {
			t.Fatal(err)
		}
		data = append(data, b)
	}
	known, err := DecodeParts(data...)
	if err != nil {
		t.Fatal(err)
	}
	run := 0
	got, err := study.RunTrials(ctx, &study.Runner{Grid: s.Grid(), Known: known, Keep: func(study.Key, study.Result) { run++ }}, s.Trials, p)
	if err != nil || run != 2 {
		t.Errorf("%d runs, %v", run, err)
	}
	if d := cmp.Diff(want, got, cmpopts.EquateNaNs()); d != "" {
		t.Error(d)
	}
	if _, err := DecodeParts(data[0][:9]); err == nil {
		t.Error("a torn part was taken")
	}
}
