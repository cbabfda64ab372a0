package page

import (
	"context"
	"flag"
	"io"
	"os"
	"regexp"
	"strings"
	"testing"

	"github.com/a-h/templ"
)

var update = flag.Bool("update", false, "write the golden files anew")

func reportView() ReportView {
	picture := func(name string) templ.Component {
		return templ.ComponentFunc(func(_ context.Context, w io.Writer) error {
			_, err := io.WriteString(w, `<svg viewBox="0 0 1 1"><title>`+name+`</title></svg>`)
			return err
		})
	}
	row := func(label string, cells ...string) ReportRow {
		r := ReportRow{Label: label}
		for _, c := range cells {
			text, bad := strings.CutPrefix(c, "!")
			r.Cells = append(r.Cells, ReportCell{text, bad})
		}
		return r
	}
	return ReportView{
		Name: "The bay", Purpose: "Does it get out?", Asked: "Asked: to reach the goal within 60 s.",
		Big: "0.03 m", Of: "of leeway, where 0.05 m is asked.", Words: "This run falls short.", Short: true,
		Ending: "It came to rest.", Shortfalls: []string{"It touched something."},
		Floor: picture("floor"), Tape: picture("tape"),
		Modes: []ReportMode{{"goal", "goal-seeking"}, {"wall", "wall-following"}, {"avoid", "obstacle avoidance"}}, Grid: "a square is 1 m",
		Columns:  []string{"point", "unicycle", "robot"},
		Rows:     []ReportRow{row("arrives after", "1.0 s", "2.0 s", "3.0 s"), row("leeway", "0.10 m", "0.09 m", "!0.03 m")},
		Ways:     []string{"It drove 3 m."},
		Partings: []ReportParting{{"1", "point", "At 0:01.0 they decided differently."}, {"2", "unicycle", "At 0:02.0 likewise."}},
		Unparted: []string{"It never parted from another."}, More: "They part once more.",
		Events: []string{"At 0:01.5 it touched."}, Changes: []string{"At 0:00.5 the goal was moved."},
		Brief:  []Part{{Text: "A robot of radius "}, {Number: "0.21", Unit: "m"}, {Text: ", by "}, {Choice: "dead reckoning"}, {Text: "."}},
		Traits: []ReportRow{row("Motion", "goes", "turns", "wheels")},
		Shared: []string{"The floor is flat."},
		Advice: []ReportAdvice{{"It brakes in time.", true}, {"It swings.", false}},
		Link:   "http://127.0.0.1:8321/open#1abc", LinkIs: "The scenario is in a link.", File: "http://127.0.0.1:8321/open#1abc",
		Command: "leeway run LINK --json", Seed: "7", Hashes: []ReportHash{{"robot", "0123456789abcdef"}},
		Version: "v1.0.0", Date: "3 April 2031",
	}
}

// withoutSheet leaves out the style, which has fonts in it.
func withoutSheet(t *testing.T, html string) string {
	t.Helper()
	before, rest, found := strings.Cut(html, "<style>")
	_, after, closed := strings.Cut(rest, "</style>")
	if !found || !closed {
		t.Fatal("no style")
	}
	return regexp.MustCompile(`sha256-[^&]+`).ReplaceAllString(before, "sha256-…") + after
}

func TestReportIsByteStable(t *testing.T) {
	const golden = "testdata/report.html"
	html := render(t, Report(reportView()))
	if again := render(t, Report(reportView())); again != html {
		t.Error("the same view gives other bytes")
	}
	got := strings.ReplaceAll(withoutSheet(t, html), "><", ">\n<")
	if *update {
		if err := os.WriteFile(golden, []byte(got), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("another page than %s; go test ./web/page -update writes it anew:\n%s", golden, got)
	}
	v := reportView()
	v.Date = "4 April 2031"
	if other := render(t, Report(v)); strings.ReplaceAll(other, "4 April", "3 April") != html {
		t.Error("another date changes more than the date")
	}
}

// A report is read by who knows not where it comes from: nothing in it may run, and
// nothing may be fetched.
func TestReportIsInert(t *testing.T) {
	v := reportView()
	v.Name, v.Purpose, v.Asked, v.Ending, v.Big, v.Of, v.Words = hostile, hostile, hostile, hostile, hostile, hostile, hostile
	v.Modes = []ReportMode{{`"><script>`, hostile}}
	v.Columns, v.Shortfalls, v.Ways, v.Unparted, v.Events, v.Changes, v.Shared = []string{hostile}, []string{hostile}, []string{hostile}, []string{hostile}, []string{hostile}, []string{hostile}, []string{hostile}
	v.Rows, v.Traits = []ReportRow{{hostile, []ReportCell{{hostile, true}}}}, []ReportRow{{hostile, []ReportCell{{hostile, true}}}}
	v.Partings, v.More, v.Grid = []ReportParting{{hostile, hostile, hostile}}, hostile, hostile
	v.Brief, v.Advice = []Part{{Text: hostile}, {Number: hostile, Unit: hostile}, {Choice: hostile}}, []ReportAdvice{{hostile, false}}
	v.LinkIs, v.File, v.Command, v.Seed, v.Version, v.Date = hostile, hostile, hostile, hostile, hostile, hostile
	v.Hashes = []ReportHash{{hostile, hostile}}
	html := render(t, Report(v))
	bare := withoutSheet(t, html)
	if m := regexp.MustCompile(`<(?:script|img|style|link|iframe|object)|<[^>]*\ssrc=|<[^>]*javascript:`).FindString(value.ReplaceAllString(bare, `=""`)); m != "" {
		t.Errorf("%s in it", m)
	}
	if m := attribute.FindString(value.ReplaceAllString(bare, `=""`)); m != "" {
		t.Errorf("an inline script or style: %s", m)
	}
	for _, ref := range regexp.MustCompile(`(?:href|src)="([^"]*)"|url\("?([^")]*)`).FindAllStringSubmatch(html, -1) {
		if to := ref[1] + ref[2]; !strings.HasPrefix(to, "data:font/woff2;base64,") && to != v.Link {
			t.Errorf("it refers to %.80s", to)
		}
	}
	if !strings.Contains(html, `<meta http-equiv="Content-Security-Policy" content="default-src &#39;none&#39;; style-src &#39;sha256-`) {
		t.Error("no policy")
	}
	if len(html) > 300_000 {
		t.Errorf("%d bytes without pictures", len(html))
	}
}
