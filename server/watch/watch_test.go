package watch

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"leeway/sim"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/scenario"
	"leeway/web/page/draw"
)

func parse(t *testing.T, text string) *scenario.Scenario {
	t.Helper()
	sc, err := scenario.Parse([]byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return sc
}

const desk = `{"leeway": 1, "name": "A desk", "floor": {"width_m": 8, "height_m": 6,
	"solids": [{"id": "desk", "corners_m": [[3, 2.4], [4, 2.4], [4, 3.8], [3, 3.8]]}, {"id": "post", "center_m": [6, 1], "radius_m": 0.2}],
	"movers": [{"id": "cart", "box_m": [0.8, 0.4], "heading_deg": 90, "route_m": [[7, 5]]}]},
	"start": {"x_m": 1, "y_m": 3, "heading_deg": 90}, "goal": {"x_m": 7, "y_m": 3, "radius_m": 0.3},
	"edits": [{"tick": 100, "what": "solid", "id": "post", "to_m": [6, 5]}]}`

func TestTrailKeepsCloseToTheWay(t *testing.T) {
	var trail Trail
	var way []geom.Vec
	thinned := 0
	// Far more spots than fit: a spiral of some hundreds of metres.
	for i := range 60_000 {
		a := float64(i) * 0.002
		p := geom.Heading(a).Scale(0.05 * a)
		way = append(way, p)
		if trail.add(p, i/10_000) {
			thinned++
		}
	}
	spots := trail.Spots()
	if len(spots) > MaxSpots || thinned == 0 {
		t.Fatalf("%d spots, thinned %d times", len(spots), thinned)
	}
	apart := spacing * math.Pow(2, float64(thinned))
	for i := 0; i < len(way)-1; i += 17 {
		p, least := way[i], math.Inf(1)
		for _, s := range spots {
			least = min(least, p.Sub(geom.Vec{X: s.X, Y: s.Y}).Norm())
		}
		if least > 2*apart {
			t.Fatalf("%v is %v m from the nearest spot; they are %v m apart", p, least, apart)
		}
	}
	seen := map[int]bool{}
	for _, s := range spots {
		seen[s.Mode] = true
	}
	if len(seen) != 6 {
		t.Errorf("modes %v", seen)
	}
	trail.Reset()
	if len(trail.Spots()) != 0 || trail.apart != spacing {
		t.Error("a reset trail remembers")
	}
}

func TestTrailHasASpotWhereTheModeChanged(t *testing.T) {
	var trail Trail
	trail.add(geom.Vec{}, 0)
	trail.add(geom.Vec{X: 0.001}, 0)
	trail.add(geom.Vec{X: 0.002}, 1)
	if s := trail.Spots(); len(s) != 2 || s[1] != (Spot{0.002, 0, 1}) {
		t.Errorf("%v", s)
	}
}

func TestFinishIsTheRunAlone(t *testing.T) {
	sc := parse(t, desk)
	var first, last int64 = -1, -1
	f, err := Finish(t.Context(), sc, func(r *sim.Run) {
		if first < 0 {
			first = r.Tick()
		}
		if r.Tick() != last+1 {
			t.Fatalf("tick %d after %d", r.Tick(), last)
		}
		last = r.Tick()
	})
	if err != nil {
		t.Fatal(err)
	}
	c, err := sc.Config()
	if err != nil {
		t.Fatal(err)
	}
	alone, err := sim.New(c)
	if err != nil {
		t.Fatal(err)
	}
	if o := alone.Finish(); o != f.Run.Outcome() || first != 0 || last != o.Ticks {
		t.Errorf("ticks %d to %d\n%+v\n%+v", first, last, f.Run.Outcome(), o)
	}
}

func TestPictureShowsTheFloorAsItEndsAndTheWholeWay(t *testing.T) {
	f, err := Finish(t.Context(), parse(t, desk), nil)
	if err != nil {
		t.Fatal(err)
	}
	p := f.Picture()
	if p.Title != "A desk" || p.Max != (draw.Point{X: 8, Y: 6}) || p.Start != (draw.Point{X: 1, Y: 3}) || p.Goal != (draw.Point{X: 7, Y: 3}) || p.Hull != 0.21 {
		t.Errorf("%+v", p)
	}
	if p.Solids[0].Shape != draw.Polygon || p.Solids[1].Shape != draw.Disc || p.Solids[1].Points[0] != (draw.Point{X: 6, Y: 5}) {
		t.Errorf("solids %+v", p.Solids[:2])
	}
	corner := p.Movers[0].Points[0] // (0.4, 0.2) turned a quarter left about (7, 5)
	if math.Abs(corner.X-6.8) > 1e-9 || math.Abs(corner.Y-5.4) > 1e-9 {
		t.Errorf("the cart's corner is at %v", corner)
	}
	looks := map[draw.Look]bool{}
	end := p.Start
	for _, leg := range p.Way {
		looks[leg.Look] = true
		if leg.Points[0] != end {
			t.Errorf("a leg begins at %v, the one before ended at %v", leg.Points[0], end)
		}
		end = leg.Points[len(leg.Points)-1]
	}
	if !looks[draw.LookGoal] || !looks[draw.LookWall] {
		t.Errorf("looks %v", looks)
	}
	if math.Hypot(end.X-7, end.Y-3) > 0.35 {
		t.Errorf("the way ends at %v", end)
	}
	o := f.Run.Outcome()
	if p.Pin == nil || p.Pin.Bad != (o.Leeway < 0.05) || math.Hypot(p.Pin.Hull.X-p.Pin.Solid.X, p.Pin.Hull.Y-p.Pin.Solid.Y)-0.21-o.Leeway > 1e-9 {
		t.Errorf("pin %+v, leeway %v", p.Pin, o.Leeway)
	}
}

func TestShortIsWhatFallsShort(t *testing.T) {
	for asked, want := range map[string]bool{
		`{"within_s": 60, "leeway_m": 0}`:                  false,
		`{"within_s": 60, "leeway_m": 1}`:                  true,
		`{"within_s": 3, "leeway_m": 0}`:                   true,
		`{"within_s": 60, "leeway_m": 0, "switches": 0}`:   true,
		`{"within_s": 60, "leeway_m": 0, "switches": 100}`: false,
	} {
		f, err := Finish(t.Context(), parse(t, strings.Replace(desk, `"edits"`, `"asked": `+asked+`, "edits"`, 1)), nil)
		if err != nil {
			t.Fatal(err)
		}
		if f.Short() != want {
			t.Errorf("%s: %v with %+v", asked, f.Short(), f.Run.Outcome())
		}
	}
}

func TestVerdictInWords(t *testing.T) {
	f, err := Finish(t.Context(), parse(t, `{"leeway": 1, "floor": {"width_m": 5, "height_m": 4, "enclosed": false}, "asked": {"within_s": 2},
		"start": {"x_m": 1, "y_m": 2}, "goal": {"x_m": 4, "y_m": 2}}`), nil)
	if err != nil {
		t.Fatal(err)
	}
	if got := f.Verdict(); got != "timed out after 0:02" {
		t.Error(got)
	}
	if f.Picture().Pin != nil {
		t.Error("a pin where nothing is near")
	}
}

func TestLookOfEveryMode(t *testing.T) {
	for _, c := range []struct {
		mode logic.Mode
		want draw.Look
	}{
		{logic.Mode{Behaviour: logic.GoalSeeking}, draw.LookGoal},
		{logic.Mode{Behaviour: logic.WallFollowing}, draw.LookWall},
		{logic.Mode{Behaviour: logic.Avoidance}, draw.LookAvoid},
		{logic.Mode{Behaviour: logic.Stop}, draw.LookOther},
		{logic.Mode{Ending: logic.EndsArrived}, draw.LookDone},
		{logic.Mode{Behaviour: logic.GoalSeeking, Ending: logic.EndsGaveUp}, draw.LookFail},
	} {
		if got := Look(&c.mode); got != c.want {
			t.Errorf("%+v looks like %s", c.mode, got)
		}
	}
}

func TestFinishCanBeGivenUp(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	ticks := 0
	_, err := Finish(ctx, parse(t, desk), func(*sim.Run) { ticks++; cancel() })
	if !errors.Is(err, context.Canceled) || ticks > 1024 {
		t.Errorf("%v after %d ticks", err, ticks)
	}
}

func TestClock(t *testing.T) {
	for s, want := range map[float64]string{0: "0:00", 59.4: "0:59", 59.6: "1:00", 3605: "60:05"} {
		if got := Clock(s); got != want {
			t.Errorf("%v is %s", s, got)
		}
	}
}
