package live

import (
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"leeway/sim"
	"leeway/sim/scenario"
)

func TestLiveNumberChangesTheRunningRobot(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		time.Sleep(2 * time.Second)
		before := b.tick()
		b.say(v, `{"kind":"number","path":"robot.speed_m_s","value":0.2}`)
		settle()
		messages := v.take()
		if after := b.tick(); after < before {
			t.Error("the run began again")
		}
		g := greet(t, last(t, messages, "hello"))
		found := false
		for _, p := range g.Brief {
			if p.Number == "robot.speed_m_s" {
				found = true
				if p.Value != 0.2 || p.Applies != "now" {
					t.Errorf("%+v", p)
				}
			}
		}
		if !found {
			t.Error("the brief does not speak of the speed")
		}
		if !strings.Contains(g.File, `"robot.speed_m_s"`) {
			t.Error("the file has no such edit")
		}
	})
}

func TestOtherNumbersAndChoicesBeginTheRunAgain(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		time.Sleep(2 * time.Second)
		b.say(v, `{"kind":"drag","what":"solid","id":"desk","x":3.2,"y":2.5,"done":true}`)
		for _, say := range []string{
			`{"kind":"number","path":"robot.radius_m","value":0.25}`,
			`{"kind":"choice","path":"robot.position","value":"true_pose"}`,
		} {
			time.Sleep(time.Second)
			v.take()
			b.say(v, say)
			settle()
			if tick := b.tick(); tick > 20 {
				t.Errorf("%s: tick %d", say, tick)
			}
			n := said(t, last(t, v.take(), "notice"))
			if !strings.Contains(n.Text, "begins again") {
				t.Errorf("%s: %q", say, n.Text)
			}
		}
		b.in(func() {
			if !b.s.playing {
				t.Error("it does not play on")
			}
			sc := b.s.sc
			if sc.Robot.Radius != 0.25 || sc.Robot.Position != "true_pose" || len(sc.Edits) != 0 || sc.Floor.Solids[0].Corners[0][0] != 3.2 {
				t.Errorf("%+v with %d edits and the desk at %v", sc.Robot, len(sc.Edits), sc.Floor.Solids[0].Corners[0])
			}
		})
	})
}

func TestUnchangedNumberDoesNotBeginTheRunAgain(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 300})
		v := b.join()
		b.say(v, `{"kind":"number","path":"robot.radius_m","value":0.21}`)
		if b.tick() != 300 {
			t.Error("the run began again")
		}
	})
}

func TestImpossibleNumbersAndChoicesAreSaid(t *testing.T) {
	for say, word := range map[string]string{
		`{"kind":"number","path":"robot.speed_m_s","value":-1}`:        "speed must be",
		`{"kind":"number","path":"robot.radius_m","value":1000}`:       "hull radius must be",
		`{"kind":"number","path":"robot.radius_m","value":1.9}`:        "", // no room at the start
		`{"kind":"number","path":"robot.track_m","value":3}`:           "", // wider than the hull
		`{"kind":"number","path":"nothing","value":1}`:                 "nothing",
		`{"kind":"number","path":"robot.motion","value":1}`:            "choice",
		`{"kind":"number","path":"ring.beams","value":2.5}`:            "whole number",
		`{"kind":"choice","path":"robot.position","value":"guessing"}`: "dead",
		`{"kind":"choice","path":"floor.walls","value":"none"}`:        "",
		`{"kind":"number","path":"asked.within_s","value":0}`:          "time asked",
		`{"kind":"number","path":"floor.width_m","value":2}`:           "",
		`{"kind":"speed","value":1000}`:                                "64",
		`{"kind":"speed","value":-1}`:                                  "64",
	} {
		synctest.Test(t, func(t *testing.T) {
			b := newBench(t, room(t), Opening{Tick: 100})
			v := b.join()
			text := string(b.text())
			b.say(v, say)
			settle()
			n := said(t, last(t, v.take(), "problem"))
			if !strings.Contains(n.Text, word) || n.About == "" {
				t.Errorf("%s: %+v does not speak of %q", say, n, word)
			}
			if b.tick() != 100 || string(b.text()) != text {
				t.Errorf("%s changed something", say)
			}
		})
	}
}

