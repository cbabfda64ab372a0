package api

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"
	"mime"
	"net/http"
	"strconv"
	"strings"
	"unicode"

	"github.com/go-chi/chi/v5"

	"leeway/scenarios"
	"leeway/server/live"
	"leeway/sim/scenario"
)

// wanted is the body of POST /api/sessions: one of the three sources.
type wanted struct {
	Shipped  *string `json:"shipped"`
	Scenario *string `json:"scenario"`
	Link     *string `json:"link"`
	Tick     int64   `json:"tick"`
	Playing  bool    `json:"playing"`
}

type created struct {
	Session string `json:"session"`
	URL     string `json:"url"`
}

// create opens a session.
func (s *server) create(w http.ResponseWriter, r *http.Request) {
	want, err := readWanted(w, r)
	if err != nil {
		s.fail(w, r, err)
		return
	}
	sc, err := want.source()
	if err != nil {
		s.fail(w, r, err)
		return
	}
	id, err := s.Lab.Create(r.Context(), sc, live.Opening{Tick: want.Tick, Playing: want.Playing})
	if err != nil {
		s.fail(w, r, err)
		return
	}
	w.Header().Set("Location", "/bench/"+id)
	s.answer(w, http.StatusCreated, created{id, "/bench/" + id})
}

func readWanted(w http.ResponseWriter, r *http.Request) (*wanted, error) {
	if kind, _, err := mime.ParseMediaType(r.Header.Get("Content-Type")); err != nil || kind != "application/json" {
		return nil, errMediaType
	}
	d := json.NewDecoder(http.MaxBytesReader(w, r.Body, maxBody))
	d.DisallowUnknownFields()
	var want wanted
	err := d.Decode(&want)
	if err == nil {
		if _, err = d.Token(); errors.Is(err, io.EOF) {
			err = nil
		} else if err == nil {
			err = errBadRequest
		}
	}
	var large *http.MaxBytesError
	switch {
	case errors.As(err, &large):
		return nil, errTooLarge
	case err != nil:
		return nil, fmt.Errorf("%w: %w", errBadRequest, err)
	}
	sources := 0
	for _, p := range []*string{want.Shipped, want.Scenario, want.Link} {
		if p != nil {
			sources++
		}
	}
	if sources != 1 || want.Tick < 0 {
		return nil, errBadRequest
	}
	return &want, nil
}

func (w *wanted) source() (*scenario.Scenario, error) {
	switch {
	case w.Shipped != nil:
		e, ok := scenarios.Find(*w.Shipped)
		if !ok {
			return nil, errNoShipped
		}
		return scenario.Parse(e.Data)
	case w.Link != nil:
		return scenario.Decode(*w.Link)
	}
	if len(*w.Scenario) > scenario.MaxBytes {
		return nil, errTooLarge
	}
	return scenario.Parse([]byte(*w.Scenario))
}

// file answers with the canonical file of a session, edits included.
func (s *server) file(w http.ResponseWriter, r *http.Request) {
	sc, err := s.Lab.Scenario(r.Context(), chi.URLParam(r, "session"))
	if err != nil {
		s.fail(w, r, err)
		return
	}
	w.Header().Set("Content-Type", "application/json")
	w.Header().Set("Content-Disposition", mime.FormatMediaType("attachment", map[string]string{"filename": fileName(sc.Name, ".json")}))
	w.Write(sc.Print())
}

// beams answers with what the ring saw from one tick to another: of the whole
// tape where a limit is missing.
func (s *server) beams(w http.ResponseWriter, r *http.Request) {
	from, to := int64(0), int64(math.MaxInt64-1)
	for name, at := range map[string]*int64{"from": &from, "to": &to} {
		text := r.URL.Query().Get(name)
		if text == "" {
			continue
		}
		tick, err := strconv.ParseInt(text, 10, 64)
		if err != nil || tick < 0 {
			s.fail(w, r, errBadTick)
			return
		}
		*at = tick
	}
	b, err := s.Lab.Beams(r.Context(), chi.URLParam(r, "session"), from, to)
	if err != nil {
		s.fail(w, r, err)
		return
	}
	w.Header().Set("Content-Type", "application/json")
	w.Write(b.JSON())
}

// fileName makes a file name of the name of a scenario: "The pocket" → "the-pocket.json".
func fileName(name, ending string) string {
	words := strings.FieldsFunc(strings.ToLower(name), func(r rune) bool { return !unicode.IsLetter(r) && !unicode.IsDigit(r) })
	base := []rune(strings.Join(words, "-"))
	if len(base) == 0 {
		base = []rune("scenario")
	}
	return string(base[:min(len(base), 60)]) + ending
}

type linkAnswer struct {
	URL        string `json:"url"`
	Data       string `json:"data"`
	Characters int    `json:"characters"`
	Long       bool   `json:"long"` // longer than common chat tools take
}

// link answers with a link that holds the whole scenario of a session.
func (s *server) link(w http.ResponseWriter, r *http.Request) {
	sc, err := s.Lab.Scenario(r.Context(), chi.URLParam(r, "session"))
	if err != nil {
		s.fail(w, r, err)
		return
	}
	data := sc.Encode()
	url := origin(r) + "/open#" + data
	s.answer(w, http.StatusOK, linkAnswer{url, data, len(url), len(url) > scenario.LongLink})
}
