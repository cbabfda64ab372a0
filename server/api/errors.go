package api

import (
	"context"
	"encoding/json"
	"errors"
	"net/http"
	"runtime/debug"
	"strings"
	"unicode"
	"unicode/utf8"

	"leeway/server/live"
	"leeway/sim/scenario"
	"leeway/web/page"
)

// Errors of requests.
var (
	errBadRequest = errors.New("the request is not one that this server understands")
	errTooLarge   = errors.New("the file is larger than the 4 MB that this server accepts")
	errMediaType  = errors.New("the request must be JSON (Content-Type: application/json)")
	errNoShipped  = errors.New("there is no shipped scenario of that name")
	errTooMany    = errors.New("that was a lot of sessions in one minute; wait a little and try again")
	errBadTick    = errors.New("a tick is a whole number from 0 on")
	errNoPage     = errors.New("there is nothing at this address")
	errMethod     = errors.New("this address is not asked in that way")
)

// statuses says which error gets which HTTP status, and the title of its page.
var statuses = []struct {
	err    error
	status int
	title  string
}{
	{errBadRequest, http.StatusBadRequest, "That request is not understood"},
	{errBadTick, http.StatusBadRequest, "That request is not understood"},
	{errNoShipped, http.StatusNotFound, "No such scenario"},
	{errNoPage, http.StatusNotFound, "Nothing here"},
	{live.ErrNotFound, http.StatusNotFound, "No such session"},
	{errMethod, http.StatusMethodNotAllowed, "Not in that way"},
	{errTooLarge, http.StatusRequestEntityTooLarge, "Too large"},
	{errMediaType, http.StatusUnsupportedMediaType, "That request is not understood"},
	{errTooMany, http.StatusTooManyRequests, "Too many at once"},
	{live.ErrFull, http.StatusServiceUnavailable, "The server is full"},
	{live.ErrClosed, http.StatusServiceUnavailable, "The server is stopping"},
	{context.DeadlineExceeded, http.StatusServiceUnavailable, "That took too long"},
	{context.Canceled, http.StatusServiceUnavailable, "Given up"},
}

var errInternal = errors.New("something went wrong on the server; its log says more")

// classify returns what a client is told about an error. What is not in the table
// is the server's own affair: it is logged and told as errInternal.
func (s *server) classify(r *http.Request, err error) (status int, title, text string) {
	var problems scenario.Problems
	if errors.As(err, &problems) {
		return http.StatusUnprocessableEntity, "That scenario cannot be run", "It has problems."
	}
	for _, row := range statuses {
		if errors.Is(err, row.err) {
			return row.status, row.title, sentence(row.err.Error())
		}
	}
	s.Log.Error("a request failed", "method", r.Method, "path", r.URL.Path, "error", err)
	return http.StatusInternalServerError, "Something went wrong", sentence(errInternal.Error())
}

type errorBody struct {
	Error    *errorText         `json:"error,omitempty"`
	Problems []scenario.Problem `json:"problems,omitempty"`
}

type errorText struct {
	Text string `json:"text"`
}

// fail answers with an error: as JSON below /api, as a page elsewhere.
func (s *server) fail(w http.ResponseWriter, r *http.Request, err error) {
	status, title, text := s.classify(r, err)
	var problems scenario.Problems
	errors.As(err, &problems)
	if strings.HasPrefix(r.URL.Path, "/api/") {
		body := errorBody{Problems: problems}
		if len(problems) == 0 {
			body.Error = &errorText{text}
		}
		s.answer(w, status, body)
		return
	}
	s.page(w, r, status, page.Message(page.MessageView{Status: status, Title: title, Text: text}))
}

func (s *server) answer(w http.ResponseWriter, status int, body any) {
	b, err := json.Marshal(body)
	if err != nil {
		s.Log.Error("an answer cannot be written", "error", err)
		status, b = http.StatusInternalServerError, []byte(`{"error":{"text":"Something went wrong on the server."}}`)
	}
	w.Header().Set("Content-Type", "application/json")
	w.WriteHeader(status)
	w.Write(append(b, '\n'))
}

func (s *server) noSuchPage(w http.ResponseWriter, r *http.Request)  { s.fail(w, r, errNoPage) }
func (s *server) wrongMethod(w http.ResponseWriter, r *http.Request) { s.fail(w, r, errMethod) }
func (s *server) tooMany(w http.ResponseWriter, r *http.Request)     { s.fail(w, r, errTooMany) }

// recoverer keeps one faulty request from ending the server.
func (s *server) recoverer(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		defer func() {
			v := recover()
			if v == nil {
				return
			}
			if err, ok := v.(error); ok && errors.Is(err, http.ErrAbortHandler) {
				panic(v) // the way of net/http to break a connection off
			}
			s.Log.Error("a request ran into a fault of the program", "path", r.URL.Path, "fault", v, "stack", string(debug.Stack()))
			s.fail(w, r, errInternal)
		}()
		next.ServeHTTP(w, r)
	})
}

// sentence gives a text a capital letter and a full stop.
func sentence(s string) string {
	r, n := utf8.DecodeRuneInString(s)
	if n == 0 {
		return s
	}
	return string(unicode.ToUpper(r)) + s[n:] + "."
}
