package shadow_test

import (
	"testing"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
	"leeway/sim/shadow"
	"leeway/sim/steer"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"
)

func newTape(t testing.TB, c sim.Config, shadows bool) *shadow.Tape {
	t.Helper()
	m, err := floor.NewMap(c.Floor, 3)
	if err != nil {
		t.Fatal(err)
	}
	tape, err := shadow.NewTape(m, c, shadows)
	if err != nil {
		t.Fatal(err)
	}
	return tape
}

// hashAt is the plain way to a past tick: everything from the start again.
func hashAt(t testing.TB, c sim.Config, edits []sim.Edit, tick int64) (h [3]uint64) {
	t.Helper()
	c.Edits = nil
	for _, e := range edits {
		if e.Tick < tick {
			c.Edits = append(c.Edits, e)
		}
	}
	s := newSet(t, c)
	for s.Tick() < tick {
		s.Step()
	}
	for w := range shadow.Models {
		h[w] = s.Run(w).Outcome().Hash
	}
	return h
}

func busy() sim.Config {
	c := robot()
	c.Floor.Movers = []floor.Mover{{Radius: 0.2, Route: []geom.Vec{v(5.5, 1), v(5.5, 5)}, Speed: 0.4, Pause: 0.5}}
	return c
}

// Any tick back is exact, whatever was looked at, changed and cut before: random
// walks over a tape, against runs from the start.
func TestAnyTickBackIsExact(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		c := busy()
		tape := newTape(t, c, true)
		for range rapid.IntRange(1, 6).Draw(rt, "acts") {
			switch rapid.IntRange(0, 3).Draw(rt, "act") {
			case 0:
				for range rapid.IntRange(1, 5000).Draw(rt, "steps") {
					tape.Step()
				}
			case 1:
				tape.LookAt(rapid.Int64Range(0, tape.Length()).Draw(rt, "to"))
			case 2:
				e := sim.Edit{Kind: sim.MoveSolid, Index: 1, Pos: v(rapid.Float64Range(5, 9).Draw(rt, "x"), 3)}
				if _, err := tape.Edit(e); err != nil {
					rt.Fatal(err)
				}
			case 3:
				if _, err := tape.Edit(sim.Edit{Kind: sim.MoveGoal, Pos: v(10, rapid.Float64Range(1, 5).Draw(rt, "y"))}); err != nil {
					rt.Fatal(err)
				}
			}
		}
		edits := tape.Now().Run(shadow.Robot).Edits()
		for range 2 {
			at := rapid.Int64Range(0, tape.Length()).Draw(rt, "look")
			tape.LookAt(at)
			want := hashAt(t, c, edits, at)
			for w := range shadow.Models {
				if got := tape.Now().Run(w).Outcome().Hash; got != want[w] {
					rt.Fatalf("tick %d, %v: hash %x on the tape, %x from the start", at, w, got, want[w])
				}
			}
		}
	})
}

// A change in the past cuts the tape there, and the record with it.
func TestAChangeInThePastCutsTheTape(t *testing.T) {
	tape := newTape(t, busy(), true)
	for !tape.Done() {
		tape.Step()
	}
	length := tape.Length()
	tape.LookAt(1501)
	if tape.AtHead() || tape.Length() != length {
		t.Fatal("looking back shortened the tape")
	}
	cut, err := tape.Edit(sim.Edit{Kind: sim.MoveGoal, Pos: v(10, 5)})
	if err != nil || !cut || !tape.AtHead() || tape.Length() != 1501 {
		t.Fatalf("cut %v, error %v, length %d", cut, err, tape.Length())
	}
	r := &tape.Record
	if last := r.Rows[len(r.Rows)-1].Tick; last > 1501 || len(r.Ranges) != len(r.Rows) {
		t.Errorf("the record still holds a row of tick %d", last)
	}
	for _, e := range r.Events {
		if e.Tick > 1501 {
			t.Errorf("the record still holds %+v", e)
		}
	}
	if cut, _ := tape.Edit(sim.Edit{Kind: sim.MoveGoal, Pos: v(10, 4)}); cut {
		t.Error("a change at the end of the tape is said to cut it")
	}
	for !tape.Done() {
		tape.Step()
	}
	for i := 1; i < len(r.Rows); i++ {
		if r.Rows[i].Tick-r.Rows[i-1].Tick != r.Every {
			t.Fatalf("rows at ticks %d and %d", r.Rows[i-1].Tick, r.Rows[i].Tick)
		}
	}
}

