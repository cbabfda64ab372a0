package draw

import (
	"strings"
	"testing"
)

func TestShadowsDifferByPattern(t *testing.T) {
	f := sample()
	f.Traces = []Trace{
		{Pattern: Dotted, Points: []Point{{1, 4}, {11, 4}}},
		{Pattern: Dashed, Points: []Point{{1, 4}, {1, 1}}},
		{Pattern: Dashed},
	}
	s := render(t, f, Options{Longest: 1200, Paint: Ink})
	for _, want := range []string{
		`<polyline points="106,406 1106,406" stroke-width="2.2" stroke-dasharray="0 4.6"/>`,
		`<circle cx="1106" cy="406" r="21" stroke-width="2.2" stroke-dasharray="0 4.6"/>`, // its hull
		`<polyline points="106,406 106,706" stroke-width="1.7" stroke-dasharray="7 5"/>`,
	} {
		if !strings.Contains(s, want) {
			t.Errorf("no %s", want)
		}
	}
	if strings.Index(s, "stroke-dasharray=\"7 5\"") > strings.Index(s, `stroke="#2c5bd4"`) {
		t.Error("the shadows lie above the robot's way")
	}
}
