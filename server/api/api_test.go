package api

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"io"
	"log/slog"
	"net/http"
	"net/http/httptest"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"leeway/scenarios"
	"leeway/server/live"
	"leeway/server/store"
	"leeway/sim/scenario"
)

// site is a server for tests.
type site struct {
	t   *testing.T
	url string
	log *bytes.Buffer
	lab *live.Lab
}

func newSite(t *testing.T, change func(*Config, *live.Options)) *site {
	t.Helper()
	kept, err := store.Open(context.Background(), filepath.Join(t.TempDir(), "leeway.db"))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { kept.Close() })
	s := &site{t: t, log: &bytes.Buffer{}}
	log := slog.New(slog.NewTextHandler(s.log, nil))
	options := live.Options{Keeper: kept, Log: log}
	config := Config{Hosts: NewHosts("127.0.0.1", nil), Log: log, Creations: 10_000}
	if change != nil {
		change(&config, &options)
	}
	s.lab = live.New(options)
	t.Cleanup(s.lab.Close)
	config.Lab = s.lab
	server := httptest.NewServer(New(config))
	t.Cleanup(server.Close)
	s.url = server.URL
	return s
}

func (s *site) do(method, path, body string, header ...string) (status int, answer string, h http.Header) {
	s.t.Helper()
	r, err := http.NewRequest(method, s.url+path, strings.NewReader(body))
	if err != nil {
		s.t.Fatal(err)
	}
	if body != "" {
		r.Header.Set("Content-Type", "application/json")
	}
	for i := 0; i < len(header); i += 2 {
		if header[i] == "Host" {
			r.Host = header[i+1]
		} else {
			r.Header.Set(header[i], header[i+1])
		}
	}
	client := http.Client{CheckRedirect: func(*http.Request, []*http.Request) error { return http.ErrUseLastResponse }}
	a, err := client.Do(r)
	if err != nil {
		s.t.Fatal(err)
	}
	defer a.Body.Close()
	b, err := io.ReadAll(a.Body)
	if err != nil {
		s.t.Fatal(err)
	}
	return a.StatusCode, string(b), a.Header
}

// opened opens a session and returns its id.
func (s *site) opened(body string) string {
	s.t.Helper()
	status, answer, h := s.do("POST", "/api/sessions", body)
	var c created
	if err := json.Unmarshal([]byte(answer), &c); err != nil || status != http.StatusCreated {
		s.t.Fatalf("%d %s", status, answer)
	}
	if c.URL != "/bench/"+c.Session || h.Get("Location") != c.URL {
		s.t.Errorf("%+v at %s", c, h.Get("Location"))
	}
	return c.Session
}

func text(v any) string {
	b, err := json.Marshal(v)
	if err != nil {
		panic(err)
	}
	return string(b)
}

func pocket(t *testing.T) scenarios.Entry {
	e, ok := scenarios.Find("pocket")
	if !ok {
		t.Fatal("no pocket")
	}
	return e
}

func TestSessionFromEverySource(t *testing.T) {
	s := newSite(t, nil)
	file := pocket(t).Data
	sc, err := scenario.Parse(file)
	if err != nil {
		t.Fatal(err)
	}
	seen := map[string]bool{}
	for _, body := range []string{
		`{"shipped":"pocket"}`,
		text(map[string]any{"scenario": string(file)}),
		text(map[string]any{"link": sc.Encode(), "tick": 100, "playing": false}),
		text(map[string]any{"link": "http://elsewhere.example/open#" + sc.Encode()}),
	} {
		id := s.opened(body)
		if len(id) < 16 || !regexp.MustCompile(`^[a-z2-7]+$`).MatchString(id) || seen[id] {
			t.Errorf("id %q", id)
		}
		seen[id] = true
		status, answer, h := s.do("GET", "/api/sessions/"+id+"/scenario", "")
		if status != http.StatusOK || answer != string(file) {
			t.Errorf("%d: another file came back:\n%s", status, answer)
		}
		if got := h.Get("Content-Disposition"); got != "attachment; filename=the-pocket.json" {
			t.Error(got)
		}
		status, answer, _ = s.do("GET", "/api/sessions/"+id+"/link", "")
		var l linkAnswer
		if err := json.Unmarshal([]byte(answer), &l); err != nil || status != http.StatusOK {
			t.Fatalf("%d %s", status, answer)
		}
		if l.URL != s.url+"/open#"+l.Data || l.Characters != len(l.URL) || l.Long {
			t.Errorf("%+v", l)
		}
		if back, err := scenario.Decode(l.URL); err != nil || string(back.Print()) != string(file) {
			t.Errorf("the link holds something else: %v", err)
		}
		status, answer, _ = s.do("GET", "/bench/"+id, "")
		if status != http.StatusOK || !strings.Contains(answer, id) {
			t.Errorf("bench: %d\n%.500s", status, answer)
		}
	}
}

