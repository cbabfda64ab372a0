package live

import (
	"fmt"
	"maps"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"leeway/sim"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
)

// ofThen leaves out of a comparison what a frame says of the session and of the
// whole tape; the rest is of the moment that is looked at.
var ofThen = cmpopts.IgnoreFields(heard{}, "Playing", "Speed", "Viewers", "Length", "AtHead", "Tape", "Moved", "Verdict.Shortest", "Verdict.Why")

// frames returns the frames among the messages, by tick; those within hellos too.
func frames(t *testing.T, messages [][]byte) map[int64]heard {
	out := map[int64]heard{}
	for _, m := range messages {
		switch kindOf(t, m) {
		case "frame":
			h := hear(t, m)
			out[h.Tick] = h
		case "hello":
			h := greet(t, m).Frame
			out[h.Tick] = h
		}
	}
	return out
}

// shown seeks and returns the frame that answers.
func (b *bench) shown(v *viewer, tick int64) heard {
	b.t.Helper()
	v.take()
	b.say(v, fmt.Sprintf(`{"kind":"seek","tick":%d}`, tick))
	settle()
	var f heard
	for _, m := range v.take() {
		switch kindOf(b.t, m) {
		case "frame":
			f = hear(b.t, m)
		case "hello":
			f = greet(b.t, m).Frame
		}
	}
	return f
}

// lively plays for some seconds with changes in between, and returns every frame
// that was seen.
func lively(t *testing.T, b *bench, v *viewer) map[int64]heard {
	all := map[int64]heard{}
	watch := func(d time.Duration) {
		for range d / (30 * time.Millisecond) {
			time.Sleep(30 * time.Millisecond)
			synctest.Wait()
			maps.Copy(all, frames(t, v.take()))
		}
	}
	watch(2 * time.Second)
	b.say(v, `{"kind":"drag","what":"solid","id":"desk","x":3.2,"y":2.3}`)
	watch(300 * time.Millisecond)
	b.say(v, `{"kind":"drag","what":"solid","id":"desk","x":3.1,"y":2.2,"done":true}`)
	watch(time.Second)
	b.say(v, `{"kind":"pause"}`) // changes while paused are seen at that very tick
	b.say(v, `{"kind":"drag","what":"goal","x":6.8,"y":3.4,"done":true}`)
	b.say(v, `{"kind":"drag","what":"mover","id":"cart","x":1.5,"y":5.4,"done":true}`)
	watch(100 * time.Millisecond)
	b.say(v, `{"kind":"number","path":"robot.speed_m_s","value":0.3}`)
	b.say(v, `{"kind":"play"}`)
	watch(2 * time.Second)
	b.say(v, `{"kind":"drag","what":"robot","x":2,"y":1.5,"done":true}`)
	watch(2 * time.Second)
	return all
}

func TestAPastTickIsShownAsItWas(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		live := lively(t, b, v)
		ticks := slices.Sorted(maps.Keys(live))
		if len(ticks) < 150 {
			t.Fatalf("%d frames", len(ticks))
		}
		length := b.shown(v, ticks[len(ticks)-1]).Length
		r := rand.New(rand.NewPCG(2, 3))
		for range 60 {
			tick := ticks[r.IntN(len(ticks))]
			f := b.shown(v, tick)
			if f.Playing || f.AtHead != (tick == length) || f.Length != length {
				t.Fatalf("tick %d: playing %v, at head %v, length %d of %d", tick, f.Playing, f.AtHead, f.Length, length)
			}
			if d := cmp.Diff(live[tick], f, ofThen); d != "" {
				t.Fatalf("tick %d: %s", tick, d)
			}
		}
		// Where what was moved stands is told whatever has been told before.
		b.shown(v, ticks[20])
		if f := b.shown(v, ticks[20]); fmt.Sprint(f.Moved) != "[[desk 3 2.5]]" {
			t.Errorf("at tick %d the frame has moved %v", ticks[20], f.Moved)
		}
		b.shown(v, length)
		if f := b.shown(v, length); fmt.Sprint(f.Moved) != "[[desk 3.1 2.2]]" {
			t.Errorf("at the end the frame has moved %v", f.Moved)
		}
	})
}