// The record agrees with the runs it is of.
func TestTheRecordIsTrue(t *testing.T) {
	c := busy()
	c.Ring.Bearings = ring.Even(6)
	tape := newTape(t, c, true)
	for !tape.Done() {
		tape.Step()
	}
	r := &tape.Record
	for _, i := range []int{0, 17, len(r.Rows) / 2, len(r.Rows) - 1} {
		row := r.Rows[i]
		tape.LookAt(row.Tick)
		for w := range shadow.Models {
			run := tape.Now().Run(w)
			if m := row.Models[w]; m.Pose != run.Pose() || int(m.Mode) != run.Engine().Mode() || m.Gap != min(run.Gap(), m.Gap) {
				t.Errorf("row %d, %v: %+v", i, w, m)
			}
		}
	}
	tape.LookAt(tape.Length())
	kinds := map[shadow.EventKind]int{}
	for _, e := range r.Events {
		kinds[e.Kind]++
		if e.Text == "" {
			t.Errorf("an event without words: %+v", e)
		}
	}
	if kinds[shadow.EndMark] != 3 || kinds[shadow.PartingMark] == 0 {
		t.Errorf("marks: %v", kinds)
	}
	if n := tape.Now().Run(shadow.Robot).Outcome().Contacts; kinds[shadow.ContactMark] < min(n, 1) {
		t.Errorf("%d contacts, %d marked", n, kinds[shadow.ContactMark])
	}
}

// Hidden shadows are not computed: the robot alone, the same robot.
func TestATapeWithoutShadows(t *testing.T) {
	with, without := newTape(t, busy(), true), newTape(t, busy(), false)
	for !with.Done() {
		with.Step()
	}
	for !without.Done() {
		without.Step()
	}
	a, b := with.Now().Run(shadow.Robot).Outcome(), without.Now().Run(shadow.Robot).Outcome()
	if a != b || without.Now().Run(shadow.Point) != nil || without.Now().Shadows() {
		t.Errorf("%+v with shadows, %+v without", a, b)
	}
}

// BenchmarkSeek goes back by the longest stretch that has to be stepped anew: from
// just before a snapshot.
func BenchmarkSeek(b *testing.B) {
	c := busy()
	c.Goal, c.Asked.Within = v(-50, -50), 300
	tape := newTape(b, c, true)
	for range 12_000 {
		tape.Step()
	}
	b.ReportAllocs()
	for b.Loop() {
		tape.LookAt(7999)
		tape.LookAt(1)
	}
}

// What is recorded does not tell what other futures there have been: random walks over a tape, against a tape on which
// only the changes that are left were made.
func TestTheRecordForgetsOtherFutures(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		c := busy()
		c.Steer.Rule, c.Steer.Ahead = steer.LookAhead, 0.05
		tape := newTape(t, c, true)
		for range rapid.IntRange(2, 6).Draw(rt, "acts") {
			for range rapid.IntRange(0, 1500).Draw(rt, "steps") {
				tape.Step()
			}
			tape.LookAt(rapid.Int64Range(0, tape.Length()).Draw(rt, "to"))
			e := sim.Edit{Kind: sim.MoveSolid, Index: 1, Pos: v(rapid.Float64Range(5, 9).Draw(rt, "x"), 3)}
			if rapid.Bool().Draw(rt, "goal") {
				e = sim.Edit{Kind: sim.MoveGoal, Pos: v(10, rapid.Float64Range(1, 5).Draw(rt, "y"))}
			}
			if _, err := tape.Edit(e); err != nil {
				rt.Fatal(err)
			}
		}
		for range 4000 {
			tape.Step()
		}
		plain := newTape(t, c, true)
		for _, e := range tape.Now().Run(shadow.Robot).Edits() {
			for plain.Length() < e.Tick {
				plain.Step()
			}
			if _, err := plain.Edit(e); err != nil {
				rt.Fatal(err)
			}
		}
		for plain.Length() < tape.Length() {
			plain.Step()
		}
		got, want := &tape.Record, &plain.Record
		if d := cmp.Diff(want.Rows, got.Rows); d != "" {
			rt.Errorf("rows: %s", d)
		}
		if d := cmp.Diff(want.Spans, got.Spans); d != "" {
			rt.Errorf("spans: %s", d)
		}
		if d := cmp.Diff(want.Events, got.Events); d != "" {
			rt.Errorf("marks: %s", d)
		}
	})
}

// Two decisions are different from some tick on, but that is known only later: cut in between, the tape has no such
// mark, and gets it once.
func TestACutBeforeAPartingIsKnown(t *testing.T) {
	c := busy()
	tape := newTape(t, c, true)
	count := func(kind shadow.EventKind) (n int) {
		for _, e := range tape.Record.Events {
			if e.Kind == kind {
				n++
			}
		}
		return n
	}
	partings := func() int {
		return len(tape.Now().Partings(shadow.Point)) + len(tape.Now().Partings(shadow.Unicycle))
	}
	var from, known int64 // of a different decision
	for last := 0; !tape.Done() && known == 0; {
		tape.Step()
		if n := partings(); n > last {
			last = n
			for w := shadow.Point; w < shadow.Models; w++ {
				if p := tape.Now().Partings(w); len(p) > 0 && !p[len(p)-1].Drifted && p[len(p)-1].Tick < tape.Length()-2 {
					from, known = p[len(p)-1].Tick, tape.Length()
				}
			}
		}
	}
	if known == 0 {
		t.Fatal("the models never decide differently: the test shows nothing")
	}
	all := count(shadow.PartingMark)
	tape.LookAt((from + known) / 2)
	if _, err := tape.Edit(sim.Edit{Kind: sim.MoveMover, Index: 0, Pos: v(5.5, 1)}); err != nil {
		t.Fatal(err)
	}
	if got, want := count(shadow.PartingMark), partings(); got != want || got >= all {
		t.Errorf("%d marks, %d partings, %d before", got, want, all)
	}
	for tape.Length() < known {
		tape.Step()
	}
	if got, want := count(shadow.PartingMark), partings(); got != want || got != all {
		t.Errorf("%d marks, %d partings, %d before", got, want, all)
	}
}

