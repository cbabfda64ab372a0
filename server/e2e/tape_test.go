package e2e

import (
	"fmt"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"

	"leeway/sim/logic"
	"leeway/sim/shadow"
)

const (
	plot = ".plot[role=slider]"
	// length of the tape that these tests look back on: 25 s, in which the robot meets the
	// pocket and follows its wall.
	taped = 5000
)

// tape opens a shipped floor with a tape of that length, at its end.
func tape(t *testing.T) (*site, *tab) {
	t.Helper()
	s := serve(t)
	p := newTab(t, s)
	p.bench(s.open(map[string]any{"shipped": "pocket", "tick": taped, "playing": false}))
	p.ticks(taped)
	return s, p
}

// lookAt goes to a tick by keys on the tape's line.
func (p *tab) lookAt(tick int64) {
	p.t.Helper()
	p.do(chromedp.Focus(chromedp.CSS(plot)))
	d := tick - p.last().Tick
	tenth, one := kb.ArrowRight, "."
	if d < 0 {
		d, tenth, one = -d, kb.ArrowLeft, ","
	}
	for range d / 200 {
		p.keys(tenth, chromedp.ModifierShift)
	}
	for range d % 200 / 20 {
		p.keys(tenth)
	}
	for range d % 20 {
		p.keys(one)
	}
	p.ticks(tick)
}

// same fails unless what the page shows of a tick is what the simulation has there.
func (p *tab) same(set *shadow.Set) {
	p.t.Helper()
	robot := set.Run(shadow.Robot)
	want := fmt.Sprintf("%016x", robot.Outcome().Hash)
	p.until(fmt.Sprintf("tick %d has the hash %s", set.Tick(), want), func() bool {
		f := p.last()
		return f.Tick == set.Tick() && f.Hash == want
	})
	at := robot.Pose().Pos
	p.drawn(".hull", [2]float64{at.X, at.Y})
}

// still waits until the same moment has been shown for a while.
func (p *tab) still() frame {
	p.t.Helper()
	shown, since := p.last().Tick, time.Now()
	p.until("the same moment is shown for a while", func() bool {
		if now := p.last().Tick; now != shown {
			shown, since = now, time.Now()
		}
		return time.Since(since) > 300*time.Millisecond
	})
	return p.last()
}

// TestTapeIsScrubbed drags the line of the tape back, and moves it by keys: every
// moment is exactly what it was.
func TestTapeIsScrubbed(t *testing.T) {
	t.Parallel()
	_, p := tape(t)
	p.see("nothing is said about the past", `!document.querySelector('.hint').hasAttribute('data-past')`)
	at := func(share float64) point {
		return eval[point](p, fmt.Sprintf(`(() => {
			const r = document.querySelector(%q).getBoundingClientRect();
			return {X: r.left + %g * r.width, Y: r.top + r.height / 2};
		})()`, plot, share))
	}
	p.hold(at(0.45), at(0.25)) // not on a mark
	p.until("the drag leads back", func() bool { return p.last().Tick < taped/2 })
	p.mouse(chromedp.MouseReleased, at(0.25))
	p.see("the page says that it looks back", `document.querySelector('.hint').hasAttribute('data-past')`)
	back := p.still()
	p.same(stepped(t, "pocket", back.Tick))

	p.do(chromedp.Focus(chromedp.CSS(plot)))
	p.keys(kb.ArrowLeft)
	p.ticks(back.Tick - 20)
	p.keys(",")
	p.ticks(back.Tick - 21)
	p.same(stepped(t, "pocket", back.Tick-21))
	p.keys(kb.Home)
	p.ticks(0)
	p.keys(kb.End)
	p.ticks(taped)
	p.same(stepped(t, "pocket", taped))
	p.click("[data-do=back]")
	p.ticks(taped - 1)
}

