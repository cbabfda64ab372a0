// Package live keeps benches alive: each session is one run, stepped in real
// time and shown to any number of viewers, who may all change it.
//
// # Basics
//
// A [Lab] holds the sessions of a server. [Lab.Create] begins one from a
// scenario; [Lab.Watch] serves one viewer's websocket until it leaves. A session
// is one goroutine, the only owner of its run: whatever others want of it is a
// function sent to that goroutine and called there.
//
// A change travels like this: a viewer's message is parsed by that viewer's
// reading goroutine and sent to the session; there it becomes an edit of the run,
// stamped with the tick; the next frame shows it to every viewer. The list of
// edits is part of the scenario, so the file, the link and the store reproduce
// what was dragged and when.
//
// Frames are encoded once a session and the bytes shared by its viewers. Every
// viewer has room for one waiting frame: a newer one takes its place, so a slow
// viewer loses frames and never slows the run. It notices by the numbers of the
// trail's spots and asks for everything anew.
//
// Sessions are saved while they go on. Whoever asks for one that is not running
// (the server was stopped, or nobody had watched it for long) finds it loaded from
// the store and stepped to where it was. A run is a pure function of its scenario, so
// nothing else has to be kept.
//
// # Reading the source
//
// lab.go (all sessions), session.go (the loop of one and its clockwork), change.go
// and drag.go (what viewers may change), view.go, hello.go, brief.go and frame.go (what
// viewers are told), viewer.go (one connection), save.go (what is kept).
//
// # Caveats
//
// Time is that of package time; tests run it under testing/synctest. A machine
// that cannot keep up with the chosen speed shows a run that is slower, never one
// that is different.
package live