func TestEditsAreInTheFile(t *testing.T) {
	s := newSite(t, nil)
	sc, err := scenario.Parse(pocket(t).Data)
	if err != nil {
		t.Fatal(err)
	}
	sc.Edits = []scenario.Edit{{Tick: 40, What: "goal", To: scenario.Point{sc.Goal.X, sc.Goal.Y - 0.5}}}
	id := s.opened(text(map[string]any{"scenario": string(sc.Print()), "tick": 100}))
	if _, answer, _ := s.do("GET", "/api/sessions/"+id+"/scenario", ""); answer != string(sc.Print()) {
		t.Error(answer)
	}
}

func TestBeamsOverTime(t *testing.T) {
	s := newSite(t, nil)
	id := s.opened(`{"shipped":"pocket","tick":200}`)
	for query, want := range map[string]string{
		"": "[0 20 40 60 80 100 120 140 160 180 200]", "?from=50": "[60 80 100 120 140 160 180 200]", "?from=50&to=99": "[60 80]", "?to=20": "[0 20]", "?from=500": "[]",
	} {
		status, answer, h := s.do("GET", "/api/sessions/"+id+"/beams"+query, "")
		var b struct {
			Ticks  []int64
			Ranges [][]float64
		}
		if err := json.Unmarshal([]byte(answer), &b); err != nil || status != http.StatusOK || h.Get("Content-Type") != "application/json" {
			t.Errorf("%s: %d %.200s", query, status, answer)
		}
		if fmt.Sprint(b.Ticks) != want || len(b.Ranges) != len(b.Ticks) || len(b.Ranges) > 0 && len(b.Ranges[0]) != 16 {
			t.Errorf("%s: ticks %v, %d scans", query, b.Ticks, len(b.Ranges))
		}
	}
}

