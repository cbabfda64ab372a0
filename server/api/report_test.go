package api

import (
	"bytes"
	"context"
	"log/slog"
	"net/http"
	"net/http/httptest"
	"strings"
	"testing"
	"time"

	"github.com/go-chi/chi/v5"

	"leeway/server/live"
	"leeway/server/report"
	"leeway/sim/scenario"
)

// A report and a replay are of the run that the session's file gives, edits included, and say where they were made.
func TestReportAndReplayOfASession(t *testing.T) {
	s := newSite(t, func(c *Config, _ *live.Options) {
		c.Version, c.Now = "v1.2.3-test", func() time.Time { return time.Date(2031, 2, 3, 0, 0, 0, 0, time.UTC) }
	})
	sc, err := scenario.Parse(pocket(t).Data)
	if err != nil {
		t.Fatal(err)
	}
	sc.Edits = []scenario.Edit{{Tick: 40, What: "goal", To: scenario.Point{sc.Goal.X, sc.Goal.Y - 0.5}}}
	id := s.opened(text(map[string]any{"scenario": string(sc.Print()), "tick": 100}))
	var page, film bytes.Buffer
	o := report.Options{Base: s.url, Version: "v1.2.3-test", Date: time.Date(2031, 2, 3, 0, 0, 0, 0, time.UTC)}
	v, err := report.Build(context.Background(), sc, o)
	if err != nil {
		t.Fatal(err)
	}
	if err := report.Page(&page, v); err != nil {
		t.Fatal(err)
	}
	f, err := report.BuildFilm(context.Background(), sc, o)
	if err != nil {
		t.Fatal(err)
	}
	if err := report.Replay(&film, f); err != nil {
		t.Fatal(err)
	}
	want := map[string]string{"/report/": page.String(), "/replay/": film.String()}
	for path, policy := range map[string]string{"/report/": report.Policy(), "/replay/": report.ReplayPolicy()} {
		status, answer, h := s.do("GET", path+id, "")
		if status != http.StatusOK || h.Get("Content-Type") != "text/html; charset=utf-8" {
			t.Fatalf("%s: %d %s", path, status, h.Get("Content-Type"))
		}
		if got := h.Values("Content-Security-Policy"); len(got) != 1 || got[0] != policy {
			t.Errorf("%s: policy %q", path, got)
		}
		if answer != want[path] {
			t.Errorf("%s: %d bytes, not the %d of the scenario's own", path, len(answer), len(want[path]))
		}
		if want := "inline; filename=the-pocket-" + strings.Trim(path, "/") + ".html"; h.Get("Content-Disposition") != want {
			t.Errorf("%s: %s", path, h.Get("Content-Disposition"))
		}
		if len(answer) > 1_000_000 {
			t.Errorf("%s has %d bytes", path, len(answer))
		}
		if status, answer, h := s.do("GET", path+"aaaaaaaaaaaaaaaa", ""); status != 404 || !strings.HasPrefix(h.Get("Content-Type"), "text/html") {
			t.Errorf("%s of no session: %d %.100s", path, status, answer)
		}
	}
}

// askFor calls a handler of a session's page.
func askFor(ctx context.Context, h http.HandlerFunc, id string) (status int) {
	route := chi.NewRouteContext()
	route.URLParams.Add("session", id)
	w := httptest.NewRecorder()
	h(w, httptest.NewRequestWithContext(context.WithValue(ctx, chi.RouteCtxKey, route), "GET", "/report/"+id, nil))
	return w.Code
}

// One report is made at a time; who does not wait for it is let go.
func TestReportsAreMadeOneAtATime(t *testing.T) {
	s := &server{Config{Now: time.Now}, make(chan struct{}, 1)}
	site := newSite(t, nil)
	s.Lab, s.Log = site.lab, slog.New(slog.DiscardHandler)
	id := site.opened(`{"shipped":"crossing"}`)
	s.telling <- struct{}{}
	ctx, cancel := context.WithTimeout(context.Background(), 50*time.Millisecond)
	defer cancel()
	if status := askFor(ctx, s.report, id); status != http.StatusServiceUnavailable {
		t.Errorf("status %d while another is made", status)
	}
	<-s.telling
	if status := askFor(context.Background(), s.report, id); status != http.StatusOK {
		t.Errorf("status %d", status)
	}
	if len(s.telling) != 0 {
		t.Error("a report that is made still keeps others waiting")
	}
}
