package page

import "github.com/a-h/templ"

// StartView is the start page: what there is to open.
type StartView struct {
	Cards    []Card // shipped scenarios, in the order shown
	Accepted string // the largest file accepted, in words: "4 MB"; empty: not said
}

// Card is a shipped scenario.
type Card struct {
	Key     string          // what POST /api/sessions takes as "shipped"
	Name    string          // "The pocket"
	Purpose string          // one line: what it shows
	Drawing templ.Component // the floor with the way of a finished run, an svg; nil: none
	Outcome string          // how that run went: "arrived after 0:41, 0.07 m of leeway"; may be empty
	Short   bool            // that run fell short of what is asked
}

// BenchView is the bench: one live session.
type BenchView struct {
	Session string // id, as in /live/{id}
	Name    string // of the scenario
	Purpose string // one line; may be empty
	Brief   []Part // the brief, so that it stands there before any script has run
	// Hello is the first message of the live stream ("kind":"hello"), or nil. With
	// it the floor is drawn before the stream is connected.
	Hello any
}

// Part is a piece of the brief. Exactly one of Text, Number and Choice is set.
type Part struct {
	Text   string
	Number string // the value as it is shown: "0.21"
	Unit   string // of a number: "m"; may be empty
	Choice string // the chosen option in words: "dead reckoning"
}

// OpenView is the page that takes the link in its own fragment to the bench. The
// fragment never reaches the server, so there is nothing to say here.
type OpenView struct{}

// MessageView is a page that says something: an error, or that a page is not there.
type MessageView struct {
	Status   int    // HTTP status, for the reader; 0: not shown
	Title    string // "There is no such session"
	Text     string // one or two sentences; may be empty
	Problems []Problem
}

// Problem is a fault of a file.
type Problem struct {
	Line, Column int    // from 1; 0: not known
	Path         string // "robot.radius_m"; may be empty
	Text         string
	Source       string // the offending line; may be empty
}
