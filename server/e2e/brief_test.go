package e2e

import (
	"fmt"
	"testing"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"
)

func field(path string) string { return fmt.Sprintf(`#brief [data-path="%s"]`, path) }

// shows waits until a number or choice of the brief has a value, as text.
func (p *tab) shows(path, value string) {
	p.t.Helper()
	p.see(fmt.Sprintf("%s shows %s", path, value), fmt.Sprintf(`document.querySelector(%s)?.value === %s`, quote(field(path)), quote(value)))
}

// noted waits until the note below a field is to be seen and says some words.
func (p *tab) noted(path, words string) {
	p.t.Helper()
	p.see(fmt.Sprintf("the note of %s says %q", path, words), fmt.Sprintf(`(() => {
		const note = document.querySelector(%s).closest('.num, .choice').querySelector('.note');
		return getComputedStyle(note).display !== 'none' && note.textContent.replaceAll('\u00a0', ' ').includes(%s);
	})()`, quote(field(path)), quote(words)))
}

// has waits until the scenario of the session, as it stands, has a number.
func (s *site) has(p *tab, session, path string, want float64) {
	p.t.Helper()
	var got float64
	p.until(fmt.Sprintf("the server has %s at %v", path, want), func() bool {
		var err error
		if got, err = s.scenario(session).Folded().NumberAt(path); err != nil {
			p.t.Fatal(err)
		}
		return got == want
	})
}

// TestNumbersAreEditedInPlace changes numbers of the brief in each way there is.
func TestNumbersAreEditedInPlace(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	id := s.open(map[string]any{"scenario": workshop, "playing": false, "tick": 100})
	p.bench(id)
	const speed, radius = "robot.speed_m_s", "robot.radius_m"

	// Typed, with Enter, a number of the running robot applies now.
	p.click(field(speed))
	p.noted(speed, "applies to the running robot")
	p.keys("0.3" + kb.Enter)
	p.shows(speed, "0.30")
	s.has(p, id, speed, 0.3)
	if f := p.last(); f.Tick != 100 {
		t.Errorf("the run is at tick %d: a speed is to apply to the running robot", f.Tick)
	}
	if e := s.scenario(id).Edits; len(e) != 1 || e[0].What != "number" || e[0].Tick != 100 {
		t.Errorf("the file should hold the change as an edit: %+v", e)
	}

	// By arrow keys: a step, and ten with Shift.
	p.keys(kb.ArrowUp + kb.ArrowUp)
	p.shows(speed, "0.32")
	s.has(p, id, speed, 0.32)
	p.keys(kb.ArrowUp, chromedp.ModifierShift)
	s.has(p, id, speed, 0.42)

	// Escape brings the old number back and sends nothing.
	p.keys(kb.Enter + "0.9") // Enter leaves the number selected
	p.shows(speed, "0.9")
	p.keys(kb.Escape)
	p.shows(speed, "0.42")
	p.keys(kb.Tab)
	s.has(p, id, speed, 0.42)

	// What is out of range is not taken, and the range is said.
	p.click(field(speed))
	p.keys("99" + kb.Enter)
	p.noted(speed, "Out of range")
	p.noted(speed, "0.01 to 5.00 m/s")
	p.see("it is marked", fmt.Sprintf(`document.querySelector(%s).getAttribute('aria-invalid') === 'true'`, quote(field(speed))))
	s.has(p, id, speed, 0.42)
	p.keys(kb.Escape)
	p.shows(speed, "0.42")
	p.keys("fast" + kb.Enter)
	p.noted(speed, "That is not a number")
	p.keys(kb.Escape + kb.Tab)

	// Dragged sideways: five pixels a step.
	at := p.middle(field(speed))
	p.drag(at, point{at.X + 52, at.Y})
	p.shows(speed, "0.52")
	s.has(p, id, speed, 0.52)

	// A number that no running robot can take restarts the run, and the page says so.
	p.click(field(radius))
	p.noted(radius, "restarts the run")
	p.keys("0.25" + kb.Enter)
	p.says("#strip", "the run begins again")
	s.has(p, id, radius, 0.25)
	p.until("the run is at its beginning", func() bool { return p.last().Tick == 0 })
	p.see("the robot is drawn larger", `Math.abs(document.querySelector('#floor .hull').getAttribute('r') - 0.25) < 1e-6`)
	s.has(p, id, speed, 0.52) // what was changed before stays

	// A number that fits its own range and not the rest is refused by the server, in
	// words beside it.
	p.keys(kb.Enter + "0.1" + kb.Enter)
	p.noted(radius, "wider than the hull")
	s.has(p, id, radius, 0.25)
	p.shows(radius, "0.25")
}

// TestChoiceIsChanged chooses another word of the brief.
func TestChoiceIsChanged(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	id := s.open(map[string]any{"scenario": workshop, "playing": false, "tick": 100})
	p.bench(id)
	const position = "robot.position"
	p.do(chromedp.Focus(chromedp.CSS(field(position))))
	p.noted(position, "restarts the run")
	p.keys("k") // as a person chooses "knowing its true pose" with the keyboard
	p.shows(position, "true_pose")
	p.says("#strip", "the run begins again")
	p.until("the run is at its beginning", func() bool { return p.last().Tick == 0 })
	p.until("the server has the choice", func() bool {
		v, err := s.scenario(id).Folded().ChoiceAt(position)
		return err == nil && v == "true_pose"
	})

	// Steering by look-ahead brings another number into the sentence.
	p.see("there is a gain", fmt.Sprintf(`document.querySelector(%s)`, quote(field("robot.steering_gain_per_s"))))
	p.do(chromedp.Focus(chromedp.CSS(field("robot.steering"))))
	p.keys(kb.ArrowDown)
	p.shows("robot.steering", "look_ahead")
	p.see("there is a look-ahead", fmt.Sprintf(`document.querySelector(%s)`, quote(field("robot.look_ahead_m"))))
}
