package cli

import (
	"bytes"
	"context"
	"encoding/csv"
	"encoding/json"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"net"
	"net/http"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"leeway/scenarios"
	"leeway/sim/scenario"
)

// leeway runs one command line.
func leeway(t *testing.T, in string, args ...string) (code int, out, errs string) {
	t.Helper()
	var o, e bytes.Buffer
	code = Execute(t.Context(), args, strings.NewReader(in), &o, &e)
	return code, o.String(), e.String()
}

func write(t *testing.T, name, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

const (
	open = `{"leeway": 1, "name": "Open", "floor": {"width_m": 5, "height_m": 4}, "start": {"x_m": 1, "y_m": 2}, "goal": {"x_m": 4, "y_m": 2}}`
	// A goal in a closed box is out of reach.
	shut = `{"leeway": 1, "name": "Shut", "floor": {"width_m": 8, "height_m": 6, "walls": [{"points_m": [[4, 2], [6, 2], [6, 4], [4, 4], [4, 2]]}]},
		"start": {"x_m": 1, "y_m": 3}, "goal": {"x_m": 5, "y_m": 3}, "asked": {"within_s": 20}}`
	bad = "{\n  \"leeway\": 1,\n  \"floor\": {\"width_m\": 5, \"height_m\": 4},\n  \"robot\": {\"radius_m\": -1, \"color\": 3},\n" +
		"  \"start\": {\"x_m\": 1, \"y_m\": 2}, \"goal\": {\"x_m\": 4, \"y_m\": 2}\n}\n"
)

func TestExitCodes(t *testing.T) {
	openFile, shutFile, badFile := write(t, "open.json", open), write(t, "shut.json", shut), write(t, "bad.json", bad)
	_, link, _ := leeway(t, open, "link", "-")
	link = strings.TrimSpace(link)
	for _, c := range []struct {
		name string
		in   string
		args string
		code int
		out  string // to be found in the output
		errs string // to be found among the errors
	}{
		{"run arrives", "", "run " + openFile, 0, "arrived", ""},
		{"run from standard input", open, "run -", 0, "arrived", ""},
		{"run a link", "", "run " + link, 0, "arrived", ""},
		{"run bare link data", "", "run " + link[strings.Index(link, "#")+1:], 0, "arrived", ""},
		{"run does not arrive", "", "run " + shutFile, 1, "Shut", ""},
		{"run a bad file", "", "run " + badFile, 2, "", "bad.json:4:"},
		{"run nothing", "", "run", 2, "", "accepts 1 arg"},
		{"run no such file", "", "run nothing.json", 2, "", "there is no file nothing.json"},
		{"run a folder", "", "run .", 2, "", "directory"},
		{"run no such shipped", "", "run shipped:nothing", 2, "", "shipped:crossing"},
		{"run a damaged link", "", "run " + link[:len(link)-5], 2, "", "link"},
		{"run a bad seed", "", "run " + openFile + " --seed -3", 2, "", "seed"},
		{"run a seed that is none", "", "run " + openFile + " --seed x", 2, "", "seed"},
		{"run into a folder that is not there", "", "run " + openFile + " --csv no/such/folder.csv", 2, "", "no/such"},
		{"validate", "", "validate " + openFile, 0, "valid: Open", ""},
		{"validate shipped", "", "validate shipped:pocket", 0, "valid", ""},
		{"validate from standard input", bad, "validate -", 2, "", "standard input:4:"},
		{"validate two", "", "validate " + badFile + " " + openFile, 2, "open.json: valid", "radius_m"},
		{"link", "", "link " + openFile, 0, "http://127.0.0.1:8321/open#1", ""},
		{"link for another", "", "link " + openFile + " --base https://lab.example/", 0, "https://lab.example/open#1", ""},
		{"link a bad file", "", "link " + badFile, 2, "", "radius_m"},
		{"open", "", "open " + link, 0, `"Open"`, ""},
		{"open from standard input", link + "\n", "open -", 0, `"Open"`, ""},
		{"open nonsense", "", "open http://127.0.0.1/open", 2, "", "link: "},
		{"schema", "", "schema", 0, `"$schema"`, ""},
		{"version", "", "version", 0, "leeway ", ""},
		{"unknown command", "", "dance", 2, "", "unknown command"},
		{"unknown flag", "", "run --dance", 2, "", "unknown flag"},
		{"serve with an argument", "", "serve now", 2, "", "now"},
		{"serve at a bad address", "", "serve --addr nowhere --data " + t.TempDir(), 2, "", "nowhere"},
	} {
		t.Run(c.name, func(t *testing.T) {
			code, out, errs := leeway(t, c.in, strings.Fields(c.args)...)
			if code != c.code {
				t.Errorf("exit code %d, want %d", code, c.code)
			}
			if !strings.Contains(out, c.out) {
				t.Errorf("no %q in the output:\n%s", c.out, out)
			}
			if !strings.Contains(errs, c.errs) || c.errs == "" && errs != "" {
				t.Errorf("errors:\n%s\nwant %q", errs, c.errs)
			}
		})
	}
}

func TestEveryProblemOnALineOfItsOwn(t *testing.T) {
	_, _, errs := leeway(t, "", "validate", write(t, "bad.json", bad))
	lines := strings.Split(strings.TrimSpace(errs), "\n")
	if len(lines) != 2 {
		t.Fatalf("%d lines:\n%s", len(lines), errs)
	}
	for i, want := range []string{":4:25: robot.radius_m: must be ", ":4:29: robot.color: "} {
		if !strings.Contains(lines[i], want) {
			t.Errorf("%q has no %q", lines[i], want)
		}
	}
}

func TestRunCanBeStopped(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	var out, errs bytes.Buffer
	code := Execute(ctx, []string{"run", "-"}, strings.NewReader(open), &out, &errs)
	if code != 2 || out.Len() > 0 || !strings.Contains(errs.String(), "stopped") {
		t.Errorf("%d %q %q", code, out.String(), errs.String())
	}
}

func TestRunAsJSON(t *testing.T) {
	code, out, _ := leeway(t, open, "run", "-", "--json", "--seed", "5")
	var o map[string]any
	if err := json.Unmarshal([]byte(out), &o); err != nil {
		t.Fatal(err)
	}
	for _, k := range []string{"status", "reason", "time_s", "leeway_m", "way_m", "switches", "contacts", "estimate_error_m", "saturated", "hash", "seed", "name"} {
		if _, ok := o[k]; !ok {
			t.Errorf("no %s", k)
		}
	}
	if code != 0 || o["status"] != "arrived" || o["seed"] != 5.0 || o["name"] != "Open" || len(o["hash"].(string)) != 16 {
		t.Errorf("%d %v", code, o)
	}
	if way := o["way_m"].(float64); way < 2.7 || way > 4 {
		t.Errorf("3 m to the goal took a way of %v m", way)
	}
	_, again, _ := leeway(t, open, "run", "-", "--json", "--seed", "5")
	if again != out {
		t.Error("the same seed gives another run")
	}
	_, other, _ := leeway(t, open, "run", "-", "--json", "--seed", "6")
	if other == out {
		t.Error("another seed gives the same run")
	}
}

func TestLeewayIsNullWhereNothingIsSolid(t *testing.T) {
	empty := strings.Replace(open, `"height_m": 4`, `"height_m": 4, "enclosed": false`, 1)
	_, out, _ := leeway(t, empty, "run", "-", "--json")
	if !strings.Contains(out, `"leeway_m": null`) {
		t.Error(out)
	}
	if _, words, _ := leeway(t, empty, "run", "-"); !strings.Contains(words, "nothing solid") || strings.Contains(words, "Inf") {
		t.Error(words)
	}
}

func TestTableHasARowForEveryControlTick(t *testing.T) {
	path := filepath.Join(t.TempDir(), "way.csv")
	_, out, _ := leeway(t, shut, "run", "-", "--json", "--csv", path)
	var o struct {
		Time   float64 `json:"time_s"`
		Status string  `json:"status"`
		Leeway float64 `json:"leeway_m"`
	}
	if err := json.Unmarshal([]byte(out), &o); err != nil {
		t.Fatal(err)
	}
	file, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	rows, err := csv.NewReader(file).ReadAll() // it holds that all rows are as long as the first
	if err != nil {
		t.Fatal(err)
	}
	at := map[string]int{}
	for i, name := range rows[0] {
		at[name] = i
	}
	get := func(row int, name string) float64 {
		i, ok := at[name]
		if !ok {
			t.Fatalf("no column %s", name)
		}
		v, err := strconv.ParseFloat(rows[row][i], 64)
		if err != nil {
			t.Fatalf("row %d, %s: %v", row, name, err)
		}
		return v
	}
	end := len(rows) - 1
	if want := o.Time/0.02 + 1; float64(end) < want || float64(end) > want+1 {
		t.Errorf("%d rows for %v s of 20 ms", end, o.Time)
	}
	if get(1, "time_s") != 0 || get(1, "x_m") != 1 || get(1, "y_m") != 3 || get(end, "time_s") != o.Time {
		t.Errorf("first row %v, last row %v", rows[1], rows[end])
	}
	if s := rows[end][at["status"]]; s != o.Status {
		t.Errorf("ends with %s, not %s", s, o.Status)
	}
	least := 1e9
	for i := 1; i <= end; i++ {
		least = min(least, get(i, "gap_m"))
		if v := get(i, "heading_deg"); v < -3600 || v > 3600 {
			t.Errorf("heading %v", v)
		}
	}
	if least < o.Leeway-1e-6 || least > o.Leeway+0.02 {
		t.Errorf("least gap of the table %v, leeway %v", least, o.Leeway)
	}
}

func TestPictureIsWellFormed(t *testing.T) {
	path := filepath.Join(t.TempDir(), "way.svg")
	if code, _, errs := leeway(t, "", "run", "shipped:pocket", "--svg", path); code == 2 {
		t.Fatal(errs)
	}
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	d := xml.NewDecoder(bytes.NewReader(data))
	for {
		if _, err := d.Token(); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatal(err)
		}
	}
	for _, want := range []string{"#2c5bd4", "#b96d00", " m</text>", ">goal</text>"} {
		if !bytes.Contains(data, []byte(want)) {
			t.Errorf("no %s", want)
		}
	}
}

