package scenario

import (
	"bytes"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
)

func trialsOf(t testing.TB, text string) *Trials {
	t.Helper()
	trials, err := mustParse(t, text).Trials()
	if err != nil {
		t.Fatal(err)
	}
	return trials
}

// A trial is a plain scenario: printed and read again it is the very run that a
// study makes of it, hash for hash.
func TestTrialRepeatsOnItsOwn(t *testing.T) {
	trials := trialsOf(t, varied)
	for i := range 8 {
		s, err := trials.Trial(i)
		if err != nil {
			t.Fatal(err)
		}
		c, m, err := trials.Config(i)
		if err != nil {
			t.Fatal(err)
		}
		again, err := Parse(s.Print())
		if err != nil {
			t.Fatalf("trial %d is no scenario: %v\n%s", i, err, s.Print())
		}
		linked, err := Decode(s.Encode())
		if err != nil || !cmp.Equal(again, linked) {
			t.Fatalf("trial %d does not survive a link: %v", i, err)
		}
		alone, err := again.Config()
		if err != nil {
			t.Fatal(err)
		}
		if d := cmp.Diff(alone, c, cmpopts.EquateEmpty(), cmp.Comparer(func(a, b *logic.Logic) bool { return cmp.Equal(*a, *b, cmpopts.EquateEmpty()) })); d != "" {
			t.Fatalf("trial %d: the file and the study differ:\n%s", i, d)
		}
		c.Asked.Within, alone.Asked.Within = 15, 15
		one, err := sim.New(alone)
		if err != nil {
			t.Fatal(err)
		}
		other, err := sim.NewOn(m, c)
		if err != nil {
			t.Fatal(err)
		}
		if a, b := one.Finish(), other.Finish(); a != b {
			t.Fatalf("trial %d: alone %+v, in the study %+v", i, a, b)
		}
		if !bytes.Contains(s.Print(), []byte(", trial ")) || bytes.Contains(s.Print(), []byte(`"vary"`)) {
			t.Errorf("trial %d:\n%s", i, s.Print())
		}
	}
}

// Everything varies within what was asked, and by about as much.
func TestTrialsStayWithin(t *testing.T) {
	trials := trialsOf(t, varied)
	const n = 400
	var speed, notice, lag, heading, offset, shiftX []float64
	beams, seeds, inDisc := map[int]int{}, map[int64]bool{}, 0
	for i := range n {
		s, err := trials.Trial(i)
		if err != nil {
			t.Fatal(err)
		}
		at := geom.Vec{X: s.Start.X, Y: s.Start.Y}
		disc := at.Sub(geom.Vec{X: 2, Y: 6}).Norm() <= 1.0001
		if disc {
			inDisc++
		}
		if !disc && !(at.X <= 3 && at.Y <= 4) {
			t.Fatalf("trial %d starts at %v", i, at)
		}
		goal := geom.Vec{X: s.Goal.X, Y: s.Goal.Y}
		if goal.X < 9 || goal.Y < 2 || at.Sub(goal).Norm() < 5 {
			t.Fatalf("trial %d goes from %v to %v", i, at, goal)
		}
		c, _, _ := trials.Config(i)
		m, err := floor.NewMap(c.Floor, 3)
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range []geom.Vec{at, goal} {
			if near, _ := m.NewWorld().Nearest(p, 9); near.Distance < s.Robot.Radius+0.1-1e-6 {
				t.Fatalf("trial %d: %v is %v m from something", i, p, near.Distance)
			}
		}
		speed, heading = append(speed, s.Robot.Speed), append(heading, s.Start.Heading)
		notice, lag = append(notice, *s.Logic.Notice), append(lag, s.Robot.WheelLag)
		offset, shiftX = append(offset, s.Floor.Movers[0].Offset), append(shiftX, s.Floor.Solids[1].Center[0]-8)
		beams[s.Ring.Beams]++
		seeds[s.Seed] = true
		d := vec(s.Floor.Solids[0].Corners[0]).Sub(geom.Vec{X: 3, Y: 5}).Norm()
		if d > 0.5001 {
			t.Fatalf("trial %d: the desk is %v m off", i, d)
		}
	}
	spread := func(what string, v []float64, low, high float64) {
		slices.Sort(v)
		if v[0] < low || v[n-1] > high || v[n-1]-v[0] < 0.9*(high-low) {
			t.Errorf("%s is drawn from %v to %v", what, v[0], v[n-1])
		}
	}
	spread("speed", speed, 0.2, 0.6)
	spread("heading", heading, -180, 180)
	spread("notice", notice, 0.2, 0.5)
	spread("offset", offset, 0, 20)
	spread("shift", shiftX, -0.3001, 0.3001)
	if slices.Sort(lag); lag[0] < 0 || lag[n-1] > 0.3 || math.Abs(lag[n/2]-0.1) > 0.02 {
		t.Errorf("lag: %v, median %v, %v", lag[0], lag[n/2], lag[n-1])
	}
	if len(beams) != 3 || len(seeds) != n {
		t.Errorf("beams %v, %d seeds", beams, len(seeds))
	}
	// π of 12+π square metres, less where it is too narrow.
	if share := float64(inDisc) / n; share < 0.12 || share > 0.33 {
		t.Errorf("%.2f of the starts are in the disc", share)
	}
	whole := trialsOf(t, extended(`"vary": {"numbers": [{"path": "ring.beams", "kind": "uniform", "low": 3, "high": 6}]}`))
	counts := map[int]int{}
	for i := range 200 {
		s, _ := whole.Trial(i)
		counts[s.Ring.Beams]++
	}
	if len(counts) != 4 || counts[3] < 25 || counts[6] < 25 {
		t.Errorf("whole numbers: %v", counts)
	}
}