func TestWhatIsAskedChangesNothingButTheEnd(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 700})
		v := b.join()
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2,"done":true}`)
		before := b.outcome()
		b.say(v, `{"kind":"number","path":"asked.within_s","value":40}`)
		b.say(v, `{"kind":"number","path":"asked.leeway_m","value":0.3}`)
		if after := b.outcome(); after != before {
			t.Errorf("was %+v, is %+v", before, after)
		}
		b.in(func() {
			if g := b.s.robot().Goal(); g.Y != 2 {
				t.Errorf("the goal is back at %v", g)
			}
		})
		settle()
		if g := greet(t, last(t, v.take(), "hello")); g.Asked.Within != 40 || g.Asked.Leeway != 0.3 {
			t.Errorf("%+v", g.Asked)
		}
		// A time that is over already ends the run where it would have ended.
		b.say(v, `{"kind":"restart"}`)
		b.say(v, `{"kind":"play"}`)
		time.Sleep(3 * time.Second)
		b.say(v, `{"kind":"number","path":"asked.within_s","value":2}`)
		if o := b.outcome(); o.Status != sim.TimedOut || o.Ticks != 400 {
			t.Errorf("%v at tick %d", o.Status, o.Ticks)
		}
	})
}

func TestRestartFoldsWhatWasDoneByHand(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 300})
		v := b.join()
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2,"done":true}`)
		b.say(v, `{"kind":"number","path":"robot.speed_m_s","value":0.3}`)
		b.say(v, `{"kind":"restart"}`)
		b.in(func() {
			if b.s.tick() != 0 || len(b.s.sc.Edits) != 0 || b.s.sc.Goal.Y != 2 || b.s.sc.Robot.Speed != 0.3 {
				t.Errorf("tick %d, %d edits, goal %v, speed %v", b.s.tick(), len(b.s.sc.Edits), b.s.sc.Goal, b.s.sc.Robot.Speed)
			}
		})
	})
}

func TestRestartOfAnUntouchedLinkShowsItAgain(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		sc := room(t)
		sc.Edits = []scenario.Edit{{Tick: 200, What: "goal", To: scenario.Point{7, 2}}, {Tick: 900, What: "solid", ID: "desk", To: scenario.Point{3, 3}}}
		b := newBench(t, sc, Opening{Tick: 500})
		v := b.join()
		text := string(b.text())
		b.say(v, `{"kind":"restart"}`)
		b.in(func() {
			if g := b.s.robot().Goal(); b.s.tick() != 0 || g.Y != 3 {
				t.Errorf("tick %d, goal %v", b.s.tick(), g)
			}
		})
		if string(b.text()) != text {
			t.Error("the file changed")
		}
		// Once somebody has a hand in it, what was done is kept and what is to come
		// still comes.
		b.say(v, `{"kind":"play"}`)
		time.Sleep(2 * time.Second)
		b.say(v, `{"kind":"drag","what":"mover","id":"cart","x":2,"y":5.4,"done":true}`)
		b.say(v, `{"kind":"restart"}`)
		b.in(func() {
			sc := b.s.sc
			if sc.Goal.Y != 2 || sc.Floor.Movers[0].Route[0][0] != 2 || len(sc.Edits) != 1 || sc.Edits[0].ID != "desk" {
				t.Errorf("goal %v, cart %v, edits %v", sc.Goal, sc.Floor.Movers[0].Route, sc.Edits)
			}
		})
	})
}

func TestOneTick(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 10, Playing: true})
		v := b.join()
		b.say(v, `{"kind":"pause"}`)
		before := b.tick()
		b.say(v, `{"kind":"tick"}`)
		settle()
		if f := hear(t, last(t, v.take(), "frame")); f.Tick != before+1 || f.Playing {
			t.Errorf("tick %d after %d, playing %v", f.Tick, before, f.Playing)
		}
	})
}
