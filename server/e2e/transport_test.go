package e2e

import (
	"fmt"
	"testing"
	"time"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"
)

// settled waits until the run stands and the page knows the last tick of it.
func (p *tab) settled() frame {
	p.t.Helper()
	p.until("the run stands", func() bool { return !p.last().Playing })
	return p.last()
}

// ticks waits until the run is at exactly this tick.
func (p *tab) ticks(want int64) {
	p.t.Helper()
	p.until(fmt.Sprintf("the run is at tick %d", want), func() bool { return p.last().Tick == want })
}

// TestTransportByMouse plays, pauses, ticks and restarts with the buttons.
func TestTransportByMouse(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	p.bench(s.open(map[string]any{"scenario": workshop, "playing": false}))
	const play = "[data-do=play]"
	named := func(name string) {
		t.Helper()
		p.see("the button is called "+name, fmt.Sprintf(`document.querySelector(%q).ariaLabel === %q`, play, name))
	}
	named("Play")
	p.click(play)
	p.until("time passes", func() bool { return p.last().Tick > 40 })
	named("Pause")
	p.click(play)
	stood := p.settled()
	named("Play")

	// One tick is one tick.
	p.click("[data-do=tick]")
	p.ticks(stood.Tick + 1)
	p.click("[data-do=tick]")
	p.click("[data-do=tick]")
	p.ticks(stood.Tick + 3)
	// A tick while it plays stops it.
	p.click(play)
	p.until("it plays", func() bool { return p.last().Playing })
	p.click("[data-do=tick]")
	p.settled()

	p.click("[data-do=restart]")
	p.ticks(0)
	p.see("the clock is back", `document.querySelector('.clock').textContent === '0:00.0'`)
	p.drawn(".hull", [2]float64{1, 4})
	if eval[bool](p, `[...document.querySelectorAll('#floor .way')].some((e) => (e.getAttribute('d') ?? '').includes('L'))`) {
		t.Error("the old trail is still drawn")
	}
}

// TestTransportByKeys does the same with single keys.
func TestTransportByKeys(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	p.bench(s.open(map[string]any{"scenario": workshop, "playing": false}))
	p.keys(" ")
	p.until("time passes", func() bool { return p.last().Tick > 40 })
	p.see("the page knows that it plays", `document.querySelector('[data-do=play]').ariaLabel === 'Pause'`)
	p.keys(" ")
	stood := p.settled()
	p.keys("...")
	p.ticks(stood.Tick + 3)
	p.keys("r")
	p.ticks(0)

	// In a number they are only keys.
	p.click(field("robot.speed_m_s"))
	p.keys("r. ")
	p.shows("robot.speed_m_s", "r. ")
	p.keys(kb.Escape)
	// On a button Space is the button's own, and not a second command.
	p.do(chromedp.Focus(chromedp.CSS("[data-do=tick]")))
	p.keys(" ")
	p.ticks(1)
	if p.last().Playing {
		t.Error("it plays")
	}

	// They can be turned off, and stay off.
	p.click("#keys-open")
	p.see("the keys are shown", `document.getElementById('keys').open`)
	p.keys("r.") // below an open dialog nothing moves
	p.click("#keys-on")
	p.see("they are off", `!document.getElementById('keys-on').checked`)
	p.keys(kb.Escape)
	p.see("the dialog is closed", `!document.getElementById('keys').open`)
	p.reload()
	p.keys("r...")
	// What the page would send, it has sent before what it is told now.
	p.click("[data-do=tick]")
	p.ticks(2)
}

// TestSpeeds goes slowly, fast, and as fast as it goes.
func TestSpeeds(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	p.bench(s.open(map[string]any{"shipped": "walled", "playing": true}))
	pace := func(speed string, want float64) float64 {
		t.Helper()
		p.click(fmt.Sprintf(`.speeds input[value="%s"]`, speed))
		p.until("the run has speed "+speed, func() bool { return p.last().Speed == want })
		p.see("the page shows it", fmt.Sprintf(`document.querySelector('.speeds input:checked').value === %q`, speed))
		from, began := p.last(), time.Now()
		p.until("time passes", func() bool { return time.Since(began) > 400*time.Millisecond && p.last().Tick > from.Tick })
		return (p.last().Time - from.Time) / time.Since(began).Seconds()
	}
	// On a busy machine a run falls behind, so only what lies far apart is compared.
	slow, fast := pace("0.25", 0.25), pace("8", 8)
	t.Logf("seconds of the run a second: %.2f at ×¼, %.2f at ×8", slow, fast)
	if slow > 0.8 || fast < 4*slow {
		t.Errorf("seconds of the run a second: %.2f at ×¼, %.2f at ×8", slow, fast)
	}

	end := p.toTheEnd()
	if end.Status != "gave up" || end.Time < 20 {
		t.Errorf("it ends after %v s with %q", end.Time, end.Status)
	}
	p.says("#verdict .status", "gave up")
	p.says("#verdict .reason", "gave up")
	p.see("the end is read out", `document.getElementById('heard').textContent.includes('gave up')`)

	// After the end there is no further tick, and playing begins again.
	p.click("[data-do=tick]")
	p.says("#strip", "The run has ended")
	p.click(`.speeds input[value="1"]`)
	p.until("the run has speed 1", func() bool { return p.last().Speed == 1 })
	p.click("[data-do=play]")
	p.until("it begins again", func() bool { f := p.last(); return f.Playing && f.Status == "running" && f.Time < 10 })

	// The keys work on with the focus on the chosen speed.
	p.click(`.speeds input[value="2"]`)
	p.until("the run has speed 2", func() bool { return p.last().Speed == 2 })
	p.see("the page knows that it plays", `document.querySelector('[data-do=play]').ariaLabel === 'Pause'`)
	p.keys(" ")
	stood := p.settled()
	p.keys(".")
	p.ticks(stood.Tick + 1)
}