func TestLinkAndOpenAreInverse(t *testing.T) {
	for _, e := range scenarios.All() {
		_, link, _ := leeway(t, "", "link", "shipped:"+e.Slug)
		_, file, _ := leeway(t, "", "open", strings.TrimSpace(link))
		if file != string(e.Data) {
			t.Errorf("%s came back as another file", e.Slug)
		}
	}
}

func TestLongLinkIsSaid(t *testing.T) {
	sc, err := scenario.Parse([]byte(open))
	if err != nil {
		t.Fatal(err)
	}
	for i := range 2000 {
		x := 1000 * (float64(i)*0.6180339887498949 - float64(int(float64(i)*0.6180339887498949)))
		sc.Edits = append(sc.Edits, scenario.Edit{Tick: int64(i), What: "goal", To: scenario.Point{x / 250, x / 500}})
	}
	code, link, errs := leeway(t, string(sc.Print()), "link", "-")
	if code != 0 || len(link) < scenario.LongLink || !strings.Contains(errs, "send the file instead") {
		t.Errorf("%d, %d characters, %q", code, len(link), errs)
	}
}

func TestEveryCommandHasHelpWithExamples(t *testing.T) {
	for _, c := range newRoot().Commands() {
		if c.Hidden || c.Name() == "help" || c.Name() == "completion" {
			continue
		}
		code, out, _ := leeway(t, "", c.Name(), "--help")
		if code != 0 || !strings.Contains(out, "Examples:") || !strings.Contains(out, "leeway "+c.Name()) {
			t.Errorf("%s --help: %d\n%s", c.Name(), code, out)
		}
	}
	code, out, _ := leeway(t, "", "--help")
	if code != 0 || !strings.Contains(out, "serve") || !strings.Contains(out, "--addr") {
		t.Errorf("--help: %d\n%s", code, out)
	}
}

