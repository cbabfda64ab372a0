package e2e

import "testing"

// TestTwoPagesWatchOneRun has two people on one session.
func TestTwoPagesWatchOneRun(t *testing.T) {
	t.Parallel()
	s := serve(t)
	id := s.open(map[string]any{"scenario": workshop, "playing": false})
	a := newTab(t, s)
	a.bench(id)
	if got := a.read("#viewers"); got != "" {
		t.Errorf("alone, and the page says %q", got)
	}
	b := newTab(t, s)
	b.name = " of the other person"
	b.bench(id)
	for _, p := range []*tab{a, b} {
		p.says("#viewers", "2 watching")
	}

	// What one does, the other sees: a drag before it is let go, a number, playing.
	a.hold(a.at(11, 4), a.at(9.5, 6))
	b.drawn(".goal-mark", [2]float64{9.5, 6})
	a.mouse("mouseReleased", a.at(9.5, 6))
	a.click(field("robot.speed_m_s"))
	a.keys("0.7\r")
	b.shows("robot.speed_m_s", "0.70")
	b.drag(b.at(6, 1.5), b.at(8, 1.5))
	a.drawn(`[data-thing="solid post"] .ring`, [2]float64{8, 1.5})
	b.click("[data-do=play]")
	a.until("the run goes on", func() bool { return a.last().Tick > 20 })
	a.see("the button offers to pause", `document.querySelector('[data-do=play]').ariaLabel === 'Pause'`)

	// One goes away.
	b.visit("/")
	a.see("nobody else watches", `document.getElementById('viewers').textContent === ''`)
	a.until("the run goes on", func() bool { return a.last().Viewers == 1 && a.last().Playing })
}
