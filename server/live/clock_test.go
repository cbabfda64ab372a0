package live

import (
	"context"
	"errors"
	"testing"
	"testing/synctest"
	"time"

	"leeway/sim"
)

// Tests in a bubble of testing/synctest: time stands still until everybody waits,
// and then jumps, so these are exact and take no time.

func TestRunKeepsPaceWithTheClock(t *testing.T) {
	for _, c := range []struct {
		say  string
		wall time.Duration
		want int64
	}{
		{`{"kind":"speed","value":1}`, 10 * time.Second, 2000},
		{`{"kind":"speed","value":0.25}`, 20 * time.Second, 1000},
		{`{"kind":"speed","value":4}`, 2500 * time.Millisecond, 2000},
	} {
		synctest.Test(t, func(t *testing.T) {
			b := newBench(t, room(t), Opening{})
			v := b.join()
			b.say(v, c.say)
			b.say(v, `{"kind":"play"}`)
			time.Sleep(c.wall)
			synctest.Wait()
			// Up to a frame's worth behind the clock, never before it.
			slack := int64(float64(frameEvery)/float64(c.wall)*float64(c.want)) + 1
			if got := b.tick(); got > c.want || got < c.want-slack {
				t.Errorf("%s: tick %d after %s, want %d (or up to %d less)", c.say, got, c.wall, c.want, slack)
			}
		})
	}
}

func TestSpeedChangesDoNotAddUpToDrift(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		for range 200 {
			b.say(v, `{"kind":"speed","value":2}`)
			time.Sleep(25 * time.Millisecond)
			b.say(v, `{"kind":"speed","value":1}`)
			time.Sleep(25 * time.Millisecond)
		}
		// 5 s at twice real time and 5 s at real time are 3,000 ticks. Every change
		// of speed may lose less than one tick.
		if got := b.tick(); got < 3000-400 || got > 3000 {
			t.Errorf("tick %d, want about 3000", got)
		}
	})
}

func TestPausedAndUnseenSessionSleepsUntilItEnds(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{})
		began := time.Now()
		time.Sleep(time.Minute)
		var wake time.Time
		var ok bool
		b.in(func() { wake, ok = b.s.nextWake(time.Now()) })
		if want := began.Add(30 * time.Minute); !ok || !wake.Equal(want) {
			t.Errorf("wakes at %v (%v), want %v: when it ends", wake, ok, want)
		}
		saves := b.keep.count()
		time.Sleep(28 * time.Minute)
		synctest.Wait()
		if n := b.lab.Running(); n != 1 {
			t.Fatalf("%d sessions running before the idle time is over", n)
		}
		if n := b.keep.count(); n != saves {
			t.Errorf("saved %d times while nothing happened", n-saves)
		}
		time.Sleep(2 * time.Minute)
		synctest.Wait()
		if n := b.lab.Running(); n != 0 {
			t.Fatalf("%d sessions running after the idle time", n)
		}
	})
}