func TestGoingOnFromThePastIsTheSameRun(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		live := lively(t, b, v)
		text := string(b.text())
		length := b.length()
		b.shown(v, length/3)
		if f := b.shown(v, -5); f.Tick != 0 {
			t.Errorf("tick %d", f.Tick)
		}
		if f := b.shown(v, length/3); f.Tick != length/3 {
			t.Errorf("tick %d of %d", f.Tick, length/3)
		}
		if f := b.shown(v, 1<<40); f.Tick != length || !f.AtHead {
			t.Errorf("tick %d of %d", f.Tick, length)
		}
		b.shown(v, length/3)
		b.say(v, `{"kind":"play"}`)
		v.take()
		n := 0
		for range 100 {
			time.Sleep(15 * time.Millisecond)
			synctest.Wait()
			for tick, f := range frames(t, v.take()) {
				if was, ok := live[tick]; ok {
					if d := cmp.Diff(was, f, ofThen); d != "" {
						t.Fatalf("tick %d: %s", tick, d)
					}
					n++
				}
				if !f.Playing || f.Tick <= length/3 {
					t.Fatalf("tick %d, playing %v", f.Tick, f.Playing)
				}
			}
		}
		if n == 0 {
			t.Error("no frame of a tick that was seen before")
		}
		o := b.untilEnded(v)
		if string(b.text()) != text {
			t.Error("looking back changed the file")
		}
		if want := finish(t, []byte(text)); o != want {
			t.Errorf("live %+v\nalone %+v", o, want)
		}
		b.in(func() {
			if b.s.playing {
				t.Error("it plays on after all have ended")
			}
		})
	})
}

func TestAChangeInThePastBeginsAnotherFuture(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		lively(t, b, v)
		b.shown(v, 300)
		v.take()
		for i := range 10 {
			b.say(v, fmt.Sprintf(`{"kind":"drag","what":"goal","x":7,"y":%g}`, 1.5+0.1*float64(i)))
			time.Sleep(20 * time.Millisecond)
		}
		settle()
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2.5,"done":true}`)
		settle()
		notices, hellos, f := 0, 0, heard{}
		for _, m := range v.take() {
			switch kindOf(t, m) {
			case "notice":
				notices++
				if n := said(t, m); n.Text != "Changed at 0:01.5: what had come after is another future now." {
					t.Error(n.Text)
				}
			case "hello":
				hellos++
				g := greet(t, m)
				f = g.Frame
				if g.Tape.Length != 300 || len(g.Tape.Rows) != 16 || f.Tape.From != 16 {
					t.Errorf("length %d, %d rows", g.Tape.Length, len(g.Tape.Rows))
				}
			case "frame":
				if f.Tick == 0 {
					t.Error("a frame before the hello")
				}
				f = hear(t, m)
			}
		}
		if notices != 1 || hellos != 1 && hellos != 2 || f.Tick != 300 || !f.AtHead || f.Length != 300 || f.Goal != [2]float64{7, 2.5} {
			t.Errorf("%d notices, %d hellos, tick %d, length %d, at head %v, goal %v", notices, hellos, f.Tick, f.Length, f.AtHead, f.Goal)
		}
		b.in(func() {
			edits := b.s.robot().Edits()
			if len(edits) != 1 || edits[0].Tick != 300 || edits[0].Kind != sim.MoveGoal {
				t.Errorf("edits %+v", edits)
			}
		})
		o := b.untilEnded(v)
		if want := finish(t, b.text()); o != want {
			t.Errorf("live %+v\nalone %+v", o, want)
		}
	})
}

// What is in a hand while somebody looks elsewhere moves there at once.
func TestAThingInAHandGoesAlongToThePast(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 500})
		v := b.join()
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2}`)
		b.shown(v, 300)
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2.5}`)
		b.in(func() {
			if e := b.s.robot().Edits(); len(e) != 1 || e[0].Tick != 300 || e[0].Pos.Y != 2.5 || b.s.tape.Length() != 300 {
				t.Errorf("edits %+v, length %d", e, b.s.tape.Length())
			}
		})
	})
}

// What cannot be done in the past forgets nothing.
func TestARefusedChangeInThePastForgetsNothing(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 1000})
		v := b.join()
		b.shown(v, 200)
		for _, say := range []string{
			`{"kind":"drag","what":"goal","x":3.3,"y":3}`, `{"kind":"drag","what":"goal","x":3.3,"y":3,"done":true}`,
			`{"kind":"drag","what":"robot","x":3.1,"y":3,"done":true}`, `{"kind":"drag","what":"solid","id":"none","x":1,"y":1,"done":true}`,
			`{"kind":"number","path":"robot.speed_m_s","value":-1}`, `{"kind":"number","path":"robot.radius_m","value":9}`,
		} {
			b.say(v, say)
			if b.length() != 1000 || b.tick() != 200 {
				t.Errorf("%s: tick %d of %d", say, b.tick(), b.length())
			}
		}
	})
}

func TestANumberChangedInThePast(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 1000})
		v := b.join()
		b.shown(v, 200)
		b.say(v, `{"kind":"number","path":"robot.speed_m_s","value":0.2}`)
		settle()
		messages := v.take()
		if b.length() != 200 || !strings.Contains(said(t, last(t, messages, "notice")).Text, "another future") {
			t.Errorf("length %d", b.length())
		}
		if g := greet(t, last(t, messages, "hello")); !strings.Contains(fmt.Sprint(g.Brief), "robot.speed_m_s  0.2") {
			t.Errorf("%v", g.Brief)
		}
		if want := finish(t, b.text()); b.untilEnded(v) != want {
			t.Error("the file gives another run")
		}
	})
}

// A change that begins the run again is made of what stands where it is looked at:
// what came later is forgotten.
func TestBeginningAgainFromThePast(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 400})
		v := b.join()
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2,"done":true}`)
		b.say(v, `{"kind":"play"}`)
		time.Sleep(2 * time.Second)
		b.say(v, `{"kind":"drag","what":"solid","id":"desk","x":3.2,"y":2,"done":true}`)
		b.shown(v, 600)
		b.say(v, `{"kind":"number","path":"robot.radius_m","value":0.2}`)
		b.in(func() {
			sc := b.s.sc
			if b.s.tick() != 0 || b.s.tape.Length() != 0 || sc.Goal.Y != 2 || sc.Floor.Solids[0].Corners[0] != (scenario.Point{3, 2.5}) || len(sc.Edits) != 0 {
				t.Errorf("tick %d, goal %v, desk %v, edits %v", b.s.tick(), sc.Goal, sc.Floor.Solids[0].Corners[0], sc.Edits)
			}
		})
	})
}