// TestRunGoesOnFromThePast plays from a past moment through what is known and beyond
// it, and then changes something in the past: that is another future.
func TestRunGoesOnFromThePast(t *testing.T) {
	t.Parallel()
	s, p := tape(t)
	p.do(chromedp.Focus(chromedp.CSS(plot)))
	p.keys(kb.Home)
	p.ticks(0)
	p.click("input[name=speed][value='64']+span, label:has(input[name=speed][value='64'])")
	p.click("[data-do=play]")
	p.until("it has gone on beyond what was known", func() bool { return p.last().Tick > taped+400 })
	p.click("[data-do=play]")
	on := p.settled()
	p.same(stepped(t, "pocket", on.Tick))

	past := on.Tick - on.Tick/2 // the robot is far from the goal there, and does not lie over it
	p.lookAt(past)
	from := p.middle(`[data-thing="goal"]`)
	p.drag(from, p.at(10.5, 1.5))
	p.until("the goal is elsewhere", func() bool { return near(p.last().Goal, [2]float64{10.5, 1.5}, 0.02) })
	p.see("the tape ends here now", `!document.querySelector('.hint').hasAttribute('data-past')`)
	p.says("#strip-words", "another future")
	if tick := p.last().Tick; tick != past {
		t.Errorf("the change was made at tick %d, looked at was %d", tick, past)
	}
	edits := s.scenario(p.session()).Edits
	if len(edits) == 0 || edits[len(edits)-1].Tick != past || edits[len(edits)-1].What != "goal" {
		t.Errorf("the file has the edits %+v", edits)
	}
	p.see("the old future is still drawn", `document.querySelector('#floor .old')?.getAttribute('d')`)
}

// TestPartingIsJumpedTo goes to the parting that the verdict tells of.
func TestPartingIsJumpedTo(t *testing.T) {
	t.Parallel()
	_, p := tape(t)
	want, ok := shadow.MostTelling(stepped(t, "pocket", taped).Partings(shadow.Point))
	if !ok {
		t.Fatal("on this floor the point and the robot do not part: take another")
	}
	p.see("the parting is told", fmt.Sprintf(`document.querySelector('.parting-words').textContent.replaceAll('\u00a0', ' ').includes(%s)`, quote(want.Text[:40])))
	p.click(".parting button")
	p.ticks(want.Tick)
	p.same(stepped(t, "pocket", want.Tick))
}

// TestGaugesAgreeWithTheDecision looks at the ticks before and after the first switch:
// before it, the gauges are the exits as they stood; after it, the sentence is that of
// the decision, with its numbers.
func TestGaugesAgreeWithTheDecision(t *testing.T) {
	t.Parallel()
	_, p := tape(t)
	first := stepped(t, "pocket", taped).Run(shadow.Robot).Switches()[0]

	p.lookAt(first.Tick)
	before := stepped(t, "pocket", first.Tick).Run(shadow.Robot)
	want := map[string]bool{}
	for _, x := range before.Engine().Exits(before.Time()) {
		for _, g := range x.Gauges {
			want[g.Text] = g.Met
		}
	}
	type gauge struct {
		Text string
		Met  bool
	}
	shown := func() []gauge {
		return eval[[]gauge](p, `[...document.querySelectorAll('#why .gauge')].filter((e) => e.checkVisibility()).map((e) => ({
			Text: e.querySelector('.value').textContent.replaceAll('\u00a0', ' '),
			Met: e.hasAttribute('data-met') && e.getAttribute('data-met') !== 'false',
		}))`)
	}
	agree := func() bool {
		all := shown()
		for _, g := range all {
			if met, ok := want[g.Text]; !ok || met != g.Met {
				return false
			}
		}
		return len(all) > 0
	}
	p.until(fmt.Sprintf("the gauges at tick %d are %v", first.Tick, want), agree)

	p.lookAt(first.Tick + 1)
	after := stepped(t, "pocket", first.Tick+1).Run(shadow.Robot)
	l := after.Config().Logic
	p.says("#why .mode-name", strings.ToUpper(l.Modes[first.To].Name[:1])+l.Modes[first.To].Name[1:])
	sentence := after.Why()
	p.see("the sentence is "+sentence, fmt.Sprintf(`document.getElementById('why').textContent.replaceAll('\u00a0', ' ').includes(%s)`, quote(sentence)))
	if after.Engine().Side() == logic.NoSide {
		t.Error("the first switch follows no wall: this test looks at the wrong one")
	}
}
