// Package page draws Leeway's pages: the start page, the bench, the page that
// opens a link, and messages.
//
// Each page is a function from a view model to a component: Start(StartView),
// Bench(BenchView), Open(OpenView), Message(MessageView). A view model holds
// texts, addresses and finished pictures; it knows nothing of runs, scenarios or
// sessions, so that whoever serves the pages decides what they say.
//
// The pages work under a content security policy without inline scripts or
// styles: behaviour comes from the ES modules below web/static/js, which find
// their data in data attributes and in a JSON block.
//
// The *_templ.go files are generated from the *.templ files by
// "go tool templ generate" and committed.
package page
