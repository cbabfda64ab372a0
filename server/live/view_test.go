package live

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"github.com/google/go-cmp/cmp"

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
		if len(g.Tape.Rows) != 21 || g.Frame.Tape.From != 21 || len(g.Frame.Tape.Rows) != 0 || g.Frame.Tick != 400 {
			t.Errorf("%d rows; frame from %d with %d at tick %d", len(g.Tape.Rows), g.Frame.Tape.From, len(g.Frame.Tape.Rows), g.Frame.Tick)
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

// follower keeps what it knows of the tape as the page does.
type follower struct {
	rows   [][]float64
	spans  [][4]int64
	marks  []markHeard
	gaps   int
	hellos int
}

func (f *follower) hear(t *testing.T, messages [][]byte) {
	for _, m := range messages {
		switch kindOf(t, m) {
		case "hello":
			g := greet(t, m).Tape
			f.rows, f.spans, f.marks = g.Rows, g.Spans, g.Marks
			f.hellos++
		case "frame":
			h := hear(t, m).Tape
			if h.From != len(f.rows) || h.SpansFrom != len(f.spans) || h.MarksFrom != len(f.marks) {
				f.gaps++
				continue
			}
			f.rows, f.spans, f.marks = append(f.rows, h.Rows...), append(f.spans, h.Spans...), append(f.marks, h.Marks...)
		}
	}
}

func TestTapeGoesOnWithoutGapsWhoeverComesAndGoes(t *testing.T) {
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
		late := b.join()
		synctest.Wait()
		g := greet(t, last(t, late.take(), "hello")).Tape
		if len(g.Rows) < 100 || len(g.Spans) < 6 || len(g.Marks) < 1 {
			t.Errorf("%d rows, %d spans, %d marks", len(g.Rows), len(g.Spans), len(g.Marks))
		}
		if d := cmp.Diff([]any{g.Rows, g.Spans, g.Marks}, []any{steady.rows, steady.spans, steady.marks}); d != "" {
			t.Errorf("who comes late hears another tape: %s", d)
		}
	})
}

// longRun is a room in which the robot is sent to and fro for so many ticks.
func longRun(t testing.TB, ticks int64) *scenario.Scenario {
	sc := room(t)
	sc.Asked.Within = 3600
	for i := range ticks / 4000 {
		sc.Edits = append(sc.Edits, scenario.Edit{Tick: 4000 * i, What: "goal", To: scenario.Point{7 - float64(i%2)*6, 3}})
	}
	return sc
}

func TestALongTapeIsToldMoreCoarsely(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, longRun(t, 90_000), Opening{Tick: 79_900})
		v := b.join()
		b.say(v, `{"kind":"shadows","on":false}`)
		settle()
		var f follower
		f.hear(t, v.take())
		every := func() int64 {
			late := b.join()
			synctest.Wait()
			g := greet(t, last(t, late.take(), "hello")).Tape
			b.in(func() { b.s.leaves(late) })
			f.hear(t, v.take())
			if d := cmp.Diff([]any{g.Rows, g.Spans, g.Marks}, []any{f.rows, f.spans, f.marks}); d != "" || f.gaps > 0 {
				t.Fatalf("%d gaps; who comes late hears another tape: %s", f.gaps, d)
			}
			for i, row := range g.Rows {
				if int64(row[0]) != int64(i)*g.Every {
					t.Fatalf("row %d of every %d is of tick %v", i, g.Every, row[0])
				}
			}
			if n := int64(len(g.Rows)); n > maxRowsTold || n != g.Length/g.Every+1 {
				t.Fatalf("%d rows of a tape of %d", n, g.Length)
			}
			return g.Every
		}
		if e := every(); e != 20 {
			t.Errorf("a row every %d ticks", e)
		}
		b.say(v, `{"kind":"play"}`)
		for range 60 {
			time.Sleep(20 * time.Millisecond)
			synctest.Wait()
			f.hear(t, v.take())
		}
		if e := every(); e != 40 || b.length() < 80_050 {
			t.Errorf("a row every %d ticks of %d", e, b.length())
		}
		// Cut to be short, it is told finely again.
		b.shown(v, 4000)
		b.say(v, `{"kind":"drag","what":"goal","x":7,"y":2,"done":true}`)
		settle()
		f.hear(t, v.take())
		if e := every(); e != 20 {
			t.Errorf("a row every %d ticks", e)
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
			t.Fatal("the lost frames leave no gap in the tape")
		}
		b.say(slow, `{"kind":"resync"}`)
		settle()
		f.hear(t, slow.take())
		if f.hellos != 2 || f.gaps != 1 {
			t.Errorf("after a resync: %d hellos, %d gaps", f.hellos, f.gaps)
		}
	})
}