func TestBadRequestsGetTheirStatusAndASentence(t *testing.T) {
	s := newSite(t, nil)
	huge := strings.Repeat(" ", maxBody+1)
	for _, c := range []struct {
		name, method, path, body string
		status                   int
		word                     string
	}{
		{"no such session", "GET", "/api/sessions/aaaaaaaaaaaaaaaa/scenario", "", 404, "no such session"},
		{"no such session's link", "GET", "/api/sessions/aaaaaaaaaaaaaaaa/link", "", 404, "no such session"},
		{"no such session's beams", "GET", "/api/sessions/aaaaaaaaaaaaaaaa/beams", "", 404, "no such session"},
		{"beams from no tick", "GET", "/api/sessions/aaaaaaaaaaaaaaaa/beams?from=now", "", 400, "whole number"},
		{"beams from before the start", "GET", "/api/sessions/aaaaaaaaaaaaaaaa/beams?from=-1", "", 400, "whole number"},
		{"beams to half a tick", "GET", "/api/sessions/aaaaaaaaaaaaaaaa/beams?to=1.5", "", 400, "whole number"},
		{"an id that is none", "GET", "/api/sessions/A%27--/link", "", 404, "no such session"},
		{"no such shipped", "POST", "/api/sessions", `{"shipped":"nothing"}`, 404, "no shipped scenario"},
		{"nothing", "POST", "/api/sessions", `{}`, 400, "not one"},
		{"two sources", "POST", "/api/sessions", `{"shipped":"pocket","link":"1a"}`, 400, "not one"},
		{"no JSON", "POST", "/api/sessions", `shipped=pocket`, 400, "not one"},
		{"more than one text", "POST", "/api/sessions", `{"shipped":"pocket"} {}`, 400, "not one"},
		{"unknown field", "POST", "/api/sessions", `{"shipped":"pocket","speed":2}`, 400, "not one"},
		{"a tick before the start", "POST", "/api/sessions", `{"shipped":"pocket","tick":-1}`, 400, "not one"},
		{"too large", "POST", "/api/sessions", `{"scenario":"` + huge + `"}`, 413, "larger"},
		{"not below api", "GET", "/nothing", "", 404, "nothing at this address"},
		{"nothing below api", "GET", "/api/nothing", "", 404, "nothing at this address"},
		{"wrong method", "DELETE", "/api/sessions", "", 405, "in that way"},
	} {
		t.Run(c.name, func(t *testing.T) {
			status, answer, h := s.do(c.method, c.path, c.body)
			if status != c.status || !strings.Contains(strings.ToLower(answer), strings.ToLower(c.word)) && !strings.HasPrefix(h.Get("Content-Type"), "text/html") {
				t.Errorf("%d %.300s; want %d and %q", status, answer, c.status, c.word)
			}
			if strings.HasPrefix(c.path, "/api/") && h.Get("Content-Type") != "application/json" {
				t.Errorf("an answer of the api is %s", h.Get("Content-Type"))
			}
			for _, internal := range []string{"json:", ".go", "sql", "goroutine"} {
				if strings.Contains(answer, internal) {
					t.Errorf("%q tells of %s", answer, internal)
				}
			}
		})
	}
	status, answer, _ := s.do("POST", "/api/sessions", `{"shipped":"pocket"}`, "Content-Type", "text/plain")
	if status != http.StatusUnsupportedMediaType {
		t.Errorf("a form of another site could send this: %d %s", status, answer)
	}
}

func TestProblemsOfAFileComeWithTheirPlaces(t *testing.T) {
	s := newSite(t, nil)
	bad := "{\n \"leeway\": 1,\n \"robot\": {\"radius_m\": -1, \"color\": 2},\n \"floor\": {\"width_m\": 5, \"height_m\": 4},\n" +
		" \"start\": {\"x_m\": 1, \"y_m\": 2}, \"goal\": {\"x_m\": 4, \"y_m\": 2}\n}"
	status, answer, _ := s.do("POST", "/api/sessions", text(map[string]any{"scenario": bad}))
	var body errorBody
	if err := json.Unmarshal([]byte(answer), &body); err != nil {
		t.Fatal(err)
	}
	if status != http.StatusUnprocessableEntity || len(body.Problems) != 2 || body.Problems[0].Line != 3 || body.Problems[0].Path != "robot.radius_m" {
		t.Errorf("%d %s", status, answer)
	}
	status, answer, _ = s.do("POST", "/api/sessions", `{"link":"http://127.0.0.1/open"}`)
	if status != http.StatusUnprocessableEntity || !strings.Contains(answer, "problems") {
		t.Errorf("%d %s", status, answer)
	}
}

func TestForeignNamesAreRefused(t *testing.T) {
	s := newSite(t, func(c *Config, _ *live.Options) { c.Hosts = NewHosts("127.0.0.1", []string{"lab.example"}) })
	id := s.opened(`{"shipped":"pocket"}`)
	for host, want := range map[string]bool{
		"localhost": true, "LOCALHOST:8321": true, "localhost.": true, "127.0.0.1:9": true, "127.8.8.8": true, "[::1]:80": true, "[::ffff:127.0.0.1]": true,
		"lab.example": true, "lab.example:8321": true, "Lab.Example": true,
		"evil.example": false, "localhost.evil.example": false, "lab.example.evil": false, "10.0.0.5": false, "[fe80::1]": false,
		"127.0.0.1.evil.example": false, "notlocalhost": false, "0x7f000001": false,
	} {
		for _, path := range []string{"/", "/healthz", "/live/" + id, "/api/sessions/" + id + "/scenario", "/static/x/y"} {
			status, _, h := s.do("GET", path, "", "Host", host)
			if (status == http.StatusMisdirectedRequest) == want {
				t.Errorf("%s at %s: %d", path, host, status)
			}
			if h.Get("Content-Security-Policy") == "" {
				t.Errorf("%s at %s has no policy", path, host)
			}
		}
	}
}

