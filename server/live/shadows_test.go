package live

import (
	"fmt"
	"math"
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

// setOf steps the models of a scenario file alone, without a session, to a tick.
func setOf(t testing.TB, text []byte, tick int64) *shadow.Set {
	t.Helper()
	sc, err := scenario.Parse(text)
	if err != nil {
		t.Fatal(err)
	}
	c, err := sc.Config()
	if err != nil {
		t.Fatal(err)
	}
	set, err := shadow.New(c)
	if err != nil {
		t.Fatal(err)
	}
	for set.Tick() < tick && !set.Done() {
		set.Step()
	}
	return set
}

// pocket is a floor on which robot and shadows part.
func pocket(t testing.TB) *scenario.Scenario {
	t.Helper()
	sc, err := scenario.Parse([]byte(`{
		"leeway": 1, "name": "A pocket", "seed": 5,
		"floor": {"width_m": 10, "height_m": 8, "walls": [{"id": "u", "points_m": [[4, 2.5], [6, 2.5], [6, 5.5], [4, 5.5]]}]},
		"robot": {"wheel_lag_s": 0.3, "speed_m_s": 0.6}, "ring": {"beams": 10},
		"start": {"x_m": 1, "y_m": 4}, "goal": {"x_m": 9, "y_m": 4, "radius_m": 0.2}, "asked": {"within_s": 120}}`))
	if err != nil {
		t.Fatal(err)
	}
	return sc
}

func TestTheVerdictIsThatOfTheModelsAlone(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, pocket(t), Opening{Tick: 9000})
		v := b.join()
		settle()
		parted := false
		for _, tick := range []int64{0, 1, 900, 4001, 6500, 9000} {
			f := b.shown(v, tick)
			set := setOf(t, b.text(), tick)
			if len(f.Verdict.Models) != int(shadow.Models) || len(f.Shadows) != 2 {
				t.Fatalf("%d models, %d shadows", len(f.Verdict.Models), len(f.Shadows))
			}
			for w := range shadow.Models {
				r := set.Run(w)
				o, d := r.Outcome(), set.Deviation(w)
				want := modelHeard{
					Who: int(w), Status: o.Status.String(), Time: near(o.Time), Leeway: maybe(o.Leeway), Way: near(o.Way), Switches: o.Switches, Contacts: o.Contacts,
					Saturated: near(o.Saturated), Estimate: near(o.EstimateError), Largest: near(d.Largest), LargestAt: near(d.At), RMS: near(d.RMS),
				}
				if p, ok := shadow.MostTelling(set.Partings(w)); ok {
					want.Parting, want.PartingTick = p.Text, p.Tick
					parted = true
				}
				if d := cmp.Diff(want, f.Verdict.Models[w]); d != "" {
					t.Errorf("tick %d, %v: %s", tick, w, d)
				}
				if w == shadow.Robot {
					continue
				}
				p := r.Pose()
				s := shadowHeard{[3]float64{near(p.Pos.X), near(p.Pos.Y), near(p.Theta)}, r.Engine().Mode(), int(r.Engine().Side()), r.Status().String(), maybe(r.Gap())}
				if d := cmp.Diff(s, f.Shadows[w-1]); d != "" {
					t.Errorf("tick %d, %v: %s", tick, w, d)
				}
			}
		}
		if !parted {
			t.Error("robot and shadows never part: the test shows less than it should")
		}
	})
}

func TestTheExitsAreThoseOfTheEngine(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, pocket(t), Opening{Tick: 6000})
		v := b.join()
		settle()
		exits, modes := 0, map[int]bool{}
		for _, tick := range []int64{1, 2, 4, 5, 700, 1203, 2400, 3333, 5999} {
			f := b.shown(v, tick)
			r := setOf(t, b.text(), tick).Run(shadow.Robot)
			decided := (tick - 1) / 4 * 4 // every 0.02 s, and ticks are of 0.005 s
			want := []exitHeard{}
			for _, x := range r.Engine().Exits(float64(decided) * 0.005) {
				e := exitHeard{x.To, r.Config().Logic.Modes[x.To].Name, near(x.Hold), near(x.Held), []gaugeHeard{}}
				for _, g := range x.Gauges {
					e.Gauges = append(e.Gauges, gaugeHeard{g.Label, g.Text, g.Met, near(g.Share), near(g.Mark), near(g.Release)})
				}
				want = append(want, e)
				exits++
			}
			modes[f.Mode] = true
			if d := cmp.Diff(want, f.Exits); d != "" {
				t.Errorf("tick %d: %s", tick, d)
			}
		}
		if f := b.shown(v, 0); len(f.Exits) != 0 {
			t.Errorf("exits before the first look: %+v", f.Exits)
		}
		b.untilEnded(v)
		b.say(v, `{"kind":"pause"}`)
		b.say(v, `{"kind":"drag","what":"goal","x":2,"y":2,"done":true}`)
		settle()
		if f := greet(t, last(t, v.take(), "hello")).Frame; f.Status != "running" || len(f.Exits) != 0 {
			t.Errorf("%s; exits of a logic that has just begun: %+v", f.Status, f.Exits)
		}
		if exits < 20 || len(modes) < 2 {
			t.Errorf("%d exits of %d modes", exits, len(modes))
		}
	})
}

