package e2e

import (
	"testing"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"

	"leeway/sim/scenario"
)

// put is what a drag must come to: a thing at a place, on the page and in the
// server.
type put struct {
	name string
	from [2]float64 // where the hand takes it, m
	to   [2]float64 // where the hand lets it go
	// in returns the thing's anchor from the scenario as it stands after the edits.
	in func(*scenario.Scenario) [2]float64
	// anchor is where that must be.
	anchor [2]float64
	// drawn is the part of the picture whose middle must be at shown.
	drawn string
	shown [2]float64
}

var puts = []put{
	{
		name: "goal", from: [2]float64{11, 4}, to: [2]float64{9.5, 2.5},
		in:     func(sc *scenario.Scenario) [2]float64 { return [2]float64{sc.Goal.X, sc.Goal.Y} },
		anchor: [2]float64{9.5, 2.5}, drawn: ".goal-mark", shown: [2]float64{9.5, 2.5},
	},
	{ // taken by its middle, it keeps the hand's distance from its first corner
		name: "solid", from: [2]float64{6.5, 5.3}, to: [2]float64{3.5, 5.3},
		in:     func(sc *scenario.Scenario) [2]float64 { return sc.Floor.Solids[0].Corners[0] },
		anchor: [2]float64{3, 5}, drawn: `[data-thing="solid desk"] .ring`, shown: [2]float64{3.5, 5.3},
	},
	{
		name: "round solid", from: [2]float64{6, 1.5}, to: [2]float64{8, 1.2},
		in:     func(sc *scenario.Scenario) [2]float64 { return sc.Floor.Solids[1].Center },
		anchor: [2]float64{8, 1.2}, drawn: `[data-thing="solid post"] .ring`, shown: [2]float64{8, 1.2},
	},
	{
		name: "wall", from: [2]float64{4.5, 7}, to: [2]float64{5.5, 6.5},
		in:     func(sc *scenario.Scenario) [2]float64 { return sc.Floor.Walls[0].Points[0] },
		anchor: [2]float64{5, 5.5}, drawn: `[data-thing="solid screen"] .ring`, shown: [2]float64{5.5, 6},
	},
	{ // its whole route goes with it
		name: "mover", from: [2]float64{9, 6}, to: [2]float64{8.5, 6.8},
		in:     func(sc *scenario.Scenario) [2]float64 { return sc.Floor.Movers[0].Route[0] },
		anchor: [2]float64{8.5, 6.8}, drawn: ".mover", shown: [2]float64{8.5, 6.8},
	},
	{
		name: "start", from: [2]float64{1, 4}, to: [2]float64{1.5, 2},
		in:     func(sc *scenario.Scenario) [2]float64 { return [2]float64{sc.Start.X, sc.Start.Y} },
		anchor: [2]float64{1.5, 2}, drawn: ".start-mark path", shown: [2]float64{1.5, 2},
	},
}

// TestThingsAreDraggedByMouse drags one of everything on a run that stands, and
// asks the page where it is drawn and the server where it is.
func TestThingsAreDraggedByMouse(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	id := s.open(map[string]any{"scenario": workshop, "playing": false})
	p.bench(id)
	for _, d := range puts {
		from := p.at(d.from[0], d.from[1])
		if d.name == "start" {
			// The robot stands on the start: the start is taken by its name.
			from = p.middle("#floor .word")
			to := p.at(d.to[0], d.to[1])
			grip := p.at(d.from[0], d.from[1])
			p.drag(from, point{to.X + from.X - grip.X, to.Y + from.Y - grip.Y})
		} else {
			p.drag(from, p.at(d.to[0], d.to[1]))
		}
		p.drawn(d.drawn, d.shown)
		var got [2]float64
		p.until("the server has the "+d.name+" where it was put", func() bool {
			got = d.in(s.scenario(id).Folded())
			return near(got, d.anchor, 0.012) // a pixel of this floor is a centimetre
		})
	}
	// The robot starts anew where the start is.
	p.drawn(".hull", [2]float64{1.5, 2})
}

// TestRobotIsCarried takes the robot up and sets it down elsewhere while it drives.
func TestRobotIsCarried(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	id := s.open(map[string]any{"scenario": workshop, "playing": false, "tick": 200})
	p.bench(id)
	here := p.last().Pose
	p.drag(p.at(here[0], here[1]), p.at(5, 3))
	p.until("the robot is where it was put", func() bool {
		f := p.last()
		return near([2]float64{f.Pose[0], f.Pose[1]}, [2]float64{5, 3}, 0.012)
	})
	p.drawn(".hull", [2]float64{5, 3})
	edits := s.scenario(id).Edits
	if len(edits) == 0 || edits[len(edits)-1].What != "robot" {
		t.Errorf("the file does not hold that the robot was carried: %v", edits)
	}
	p.click("[data-do=play]")
	p.until("it drives on from there", func() bool { return p.last().Pose[0] > 5.3 })
}