func TestHostsOfANetworkAddress(t *testing.T) {
	for _, listening := range []string{"", "0.0.0.0", "::", "192.168.1.7", "[::]:80"} {
		h := NewHosts(listening, nil)
		if !h.allows("192.168.1.7:8321") || !h.allows("localhost") || h.allows("evil.example") {
			t.Errorf("%q: %+v", listening, h)
		}
	}
	if h := NewHosts("lab.example:8321", nil); !h.allows("lab.example") || h.allows("10.0.0.1") {
		t.Errorf("%+v", h)
	}
}

func TestOtherSitesCannotOpenSessions(t *testing.T) {
	s := newSite(t, nil)
	for _, header := range [][]string{
		{"Origin", "http://evil.example"},
		{"Sec-Fetch-Site", "cross-site"},
		{"Sec-Fetch-Site", "same-site"}, // another port of this machine
		{"Origin", "null"},
	} {
		if status, answer, _ := s.do("POST", "/api/sessions", `{"shipped":"pocket"}`, header...); status != http.StatusForbidden {
			t.Errorf("%v: %d %s", header, status, answer)
		}
	}
	for _, header := range [][]string{{"Origin", s.url}, {"Sec-Fetch-Site", "same-origin"}, nil} {
		if status, answer, _ := s.do("POST", "/api/sessions", `{"shipped":"pocket"}`, header...); status != http.StatusCreated {
			t.Errorf("%v: %d %s", header, status, answer)
		}
	}
	if n := s.lab.Running(); n != 3 {
		t.Errorf("%d sessions", n)
	}
}

func TestManySessionsAtOnceAreSlowedDown(t *testing.T) {
	s := newSite(t, func(c *Config, _ *live.Options) { c.Creations = 3 })
	for range 3 {
		s.opened(`{"shipped":"crossing"}`)
	}
	status, answer, _ := s.do("POST", "/api/sessions", `{"shipped":"crossing"}`)
	if status != http.StatusTooManyRequests || !strings.Contains(answer, "wait") {
		t.Errorf("%d %s", status, answer)
	}
	if status, _, _ := s.do("GET", "/healthz", ""); status != http.StatusOK {
		t.Error("and everything else with them")
	}
}

func TestPagesLoadFromThisServerAlone(t *testing.T) {
	s := newSite(t, nil)
	id := s.opened(`{"shipped":"pocket"}`)
	source := regexp.MustCompile(`(?:src|href)="([^"#][^"]*)"`)
	inline := regexp.MustCompile(`<script(?:>| [^>]*>)[^<]|<style|\son[a-z]+=|\sstyle="`)
	for _, path := range []string{"/", "/open", "/bench/" + id, "/bench/aaaaaaaaaaaaaaaa", "/nothing"} {
		status, page, h := s.do("GET", path, "")
		if !strings.HasPrefix(h.Get("Content-Type"), "text/html") {
			t.Fatalf("%s: %d %s", path, status, h.Get("Content-Type"))
		}
		csp := h.Get("Content-Security-Policy")
		for _, rule := range []string{"default-src 'none'", "script-src 'self';", "style-src 'self';", "frame-ancestors 'none'"} {
			if !strings.Contains(csp, rule) {
				t.Errorf("%s: no %s in %s", path, rule, csp)
			}
		}
		if h.Get("X-Content-Type-Options") != "nosniff" || h.Get("Cache-Control") != "no-store" {
			t.Errorf("%s: %v", path, h)
		}
		for _, m := range source.FindAllStringSubmatch(page, -1) {
			if strings.HasPrefix(m[1], "/static/") {
				status, _, h := s.do("GET", m[1], "")
				if status != http.StatusOK || !strings.Contains(h.Get("Cache-Control"), "immutable") || h.Get("ETag") == "" {
					t.Errorf("%s: %d %v", m[1], status, h)
				}
			} else if !strings.HasPrefix(m[1], "/") {
				t.Errorf("%s loads or leads to %s", path, m[1])
			}
		}
		for _, m := range inline.FindAllString(page, -1) {
			if !strings.HasPrefix(m, `<script`) || !strings.Contains(m, `application/json`) {
				t.Errorf("%s has %s, which the policy forbids", path, m)
			}
		}
	}
}