func TestEndedSessionComesBackWhereItWas(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 500})
		v := b.join()
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2,"done":true}`)
		before := b.outcome()
		b.in(func() { b.s.leaves(v) })
		time.Sleep(31 * time.Minute)
		synctest.Wait()
		if b.lab.Running() != 0 {
			t.Fatal("it has not ended")
		}
		again := reopened(t, b.lab, b.keep, b.id)
		if again.s == b.s {
			t.Fatal("the same session")
		}
		if after := again.outcome(); after != before {
			t.Errorf("came back as %+v, was %+v", after, before)
		}
		again.in(func() {
			if g := again.s.robot().Goal(); g.Y != 2 {
				t.Errorf("the goal is at %v", g)
			}
		})
	})
}

func TestUnseenRunGoesOnToItsEnd(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		time.Sleep(120 * time.Second)
		synctest.Wait()
		o := b.outcome()
		if o.Status != sim.Arrived {
			t.Fatalf("%v: %s", o.Status, o.Reason)
		}
		if want := finish(t, room(t).Print()); o != want {
			t.Errorf("the live run ended as %+v, the run alone as %+v", o, want)
		}
		b.in(func() {
			if b.s.playing {
				t.Error("it still plays")
			}
		})
	})
}

func TestFramesComeThirtyTimesASecond(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		time.Sleep(time.Second)
		synctest.Wait()
		v.take()
		frames := 0
		for range 1000 {
			time.Sleep(time.Millisecond)
			synctest.Wait()
			for _, m := range v.take() {
				if kindOf(t, m) == "frame" {
					frames++
				}
			}
		}
		if frames < 29 || frames > 31 {
			t.Errorf("%d frames in a second", frames)
		}
		b.say(v, `{"kind":"pause"}`)
		time.Sleep(100 * time.Millisecond)
		v.take()
		time.Sleep(time.Minute)
		synctest.Wait()
		if m := v.take(); len(m) > 0 {
			t.Errorf("%d messages while nothing changes", len(m))
		}
	})
}

func TestPlayingIsSavedEverySecondOrTwo(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		b.join()
		time.Sleep(10 * time.Second)
		synctest.Wait()
		if n := b.keep.count(); n < 5 || n > 7 {
			t.Errorf("saved %d times in 10 s", n)
		}
		kept := b.keep.crashCopy().saved[b.id]
		if behind := b.tick() - kept.Tick; behind > 420 || !kept.Playing {
			t.Errorf("a crash would cost %d ticks (playing: %v)", behind, kept.Playing)
		}
	})
}

func TestFailedSaveIsTriedAgain(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{})
		v := b.join()
		synctest.Wait()
		b.keep.mu.Lock()
		b.keep.fail = errors.New("the disk is full")
		b.keep.mu.Unlock()
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2,"done":true}`)
		time.Sleep(time.Second)
		synctest.Wait()
		b.keep.mu.Lock()
		b.keep.fail = nil
		b.keep.mu.Unlock()
		b.say(v, `{"kind":"play"}`)
		time.Sleep(time.Second)
		b.say(v, `{"kind":"pause"}`)
		synctest.Wait()
		kept := b.keep.crashCopy().saved[b.id]
		if string(kept.Scenario) != string(b.text()) {
			t.Error("the change that could not be written at first was lost")
		}
	})
}

func TestSessionThatTheKeeperForgotIsSavedWhole(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{})
		v := b.join()
		time.Sleep(time.Second)
		synctest.Wait()
		b.keep.mu.Lock()
		delete(b.keep.saved, b.id)
		b.keep.mu.Unlock()
		b.say(v, `{"kind":"tick"}`)
		time.Sleep(time.Second)
		synctest.Wait()
		kept, ok := b.keep.crashCopy().saved[b.id]
		if !ok || kept.Tick != 1 || string(kept.Scenario) != string(b.text()) {
			t.Errorf("kept: %v, tick %d", ok, kept.Tick)
		}
	})
}

func TestFullLabEndsTheOneUnseenLongest(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		keep := &memory{}
		lab := New(Options{Keeper: keep, Sessions: 2})
		defer lab.Close()
		ctx := context.Background()
		create := func() (*bench, error) {
			id, err := lab.Create(ctx, room(t), Opening{})
			if err != nil {
				return nil, err
			}
			return reopened(t, lab, keep, id), nil
		}
		first, err := create()
		if err != nil {
			t.Fatal(err)
		}
		time.Sleep(time.Second)
		second, err := create()
		if err != nil {
			t.Fatal(err)
		}
		first.join()
		third, err := create() // the second has nobody watching
		if err != nil {
			t.Fatal(err)
		}
		select {
		case <-second.s.done:
		default:
			t.Error("the second session still runs")
		}
		third.join()
		if _, err := create(); !errors.Is(err, ErrFull) {
			t.Errorf("a third watched session: %v", err)
		}
		if _, err := lab.Scenario(ctx, second.id); !errors.Is(err, ErrFull) {
			t.Errorf("the ended one cannot be loaded now, and says so: %v", err)
		}
	})
}

func TestClosedLabSavesAndRefuses(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Playing: true})
		v := b.join()
		time.Sleep(1500 * time.Millisecond)
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2}`)
		tick, text := b.tick(), b.text()
		b.lab.Close()
		kept := b.keep.crashCopy().saved[b.id]
		if kept.Tick < tick || string(kept.Scenario) != string(text) || !kept.Playing {
			t.Errorf("kept tick %d of %d, playing %v", kept.Tick, tick, kept.Playing)
		}
		if _, err := b.lab.Create(context.Background(), room(t), Opening{}); !errors.Is(err, ErrClosed) {
			t.Errorf("a session in a closed lab: %v", err)
		}
		if _, err := b.lab.Scenario(context.Background(), b.id); !errors.Is(err, ErrClosed) {
			t.Errorf("a question to a closed lab: %v", err)
		}
	})
}