func TestHelloHasTheAdviceAndTheLimits(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{})
		v := b.join()
		settle()
		g := greet(t, last(t, v.take(), "hello"))
		set := setOf(t, b.text(), 0)
		var want []helloAdvice
		for _, a := range shadow.Advise(*set.Run(shadow.Robot).Config()) {
			want = append(want, helloAdvice(a))
		}
		if d := cmp.Diff(want, g.Advice); d != "" || len(want) < 3 {
			t.Error(d, len(want))
		}
		if !g.Shadows || g.Ceiling != nil || g.WheelMax == nil || *g.WheelMax != 14 {
			t.Errorf("shadows %v, ceiling %v, wheels %v", g.Shadows, g.Ceiling, g.WheelMax)
		}
		b.say(v, `{"kind":"choice","path":"robot.steering","value":"look_ahead"}`)
		settle()
		g = greet(t, last(t, v.take(), "hello"))
		// |u| ≤ v_wheel/√(1+(L/2ℓ)²) with 14 rad/s on 0.05 m, L = 0.3 m, ℓ = 0.1 m (derived)
		if want := 0.7 / math.Sqrt(1+1.5*1.5); g.Ceiling == nil || math.Abs(*g.Ceiling-want) > 1e-4 {
			t.Errorf("ceiling %v, want %v", g.Ceiling, want)
		}
		b.say(v, `{"kind":"choice","path":"robot.motion","value":"point"}`)
		settle()
		if g = greet(t, last(t, v.take(), "hello")); g.Ceiling != nil || g.WheelMax != nil || len(g.Advice) != 0 {
			t.Errorf("a point has ceiling %v, wheels %v, advice %v", g.Ceiling, g.WheelMax, g.Advice)
		}
	})
}

// recordOf returns a copy of what the session's tape has recorded.
func (b *bench) recordOf() (r shadow.Record) {
	b.in(func() {
		r = b.s.tape.Record
		r.Rows, r.Spans, r.Events = slices.Clone(r.Rows), slices.Clone(r.Spans), slices.Clone(r.Events)
	})
	return r
}

var sameRecord = cmp.Options{cmpopts.IgnoreUnexported(shadow.Record{}), cmpopts.IgnoreFields(shadow.Record{}, "Recast"), cmpopts.EquateEmpty()}

func TestShadowsOffAndOnAgain(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, pocket(t), Opening{Tick: 3000})
		v := b.join()
		b.say(v, `{"kind":"drag","what":"goal","x":9,"y":3,"done":true}`)
		b.say(v, `{"kind":"play"}`)
		time.Sleep(3 * time.Second)
		b.say(v, `{"kind":"pause"}`)
		before := b.recordOf()
		with := b.shown(v, 2000)

		b.say(v, `{"kind":"shadows","on":false}`)
		settle()
		g := greet(t, last(t, v.take(), "hello"))
		if g.Shadows || len(g.Frame.Shadows) != 0 || len(g.Frame.Verdict.Models) != 1 || len(g.Tape.Rows[0]) != 18 || g.Frame.Tick != 2000 || g.Frame.Hash != with.Hash {
			t.Errorf("shadows %v, %d in the frame, %d models, rows of %d, tick %d", g.Shadows, len(g.Frame.Shadows), len(g.Frame.Verdict.Models), len(g.Tape.Rows[0]), g.Frame.Tick)
		}
		b.in(func() {
			if b.s.set().Run(shadow.Point) != nil {
				t.Error("the point is computed")
			}
		})
		for _, s := range g.Tape.Spans {
			if s[0] != 0 {
				t.Errorf("a span of a shadow: %v", s)
			}
		}

		b.say(v, `{"kind":"shadows","on":true}`)
		settle()
		g = greet(t, last(t, v.take(), "hello"))
		if d := cmp.Diff(with, g.Frame, ofThen); d != "" || !g.Shadows || len(g.Tape.Rows[0]) != 32 {
			t.Errorf("shadows %v, rows of %d; %s", g.Shadows, len(g.Tape.Rows[0]), d)
		}
		if d := cmp.Diff(before, b.recordOf(), sameRecord); d != "" {
			t.Errorf("the record is another: %s", d)
		}
		b.say(v, `{"kind":"shadows","on":true}`) // as they are
		if d := cmp.Diff(before, b.recordOf(), sameRecord); d != "" {
			t.Errorf("the record is another: %s", d)
		}
	})
}

