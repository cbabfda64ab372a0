package e2e

import (
	"fmt"
	"math"
	"testing"

	"github.com/chromedp/cdproto/page"

	"leeway/scenarios"
	"leeway/sim/scenario"
)

// A new user opens the start page, clicks a floor, and sees a robot move.
func TestStartPageOpensABenchOnWhichARobotMoves(t *testing.T) {
	t.Parallel()
	p := newTab(t, serve(t))
	p.visit("/")
	for _, e := range scenarios.All() {
		sc, err := scenario.Parse(e.Data)
		if err != nil {
			t.Fatal(err)
		}
		card := fmt.Sprintf(`document.querySelector('button[data-shipped="%s"]')`, e.Slug)
		p.see("there is a card for "+e.Slug, card)
		text := eval[string](p, card+".textContent.replace(/\\s+/g, ' ')")
		for _, want := range []string{sc.Name, sc.Purpose} {
			if !contains(text, want) {
				t.Errorf("the card of %s does not say %q: %s", e.Slug, want, text)
			}
		}
		if !eval[bool](p, card+`.querySelector('svg')?.getBoundingClientRect().height > 40`) {
			t.Errorf("the card of %s has no drawing", e.Slug)
		}
	}
	if got, want := eval[int](p, `document.querySelectorAll('button[data-shipped]').length`), len(scenarios.All()); got != want {
		t.Errorf("%d cards for %d scenarios", got, want)
	}

	// What a person sees first is measured, not asserted: it depends on the machine.
	call(p, page.AddScriptToEvaluateOnNewDocument, page.AddScriptToEvaluateOnNewDocumentParams{Source: `
		const look = () => {
			if (document.querySelector('#floor .hull')?.getAttribute('r')) window.firstRobot = performance.now();
			else requestAnimationFrame(look);
		};
		requestAnimationFrame(look);`})
	p.click(`button[data-shipped="crossing"]`)
	p.see("the bench opens", `location.pathname.startsWith('/bench/')`)
	p.alive()
	p.see("the first robot was noticed", `window.firstRobot`)
	t.Logf("the robot is drawn %.0f ms after the bench is asked for, and something is painted after %.0f ms",
		eval[float64](p, `firstRobot`), eval[float64](p, `performance.getEntriesByType('paint').find((e) => e.name === 'first-contentful-paint')?.startTime ?? NaN`))

	p.says("#name", "Across the foyer")
	before := p.drawnAt(".hull")
	start := p.last()
	p.until("the robot is drawn half a metre on", func() bool {
		now := p.drawnAt(".hull")
		return math.Hypot(now[0]-before[0], now[1]-before[1]) > 0.5
	})
	p.see("the clock has gone on", `document.querySelector('.clock').textContent > '0:00.5'`)
	p.see("the trail is drawn", `document.querySelector('#floor .way')?.getAttribute('d').length > 20`)
	if now := p.last(); now.Time <= start.Time || !now.Playing {
		t.Errorf("time went from %v to %v s, playing %v", start.Time, now.Time, now.Playing)
	}
	if mode := p.read("#why .mode-name"); mode == "" || mode == "…" {
		t.Errorf("the card does not say what the robot does: %q", mode)
	}
}
