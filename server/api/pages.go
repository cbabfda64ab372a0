package api

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"net/http"
	"sync"

	"github.com/a-h/templ"
	"github.com/go-chi/chi/v5"

	"leeway/scenarios"
	"leeway/server/brief"
	"leeway/server/watch"
	"leeway/sim/scenario"
	"leeway/web/page"
	"leeway/web/page/draw"
)

// page answers with a page. It is written to memory first, so that a fault in it
// is not half a page.
func (s *server) page(w http.ResponseWriter, r *http.Request, status int, c templ.Component) {
	var b bytes.Buffer
	// A page may be about the request having taken too long.
	if err := c.Render(context.WithoutCancel(r.Context()), &b); err != nil {
		s.Log.Error("a page cannot be drawn", "path", r.URL.Path, "error", err)
		http.Error(w, sentence(errInternal.Error()), http.StatusInternalServerError)
		return
	}
	w.Header().Set("Content-Type", "text/html; charset=utf-8")
	w.WriteHeader(status)
	w.Write(b.Bytes())
}

func (s *server) start(w http.ResponseWriter, r *http.Request) {
	cards, err := gallery()
	if err != nil {
		s.fail(w, r, err)
		return
	}
	s.page(w, r, http.StatusOK, page.Start(page.StartView{
		Cards: cards, Accepted: fmt.Sprintf("%d MB", scenario.MaxBytes>>20),
	}))
}

func (s *server) open(w http.ResponseWriter, r *http.Request) {
	s.page(w, r, http.StatusOK, page.Open(page.OpenView{}))
}

func (s *server) bench(w http.ResponseWriter, r *http.Request) {
	id := chi.URLParam(r, "session")
	b, err := s.Lab.Bench(r.Context(), id)
	if err != nil {
		s.fail(w, r, err)
		return
	}
	s.page(w, r, http.StatusOK, page.Bench(page.BenchView{
		Session: id, Name: b.Name, Purpose: b.Purpose, Brief: briefView(b.Brief), Hello: json.RawMessage(b.Hello),
	}))
}

// briefView writes the brief as it stands, for the page before its script runs.
func briefView(parts []brief.Part) []page.Part {
	out := make([]page.Part, len(parts))
	for i, p := range parts {
		switch {
		case p.Number != "":
			out[i] = page.Part{Number: p.Shown(), Unit: p.Unit}
		case p.Choice != "":
			out[i] = page.Part{Choice: p.Shown()}
		default:
			out[i] = page.Part{Text: p.Text}
		}
	}
	return out
}

// cardWidth is about how wide a card's drawing is on a page, in pixels.
const cardWidth = 360

// gallery returns the cards of the shipped scenarios, each with a finished run
// drawn on it. They are the same for every server and made once.
var gallery = sync.OnceValues(func() ([]page.Card, error) {
	all := scenarios.All()
	cards, errs := make([]page.Card, len(all)), make([]error, len(all))
	var wg sync.WaitGroup
	for i, e := range all {
		wg.Go(func() { cards[i], errs[i] = card(e) })
	}
	wg.Wait()
	return cards, errors.Join(errs...)
})

func card(e scenarios.Entry) (page.Card, error) {
	sc, err := scenario.Parse(e.Data)
	if err != nil {
		return page.Card{}, fmt.Errorf("shipped scenario %s: %w", e.Slug, err)
	}
	f, err := watch.Finish(context.Background(), sc, nil)
	if err != nil {
		return page.Card{}, fmt.Errorf("shipped scenario %s: %w", e.Slug, err)
	}
	var b bytes.Buffer
	if err := draw.SVG(&b, f.Picture(), draw.Options{Longest: cardWidth, Paint: draw.Paper}); err != nil {
		return page.Card{}, err
	}
	svg := b.Bytes()
	return page.Card{
		Key: e.Slug, Name: sc.Name, Purpose: sc.Purpose,
		Drawing: templ.ComponentFunc(func(_ context.Context, w io.Writer) error { _, err := w.Write(svg); return err }),
		Outcome: f.Verdict(), Short: f.Short(),
	}, nil
}
