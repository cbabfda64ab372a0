package live

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"leeway/sim"
	"leeway/sim/scenario"
)

// settle lets frames that are due go out.
func settle() {
	time.Sleep(2 * frameEvery)
	synctest.Wait()
}

func TestHelloSaysEverything(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 400})
		v := b.join()
		settle()
		messages := v.take()
		if kindOf(t, messages[0]) != "hello" {
			t.Fatalf("the first message is %s", messages[0])
		}
		g := greet(t, messages[0])
		if g.Session != b.id || g.Name != "A room" || g.Tick != 0.005 || g.Playing || g.Speed != 1 || g.Viewers != 1 || g.IdleMinutes != 30 {
			t.Errorf("%+v", g.hello)
		}
		if g.Bounds != [4]float64{0, 0, 8, 6} || g.Start != [3]float64{1, 3, 0} || g.Goal != [3]float64{7, 3, 0.3} || g.Hull != 0.21 {
			t.Errorf("bounds %v, start %v, goal %v, hull %v", g.Bounds, g.Start, g.Goal, g.Hull)
		}
		var ids []string
		for _, s := range g.Solids {
			ids = append(ids, fmt.Sprintf("%s %s %d %v", s.ID, s.Shape, len(s.Points), s.Fixed))
		}
		if got := strings.Join(ids[:3], ", "); got != "screen wall 2 false, desk polygon 4 false, post disc 1 false" {
			t.Error(got)
		}
		if len(ids) < 4 || !g.Solids[len(ids)-1].Fixed {
			t.Errorf("the border is not fixed: %v", ids)
		}
		if len(g.Movers) != 1 || g.Movers[0].ID != "cart" || len(g.Movers[0].Route) != 2 {
			t.Errorf("movers %+v", g.Movers)
		}
		if g.File != string(b.text()) {
			t.Error("the file is another")
		}
		if len(g.Trail) < 2 || g.Frame.TrailFrom != len(g.Trail) || len(g.Frame.Trail) != 0 || g.Frame.Tick != 400 {
			t.Errorf("%d spots; frame from %d with %d at tick %d", len(g.Trail), g.Frame.TrailFrom, len(g.Frame.Trail), g.Frame.Tick)
		}
		looks := map[string]bool{}
		for _, m := range g.Modes {
			looks[m.Look] = true
		}
		for _, l := range []string{"goal", "wall", "avoid", "done", "fail"} {
			if !looks[l] {
				t.Errorf("no mode looks like %s: %+v", l, g.Modes)
			}
		}
		var words strings.Builder
		for _, p := range g.Brief {
			words.WriteString(p.Text)
			if p.Number != "" {
				if p.Min == nil || p.Max == nil || p.Decimals == nil || p.Label == "" || p.Applies == "" {
					t.Errorf("%+v", p)
				}
				fmt.Fprintf(&words, "[%v %s]", p.Value, p.Unit)
			}
			if p.Choice != "" {
				if len(p.Options) < 2 {
					t.Errorf("%+v", p)
				}
				fmt.Fprintf(&words, "[%v]", p.Value)
			}
		}
		if want := "A robot of radius [0.21 m] moves [two_wheels] [0.3 m] apart at [0.45 m/s]"; !strings.HasPrefix(words.String(), want) {
			t.Error(words.String())
		}
	})
}

// follower keeps a trail as the page does.
type follower struct {
	trail  [][3]float64
	gaps   int
	hellos int
}

func (f *follower) hear(t *testing.T, messages [][]byte) {
	for _, m := range messages {
		switch kindOf(t, m) {
		case "hello":
			f.trail = greet(t, m).Trail
			f.hellos++
		case "frame":
			h := hear(t, m)
			if h.TrailFrom != len(f.trail) {
				f.gaps++
				continue
			}
			f.trail = append(f.trail, h.Trail...)
		}
	}
}

func TestTrailGoesOnWithoutGapsWhoeverComesAndGoes(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		var steady follower
		var others []*viewer
		r := rand.New(rand.NewPCG(5, 0))
		for range 600 {
			for range r.IntN(10) { // a viewer that keeps up reads more often than frames come
				time.Sleep(5 * time.Millisecond)
				synctest.Wait()
				steady.hear(t, v.take())
			}
			switch r.IntN(8) {
			case 0:
				others = append(others, b.join())
			case 1:
				if n := len(others); n > 0 {
					gone := others[n-1]
					others = others[:n-1]
					b.in(func() { b.s.leaves(gone) })
				}
			case 2:
				if n := len(others); n > 0 {
					b.say(others[r.IntN(n)], `{"kind":"resync"}`)
				}
			}
			synctest.Wait()
			steady.hear(t, v.take())
		}
		if steady.gaps > 0 || steady.hellos != 1 {
			t.Errorf("%d gaps, %d hellos", steady.gaps, steady.hellos)
		}
		b.say(v, `{"kind":"pause"}`)
		for range 20 {
			time.Sleep(5 * time.Millisecond)
			synctest.Wait()
			steady.hear(t, v.take())
		}
		var spots int
		b.in(func() { spots = b.s.told })
		if len(steady.trail) != spots {
			t.Errorf("%d spots of %d", len(steady.trail), spots)
		}
	})
}