// lineWriter hands on what is written.
type lineWriter chan string

func (w lineWriter) Write(b []byte) (int, error) {
	w <- string(b)
	return len(b), nil
}

// serving starts leeway with these arguments and returns its address and a stop
// that returns its exit code.
func serving(t *testing.T, args ...string) (url string, stop func() int) {
	t.Helper()
	ctx, cancel := context.WithCancel(context.Background())
	out := make(lineWriter, 100)
	code := make(chan int, 1)
	var errs bytes.Buffer
	go func() { code <- Execute(ctx, args, strings.NewReader(""), out, &errs) }()
	select {
	case line := <-out:
		url = strings.Fields(strings.TrimPrefix(line, "Leeway is at "))[0]
	case c := <-code:
		t.Fatalf("it ended with %d: %s", c, errs.String())
	case <-time.After(20 * time.Second):
		t.Fatal("it does not say where it is")
	}
	return url, func() int {
		cancel()
		select {
		case c := <-code:
			return c
		case <-time.After(20 * time.Second):
			t.Fatal("it does not stop")
			return -1
		}
	}
}

func TestServeAnswersAndStops(t *testing.T) {
	for _, command := range [][]string{{}, {"serve"}} {
		data := filepath.Join(t.TempDir(), "made when needed")
		url, stop := serving(t, append(command, "--addr", "127.0.0.1:0", "--data", data)...)
		answer, err := http.Get(url + "healthz")
		if err != nil {
			t.Fatal(err)
		}
		answer.Body.Close()
		if answer.StatusCode != http.StatusOK {
			t.Errorf("status %d", answer.StatusCode)
		}
		if code := stop(); code != 0 {
			t.Errorf("it stopped with %d", code)
		}
		if _, err := os.Stat(data); err != nil {
			t.Error(err)
		}
		if _, err := http.Get(url + "healthz"); err == nil {
			t.Error("it still answers")
		}
	}
}

