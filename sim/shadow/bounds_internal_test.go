package shadow

import (
	"math/rand/v2"
	"slices"
	"testing"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
	"leeway/sim/steer"
)

// A record of very many switches keeps the long stays: where it left some out, the lane shows the mode before.
func TestShortStaysAreLeftOut(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 0))
	rec := Record{Every: 20}
	var tick [Models]int64
	var longest [Models]Span
	var lasted [Models]int64
	mode := [Models]int{}
	for len(rec.Spans) <= maxSpans {
		w := Who(r.IntN(int(Models)))
		stay := 1 + r.Int64N(50)
		if r.IntN(40) == 0 {
			stay = 1000 + r.Int64N(100_000)
		}
		mode[w] = (mode[w] + 1 + r.IntN(2)) % 3
		span := Span{Who: w, Tick: tick[w], Mode: mode[w]}
		rec.Spans = append(rec.Spans, span)
		if stay > lasted[w] {
			longest[w], lasted[w] = span, stay
		}
		tick[w] += stay
	}
	all := slices.Clone(rec.Spans)
	rec.thinSpans()
	if n := len(rec.Spans); n > maxSpans/2 || n < 100 || rec.Recast != 1 {
		t.Fatalf("%d spans of %d are left", n, len(all))
	}
	of := func(spans []Span, w Who) []Span {
		return slices.DeleteFunc(slices.Clone(spans), func(s Span) bool { return s.Who != w })
	}
	for w := range Models {
		was, is := of(all, w), of(rec.Spans, w)
		if is[0] != was[0] {
			t.Errorf("%v: the first is %+v, not %+v", w, is[0], was[0])
		}
		then := is[0] // in the middle of the longest stay
		for _, s := range is {
			if s.Tick <= longest[w].Tick+lasted[w]/2 {
				then = s
			}
		}
		if then.Mode != longest[w].Mode {
			t.Errorf("%v: the longest stay, %+v, is shown as %+v", w, longest[w], then)
		}
		if is[len(is)-1].Mode != was[len(was)-1].Mode {
			t.Errorf("%v: the lane ends with %+v, not %+v", w, is[len(is)-1], was[len(was)-1])
		}
		for i, s := range is {
			if !slices.Contains(was, s) {
				t.Errorf("%v: %+v was made up", w, s)
			}
			if i > 0 && (s.Mode == is[i-1].Mode || s.Tick <= is[i-1].Tick) {
				t.Errorf("%v: %+v follows on %+v", w, s, is[i-1])
			}
		}
	}
}

func boundsConfig() sim.Config {
	return sim.Config{
		Seed: 2, Tick: 0.005, DecideEvery: 4, Hull: 0.2,
		Floor: floor.Config{Solids: []floor.Solid{{Kind: floor.Disc, Points: []geom.Vec{{X: 2, Y: 0.1}}, Radius: 0.3}}},
		Ring:  ring.Config{Bearings: ring.Even(12), Mount: 0.2, Max: 2, NoiseBase: 0.01, Period: 10, SubRays: 1},
		Drive: drive.Config{Model: drive.TwoWheels, WheelRadius: 0.05, Track: 0.3, MaxWheelSpeed: 14, Lag: 0.05},
		Steer: steer.Config{Gain: 3, WheelRadius: 0.05, Track: 0.3, MaxWheelSpeed: 14, TurnBeyond: 1},
		Logic: logic.Default(logic.DefaultNumbers(0.2, 0.4, 0.2)), Speed: 0.4,
		Goal: geom.Vec{X: 40}, GoalRadius: 0.2, Asked: sim.Asked{Within: 1000, Switches: -1},
	}
}

// A tape whose snapshots are large keeps fewer of them, always one of the start, and is as exact as ever.
func TestLargeSnapshotsAreFewer(t *testing.T) {
	c := boundsConfig()
	m, err := floor.NewMap(c.Floor, 3)
	if err != nil {
		t.Fatal(err)
	}
	tape, err := NewTape(m, c, true)
	if err != nil {
		t.Fatal(err)
	}
	plain, err := NewTape(m, c, true)
	if err != nil {
		t.Fatal(err)
	}
	tape.pieces = maxHeld / pieceSize / 3 / 8 // eight snapshots are too many once something has moved
	hashes := map[int64]uint64{}
	for _, x := range []*Tape{tape, plain} {
		if _, err := x.Edit(sim.Edit{Kind: sim.MoveSolid, Index: 0, Pos: geom.Vec{X: 2.2}}); err != nil {
			t.Fatal(err)
		}
		for range 20_000 {
			x.Step()
			if x == plain && x.Length()%777 == 0 {
				hashes[x.Length()] = x.Now().Run(Robot).Outcome().Hash
			}
		}
	}
	if n := len(tape.marks); n > 8 || n < 3 || tape.marks[0].tick != 0 || tape.held > maxHeld {
		t.Errorf("%d snapshots of %d bytes, the first of tick %d", n, tape.held, tape.marks[0].tick)
	}
	if n := len(plain.marks); n != 21 {
		t.Errorf("%d snapshots of the plain tape", n)
	}
	for tick, want := range hashes {
		tape.LookAt(tick)
		if got := tape.Now().Run(Robot).Outcome().Hash; got != want {
			t.Errorf("tick %d: another hash", tick)
		}
	}
}

// A ring of many beams has its rows thinned before they are too much, and the beams go with their rows.
func TestManyBeamsMakeFewerRows(t *testing.T) {
	c := boundsConfig()
	c.Ring.Bearings = ring.Even(720)
	m, err := floor.NewMap(c.Floor, 3)
	if err != nil {
		t.Fatal(err)
	}
	set, err := NewOn(m, c, false)
	if err != nil {
		t.Fatal(err)
	}
	rec := Record{Every: 20}
	for set.tick = 0; len(rec.Rows)*720 < maxRanges; set.tick += 20 {
		rec.noteRow(set)
		rec.Ranges[len(rec.Ranges)-1][0] = float32(set.tick)
	}
	full := len(rec.Rows)
	for ; rec.Every == 20; set.tick += 20 {
		rec.noteRow(set)
	}
	if n := len(rec.Rows); n > full/2+1 || n < full/2-1 || len(rec.Ranges) != n || rec.Recast != 1 {
		t.Fatalf("%d of %d rows and %d scans are left", n, full, len(rec.Ranges))
	}
	for i, row := range rec.Rows[:full/2-1] {
		if row.Tick != int64(i)*rec.Every || rec.Ranges[i][0] != float32(row.Tick) {
			t.Fatalf("row %d is of tick %d with beams of tick %v", i, row.Tick, rec.Ranges[i][0])
		}
	}
}