// The robot ends as it would with its shadows, and the run is over when it has.
func TestWithoutShadowsTheRobotIsTheSame(t *testing.T) {
	outcomes := map[bool]sim.Outcome{}
	for _, on := range []bool{true, false} {
		synctest.Test(t, func(t *testing.T) {
			b := newBench(t, pocket(t), Opening{})
			v := b.join()
			b.say(v, fmt.Sprintf(`{"kind":"shadows","on":%t}`, on))
			outcomes[on] = b.untilEnded(v)
			if over := b.length() - outcomes[on].Ticks; !on && over != 0 || over < 0 {
				t.Errorf("shadows %v: the tape goes on for %d ticks after the robot", on, over)
			}
			time.Sleep(time.Second)
			synctest.Wait()
			disk := b.keep.crashCopy()
			lab := New(Options{Keeper: disk})
			defer lab.Close()
			again := reopened(t, lab, disk, b.id)
			again.in(func() {
				if again.s.set().Shadows() != on {
					t.Errorf("shadows %v came back as %v", on, !on)
				}
			})
		})
	}
	if outcomes[true] != outcomes[false] || outcomes[true].Ticks == 0 {
		t.Errorf("with %+v\nwithout %+v", outcomes[true], outcomes[false])
	}
}

// The robot stands and time passes while a shadow is still under way; then the run pauses.
func TestPlayingGoesOnUntilAllHaveEnded(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		sc := room(t)
		sc.Ideal = nil
		b := newBench(t, sc, Opening{})
		v := b.join()
		o := b.untilEnded(v)
		set := setOf(t, b.text(), 1<<40-1)
		longest := int64(0)
		for w := range shadow.Models {
			longest = max(longest, set.Run(w).Outcome().Ticks)
		}
		if b.length() != longest || o.Ticks > longest {
			t.Errorf("length %d; the last ends at %d, the robot at %d", b.length(), longest, o.Ticks)
		}
		f := b.shown(v, longest)
		if f.Playing || f.Tick != longest || !f.AtHead || f.Verdict.Models[0].Time != near(o.Time) {
			t.Errorf("playing %v at tick %d of %d, robot's time %v", f.Playing, f.Tick, longest, f.Verdict.Models[0].Time)
		}
	})
}

