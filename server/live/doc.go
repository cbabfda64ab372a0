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
// A session's run is a tape (package shadow): the robot with its shadows, and
// their past. The tape has a length, up to which it has been computed, and is
// looked at somewhere, at its end or before. All that viewers are told is of
// where it is looked at. Playing goes through what is known, and beyond the end
// computes more.
//
// A change travels like this: a viewer's message is parsed by that viewer's
// reading goroutine and sent to the session; there it becomes an edit of the run,
// stamped with the tick; the next frame shows it to every viewer. An edit in the
// past cuts the tape there, and what came later is forgotten. The list of
// edits is part of the scenario, so the file, the link and the store reproduce
// what was dragged and when. What no running robot can take (another radius, another
// start) begins another tape; what is only asked, or shadows that were off, have the
// same tape computed anew, in slices between which the old one is shown.
//
// Frames are encoded once a session and the bytes shared by its viewers. Every
// viewer has room for one waiting frame: a newer one takes its place, so a slow
// viewer loses frames and never slows the run. It notices by the numbers of the
// tape's rows and asks for everything anew.
//
// Sessions are saved while they go on. Whoever asks for one that is not running
// (the server was stopped, or nobody had watched it for long) finds it loaded from
// the store: its tape is stepped to its length, and looked at where it was. A run is a
// pure function of its scenario, so nothing else has to be kept.
//
// # Reading the source
//
// lab.go (all sessions), session.go (the loop of one and its clockwork), change.go,
// seek.go and drag.go (what viewers may do), making.go (tapes computed anew),
// shortest.go (the shortest way, beside the loop), view.go, hello.go, frame.go,
// record.go, verdict.go and beams.go (what viewers are told), viewer.go (one
// connection), save.go (what is kept).
//
// # Caveats
//
// Time is that of package time; tests run it under testing/synctest. A machine
// that cannot keep up with the chosen speed shows a run that is slower, never one
// that is different.
//
// A tape takes memory while its session runs: with shadows about 2 MB for a minute of
// run, 20 MB for ten and 80 to 160 MB for an hour; a robot alone about a third of that.
// Package shadow bounds it: snapshots to about 200 MB, rows and beams to about 70 MB.
package live