// One more thing that varies, or a number set, leaves everything else as drawn.
func TestDrawsAreCommon(t *testing.T) {
	trials := trialsOf(t, varied)
	set, err := trials.With(Setting{"robot.speed_m_s", 0.33}, Setting{"ring.noise_m", 0})
	if err != nil {
		t.Fatal(err)
	}
	less := mustParse(t, varied)
	less.Vary.Numbers = less.Vary.Numbers[1:]
	less.Vary.Movers = nil
	fewer, err := less.Trials()
	if err != nil {
		t.Fatal(err)
	}
	for i := range 20 {
		a, _ := trials.Trial(i)
		b, err := set.Trial(i)
		if err != nil {
			t.Fatal(err)
		}
		if b.Robot.Speed != 0.33 || b.Ring.Noise != 0 {
			t.Fatalf("trial %d: speed %v, noise %v", i, b.Robot.Speed, b.Ring.Noise)
		}
		b.Robot.Speed, b.Ring.Noise = a.Robot.Speed, a.Ring.Noise
		if d := cmp.Diff(a, b); d != "" {
			t.Fatalf("trial %d differs by more than what was set:\n%s", i, d)
		}
		c, _ := fewer.Trial(i)
		c.Robot.Speed, c.Floor.Movers = a.Robot.Speed, a.Floor.Movers
		if d := cmp.Diff(a, c); d != "" {
			t.Fatalf("trial %d differs by more than what no longer varies:\n%s", i, d)
		}
	}
	if _, err := trials.With(Setting{"robot.speed_m_s", -1}); err == nil {
		t.Error("a speed of −1 was set")
	}
	if _, err := trials.With(Setting{"seed", 1}); err == nil {
		t.Error("the seed was set")
	}
}

// Without anything that varies there is still a seed for every trial; or not.
func TestTrialsOfAPlainScenario(t *testing.T) {
	trials := trialsOf(t, plain)
	a, _ := trials.Trial(0)
	b, _ := trials.Trial(1)
	if a.Seed == b.Seed || !trials.Varies() {
		t.Error("the seeds are the same")
	}
	a.Seed, b.Seed, a.Name, b.Name = 1, 1, "Untitled", "Untitled"
	if want := mustParse(t, plain); !cmp.Equal(a, want) || !cmp.Equal(b, want) {
		t.Error("more than the seed differs")
	}
	same := trialsOf(t, extended(`"vary": {"same_seed": true}`))
	if s, _ := same.Trial(5); s.Seed != 1 || same.Varies() {
		t.Errorf("the seed is %d", s.Seed)
	}
}

// What cannot be drawn says so after a bounded search.
func TestTrialsThatCannotBe(t *testing.T) {
	for text, want := range map[string]string{
		`"vary": {"start": [{"from_m": [0, 0], "to_m": [0.2, 0.2]}]}`:                                         "no free place for the start",
		`"vary": {"goal": [{"from_m": [1, 1], "to_m": [3, 3]}], "apart_m": 6}`:                                "no free place for the goal",
		`"vary": {"numbers": [{"path": "robot.track_m", "kind": "list", "values": [3]}]}`:                     "wider than the hull",
		`"vary": {"numbers": [{"path": "robot.radius_m", "kind": "list", "values": [1.5]}]}`:                  "no room",
		`"vary": {"numbers": [{"path": "robot.wheel_lag_s", "kind": "normal", "mean": 0, "deviation": 1e9}]}`: "draws about",
	} {
		full := extended(text)
		trials := trialsOf(t, full)
		_, err := trials.Trial(3)
		if err == nil || !strings.Contains(err.Error(), want) || !strings.HasPrefix(err.Error(), "trial 3: ") {
			t.Errorf("%s: %v, want %q", text, err, want)
		}
	}
}
