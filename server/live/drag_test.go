package live

import (
	"fmt"
	"math"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"leeway/sim"
	"leeway/sim/scenario"
)

func TestDragWhilePausedIsSeenAtOnce(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 100})
		v := b.join()
		settle()
		v.take()
		for i := range 20 {
			b.say(v, fmt.Sprintf(`{"kind":"drag","what":"solid","id":"desk","x":%g,"y":2.5}`, 3+0.05*float64(i)))
		}
		b.say(v, `{"kind":"drag","what":"goal","x":6.5,"y":3.25}`)
		settle()
		f := hear(t, last(t, v.take(), "frame"))
		if len(f.Moved) != 1 || f.Moved[0] != [3]any{"desk", 3.95, 2.5} || f.Goal != [2]float64{6.5, 3.25} || f.Tick != 100 {
			t.Errorf("moved %v, goal %v, tick %d", f.Moved, f.Goal, f.Tick)
		}
		b.in(func() {
			if n := len(b.s.robot().Edits()); n != 2 {
				t.Errorf("%d edits for two things at one tick", n)
			}
		})
		b.say(v, `{"kind":"drag","what":"solid","id":"desk","x":4,"y":2.5,"done":true}`)
		settle()
		g := greet(t, last(t, v.take(), "hello"))
		if g.Solids[1].Points[0] != [2]float64{4, 2.5} || g.Solids[1].Points[2] != [2]float64{4.6, 3.6} {
			t.Errorf("the desk is at %v", g.Solids[1].Points)
		}
	})
}

func TestDragInARunningRobotIsThinnedAndEndsWhereItWasDropped(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		at := 3.0
		for range 300 { // 3 s at 100 messages a second
			at += 0.001
			b.say(v, fmt.Sprintf(`{"kind":"drag","what":"goal","x":7,"y":%g}`, at))
			time.Sleep(10 * time.Millisecond)
		}
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":3.456,"done":true}`)
		b.in(func() {
			edits := b.s.robot().Edits()
			if n := len(edits); n < 40 || n > 62 {
				t.Errorf("%d edits in 3 s; one every 50 ms is meant", n)
			}
			if y := edits[len(edits)-1].Pos.Y; y != 3.456 {
				t.Errorf("the goal was left at %v", y)
			}
			for i := 2; i < len(edits)-1; i++ {
				if edits[i].Tick-edits[i-1].Tick < 10 {
					t.Errorf("edits at ticks %d and %d", edits[i-1].Tick, edits[i].Tick)
				}
			}
		})
	})
}

func TestLastPlaceCountsWhenTheHandStandsStillOrTheViewerGoes(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":3.1}`)
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":3.2}`)
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":3.3}`)
		time.Sleep(200 * time.Millisecond)
		b.in(func() {
			if y := b.s.robot().Goal().Y; y != 3.3 {
				t.Errorf("the goal is at %v", y)
			}
			b.s.leaves(v)
			if len(b.s.grips) != 0 {
				t.Error("a thing is still in the hand of a viewer that has gone")
			}
		})
	})
}

func TestImpossibleDropsAreSaidAndUndone(t *testing.T) {
	for _, c := range []struct{ name, drag, word string }{
		{"goal in the desk", `"what":"goal","x":3.3,"y":3`, `solid "desk"`},
		{"goal off the floor", `"what":"goal","x":9,"y":3`, "floor"},
		{"desk off the floor", `"what":"solid","id":"desk","x":20,"y":3`, "floor"},
		{"desk on the goal", `"what":"solid","id":"desk","x":6.7,"y":2.5`, "goal"},
		{"desk on the start", `"what":"solid","id":"desk","x":0.9,"y":2.5`, "start"},
		{"start in the desk", `"what":"start","x":3.3,"y":3`, `"desk"`},
		{"start off the floor", `"what":"start","x":-1,"y":3`, "floor"},
		{"robot in the desk", `"what":"robot","x":3.1,"y":3`, `"desk"`},
		{"robot off the floor", `"what":"robot","x":3,"y":-4`, "floor"},
		{"cart off the floor", `"what":"mover","id":"cart","x":100,"y":3`, "floor"},
		{"the border", `"what":"solid","id":"BORDER","x":1,"y":1`, "border"},
		{"no such solid", `"what":"solid","id":"nothing","x":1,"y":1`, "no such"},
		{"no such mover", `"what":"mover","id":"nothing","x":1,"y":1`, "no such"},
		{"nothing that can be dragged", `"what":"weather","x":1,"y":1`, "cannot"},
	} {
		t.Run(c.name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				b := newBench(t, room(t), Opening{Tick: 50})
				v := b.join()
				settle()
				before := greet(t, last(t, v.take(), "hello"))
				for _, s := range before.Solids {
					if s.Fixed {
						c.drag = strings.Replace(c.drag, "BORDER", s.ID, 1)
					}
				}
				b.say(v, `{"kind":"drag",`+c.drag+`}`)
				b.say(v, `{"kind":"drag",`+c.drag+`,"done":true}`)
				settle()
				messages := v.take()
				n := said(t, last(t, messages, "problem"))
				if !strings.Contains(n.Text, c.word) || n.About != "drag" {
					t.Errorf("%+v does not speak of %s", n, c.word)
				}
				after := greet(t, last(t, messages, "hello"))
				if fmt.Sprint(after.Solids, after.Movers, after.Goal, after.Start, after.Frame.Pose) !=
					fmt.Sprint(before.Solids, before.Movers, before.Goal, before.Start, before.Frame.Pose) {
					t.Error("it was not put back")
				}
				if p, err := scenario.Parse(b.text()); err != nil {
					t.Errorf("the file is not valid any more: %v", err)
				} else if problems := p.Folded().Validate(); len(problems) > 0 {
					t.Errorf("the floor is not valid any more: %v", problems)
				}
			})
		})
	}
}

