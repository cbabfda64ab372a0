package api

import (
	"bytes"
	"context"
	"io"
	"mime"
	"net/http"

	"github.com/go-chi/chi/v5"

	"leeway/server/report"
	"leeway/sim/scenario"
)

// report answers with the printable page of a session's run.
func (s *server) report(w http.ResponseWriter, r *http.Request) {
	s.told(w, r, "report", report.Policy(), func(ctx context.Context, sc *scenario.Scenario, o report.Options, out io.Writer) error {
		v, err := report.Build(ctx, sc, o)
		if err != nil {
			return err
		}
		return report.Page(out, v)
	})
}

// replay answers with the file that plays a session's run.
func (s *server) replay(w http.ResponseWriter, r *http.Request) {
	s.told(w, r, "replay", report.ReplayPolicy(), func(ctx context.Context, sc *scenario.Scenario, o report.Options, out io.Writer) error {
		f, err := report.BuildFilm(ctx, sc, o)
		if err != nil {
			return err
		}
		return report.Replay(out, f)
	})
}

// told answers with a page that is made by running a session's scenario to its end.
// That takes a core for up to some seconds, so one is made at a time.
func (s *server) told(w http.ResponseWriter, r *http.Request, what, policy string,
	write func(context.Context, *scenario.Scenario, report.Options, io.Writer) error) {
	sc, err := s.Lab.Scenario(r.Context(), chi.URLParam(r, "session"))
	if err != nil {
		s.fail(w, r, err)
		return
	}
	select {
	case s.telling <- struct{}{}:
		defer func() { <-s.telling }()
	case <-r.Context().Done():
		s.fail(w, r, r.Context().Err())
		return
	}
	var b bytes.Buffer
	if err := write(r.Context(), sc, report.Options{Base: origin(r), Version: s.Version, Date: s.Now()}, &b); err != nil {
		s.fail(w, r, err)
		return
	}
	h := w.Header()
	h.Set("Content-Type", "text/html; charset=utf-8")
	h.Set("Content-Security-Policy", policy)
	h.Set("Content-Disposition", mime.FormatMediaType("inline", map[string]string{"filename": fileName(sc.Name+" "+what, ".html")}))
	w.Write(b.Bytes())
}

// origin is where this server was asked.
func origin(r *http.Request) string {
	scheme := "http"
	if r.TLS != nil {
		scheme = "https"
	}
	return scheme + "://" + r.Host
}
