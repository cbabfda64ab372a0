// Package api is what the server answers over HTTP: pages, sessions, files, links,
// reports and replays. It turns requests into calls of package live and package scenario, and
// what those return into pages and JSON.
//
// # Basics
//
// New returns the one handler. Pages are for people: an error is a page too. What
// lies below /api answers in JSON, errors included: {"error": {"text": …}}, or for a
// scenario that is not valid {"problems": [{line, column, path, text}, …]}. Which
// error gets which status stands in one table, in errors.go; what went wrong inside
// the server goes into its log and never to a client.
//
// # Safety
//
// The server has no accounts: whoever reaches it may use it. What it must keep out is
// other sites acting through the browser of somebody who has it open. A request
// must name one of the server's own hosts (hosts.go), which stops names that were
// rebound to this address; requests that change something must not come from another
// site; a websocket must come from a page of the same host and port; and pages load
// scripts, styles, fonts and pictures from this server alone.
package api

import (
	"context"
	"log/slog"
	"net"
	"net/http"
	"time"

	"github.com/go-chi/chi/v5"
	"github.com/go-chi/chi/v5/middleware"
	"github.com/go-chi/httprate"

	"leeway/server/live"
	"leeway/sim/scenario"
	"leeway/web"
)

// Config is what the handler needs.
type Config struct {
	Lab   *live.Lab    // required
	Hosts Hosts        // the names this server answers to
	Log   *slog.Logger // required
	// Creations is how many sessions one client may open in a minute; 0 means 120.
	Creations int
	Version   string           // of this program, for reports
	Now       func() time.Time // for the date of a report; default time.Now
}

type server struct {
	Config
	telling chan struct{} // of capacity 1: held by who makes a report or a replay
}

const (
	// maxBody is the largest request accepted, bytes: a scenario file of the
	// largest size as a JSON text, in which every line end and quote takes two.
	maxBody = 2*scenario.MaxBytes + 64<<10
	// A request for anything but a stream is given up after this.
	answerWithin = 30 * time.Second
)

// New returns the handler of everything that the server answers.
func New(c Config) http.Handler {
	if c.Creations == 0 {
		c.Creations = 120
	}
	if c.Now == nil {
		c.Now = time.Now
	}
	s := &server{c, make(chan struct{}, 1)}
	go gallery() // made before the first person asks

	r := chi.NewRouter()
	r.Use(s.recoverer, fresh, securityHeaders, s.ownHostOnly, http.NewCrossOriginProtection().Handler, middleware.GetHead)
	r.NotFound(s.noSuchPage)
	r.MethodNotAllowed(s.wrongMethod)
	r.Get("/live/{session}", s.watch)
	r.Mount("/static", web.Handler())
	r.Group(func(r chi.Router) {
		r.Use(inTime)
		r.Get("/", s.start)
		r.Get("/bench/{session}", s.bench)
		r.Get("/report/{session}", s.report)
		r.Get("/replay/{session}", s.replay)
		r.Get("/open", s.open)
		r.Get("/healthz", s.health)
		r.Get("/schema.json", s.schema)
		limit := httprate.LimitBy(c.Creations, time.Minute, clientAddress, httprate.WithLimitHandler(s.tooMany))
		r.With(limit).Post("/api/sessions", s.create)
		r.Get("/api/sessions/{session}/scenario", s.file)
		r.Get("/api/sessions/{session}/link", s.link)
		r.Get("/api/sessions/{session}/beams", s.beams)
	})
	return r
}

// clientAddress tells clients apart by where they connect from. What a proxy says
// about its clients is not believed: anybody could say it.
func clientAddress(r *http.Request) (string, error) {
	host, _, err := net.SplitHostPort(r.RemoteAddr)
	return httprate.CanonicalizeIP(host), err
}

// inTime gives up on a request that takes too long. It must not be put before the
// websocket, which it would end.
func inTime(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		ctx, cancel := context.WithTimeout(r.Context(), answerWithin)
		defer cancel()
		next.ServeHTTP(w, r.WithContext(ctx))
	})
}

// fresh keeps answers out of caches: they say what is the case now. Static files
// say otherwise of themselves.
func fresh(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		w.Header().Set("Cache-Control", "no-store")
		next.ServeHTTP(w, r)
	})
}

// policy lets a page load what this server serves and nothing else.
const policy = "default-src 'none'; script-src 'self'; style-src 'self'; img-src 'self' data: blob:; font-src 'self'; " +
	"connect-src 'self'; base-uri 'none'; form-action 'self'; frame-ancestors 'none'"

func securityHeaders(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		h := w.Header()
		h.Set("Content-Security-Policy", policy)
		h.Set("X-Content-Type-Options", "nosniff")
		h.Set("Referrer-Policy", "no-referrer")
		h.Set("Cross-Origin-Opener-Policy", "same-origin")
		h.Set("Cross-Origin-Resource-Policy", "same-origin")
		h.Set("Permissions-Policy", "camera=(), microphone=(), geolocation=(), payment=(), usb=()")
		next.ServeHTTP(w, r)
	})
}

func (s *server) watch(w http.ResponseWriter, r *http.Request) {
	s.Lab.Watch(w, r, chi.URLParam(r, "session"))
}

func (s *server) health(w http.ResponseWriter, r *http.Request) {
	w.Header().Set("Content-Type", "text/plain; charset=utf-8")
	w.Write([]byte("ok\n"))
}

func (s *server) schema(w http.ResponseWriter, r *http.Request) {
	w.Header().Set("Content-Type", "application/schema+json")
	w.Write(scenario.Schema())
}