// TestGoalIsDraggedWhileTheRobotDrives moves the goal behind the robot's back.
func TestGoalIsDraggedWhileTheRobotDrives(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	id := s.open(map[string]any{"scenario": workshop, "playing": true})
	p.bench(id)
	p.hold(p.at(11, 4), p.at(2, 1))
	// The picture follows the hand at once; the server learns of it on the way.
	p.drawn(".goal-mark", [2]float64{2, 1})
	p.until("the run has the goal before the hand lets go", func() bool { return near(p.last().Goal, [2]float64{2, 1}, 0.012) })
	p.mouse(chromedp.MouseReleased, p.at(2, 1))
	p.until("the robot turns towards it", func() bool { return p.last().Pose[1] < 3.8 })
	sc := s.scenario(id)
	if len(sc.Edits) == 0 || sc.Goal.X != 11 {
		t.Errorf("the file should have the goal where the run began, and the drag as edits: %+v, %d edits", sc.Goal, len(sc.Edits))
	}
	folded := sc.Folded()
	if got := [2]float64{folded.Goal.X, folded.Goal.Y}; !near(got, [2]float64{2, 1}, 0.012) {
		t.Errorf("the server has the goal at %v", got)
	}
	// Escape during a drag gives it up.
	p.hold(p.at(2, 1), p.at(6, 3.5))
	p.drawn(".goal-mark", [2]float64{6, 3.5})
	p.keys(kb.Escape)
	p.drawn(".goal-mark", [2]float64{2, 1})
	p.mouse(chromedp.MouseReleased, p.at(6, 3.5))
	p.drawn(".goal-mark", [2]float64{2, 1})
}

// TestDropInsideASolidIsRefused lets the goal go where it cannot be.
func TestDropInsideASolidIsRefused(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	id := s.open(map[string]any{"scenario": workshop, "playing": false})
	p.bench(id)
	p.drag(p.at(11, 4), p.at(6.5, 5.3))
	p.says("#strip", `The goal cannot be inside solid "desk"`)
	p.drawn(".goal-mark", [2]float64{11, 4})
	if got := s.scenario(id).Folded().Goal; got.X != 11 || got.Y != 4 {
		t.Errorf("the server has the goal at %v, %v", got.X, got.Y)
	}
	// Likewise a solid on top of the goal.
	p.drag(p.at(6.5, 5.3), p.at(11, 4))
	p.says("#strip", `The goal would be inside solid "desk"`)
	p.drawn(`[data-thing="solid desk"] .ring`, [2]float64{6.5, 5.3})
	if got := s.scenario(id).Folded().Floor.Solids[0].Corners[0]; got != [2]float64{6, 5} {
		t.Errorf("the server has the desk at %v", got)
	}
}

// TestThingsAreMovedByKeys reaches things with the Tab key alone and moves them by
// arrows.
func TestThingsAreMovedByKeys(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	id := s.open(map[string]any{"scenario": workshop, "playing": false})
	p.bench(id)
	p.tabTo(`[data-thing="goal"]`)
	p.see("the focus can be seen", `getComputedStyle(document.activeElement.querySelector('.ring')).stroke !== 'none'`)
	p.keys(kb.ArrowLeft + kb.ArrowLeft + kb.ArrowUp)
	p.keys(kb.ArrowUp, chromedp.ModifierShift)
	p.keys(kb.ArrowLeft, chromedp.ModifierAlt)
	want := [2]float64{10.79, 4.6}
	p.drawn(".goal-mark", want)
	p.until("the server has the goal there, exactly", func() bool {
		g := s.scenario(id).Folded().Goal
		return g.X == want[0] && g.Y == want[1]
	})
	p.see("the place is read out", `document.getElementById('heard').textContent.includes('10.79')`)
	p.see("the handle says where it is", `document.activeElement.getAttribute('aria-label').includes('10.79')`)

	p.tabTo(`[data-thing="solid desk"]`)
	p.keys(kb.ArrowDown)
	p.until("the server has the desk lower", func() bool {
		return near(s.scenario(id).Folded().Floor.Solids[0].Corners[0], [2]float64{6, 4.9}, 1e-9)
	})
	p.see("the focus is still on the desk", `document.activeElement.dataset.thing === 'solid desk'`)
	p.tabTo(`[data-thing="mover cart"]`)
	p.keys(kb.ArrowRight)
	p.until("the server has the cart further right", func() bool {
		return near(s.scenario(id).Folded().Floor.Movers[0].Route[0], [2]float64{9.1, 6}, 1e-9)
	})
}

// TestGoalIsDraggedByFinger does it on a telephone's screen.
func TestGoalIsDraggedByFinger(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	p.do(chromedp.EmulateViewport(390, 844, chromedp.EmulateMobile, chromedp.EmulateTouch))
	id := s.open(map[string]any{"scenario": workshop, "playing": false})
	p.bench(id)
	p.swipe(p.at(11, 4), p.at(9, 2))
	p.until("the server has the goal where it was put", func() bool {
		g := s.scenario(id).Folded().Goal
		return near([2]float64{g.X, g.Y}, [2]float64{9, 2}, 0.06) // a pixel is three centimetres
	})
	g := s.scenario(id).Folded().Goal
	p.drawn(".goal-mark", [2]float64{g.X, g.Y})
}