// What takes long is done in slices: the session answers in between, and shows what it had.
func TestALongTapeIsComputedAnewInSlices(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, longRun(t, 80_000), Opening{Tick: 75_000})
		v := b.join()
		b.say(v, `{"kind":"shadows","on":false}`)
		length := b.length()
		b.shown(v, 45_000)
		b.say(v, `{"kind":"play"}`)

		rounds := 0
		m, err := parseMessage([]byte(`{"kind":"shadows","on":true}`))
		if err != nil {
			t.Fatal(err)
		}
		b.in(func() {
			b.s.speed = 0 // and yet it does not go on meanwhile
			b.s.receive(v, m)
			for b.s.making != nil {
				before := b.s.making.tape.Length()
				if b.s.set().Shadows() || b.s.tape.Length() != length || b.s.tick() != 45_000 {
					t.Fatal("the present tape is not shown as it is")
				}
				now := time.Now()
				b.s.advance(now)
				b.s.makeOn(now)
				rounds++
				if b.s.making != nil && b.s.making.tape.Length()-before > sliceTicks+64 {
					t.Errorf("%d ticks in one slice", b.s.making.tape.Length()-before)
				}
				switch rounds { // what is changed meanwhile is part of it, and cuts
				case 1:
					b.s.receive(v, &message{Kind: "number", Path: "asked.within_s", number: 3500})
				case 2:
					b.s.receive(v, &message{Kind: "drag", What: "solid", ID: "post", X: 6, Y: 1, Done: true})
					length = b.s.tape.Length()
				}
			}
			if !b.s.set().Shadows() || b.s.tick() != 45_000 || b.s.tape.Length() != 45_000 || !b.s.playing || b.s.sc.Asked.Within != 3500 {
				t.Errorf("tick %d of %d, playing %v, within %v", b.s.tick(), b.s.tape.Length(), b.s.playing, b.s.sc.Asked.Within)
			}
			if p := b.s.robot().World().SolidAt(2).Points[0]; p.X != 6 || p.Y != 1 {
				t.Errorf("the post is at %v", p)
			}
		})
		if rounds < 3 {
			t.Errorf("%d slices", rounds)
		}
		b.say(v, `{"kind":"pause"}`)
		if want, got := setOf(t, b.text(), b.tick()).Run(shadow.Unicycle).Outcome(), (sim.Outcome{}); true {
			b.in(func() { got = b.s.set().Run(shadow.Unicycle).Outcome() })
			if got != want {
				t.Errorf("the unicycle is %+v, alone %+v", got, want)
			}
		}
	})
}

// Who looks elsewhere while a tape is in the making looks there in the new one.
func TestSeekingWhileATapeIsInTheMaking(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, longRun(t, 40_000), Opening{Tick: 30_000})
		v := b.join()
		b.say(v, `{"kind":"shadows","on":false}`)
		b.in(func() {
			b.s.receive(v, &message{Kind: "shadows", On: new(bool)})
			on := true
			b.s.receive(v, &message{Kind: "shadows", On: &on})
			tick := int64(5000)
			b.s.receive(v, &message{Kind: "seek", Tick: &tick})
			if b.s.making == nil {
				t.Fatal("it is made at once: the test shows nothing")
			}
			for b.s.making != nil {
				b.s.makeOn(time.Now())
			}
			if b.s.tick() != 5000 || b.s.tape.Length() != 30_000 || !b.s.set().Shadows() {
				t.Errorf("tick %d of %d", b.s.tick(), b.s.tape.Length())
			}
		})
	})
}

func TestLongWorkIsSaid(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, room(t), Opening{Tick: 2000})
		v := b.join()
		b.say(v, `{"kind":"shadows","on":false}`)
		b.say(v, `{"kind":"shadows","on":true}`)
		settle()
		for _, m := range v.take() {
			if kindOf(t, m) == "notice" {
				t.Errorf("ten seconds are no long run: %s", m)
			}
		}
		b.in(func() {
			// As if the first slice had got no farther than a fiftieth of the way.
			b.s.making = &making{laid: &laid{tape: b.s.tape}, length: 50 * b.s.tape.Length()}
			b.s.saySlow()
			b.s.making = nil
		})
		settle()
		if n := said(t, last(t, v.take(), "notice")); !strings.Contains(n.Text, "moment") {
			t.Error(n.Text)
		}
	})
}

// What is asked changes nothing of the tape but where it ends.
func TestWhatIsAskedKeepsTheTape(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newBench(t, pocket(t), Opening{Tick: 3000})
		v := b.join()
		with := b.shown(v, 1000)
		before := b.recordOf()
		b.say(v, `{"kind":"number","path":"asked.leeway_m","value":0.3}`)
		b.say(v, `{"kind":"number","path":"asked.within_s","value":100}`)
		settle()
		g := greet(t, last(t, v.take(), "hello"))
		if d := cmp.Diff(with, g.Frame, ofThen); d != "" || g.Frame.Length != 3000 || g.Asked.Leeway != 0.3 || g.Asked.Within != 100 {
			t.Errorf("length %d, asked %+v; %s", g.Frame.Length, g.Asked, d)
		}
		if d := cmp.Diff(before, b.recordOf(), sameRecord); d != "" {
			t.Errorf("the record is another: %s", d)
		}
		b.say(v, `{"kind":"number","path":"asked.within_s","value":4}`) // 800 ticks
		settle()
		if f := greet(t, last(t, v.take(), "hello")).Frame; f.Length != 800 || f.Tick != 800 || f.Status != "timed out" {
			t.Errorf("tick %d of %d, %s", f.Tick, f.Length, f.Status)
		}
	})
}
