package e2e

import (
	"math"
	"testing"

	"github.com/chromedp/chromedp"
)

// lossy are the messages that the browser itself writes when a server goes away,
// whatever the page does. A server that is going answers 503; and the websocket
// library answers the answer to its own close frame, which the browser finds odd.
const lossy = `WebSocket connection to .* failed|net::ERR_(CONNECTION_REFUSED|CONNECTION_RESET|EMPTY_RESPONSE|SOCKET_NOT_CONNECTED)` +
	`|answered 503|status of 503|websocket: Close received after close`

// startedRun is a page on which a run drives that has been changed by hand.
func startedRun(t *testing.T, s *site) *tab {
	t.Helper()
	p := newTab(t, s)
	p.expect(lossy)
	p.bench(s.open(map[string]any{"scenario": workshop, "playing": true}))
	p.drag(p.at(11, 4), p.at(10, 2))
	p.until("the run has the goal where it was put", func() bool { return math.Abs(p.last().Goal[1]-2) < 0.02 })
	// A page that is loaded anew would have lost this.
	eval[any](p, `void (window.sameAsBefore = true)`)
	return p
}

// goesOn waits until the run has gone on after an interruption, on the same page.
func (p *tab) goesOn(before frame) {
	p.t.Helper()
	p.until("the run goes on from where it was", func() bool { return p.last().Tick > before.Tick+20 })
	p.see("the banner is gone", `document.getElementById('banner').hidden`)
	if !eval[bool](p, `window.sameAsBefore === true`) {
		p.t.Error("the page was loaded anew")
	}
	f := p.last()
	if !near(f.Goal, before.Goal, 1e-3) {
		p.t.Errorf("the goal is at %v, where %v was left", f.Goal, before.Goal)
	}
	p.until("it goes at the speed it had", func() bool { return p.last().Speed == before.Speed && p.last().Playing })
	p.drawn(".goal-mark", f.Goal)
	// The stream takes commands again.
	p.click("[data-do=play]")
	p.until("it pauses", func() bool { return !p.last().Playing })
}

// TestPageRecoversWhenTheServerIsRestarted stops the program in the middle of a run,
// once as a person does and once as a crash does, and starts it again.
func TestPageRecoversWhenTheServerIsRestarted(t *testing.T) {
	for _, how := range []string{"stopped", "killed"} {
		t.Run(how, func(t *testing.T) {
			t.Parallel()
			data := t.TempDir()
			s := serveProcess(t, "127.0.0.1:0", data)
			p := startedRun(t, s)
			if how == "killed" {
				// A crash may cost what has not been saved yet: at most two seconds of the
				// run, and what was changed in the last third of a second.
				first := p.last().Tick
				p.until("the change is saved", func() bool { return p.last().Tick > first+100 })
				s.kill()
			} else {
				s.stop()
			}
			before := p.last()
			p.says("#banner", "The connection to the server is lost")
			again := serveProcess(t, s.addr(), data)
			p.site = again
			p.goesOn(before)
			if got := again.scenario(p.session()).Folded().Goal; math.Abs(got.Y-2) > 0.02 {
				t.Errorf("the server has the goal at %v, %v", got.X, got.Y)
			}
		})
	}
}

// TestPageHandsItsRunToAServerThatHasLostIt starts the program again without its
// data: the page has the scenario, and gives it back.
func TestPageHandsItsRunToAServerThatHasLostIt(t *testing.T) {
	t.Parallel()
	s := serveProcess(t, "127.0.0.1:0", t.TempDir())
	p := startedRun(t, s)
	p.expect(`/bench/\w+ answered 404|status of 404`)
	p.click(`.speeds input[value="2"]`)
	p.until("it goes at double speed", func() bool { return p.last().Speed == 2 })
	session := p.session()
	s.kill()
	before := p.last()
	p.says("#banner", "The connection to the server is lost")
	again := serveProcess(t, s.addr(), t.TempDir())
	p.site = again
	p.says("#strip", "The server had lost this run")
	p.see("the page has another address", `location.pathname !== '/bench/`+session+`'`)
	p.goesOn(before)
	if got := again.scenario(p.session()).Folded().Goal; math.Abs(got.Y-2) > 0.02 {
		t.Errorf("the server has the goal at %v, %v", got.X, got.Y)
	}
	// Under its new address it can be loaded, and its file saved.
	p.do(chromedp.Reload())
	p.alive()
	p.says("#name", "The workshop")
	if href := eval[string](p, `document.getElementById('save').pathname`); href != "/api/sessions/"+p.session()+"/scenario" {
		t.Errorf("the file is saved from %s", href)
	}
}