func TestDragThroughAnImpossiblePlaceEndsWell(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{})
		v := b.join()
		for x := 7.0; x > 2; x -= 0.1 { // right through the desk
			b.say(v, fmt.Sprintf(`{"kind":"drag","what":"goal","x":%g,"y":3}`, x))
			b.in(func() {
				if g := b.s.robot().Goal(); g.X > 3 && g.X < 3.6 {
					t.Fatalf("the goal is in the desk, at %v", g)
				}
			})
		}
		b.say(v, `{"kind":"drag","what":"goal","x":2,"y":3,"done":true}`)
		settle()
		messages := v.take()
		for _, m := range messages {
			if kindOf(t, m) == "problem" {
				t.Errorf("%s", m)
			}
		}
		if g := greet(t, last(t, messages, "hello")); g.Goal != [3]float64{2, 3, 0.3} {
			t.Errorf("the goal is at %v", g.Goal)
		}
	})
}

func TestCarriedRobotGoesOnFromThere(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		time.Sleep(time.Second)
		b.say(v, `{"kind":"drag","what":"robot","x":4.5,"y":1.5,"done":true}`)
		time.Sleep(100 * time.Millisecond)
		b.in(func() {
			if p := b.s.robot().Pose().Pos; math.Hypot(p.X-4.5, p.Y-1.5) > 0.1 {
				t.Errorf("the robot is at %v", p)
			}
		})
	})
}

func TestMovedStartBeginsTheRunThere(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 300})
		v := b.join()
		b.say(v, `{"kind":"drag","what":"start","x":1.5,"y":2}`)
		if b.tick() != 300 {
			t.Error("the run began again before the start was dropped")
		}
		b.say(v, `{"kind":"drag","what":"start","x":1.5,"y":2,"done":true}`)
		settle()
		messages := v.take()
		g := greet(t, last(t, messages, "hello"))
		if g.Start != [3]float64{1.5, 2, 0} || g.Frame.Tick != 0 || g.Frame.Pose != [3]float64{1.5, 2, 0} {
			t.Errorf("start %v, tick %d, pose %v", g.Start, g.Frame.Tick, g.Frame.Pose)
		}
		last(t, messages, "notice")
	})
}

func TestNewGoalSetsAnArrivedRobotGoingAgain(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{})
		v := b.join()
		if o := b.untilEnded(v); o.Status != sim.Arrived {
			t.Fatalf("%v: %s", o.Status, o.Reason)
		}
		b.say(v, `{"kind":"speed","value":1}`)
		b.say(v, `{"kind":"drag","what":"goal","x":1,"y":3,"done":true}`)
		time.Sleep(time.Second)
		settle()
		if f := hear(t, last(t, v.take(), "frame")); f.Status != "running" || !f.Playing {
			t.Errorf("%s, playing %v", f.Status, f.Playing)
		}
		o := b.untilEnded(v)
		if want := finish(t, b.text()); o != want {
			t.Errorf("live %+v\nalone %+v", o, want)
		}
		// And playing once it is there starts the run again.
		b.say(v, `{"kind":"speed","value":1}`)
		b.say(v, `{"kind":"play"}`)
		if b.tick() > 10 {
			t.Error("play did not start the ended run again")
		}
	})
}

func TestEditLimitIsSaid(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		sc := room(t)
		for i := range scenario.MaxEdits {
			sc.Edits = append(sc.Edits, scenario.Edit{Tick: int64(i / 400), What: "goal", To: scenario.Point{7, 2 + float64(i%400)/1000}})
		}
		b := newBench(t, sc, Opening{Tick: 100})
		v := b.join()
		settle()
		v.take()
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":4}`)
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":4,"done":true}`)
		b.say(v, `{"kind":"number","path":"robot.speed_m_s","value":0.2}`)
		settle()
		problems := 0
		for _, m := range v.take() {
			if kindOf(t, m) == "problem" {
				problems++
				if n := said(t, m); !strings.Contains(n.Text, "restart") {
					t.Error(n.Text)
				}
			}
		}
		if problems != 2 {
			t.Errorf("%d problems", problems)
		}
		if _, err := scenario.Parse(b.text()); err != nil {
			t.Error(err)
		}
		b.say(v, `{"kind":"drag","what":"start","x":1.2,"y":3,"done":true}`) // begins again: there is room now
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":4,"done":true}`)
		b.in(func() {
			if g := b.s.robot().Goal(); g.Y != 4 {
				t.Errorf("the goal is at %v", g)
			}
		})
	})
}
