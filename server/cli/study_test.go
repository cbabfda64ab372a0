package cli

import (
	"bytes"
	"context"
	"encoding/json"
	"encoding/xml"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"leeway/sim/scenario"
)

// posts is a small floor on which starts, goals and a post vary; its robot has too few
// beams to see the post always.
const posts = `{"leeway": 1, "name": "Two posts", "floor": {"width_m": 6, "height_m": 4, "solids": [{"id": "post", "center_m": [3, 2], "radius_m": 0.2}]},
 "ring": {"beams": 5}, "start": {"x_m": 1, "y_m": 2}, "goal": {"x_m": 5, "y_m": 2}, "asked": {"within_s": 40},
 "timing": {"tick_s": 0.01},
 "vary": {"start": [{"from_m": [0, 0], "to_m": [1.5, 4]}], "turn_deg": 180, "goal": [{"from_m": [4.5, 0], "to_m": [6, 4]}], "solids": [{"id": "post", "by_m": 0.3}]}}`

func TestTrialsCommand(t *testing.T) {
	file, table, picture := write(t, "posts.json", posts), filepath.Join(t.TempDir(), "t.csv"), filepath.Join(t.TempDir(), "t.svg")
	o := jsonOf(t, "", "trials", file, "--n", "40", "--json", "--csv", table, "--svg", picture, "--jobs", "2")
	if o["study"] != "trials" || o["runs"] != 40.0 || o["complete"] != true || o["successes"].(float64) < 5 {
		t.Errorf("%v of %v", o["successes"], o["runs"])
	}
	again := jsonOf(t, "", "trials", file, "--n", "40", "--json", "--jobs", "1")
	for _, k := range []string{"successes", "leeway_m", "worst", "groups"} {
		a, _ := json.Marshal(o[k])
		if b, _ := json.Marshal(again[k]); !bytes.Equal(a, b) {
			t.Errorf("one job gives another %s", k)
		}
	}
	text, err := os.ReadFile(table)
	if err != nil || strings.Count(string(text), "\n") != 41 {
		t.Errorf("the table has %d lines: %v", strings.Count(string(text), "\n"), err)
	}
	if svg, err := os.ReadFile(picture); err != nil || !bytes.HasPrefix(svg, []byte("<svg")) {
		t.Error("no picture", err)
	}

	// A trial printed as a scenario is, on its own, the run of the study.
	worst := o["worst"].([]any)[0].(map[string]any)
	_, printed, _ := leeway(t, "", "trials", file, "--trial", "0")
	if sc, err := scenario.Parse([]byte(printed)); err != nil || sc.Name != "Two posts, trial 0" {
		t.Error(err)
	}
	alone := jsonOf(t, "", "run", worst["link"].(string), "--json", "--no-shadows")
	if alone["hash"] != worst["hash"] {
		t.Errorf("the worst trial has hash %v in the study and %v by itself", worst["hash"], alone["hash"])
	}
	_, words, _ := leeway(t, "", "trials", file, "--n", "12")
	for _, w := range []string{"12 trials", "does what is asked", "Worth a look", "median"} {
		if !strings.Contains(words, w) {
			t.Errorf("the words lack %q:\n%s", w, words)
		}
	}
}

// A check ends with the status that scripts wait for.
func TestCheckCommand(t *testing.T) {
	file, shutFile, badFile := write(t, "posts.json", posts), write(t, "shut.json", shut), write(t, "bad.json", bad)
	openFile, junit := write(t, "open.json", open), filepath.Join(t.TempDir(), "check.xml")
	for _, c := range []struct {
		args string
		code int
		out  string
	}{
		{openFile, 0, "met: 50 of 50"},
		{shutFile + " --budget 50", 1, "not met: 0 of 50"},
		{file + " --success 0.8 --budget 8", 3, "undecided"},
		{badFile, 2, ""},
		{openFile + " " + badFile, 2, ""},
		{openFile + " --success 2", 2, ""},
		{openFile + " --confidence 1", 2, ""},
		{openFile + " " + shutFile + " --budget 50 --junit " + junit, 1, "not met"},
	} {
		code, out, errs := leeway(t, "", append([]string{"check"}, strings.Fields(c.args)...)...)
		if code != c.code || !strings.Contains(out, c.out) {
			t.Errorf("check %s: %d, want %d\n%s%s", c.args, code, c.code, out, errs)
		}
	}
	text, err := os.ReadFile(junit)
	if err != nil {
		t.Fatal(err)
	}
	var suites struct {
		Tests    int `xml:"tests,attr"`
		Failures int `xml:"failures,attr"`
	}
	if err := xml.Unmarshal(text, &suites); err != nil || suites.Tests != 2 || suites.Failures != 1 {
		t.Errorf("%v: %+v", err, suites)
	}
	_, out, _ := leeway(t, "", "check", openFile, "--json")
	var list []map[string]any
	if err := json.Unmarshal([]byte(out), &list); err != nil || list[0]["verdict"] != "met" || list[0]["target"] != 0.9 {
		t.Errorf("%v: %s", err, out)
	}
}

