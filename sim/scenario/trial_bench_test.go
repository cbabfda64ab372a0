package scenario

import (
	"os"
	"testing"
)

// What it takes to draw a trial of the largest shipped floor, beside running it.
func BenchmarkTrialConfig(b *testing.B) {
	text, err := os.ReadFile("../../scenarios/office.json")
	if err != nil {
		b.Fatal(err)
	}
	s := mustParse(b, string(text))
	s.Vary = Vary{Start: []Region{{To: Point{s.Floor.Width, s.Floor.Height}}}, Turn: 180, Goal: []Region{{To: Point{s.Floor.Width, s.Floor.Height}}}, Apart: 10}
	trials, err := s.Trials()
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	i := 0
	for b.Loop() {
		if _, _, err := trials.Config(i); err != nil {
			b.Fatal(err)
		}
		i++
	}
}