func TestTextOfAFileStaysText(t *testing.T) {
	s := newSite(t, nil)
	sc, err := scenario.Parse(pocket(t).Data)
	if err != nil {
		t.Fatal(err)
	}
	sc.Name = `</script><script>alert("1")</script><b onclick="x()">&amp;`
	sc.Floor.Solids[0].ID = `"><img src=x onerror=x()>`
	id := s.opened(text(map[string]any{"scenario": string(sc.Print())}))
	_, page, _ := s.do("GET", "/bench/"+id, "")
	for _, live := range []string{"<script>alert", "<b onclick", "<img src=x"} {
		if strings.Contains(page, live) {
			t.Errorf("the page has %s", live)
		}
	}
	if !strings.Contains(page, "alert(") {
		t.Error("the name is not on the page at all")
	}
}

func TestStartPageShowsEveryShippedScenario(t *testing.T) {
	s := newSite(t, nil)
	_, page, _ := s.do("GET", "/", "")
	for _, e := range scenarios.All() {
		if !strings.Contains(page, e.Slug) {
			t.Errorf("no %s", e.Slug)
		}
	}
	if n := strings.Count(page, "<svg viewBox="); n < len(scenarios.All()) {
		t.Errorf("%d drawings of %d", n, len(scenarios.All()))
	}
	if len(page) > 1<<20 {
		t.Errorf("the page has %d bytes", len(page))
	}
}

func TestSchemaAndHealth(t *testing.T) {
	s := newSite(t, nil)
	if status, answer, _ := s.do("GET", "/schema.json", ""); status != 200 || answer != string(scenario.Schema()) {
		t.Errorf("%d", status)
	}
	if status, answer, _ := s.do("GET", "/healthz", ""); status != 200 || answer != "ok\n" {
		t.Errorf("%d %q", status, answer)
	}
	if status, answer, _ := s.do("HEAD", "/healthz", ""); status != 200 || answer != "" {
		t.Errorf("%d %q", status, answer)
	}
}

func TestFullServerSaysSo(t *testing.T) {
	s := newSite(t, func(_ *Config, o *live.Options) { o.Sessions = 1 })
	s.opened(`{"shipped":"crossing"}`)
	s.opened(`{"shipped":"crossing"}`) // the first has no viewers and gives way
	if n := s.lab.Running(); n != 1 {
		t.Errorf("%d sessions", n)
	}
}

func TestFaultOfTheProgramIsLoggedAndNotTold(t *testing.T) {
	var log bytes.Buffer
	s := &server{Config: Config{Log: slog.New(slog.NewTextHandler(&log, nil))}}
	h := s.recoverer(http.HandlerFunc(func(http.ResponseWriter, *http.Request) { panic("the secret") }))
	for _, path := range []string{"/api/x", "/x"} {
		w := httptest.NewRecorder()
		h.ServeHTTP(w, httptest.NewRequest("GET", path, nil))
		if w.Code != http.StatusInternalServerError || strings.Contains(w.Body.String(), "secret") {
			t.Errorf("%d %s", w.Code, w.Body.String())
		}
	}
	if !strings.Contains(log.String(), "the secret") {
		t.Error("the log does not say what happened")
	}
}

func TestFileNames(t *testing.T) {
	for in, want := range map[string]string{
		"The pocket": "the-pocket.json", "../../etc/passwd": "etc-passwd.json", "": "scenario.json", "Büro 2": "büro-2.json",
		strings.Repeat("long ", 50): "long-long-long-long-long-long-long-long-long-long-long-long-.json",
	} {
		if got := fileName(in, ".json"); got != want {
			t.Errorf("%q became %q", in, got)
		}
	}
}