func TestOtherStudies(t *testing.T) {
	file := write(t, "posts.json", posts)
	more := write(t, "more.json", strings.Replace(posts, `"beams": 5`, `"beams": 16`, 1))
	tuned := filepath.Join(t.TempDir(), "tuned.json")
	for _, c := range []struct {
		args  string
		study string
		key   string
	}{
		{"sweep " + file + " --over ring.beams=4:12:2 --n 4", "sweep", "cells"},
		{"sweep " + file + " --over ring.beams=4:12 --over robot.speed_m_s=0.3:0.6 --layout sobol --points 2 --n 2", "sweep", "success_indices"},
		{"compare " + file + " " + more + " --n 12", "compare", "pairs"},
		{"compare " + file + " " + more + " --n 4 --floors scattered", "compare", "pairs"},
		{"audit " + file + " --n 2", "audit", "sentence"},
		{"limit " + file + " --number ring.beams=4:20 --smallest --success 0.5 --n 10 --scan 3 --tolerance 8", "limit", "curve"},
		{"tune " + file + " --number robot.speed_m_s=0.3:0.6 --n 4 --settings 3 --fresh 4 -o " + tuned, "tune", "best_on_fresh_trials"},
	} {
		o := jsonOf(t, "", strings.Fields(c.args+" --json")...)
		if o["study"] != c.study || o[c.key] == nil || o["complete"] != true {
			t.Errorf("%s: %v", c.args, o)
		}
		code, words, errs := leeway(t, "", strings.Fields(c.args)...)
		if code != 0 || !strings.Contains(words, "seed 1") && !strings.Contains(words, "Seed 1") {
			t.Errorf("%s: %d\n%s%s", c.args, code, words, errs)
		}
	}
	if text, err := os.ReadFile(tuned); err != nil {
		t.Error(err)
	} else if _, err := scenario.Parse(text); err != nil {
		t.Error(err)
	}
}

func TestStudiesRefuse(t *testing.T) {
	file := write(t, "posts.json", posts)
	for args, want := range map[string]string{
		"sweep FILE":                                                  "over",
		"sweep FILE --over robot.speed_m_s":                           "is not PATH=LOW:HIGH",
		"sweep FILE --over robot.speed_m_s=1:x":                       "is not PATH=LOW:HIGH",
		"sweep FILE --over robot.speed_m_s=0.5:0.2":                   "must be below",
		"sweep FILE --over robot.speed_m_s=0.2:9":                     "between",
		"sweep FILE --over robot.spead=0.2:1":                         "no field",
		"sweep FILE --over seed=1:5":                                  "cannot differ",
		"sweep FILE --over robot.speed_m_s=0.2:1 --budget 3":          "too small",
		"sweep FILE --over robot.speed_m_s=0.2:1 --layout circle":     "--layout must be",
		"trials FILE --n 0":                                           "--n must be",
		"trials FILE --jobs -1":                                       "--jobs",
		"trials FILE --seed -1":                                       "--seed",
		"audit FILE --budget 10":                                      "too small",
		"limit FILE --number robot.speed_m_s=0.2:1 --n 5":             "without a failure are needed",
		"limit FILE --number robot.speed_m_s=0.2:1 --success 1":       "--success",
		"tune FILE --number robot.speed_m_s=0.6:1":                    "outside of what it is to be tuned in",
		"tune FILE --number robot.speed_m_s=0.2:1 --reward happiness": "--reward must be",
		"compare FILE FILE --floors wet":                              "there are no floors",
		"compare FILE":                                                "requires at least 2",
		"trials FILE --csv no/such/folder.csv --n 2":                  "no/such",
	} {
		code, _, errs := leeway(t, "", strings.Fields(strings.ReplaceAll(args, "FILE", file))...)
		if code != 2 || !strings.Contains(errs, want) {
			t.Errorf("%s: %d %q, want %q", args, code, errs, want)
		}
	}
}

// A study that is interrupted prints what is known, as far as its trials go.
func TestInterruptedStudy(t *testing.T) {
	ctx, stop := context.WithCancel(t.Context())
	time.AfterFunc(300*time.Millisecond, stop)
	var out, errs bytes.Buffer
	code := Execute(ctx, []string{"trials", write(t, "posts.json", posts), "--n", "1000000", "--json"}, strings.NewReader(""), &out, &errs)
	var o map[string]any
	if err := json.Unmarshal(out.Bytes(), &o); err != nil {
		t.Fatal(err, errs.String())
	}
	if code != 2 || o["complete"] != false || o["runs"].(float64) >= 1_000_000 || !strings.Contains(errs.String(), "stopped before the end") {
		t.Errorf("%d: %v runs, %s", code, o["runs"], errs.String())
	}
}

// Off a terminal, progress is plain lines, a few of them.
func TestProgress(t *testing.T) {
	var b bytes.Buffer
	p := newProgress(&b)
	p.began, p.last = time.Now().Add(-30*time.Second), time.Now().Add(-30*time.Second)
	p.show(25, 100)
	p.show(26, 100)
	p.done()
	if got := b.String(); got != "25 of 100 runs, 25 %, about 1m30s left\n" {
		t.Errorf("%q", got)
	}
	b.Reset()
	p.terminal, p.last = true, time.Now().Add(-time.Second)
	p.show(50, 100)
	p.done()
	if got := b.String(); got != "\r\x1b[K50 of 100 runs, 50 %, about 30s left\r\x1b[K" {
		t.Errorf("%q", got)
	}
}
