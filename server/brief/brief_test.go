package brief_test

import (
	"strings"
	"testing"

	"leeway/scenarios"
	"leeway/server/brief"
	"leeway/sim/scenario"
)

func TestBriefOfADefaultRobot(t *testing.T) {
	got := brief.Text(brief.Of(scenario.New(12, 8)))
	want := "A robot of radius 0.21 m moves on two wheels 0.30 m apart at 0.45 m/s with a wheel lag of 0.08 s, " +
		"sees 16 beams out to 3.00 m give or take 0.010 m, finds its way by dead reckoning, " +
		"and must reach the goal within 90 s keeping 0.05 m of leeway. " +
		"Steered by heading servo of gain 3.0 1/s, it turns slowing by the cosine; a wheel at its limit keeps the curve. " +
		"It takes notice of what is nearer than "
	if !strings.HasPrefix(got, want) {
		t.Errorf("got  %s\nwant %s…", got, want)
	}
}

// What a robot does not have is not spoken of.
func TestBriefLeavesOutWhatIsNotThere(t *testing.T) {
	sc := scenario.New(12, 8)
	sc.Robot.Motion = "point"
	sc.Ring.Bearings, sc.Ring.Beams = []float64{0, 20, -20}, 3
	sc.Ideal = []string{"true_position", "noiseless_sight"}
	got := brief.Text(brief.Of(sc))
	for _, never := range []string{"apart", "wheel", "Steered"} {
		if strings.Contains(got, never) {
			t.Errorf("a point is said to have: %s\n%s", never, got)
		}
	}
	for _, want := range []string{"moves as a point at", "beams at bearings of its own", "Idealised: true position, noiseless sight."} {
		if !strings.Contains(got, want) {
			t.Errorf("no %q in %s", want, got)
		}
	}
}

// Every number and choice of a brief is a field that can be changed, shown as it is.
func TestPartsAreFields(t *testing.T) {
	for _, e := range scenarios.All() {
		sc, err := scenario.Parse(e.Data)
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range brief.Of(sc) {
			switch {
			case p.Number != "":
				if v, err := sc.NumberAt(p.Number); err != nil || v != p.Value || p.Label == "" {
					t.Errorf("%s: %s is %v, and the brief says %v (%v)", e.Slug, p.Number, v, p.Value, err)
				}
			case p.Choice != "":
				if v, err := sc.ChoiceAt(p.Choice); err != nil || v != p.Value || p.Shown() == v && strings.Contains(v, "_") {
					t.Errorf("%s: %s is %v, and the brief says %v (%v)", e.Slug, p.Choice, v, p.Value, err)
				}
			case p.Text == "":
				t.Errorf("%s: an empty part", e.Slug)
			}
		}
	}
}