func TestTakenPortIsSaidPlainly(t *testing.T) {
	l, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	defer l.Close()
	data := filepath.Join(t.TempDir(), "data")
	code, _, errs := leeway(t, "", "serve", "--addr", l.Addr().String(), "--data", data)
	if code != 2 || !strings.Contains(errs, fmt.Sprintf("%s is in use", l.Addr())) || !strings.Contains(errs, "leeway serve --addr 127.0.0.1:0") {
		t.Errorf("%d: %s", code, errs)
	}
	if _, err := os.Stat(data); err == nil {
		t.Error("the data folder was touched")
	}
}

func TestDataFolderIsThatOfTheUser(t *testing.T) {
	t.Setenv("XDG_DATA_HOME", filepath.Join(t.TempDir(), "x"))
	dir, err := dataDir()
	if err != nil || filepath.Base(dir) != "leeway" || !filepath.IsAbs(dir) {
		t.Errorf("%s, %v", dir, err)
	}
	t.Setenv("XDG_DATA_HOME", "relative")
	t.Setenv("HOME", "")
	if dir, err := dataDir(); err == nil || !strings.Contains(err.Error(), "--data") {
		t.Errorf("%s, %v", dir, err)
	}
}

func TestWordsOfTheTable(t *testing.T) {
	for in, want := range map[string]string{
		"plain": ",plain", `a "b", c`: `,"a ""b"", c"`, "=1+1": ", =1+1", "": ",",
	} {
		if got := string(word(nil, in)); got != want {
			t.Errorf("%q became %q", in, got)
		}
	}
}
