package page

import (
	"bytes"
	"context"
	"encoding/json"
	"io"
	"regexp"
	"strings"
	"testing"

	"github.com/a-h/templ"
)

func render(t *testing.T, c templ.Component) string {
	t.Helper()
	var b bytes.Buffer
	if err := c.Render(context.Background(), &b); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

const hostile = `</script><img src=x onerror=alert(1)> "quoted" & 'so'`

// pages are all pages, with everything on them, in the words of an attacker.
func pages() map[string]templ.Component {
	drawing := templ.ComponentFunc(func(_ context.Context, w io.Writer) error {
		_, err := io.WriteString(w, `<svg viewBox="0 0 1 1"></svg>`)
		return err
	})
	return map[string]templ.Component{
		"start": Start(StartView{
			Cards:    []Card{{Key: hostile, Name: hostile, Purpose: hostile, Drawing: drawing, Outcome: hostile, Short: true}, {Key: "plain"}},
			Accepted: hostile,
		}),
		"bench": Bench(BenchView{
			Session: "k3f", Name: hostile, Purpose: hostile,
			Brief: []Part{{Text: hostile}, {Number: hostile, Unit: hostile}, {Choice: hostile}},
			Hello: json.RawMessage(`{"name":"</script><img src=x>"}`),
		}),
		"open": Open(OpenView{}),
		"message": Message(MessageView{
			Status: 404, Title: hostile, Text: hostile,
			Problems: []Problem{{Line: 3, Column: 7, Path: hostile, Text: hostile, Source: hostile}, {Text: hostile}},
		}),
	}
}

var (
	value     = regexp.MustCompile(`="[^"]*"`)
	attribute = regexp.MustCompile(`<[a-zA-Z][^>]*?\s(on[a-z]+|style)=`)
	script    = regexp.MustCompile(`<script[^>]*>`)
	external  = regexp.MustCompile(`^<script type="module" src="/static/[0-9a-f]+/js/[a-z]+\.js">$`)
	data      = regexp.MustCompile(`^<script id="hello" type="application/json">$`)
)

// TestPagesKeepThePolicy renders every page and looks for what a content security
// policy without inline scripts and styles would refuse, and for words that got out
// of their quotes.
func TestPagesKeepThePolicy(t *testing.T) {
	for name, c := range pages() {
		html := render(t, c)
		if m := attribute.FindString(value.ReplaceAllString(html, `=""`)); m != "" {
			t.Errorf("%s has an inline script or style: %s", name, m)
		}
		for _, m := range script.FindAllString(html, -1) {
			if !external.MatchString(m) && !data.MatchString(m) {
				t.Errorf("%s has %s", name, m)
			}
		}
		if strings.Contains(html, "<img") || strings.Contains(html, `href="javascript:`) || strings.Contains(html, "<style") {
			t.Errorf("%s lets an attacker's words through", name)
		}
		if !strings.Contains(html, `<html lang="en">`) || strings.Count(html, "<main") != 1 || strings.Count(html, "<h1") != 1 {
			t.Errorf("%s lacks a language, or has not one main and one heading", name)
		}
	}
}

// TestIDsAreUnique keeps labels and scripts from finding another element.
func TestIDsAreUnique(t *testing.T) {
	id := regexp.MustCompile(`\sid="([^"]+)"`)
	for name, c := range pages() {
		seen := map[string]bool{}
		for _, m := range id.FindAllStringSubmatch(render(t, c), -1) {
			if seen[m[1]] {
				t.Errorf("%s has two elements with the id %q", name, m[1])
			}
			seen[m[1]] = true
		}
	}
}

func TestBriefHasNoSpacesOfItsOwn(t *testing.T) {
	got := render(t, brief([]Part{{Text: "at "}, {Number: "0.45", Unit: "m/s"}, {Text: ", by "}, {Choice: "dead reckoning"}, {Text: "."}}))
	plain := regexp.MustCompile(`<[^>]+>`).ReplaceAllString(got, "")
	if want := "at 0.45&thinsp;m/s, by dead reckoning."; plain != want {
		t.Errorf("got %q, want %q", plain, want)
	}
	for _, together := range []string{`</span>,</span> by `, `dead reckoning</span>.</span>`} {
		if !strings.Contains(got, together) {
			t.Errorf("a line may break before punctuation: no %q in %q", together, got)
		}
	}
}

func TestWhereAProblemIs(t *testing.T) {
	for _, c := range []struct {
		p    Problem
		want string
	}{
		{Problem{}, ""},
		{Problem{Path: "goal"}, "goal"},
		{Problem{Line: 3}, "line 3"},
		{Problem{Line: 3, Column: 7, Path: "goal.x_m"}, "line 3, column 7 · goal.x_m"},
	} {
		if got := c.p.where(); got != c.want {
			t.Errorf("%+v: got %q, want %q", c.p, got, c.want)
		}
	}
}

// TestBenchHasItsPlaces keeps what the modules of the bench look for. A place that
// is missing would stop all of them.
func TestBenchHasItsPlaces(t *testing.T) {
	html := render(t, Bench(BenchView{Session: "k3f", Name: "Kit"}))
	for _, want := range []string{
		`id="floor"`, `id="why"`, `id="verdict"`, `id="transport"`, `id="tape"`, `id="strips"`, `id="advice"`, `id="holds"`, `id="legend"`,
		`class="exits"`, `class="plot" role="slider"`, `class="marks"`, `class="mark-tip"`, `class="badges"`, `class="strip-panels"`,
		`data-do="restart"`, `data-do="back"`, `data-do="play"`, `data-do="tick"`, `data-do="shadows"`,
		`data-row="time"`, `data-row="leeway"`, `data-row="way"`, `data-row="switches"`, `data-row="farthest"`, `data-row="saturated"`, `data-row="lost"`,
		`data-strip="speed"`, `data-strip="wheels"`, `data-strip="estimate"`, `data-strip="deviation"`, `data-strip="beams"`,
	} {
		if n := strings.Count(html, want); n != 1 {
			t.Errorf("%s is there %d times", want, n)
		}
	}
	// The slider's parts are not read out one by one, so nothing in it may be worth reading.
	plot := html[strings.Index(html, `class="plot"`):strings.Index(html, `class="badges"`)]
	if strings.Contains(plot, "<button") || strings.Contains(plot, "<a ") {
		t.Error("there is something to press inside of the slider")
	}
	for _, speed := range speeds {
		if !strings.Contains(html, `name="speed" value="`+speed.value+`"`) {
			t.Errorf("there is no speed %s", speed.value)
		}
	}
}
