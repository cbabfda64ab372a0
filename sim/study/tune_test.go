package study_test

import (
	"math"
	"testing"

	. "leeway/sim/study"
	"leeway/sim/study/stat"
)

// Tuning the speed of the robot that must stop before a wall, for time: as fast as it
// may go, and no faster.
func TestTuneFindsTheFastestSafeSpeed(t *testing.T) {
	family := braking(t)
	p := TunePlan{
		Axes: []Axis{{Path: "speed", Low: 0.3, High: 3}}, Reward: LessTime,
		N: 3, Fresh: 12, Settings: 60, Seed: 4, Confidence: 0.95, Within: 60,
	}
	x, err := RunTune(ctx, &Runner{}, family, []float64{0.5}, p)
	if err != nil {
		t.Fatal(err)
	}
	best := x.Tried[x.Best].Values[0]
	if limit := math.Sqrt(2 * sightGap * decel); best > limit || best < 0.93*limit {
		t.Errorf("the best of %d speeds is %v, the limit %v", len(x.Tried), best, limit)
	}
	if len(x.Tried) > p.Settings+5 || x.Before.N != 12 || x.After.N != 12 || x.After.Time.Mean >= x.Before.Time.Mean || x.Fresh.OnlyFirst > 2 {
		t.Errorf("%d settings; before %+v, after %+v", len(x.Tried), x.Before, x.After)
	}
}

func TestCheck(t *testing.T) {
	s := posts(t)
	for _, x := range []struct {
		target float64
		want   stat.Verdict
	}{{0.1, stat.Accept}, {0.97, stat.Reject}} {
		c, err := RunCheck(ctx, &Runner{}, s, CheckPlan{Target: x.target, Confidence: 0.9, Budget: 200})
		if err != nil {
			t.Fatal(err)
		}
		if c.Verdict != x.want || c.Trials.N > 200 {
			t.Errorf("success of %g: %v after %d trials with bounds %v", x.target, c.Verdict, c.Trials.N, c.Bounds)
		}
	}
	few, err := RunCheck(ctx, &Runner{}, s, CheckPlan{Target: 0.6, Confidence: 0.99, Budget: 6})
	if err != nil || few.Verdict != stat.Undecided || few.Trials.N != 6 {
		t.Errorf("six runs: %+v, %v", few, err)
	}
}