func TestSeekPausesAndOnlyTheNewestIsShown(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 2000, Playing: true})
		v := b.join()
		settle()
		v.take()
		began := time.Now()
		for tick := range 200 {
			b.say(v, fmt.Sprintf(`{"kind":"seek","tick":%d}`, 5*tick))
		}
		b.in(func() {
			if b.s.tick() > 10 && b.s.tick() < 2000 || b.s.sought != 995 {
				t.Errorf("at %d, seeking %d: it went to each place in turn", b.s.tick(), b.s.sought)
			}
		})
		for len(v.mustFrames()) == 0 {
			time.Sleep(time.Millisecond)
			synctest.Wait()
		}
		if d := time.Since(began); d > 40*time.Millisecond {
			t.Errorf("shown after %v", d)
		}
		settle()
		messages := v.take()
		if len(messages) > 1 {
			t.Errorf("%d messages for seeks at one moment", len(messages))
		}
		if f := hear(t, last(t, messages, "frame")); f.Tick != 995 || f.Playing {
			t.Errorf("tick %d, playing %v", f.Tick, f.Playing)
		}
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2}`)
		b.say(v, `{"kind":"seek","tick":500}`)
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2.5,"done":true}`) // at tick 500, though nobody has seen that yet
		b.in(func() {
			if e := b.s.robot().Edits(); len(e) != 1 || e[0].Tick != 500 {
				t.Errorf("edits %+v", e)
			}
		})
	})
}

// mustFrames looks whether a frame is waiting, without taking it.
func (v *viewer) mustFrames() []byte {
	v.mu.Lock()
	defer v.mu.Unlock()
	return v.frame
}

func TestBackAndForthByOneTick(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 3, Playing: true})
		v := b.join()
		b.say(v, `{"kind":"seek","tick":3}`)
		hashes := map[int64]string{}
		for _, say := range []string{"tick", "tick", "back", "back", "back", "back", "tick", "tick", "tick", "tick", "tick"} {
			b.say(v, `{"kind":"`+say+`"}`)
			settle()
			f := hear(t, last(t, v.take(), "frame"))
			if h, ok := hashes[f.Tick]; ok && h != f.Hash || f.Playing {
				t.Errorf("tick %d: hash %s, was %s", f.Tick, f.Hash, h)
			}
			hashes[f.Tick] = f.Hash
		}
		if b.tick() != 6 || b.length() != 6 || len(hashes) != 6 {
			t.Errorf("tick %d of %d, %d ticks seen", b.tick(), b.length(), len(hashes))
		}
		b.shown(v, 0)
		b.say(v, `{"kind":"back"}`)
		settle()
		if n := said(t, last(t, v.take(), "notice")); b.tick() != 0 || !strings.Contains(n.Text, "start") {
			t.Errorf("tick %d, %q", b.tick(), n.Text)
		}
	})
}

