// Package report tells of a whole run to someone who was not there: as a table and
// sentences for a terminal, as one printable page, and as one file that plays it.
//
// # Basics
//
// [Finish] runs a scenario to its end with its shadows beside it and gathers the
// facts; it is a pure function of the scenario, edits included, so the report of a
// session needs its scenario only. From a [Finished] come the verdict table
// ([Finished.Table]), the partings, advice and changes in words, the page ([Build],
// [Page]) and the replay ([Replay]). What a page or a replay looks like is the
// business of leeway/web/page and leeway/web/replay; here is decided what they say.
//
// # Caveats
//
// A run that is still going on is told to the end that it would come to by itself.
// The date is the only thing in a page that does not follow from the scenario, the
// address and the version; whoever asks for the page gives it.
package report