// A tape that is cut while a model chatters does not say so a second time, nor does it forget it.
func TestACutAmongChatter(t *testing.T) {
	c := busy()
	n := logic.DefaultNumbers(0.21, 0.4, 0.15)
	n.Band, n.MinTime = 0, 0
	c.Logic = logic.Default(n)
	c.Ring.NoiseBase = 0.3
	tape := newTape(t, c, true)
	marks := func() (at []int64) {
		for _, e := range tape.Record.Events {
			if e.Kind == shadow.ChatterMark && e.Who == shadow.Robot {
				at = append(at, e.Tick)
			}
		}
		return at
	}
	for !tape.Done() {
		tape.Step()
	}
	all := marks()
	if len(all) == 0 {
		t.Fatal("the robot does not chatter: the test shows nothing")
	}
	for _, at := range all {
		tape.LookAt(at + 1)
		if _, err := tape.Edit(sim.Edit{Kind: sim.SetNumber, Number: sim.GainNumber, Value: c.Steer.Gain}); err != nil {
			t.Fatal(err)
		}
		for !tape.Done() {
			tape.Step()
		}
		if d := cmp.Diff(all, marks()); d != "" {
			t.Fatalf("cut at %d: %s", at+1, d)
		}
	}
}

// What was changed at the very tick that is looked at is done already there, and changed again there it stays the last
// change: nothing later is left.
func TestAChangeIsSeenAtItsTick(t *testing.T) {
	tape := newTape(t, busy(), true)
	for range 700 {
		tape.Step()
	}
	edit := func(p geom.Vec) {
		t.Helper()
		if _, err := tape.Edit(sim.Edit{Kind: sim.MoveGoal, Pos: p}); err != nil {
			t.Fatal(err)
		}
	}
	edit(v(10, 5))
	for range 300 {
		tape.Step()
	}
	edit(v(10, 1))
	for tick, want := range map[int64]geom.Vec{699: busy().Goal, 700: v(10, 5), 999: v(10, 5), 1000: v(10, 1)} {
		tape.LookAt(tick)
		for w := range shadow.Models {
			if got := tape.Now().Run(w).Goal(); got != want {
				t.Errorf("tick %d, %v: the goal is at %v", tick, w, got)
			}
		}
	}
	tape.LookAt(700)
	if _, err := tape.Edit(sim.Edit{Kind: sim.MoveSolid, Index: 1, Pos: v(6, 3)}); err != nil {
		t.Fatal(err)
	}
	if e := tape.Now().Run(shadow.Robot).Edits(); len(e) != 2 || e[0].Pos != v(10, 5) || tape.Length() != 700 {
		t.Errorf("edits %+v, length %d", e, tape.Length())
	}
}

// A change that cannot be made changes nothing: no future is forgotten for it.
func TestARefusedChangeCutsNothing(t *testing.T) {
	tape := newTape(t, busy(), true)
	for range 500 {
		tape.Step()
	}
	tape.LookAt(100)
	if cut, err := tape.Edit(sim.Edit{Kind: sim.MoveSolid, Index: 99}); err == nil || cut || tape.Length() != 500 || tape.AtHead() {
		t.Errorf("cut %v, error %v, length %d", cut, err, tape.Length())
	}
}

// The robot is the same when its shadows are dropped, at any tick of the tape.
func TestDroppedShadowsLeaveTheRobot(t *testing.T) {
	tape, alone := newTape(t, busy(), true), newTape(t, busy(), false)
	for range 2500 {
		tape.Step()
		alone.Step()
	}
	tape.LookAt(1800)
	tape.DropShadows()
	for range 2 {
		for tape.Length() < 4000 {
			tape.LookAt(tape.Length())
			tape.Step()
		}
		for alone.Length() < 4000 && !alone.Done() {
			alone.Step()
		}
		for _, at := range []int64{1800, 0, 1001, 2500, 4000} {
			tape.LookAt(at)
			alone.LookAt(at)
			if a, b := tape.Now(), alone.Now(); a.Run(shadow.Robot).Outcome() != b.Run(shadow.Robot).Outcome() || a.Run(shadow.Point) != nil || a.Shadows() {
				t.Errorf("at %d: %+v, alone %+v", at, a.Run(shadow.Robot).Outcome(), b.Run(shadow.Robot).Outcome())
			}
		}
	}
	if d := cmp.Diff(alone.Record.Rows, tape.Record.Rows); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff(alone.Record.Spans, tape.Record.Spans); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff(alone.Record.Events, tape.Record.Events, cmpopts.EquateEmpty()); d != "" {
		t.Error(d)
	}
}