// Between two moments with a change of a number in between, the brief is told anew.
func TestTheBriefIsOfTheMoment(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 500})
		v := b.join()
		b.say(v, `{"kind":"number","path":"robot.speed_m_s","value":0.2}`)
		b.say(v, `{"kind":"play"}`)
		time.Sleep(time.Second)
		speed := func(tick int64) (values []any) {
			v.take()
			b.say(v, fmt.Sprintf(`{"kind":"seek","tick":%d}`, tick))
			time.Sleep(time.Second)
			synctest.Wait()
			for _, m := range v.take() {
				if kindOf(t, m) == "hello" {
					for _, p := range greet(t, m).Brief {
						if p.Number == "robot.speed_m_s" {
							values = append(values, p.Value)
						}
					}
				}
			}
			return values
		}
		if got := fmt.Sprint(speed(400), speed(300), speed(600), speed(650)); got != "[0.45] [] [0.2] []" {
			t.Errorf("hellos with speeds %s", got)
		}
	})
}

// What the file itself moves is seen to move.
func TestScriptedMovesAreShown(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		sc := room(t)
		sc.Edits = []scenario.Edit{{Tick: 100, What: "solid", ID: "desk", To: scenario.Point{3, 3}}}
		b := newBench(t, sc, Opening{Playing: true})
		v := b.join()
		time.Sleep(time.Second)
		synctest.Wait()
		if f := hear(t, last(t, v.take(), "frame")); fmt.Sprint(f.Moved) != "[[desk 3 3]]" {
			t.Errorf("moved %v", f.Moved)
		}
	})
}

func TestLookingBackSurvivesACrash(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		lively(t, b, v)
		f := b.shown(v, 700)
		time.Sleep(time.Second)
		synctest.Wait()
		disk := b.keep.crashCopy()
		lab := New(Options{Keeper: disk})
		defer lab.Close()
		again := reopened(t, lab, disk, b.id)
		w := again.join()
		settle()
		g := greet(t, last(t, w.take(), "hello"))
		if d := cmp.Diff(f, g.Frame, ofThen); d != "" || g.Frame.Length != f.Length || g.Frame.AtHead {
			t.Errorf("at tick %d of %d: %s", g.Frame.Tick, g.Frame.Length, d)
		}
		var was, is shadow.Record
		b.in(func() { was = b.s.tape.Record })
		again.in(func() { is = again.s.tape.Record })
		if d := cmp.Diff(was, is, cmpopts.IgnoreUnexported(shadow.Record{}), cmpopts.EquateEmpty()); d != "" {
			t.Errorf("the record is another: %s", d)
		}
		if o, want := again.untilEnded(w), finish(t, b.text()); o != want {
			t.Errorf("live %+v\nalone %+v", o, want)
		}
	})
}

func TestEditLimitInThePastCountsWhatIsKept(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		sc := room(t)
		for i := range scenario.MaxEdits {
			sc.Edits = append(sc.Edits, scenario.Edit{Tick: int64(i / 400), What: "goal", To: scenario.Point{7, 2 + float64(i%400)/1000}})
		}
		b := newBench(t, sc, Opening{Tick: 100})
		v := b.join()
		b.shown(v, 30)
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":4,"done":true}`)
		b.in(func() {
			if g := b.s.robot().Goal(); g.Y != 4 || b.s.tape.Length() != 30 {
				t.Errorf("the goal is at %v, length %d", g, b.s.tape.Length())
			}
		})
		if _, err := scenario.Parse(b.text()); err != nil {
			t.Error(err)
		}
	})
}

// BenchmarkSeekInAnHour is a seek on a tape of an hour, shadows and all, up to the
// frame that is sent.
func BenchmarkSeekInAnHour(b *testing.B) {
	bench := newBench(b, longRun(b, 720_000), Opening{Tick: 720_000})
	v := bench.join()
	if n := bench.length(); n < 700_000 {
		b.Fatalf("length %d", n)
	}
	r := rand.New(rand.NewPCG(1, 1))
	var took []time.Duration
	for b.Loop() {
		at := time.Now()
		tick := r.Int64N(bench.length())
		bench.in(func() {
			bench.s.seek(tick)
			bench.s.goWhereSought()
			bench.s.nextFrame = at
			bench.s.tell(at)
		})
		took = append(took, time.Since(at))
		v.take()
	}
	slices.Sort(took)
	b.ReportMetric(took[len(took)*95/100].Seconds()*1000, "p95-ms")
	b.ReportMetric(took[len(took)-1].Seconds()*1000, "worst-ms")
}