func TestSlowViewerLosesFramesAndFindsOut(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		slow, quick := b.join(), b.join()
		settle()
		var f follower
		f.hear(t, slow.take())
		quick.take()
		before := b.tick()
		time.Sleep(5 * time.Second)
		synctest.Wait()
		waiting := slow.take()
		if len(waiting) != 1 {
			t.Fatalf("%d messages wait for a viewer that reads nothing", len(waiting))
		}
		newest := hear(t, last(t, quick.take(), "frame"))
		if got := hear(t, waiting[0]); got.Tick != newest.Tick || got.Tick < before+900 {
			t.Errorf("the frame that waits is of tick %d; the newest is %d, 5 s after %d", got.Tick, newest.Tick, before)
		}
		f.hear(t, waiting)
		if f.gaps != 1 {
			t.Fatal("the lost frames leave no gap in the trail")
		}
		b.say(slow, `{"kind":"resync"}`)
		settle()
		f.hear(t, slow.take())
		if f.hellos != 2 || f.gaps != 1 {
			t.Errorf("after a resync: %d hellos, %d gaps", f.hellos, f.gaps)
		}
	})
}

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
			if n := len(b.s.run.Edits()); n != 2 {
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
			edits := b.s.run.Edits()
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
			if y := b.s.run.Goal().Y; y != 3.3 {
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
				if g := b.s.run.Goal(); g.X > 3 && g.X < 3.6 {
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
			if p := b.s.run.Pose().Pos; math.Hypot(p.X-4.5, p.Y-1.5) > 0.1 {
				t.Errorf("the robot is at %v", p)
			}
		})
	})
}

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
			if g := b.s.run.Goal(); g.Y != 2 {
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

func TestRestartFoldsWhatWasDoneByHand(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 300})
		v := b.join()
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2,"done":true}`)
		b.say(v, `{"kind":"number","path":"robot.speed_m_s","value":0.3}`)
		b.say(v, `{"kind":"restart"}`)
		b.in(func() {
			if b.s.run.Tick() != 0 || len(b.s.sc.Edits) != 0 || b.s.sc.Goal.Y != 2 || b.s.sc.Robot.Speed != 0.3 {
				t.Errorf("tick %d, %d edits, goal %v, speed %v", b.s.run.Tick(), len(b.s.sc.Edits), b.s.sc.Goal, b.s.sc.Robot.Speed)
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
			if g := b.s.run.Goal(); b.s.run.Tick() != 0 || g.Y != 3 {
				t.Errorf("tick %d, goal %v", b.s.run.Tick(), g)
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
			if g := b.s.run.Goal(); g.Y != 4 {
				t.Errorf("the goal is at %v", g)
			}
		})
	})
}

// The heart of it: whatever people do, whenever the server is killed, the run
// ends as the file that it leaves ends by itself.
func TestAnythingDoneAndAnyCrashLeavesARunThatItsFileGivesAgain(t *testing.T) {
	for seed := range uint64(10) {
		synctest.Test(t, func(t *testing.T) {
			r := rand.New(rand.NewPCG(seed, 1))
			b := newBench(t, room(t), Opening{Playing: true})
			v := b.join()
			somewhere := func() string { return fmt.Sprintf(`"x":%.4f,"y":%.4f`, r.Float64()*8, r.Float64()*6) }
			for range 120 {
				switch r.IntN(12) {
				case 0:
					b.say(v, `{"kind":"pause"}`)
				case 1, 2:
					b.say(v, `{"kind":"play"}`)
				case 3:
					b.say(v, `{"kind":"tick"}`)
				case 4:
					b.say(v, fmt.Sprintf(`{"kind":"number","path":"robot.speed_m_s","value":%.2f}`, 0.1+r.Float64()))
				case 5:
					b.say(v, fmt.Sprintf(`{"kind":"number","path":"asked.within_s","value":%d}`, 60+r.IntN(60)))
				case 6:
					b.say(v, fmt.Sprintf(`{"kind":"speed","value":%d}`, 1+r.IntN(8)))
				case 7:
					things := []string{`"goal"`, `"robot"`, `"solid","id":"desk"`, `"solid","id":"screen"`, `"solid","id":"post"`, `"mover","id":"cart"`}
					what := things[r.IntN(len(things))]
					for range r.IntN(5) {
						b.say(v, `{"kind":"drag","what":`+what+`,`+somewhere()+`}`)
						time.Sleep(time.Duration(r.IntN(60)) * time.Millisecond)
					}
					b.say(v, `{"kind":"drag","what":`+what+`,`+somewhere()+`,"done":true}`)
				case 8:
					if r.IntN(4) == 0 {
						b.say(v, `{"kind":"restart"}`)
					}
				case 9: // the server is killed, and another one takes over what the disk has
					if r.IntN(2) == 0 {
						time.Sleep(time.Duration(r.IntN(3000)) * time.Millisecond)
						synctest.Wait()
						disk := b.keep.crashCopy()
						lab := New(Options{Keeper: disk})
						t.Cleanup(lab.Close)
						b = reopened(t, lab, disk, b.id)
						v = b.join()
					}
				}
				time.Sleep(time.Duration(r.IntN(200)) * time.Millisecond)
			}
			o := b.untilEnded(v)
			text := b.text()
			if want := finish(t, text); o != want {
				t.Errorf("seed %d: live %+v\nalone %+v\n%s", seed, o, want, text)
			}
			if o.Ticks == 0 {
				t.Error("nothing was run")
			}
			sc, err := b.lab.Scenario(context.Background(), b.id)
			if err != nil {
				t.Fatal(err)
			}
			again, err := scenario.Decode(sc.Encode())
			if err != nil {
				t.Fatal(err)
			}
			if finish(t, again.Print()) != o {
				t.Error("the link gives another run")
			}
		})
	}
}
