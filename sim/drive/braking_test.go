package drive_test

import (
	"math"
	"testing"

	"leeway/sim/drive"
	"leeway/sim/truth"

	"pgregory.net/rapid"
)

func TestBraking(t *testing.T) {
	t.Run("K-07 bang-bang closed form", func(t *testing.T) {
		want := truth.Values(t, "K-07", "T")
		truth.Close(t, "T long", drive.RestToRest(1.2, 0.3, 0.5), want[0], 1e-12)
		truth.Close(t, "T short", drive.RestToRest(0.1, 0.3, 0.5), want[1], 1e-12)
	})
	t.Run("B-01 kinematics", func(t *testing.T) {
		truth.Close(t, "d", drive.StoppingDistance(0.8, 1.2, 0.25), truth.Value(t, "B-01", "d"), 1e-12)
	})
	t.Run("B-02 derived", func(t *testing.T) {
		truth.Close(t, "v", drive.SafeSpeed(0.8-0.05, 0.5, 0.3), truth.Value(t, "B-02", "v"), 1e-12)
	})
	t.Run("B-03 derived", func(t *testing.T) {
		truth.Close(t, "d", drive.Overrun(0.5, 0.1, 0.2), truth.Value(t, "B-03", "d"), 1e-12)
	})
	t.Run("B-04 Fox, Burgard & Thrun 1997, eq. 14", func(t *testing.T) {
		want := truth.Values(t, "B-04", "v,ω")
		truth.Close(t, "v", drive.AdmissibleSpeed(0.45, 0.5), want[0], 1e-12)
		truth.Close(t, "ω", drive.AdmissibleSpeed(1.2, 3), want[1], 1e-12)
	})
	t.Run("B-08 derived", func(t *testing.T) {
		d := drive.StoppingDistance(0.4, 0.8, drive.WorstReaction(0.1, 0.12, 0.05))
		truth.Close(t, "d", d, truth.Value(t, "B-08", "d"), 1e-12)
	})
}

func TestBrakingAtItsEdges(t *testing.T) {
	for what, c := range map[string][2]float64{
		"nothing seen":            {drive.SafeSpeed(0, 1, 0.2), 0},
		"less than nothing seen":  {drive.SafeSpeed(-0.1, 1, 0.2), 0},
		"no brakes":               {drive.SafeSpeed(1, 0, 0.2), 0},
		"no reaction time":        {drive.SafeSpeed(0.45, 0.5, 0), drive.AdmissibleSpeed(0.45, 0.5)},
		"brakes like a wall":      {drive.SafeSpeed(1, math.Inf(1), 0.5), 2},
		"no distance":             {drive.AdmissibleSpeed(-1, 2), 0},
		"backwards stops as far":  {drive.StoppingDistance(-0.8, 1.2, 0.25), drive.StoppingDistance(0.8, 1.2, 0.25)},
		"backwards overruns, too": {drive.Overrun(-1, 0.1, 0.1), 0.2},
		"no move":                 {drive.RestToRest(0, 1, 1), 0},
		"no speed limit":          {drive.RestToRest(2, math.Inf(1), 2), 2},
	} {
		within(t, what, c[0], c[1], 1e-15)
	}
}

func TestSafeSpeedInvertsStoppingDistance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		reach := rapid.Float64Range(1e-9, 50).Draw(t, "reach")
		a := rapid.Float64Range(0.01, 20).Draw(t, "a")
		reaction := rapid.Float64Range(0, 5).Draw(t, "t")
		v := drive.SafeSpeed(reach, a, reaction)
		if d := drive.StoppingDistance(v, a, reaction); math.Abs(d-reach) > 1e-12*reach {
			t.Fatalf("stops in %v m of %v m", d, reach)
		}
	})
}
