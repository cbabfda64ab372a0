package e2e

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"strings"
	"time"

	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"
)

// frame is what a test wants to know of a message of the live stream.
type frame struct {
	Tick    int64
	Time    float64
	Playing bool
	Speed   float64
	Viewers int
	Pose    [3]float64
	Movers  [][2]float64
	Goal    [2]float64
	Status  string
	Hash    string
}

// visit goes to an address of the page's server.
func (p *tab) visit(path string) {
	p.t.Helper()
	p.do(chromedp.Navigate(p.site.url + path))
}

// bench opens a session on its bench and waits until the page is alive.
func (p *tab) bench(session string) {
	p.t.Helper()
	p.visit("/bench/" + session)
	p.alive()
}

// alive waits until the bench shows what comes over its stream.
func (p *tab) alive() {
	p.t.Helper()
	p.until("the live stream brings something", func() bool { return p.seen() > 0 })
	p.see("the robot is drawn", `document.querySelector('#floor .hull')?.getAttribute('r') > 0`)
	p.see("no banner covers the floor", `document.getElementById('banner').hidden`)
}

// reload loads the bench anew and waits until it is alive again: what the old page
// has received does not count.
func (p *tab) reload() {
	p.t.Helper()
	p.mu.Lock()
	p.frames = 0
	p.mu.Unlock()
	p.do(chromedp.Reload())
	p.alive()
}

// last returns the latest frame that the page has received.
func (p *tab) last() frame {
	p.mu.Lock()
	defer p.mu.Unlock()
	return p.frame
}

// seen returns how many frames the page has received since it connected.
func (p *tab) seen() int {
	p.mu.Lock()
	defer p.mu.Unlock()
	return p.frames
}

// session returns the id in the page's address.
func (p *tab) session() string {
	p.t.Helper()
	return eval[string](p, `location.pathname.replace('/bench/', '')`)
}

// eval evaluates an expression in the page; a promise is awaited.
func eval[T any](p *tab, expression string) T {
	p.t.Helper()
	v, err := tryEval[T](p, expression)
	if err != nil {
		p.t.Fatalf("%s: %v", expression, err)
	}
	return v
}

func tryEval[T any](p *tab, expression string) (T, error) {
	ctx, cancel := context.WithTimeout(p.ctx, patience)
	defer cancel()
	return chromedp.Run(ctx, chromedp.Evaluate[T](expression, chromedp.EvalAwaitPromise))
}

// until waits for a condition, asking about fifty times a second.
func (p *tab) until(what string, ok func() bool) {
	p.t.Helper()
	for end := time.Now().Add(patience); !ok(); time.Sleep(20 * time.Millisecond) {
		if time.Now().After(end) {
			where, _ := tryEval[string](p, `location.href + ' "' + document.title + '" ' + (document.getElementById('strip')?.innerText ?? '')`)
			p.t.Fatalf("in vain: %s.\nThe page%s: %s\nThe last frame: %+v", what, p.name, where, p.last())
		}
	}
}

// see waits until an expression is true in the page, through changes of page.
func (p *tab) see(what, expression string) {
	p.t.Helper()
	p.until(fmt.Sprintf("%s (%s)", what, expression), func() bool {
		yes, err := tryEval[bool](p, "!!("+expression+")")
		return err == nil && yes
	})
}

// read waits until an element is there and returns its text.
func (p *tab) read(selector string) string {
	p.t.Helper()
	p.see("there is "+selector, fmt.Sprintf(`document.querySelector(%q)`, selector))
	return eval[string](p, fmt.Sprintf(`document.querySelector(%q).innerText`, selector))
}

// says waits until the text of an element contains some words.
func (p *tab) says(selector, words string) {
	p.t.Helper()
	p.see(fmt.Sprintf("%s says %q", selector, words),
		fmt.Sprintf(`[...document.querySelectorAll(%q)].some((e) => e.checkVisibility({visibilityProperty: true, opacityProperty: false}) && e.innerText.includes(%q))`, selector, words))
}

// point is a place on the screen, in pixels of the window.
type point struct{ X, Y float64 }

// middle scrolls an element into view, waits until it rests there, and returns the
// middle of it.
func (p *tab) middle(selector string) point {
	p.t.Helper()
	p.see("there is "+selector, fmt.Sprintf(`document.querySelector(%q)`, selector))
	return eval[point](p, fmt.Sprintf(`(async () => {
		const e = document.querySelector(%q);
		e.scrollIntoView({block: 'nearest', inline: 'nearest', behavior: 'instant'});
		for (let before = null; ;) {
			const r = e.getBoundingClientRect();
			if (before && before.left === r.left && before.top === r.top) return {X: r.left + r.width / 2, Y: r.top + r.height / 2};
			before = r;
			await new Promise((next) => requestAnimationFrame(() => requestAnimationFrame(next)));
		}
	})()`, selector))
}

// click clicks the middle of an element.
func (p *tab) click(selector string) {
	p.t.Helper()
	at := p.middle(selector)
	p.do(chromedp.MouseClickXY(at.X, at.Y))
}

