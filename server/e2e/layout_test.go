package e2e

import (
	"fmt"
	"os"
	"strings"
	"testing"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/chromedp"
)

// scheme is how the person has set the system: "light" or "dark".
func (p *tab) scheme(name string) {
	p.t.Helper()
	call(p, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{
		Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: name}},
	})
}

// sizes of windows, in pixels: a telephone, a tablet, a laptop, a large screen.
var sizes = []struct {
	width, height int64
	handheld      bool
}{
	{390, 844, true},
	{768, 1024, true},
	{1440, 900, false},
	{2560, 1440, false},
}

func (p *tab) size(width, height int64, handheld bool) {
	p.t.Helper()
	var options []chromedp.EmulateViewportOption
	if handheld {
		options = append(options, chromedp.EmulateMobile, chromedp.EmulateTouch)
	}
	p.do(chromedp.EmulateViewport(width, height, options...))
}

// beside lists what sticks out of the window sideways: every element that can be
// seen and is not inside one that scrolls or hides what is too much.
const beside = `(() => {
	const width = document.documentElement.clientWidth;
	const out = [];
	if (document.scrollingElement.scrollWidth > width) out.push('the page is ' + document.scrollingElement.scrollWidth + ' wide');
	for (const e of document.body.querySelectorAll('*')) {
		if (!e.checkVisibility({visibilityProperty: true}) || e.closest('svg svg, #floor *, .unseen')) continue;
		const r = e.getBoundingClientRect();
		if (r.width === 0 || (r.right <= width + 0.5 && r.left >= -0.5)) continue;
		let inside = false;
		for (let up = e.parentElement; up && up !== document.body; up = up.parentElement) {
			if (getComputedStyle(up).overflowX !== 'visible') inside = true;
		}
		if (!inside) out.push(e.tagName + '.' + e.getAttribute('class') + ' from ' + r.left + ' to ' + r.right);
	}
	return out.join('; ');
})()`

// TestNothingSticksOutAtAnySize looks at both pages in windows of every size.
func TestNothingSticksOutAtAnySize(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	office := s.open(map[string]any{"shipped": "office", "playing": false, "tick": 400})
	workshopID := s.open(map[string]any{"scenario": workshop, "playing": false, "tick": 400})
	paths := []string{"/", "/bench/" + office, "/bench/" + workshopID, "/report/" + workshopID, "/replay/" + workshopID, "/open"}
	for _, path := range paths {
		for _, z := range sizes {
			p.size(z.width, z.height, z.handheld)
			p.visit(path)
			p.see("the window has its size", fmt.Sprintf(`document.documentElement.clientWidth === %d`, z.width))
			onBench := strings.HasPrefix(path, "/bench/")
			if onBench {
				p.alive()
			}
			if got := eval[string](p, beside); got != "" {
				t.Errorf("%s, %d pixels wide: %s", path, z.width, got)
			}
			if !onBench {
				continue
			}
			p.see("all of the floor is in its view", `(() => {
				const view = document.getElementById('floor').getBoundingClientRect();
				const sheet = document.querySelector('#floor .sheet').getBoundingClientRect();
				return sheet.width > 100 && sheet.left >= view.left && sheet.right <= view.right && sheet.top >= view.top && sheet.bottom <= view.bottom;
			})()`)
			// Without scrolling: the floor, and the button that sets it going.
			p.see("floor and play button are in the window", `['#floor', '[data-do=play]'].every((s) => {
				const r = document.querySelector(s).getBoundingClientRect();
				return r.width > 0 && r.top >= 0 && r.bottom <= innerHeight + 1;
			})`)
			if min, got := 0.25, eval[float64](p, `(() => {
				const r = document.getElementById('floor').getBoundingClientRect();
				return r.width * r.height / (innerWidth * innerHeight);
			})()`); got < min {
				t.Errorf("%s, %d pixels wide: the floor fills %.0f %% of the window", path, z.width, 100*got)
			}
		}
	}
}

// TestDarkIsDark checks that a dark system gets dark pages, and a light one light
// pages.
func TestDarkIsDark(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	bench := "/bench/" + s.open(map[string]any{"shipped": "wall", "playing": false})
	// Lightness by the browser itself, from 0 to 1, whatever the colour is written in.
	const light = `(selector, property) => {
		const pen = new OffscreenCanvas(1, 1).getContext('2d');
		pen.fillStyle = getComputedStyle(document.querySelector(selector))[property];
		pen.fillRect(0, 0, 1, 1);
		const [r, g, b] = pen.getImageData(0, 0, 1, 1).data;
		return (0.2126 * r + 0.7152 * g + 0.0722 * b) / 255;
	}`
	lightness := func(selector, property string) float64 {
		return eval[float64](p, fmt.Sprintf(`(%s)(%q, %q)`, light, selector, property))
	}
	for _, path := range []string{"/", bench} {
		p.visit(path)
		for _, scheme := range []string{"light", "dark"} {
			p.scheme(scheme)
			ground, ink := lightness("body", "backgroundColor"), lightness("body", "color")
			if dark := scheme == "dark"; (ground < 0.2) != dark || (ground > 0.8) == dark || (ink > 0.7) != dark {
				t.Errorf("%s, %s: the ground has lightness %.2f, the ink %.2f", path, scheme, ground, ink)
			}
			if path == bench {
				p.alive()
				if floor := lightness("#floor .sheet", "fill"); (floor < 0.3) != (scheme == "dark") {
					t.Errorf("%s: the floor has lightness %.2f", scheme, floor)
				}
			}
		}
	}
}

// axe is where .ci/js keeps the checker of accessibility.
const axe = "../../.ci/js/node_modules/axe-core/axe.min.js"

// TestPagesAreAccessible has axe-core look for what keeps people out.
func TestPagesAreAccessible(t *testing.T) {
	t.Parallel()
	checker, err := os.ReadFile(axe)
	if err != nil {
		how := "the pages were not checked for accessibility: axe-core is not installed; (cd .ci/js && npm ci), then run the test again"
		if os.Getenv("CI") == "true" {
			t.Fatal(how)
		}
		tell("server/e2e: " + how)
		return
	}
	s := serve(t)
	p := newTab(t, s)
	wall := s.open(map[string]any{"shipped": "wall", "playing": false, "tick": 2000})
	bench := "/bench/" + wall
	look := func(what string) {
		t.Helper()
		type violation struct {
			ID, Impact, Help string
			Nodes            []struct {
				Target  []any
				Summary string `json:"failureSummary"`
			}
		}
		found := eval[struct {
			Passes     int
			Violations []violation
		}](p, `axe.run({resultTypes: ['violations']}).then((r) => ({passes: r.passes.length, violations: r.violations}))`)
		if found.Passes < 10 {
			t.Errorf("%s: only %d rules found something to look at", what, found.Passes)
		}
		for _, v := range found.Violations {
			var where []string
			for _, n := range v.Nodes {
				where = append(where, fmt.Sprintf("%v: %s", n.Target, strings.ReplaceAll(n.Summary, "\n", " ")))
			}
			words := fmt.Sprintf("%s: %s, %s: %s\n\t%s", what, v.Impact, v.ID, v.Help, strings.Join(where, "\n\t"))
			if v.Impact == "serious" || v.Impact == "critical" {
				t.Error(words)
			} else {
				t.Log(words)
			}
		}
	}
	for _, path := range []string{"/", "/report/" + wall, "/replay/" + wall, bench} {
		p.size(1440, 900, false)
		p.visit(path)
		if path == bench {
			p.alive()
		}
		eval[any](p, "void function () {"+string(checker)+"}.call(window)")
		for _, scheme := range []string{"light", "dark"} {
			p.scheme(scheme)
			look(path + ", " + scheme)
		}
		p.size(390, 844, true)
		look(path + ", 390 pixels wide, dark")
	}
	p.scheme("light")
	p.size(1440, 900, false)
	for _, opener := range []string{"#open", "#keys-open"} {
		p.click(opener)
		p.see("a dialog is open", `document.querySelector('dialog[open]')`)
		look("the dialog of " + opener)
		p.keys("\u001b")
		p.see("no dialog is open", `!document.querySelector('dialog[open]')`)
	}
	// A refused number, with its words in red.
	p.click(field("robot.radius_m"))
	p.keys("99\r")
	p.noted("robot.radius_m", "Out of range")
	look("a refused number")
}