func (p *tab) mouse(kind input.DispatchMouseEventType, at point) {
	p.t.Helper()
	params := input.DispatchMouseEventParams{Type: kind, X: at.X, Y: at.Y}
	switch kind {
	case chromedp.MousePressed:
		params.Button, params.Buttons, params.ClickCount = input.MouseButtonLeft, 1, 1
	case chromedp.MouseReleased:
		params.Button, params.ClickCount = input.MouseButtonLeft, 1
	}
	call(p, input.DispatchMouseEvent, params)
}

// drag presses the mouse, moves it there in steps, and lets it go.
func (p *tab) drag(from, to point) {
	p.t.Helper()
	p.hold(from, to)
	p.mouse(chromedp.MouseReleased, to)
}

// hold is drag without the release.
func (p *tab) hold(from, to point) {
	p.t.Helper()
	p.mouse(chromedp.MouseMoved, from)
	p.mouse(chromedp.MousePressed, from)
	const steps = 6
	for i := 1.0; i <= steps; i++ {
		call(p, input.DispatchMouseEvent, input.DispatchMouseEventParams{
			Type: chromedp.MouseMoved, Buttons: 1, Button: input.MouseButtonLeft,
			X: from.X + (to.X-from.X)*i/steps, Y: from.Y + (to.Y-from.Y)*i/steps,
		})
	}
}

// swipe does with a finger what drag does with the mouse.
func (p *tab) swipe(from, to point) {
	p.t.Helper()
	touch := func(kind input.DispatchTouchEventType, points ...*input.TouchPoint) {
		if points == nil {
			points = []*input.TouchPoint{}
		}
		call(p, input.DispatchTouchEvent, input.DispatchTouchEventParams{Type: kind, TouchPoints: points})
	}
	touch(input.DispatchTouchEventTypeTouchStart, &input.TouchPoint{X: from.X, Y: from.Y})
	const steps = 6
	for i := 1.0; i <= steps; i++ {
		touch(input.DispatchTouchEventTypeTouchMove, &input.TouchPoint{X: from.X + (to.X-from.X)*i/steps, Y: from.Y + (to.Y-from.Y)*i/steps})
	}
	touch(input.DispatchTouchEventTypeTouchEnd)
}

// keys presses keys one after the other, of package kb or characters.
func (p *tab) keys(keys string, held ...chromedp.Modifier) {
	p.t.Helper()
	p.do(chromedp.KeyEvent(keys, chromedp.KeyModifiers(held...)))
}

// tabTo presses Tab until the focus is on an element.
func (p *tab) tabTo(selector string) {
	p.t.Helper()
	for range 100 {
		p.keys(kb.Tab)
		if eval[bool](p, fmt.Sprintf(`document.activeElement.matches(%q)`, selector)) {
			return
		}
	}
	p.t.Fatalf("a hundred times Tab do not lead to %s", selector)
}

// at returns where a place of the floor is on the screen. It goes by the picture
// itself: by the transformation of what is drawn in metres.
func (p *tab) at(x, y float64) point {
	p.t.Helper()
	return eval[point](p, fmt.Sprintf(`(() => {
		const world = document.querySelector('#floor .world');
		const m = world.getScreenCTM();
		const at = new DOMPoint(%v, %v).matrixTransform(m);
		return {X: at.x, Y: at.y};
	})()`, x, y))
}

// drawnAt returns the place of the floor, in metres, at which the middle of an
// element of the picture is drawn.
func (p *tab) drawnAt(selector string) [2]float64 {
	p.t.Helper()
	v, err := tryEval[point](p, fmt.Sprintf(`(() => {
		const r = document.querySelector('#floor '+%q).getBoundingClientRect();
		const m = document.querySelector('#floor .world').getScreenCTM().inverse();
		const at = new DOMPoint(r.left + r.width / 2, r.top + r.height / 2).matrixTransform(m);
		return {X: at.x, Y: at.y};
	})()`, selector))
	if err != nil {
		p.t.Fatalf("%s is not drawn: %v", selector, err)
	}
	return [2]float64{v.X, v.Y}
}

// drawn waits until an element of the picture is drawn at a place of the floor, to
// within a pixel.
func (p *tab) drawn(selector string, want [2]float64) {
	p.t.Helper()
	scale := eval[float64](p, `document.querySelector('#floor .world').getScreenCTM().a`)
	var got [2]float64
	p.until(fmt.Sprintf("%s is drawn at %v", selector, want), func() bool {
		got = p.drawnAt(selector)
		return near(got, want, 1/scale)
	})
}

func contains(text, part string) bool { return strings.Contains(text, part) }

func near(a, b [2]float64, within float64) bool {
	return math.Hypot(a[0]-b[0], a[1]-b[1]) <= within
}

// quote writes a text as JavaScript.
func quote(s string) string {
	b, err := json.Marshal(s)
	if err != nil {
		panic(err)
	}
	return string(b)
}
