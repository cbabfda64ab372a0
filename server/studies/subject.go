package studies

import (
	"fmt"

	"leeway/sim/scenario"
	"leeway/sim/study"
)

// The acceptance where a scenario says nothing.
const (
	DefaultSuccess    = 0.9
	DefaultConfidence = 0.95
)

// Subject is a scenario under study.
type Subject struct {
	Scenario *scenario.Scenario
	Trials   *scenario.Trials
}

// New takes a valid scenario; the error is that of [scenario.Scenario.Trials].
func New(s *scenario.Scenario) (*Subject, error) {
	t, err := s.Trials()
	if err != nil {
		return nil, err
	}
	return &Subject{s, t}, nil
}

// Success returns the share of trials that must do what is asked, and the
// confidence with which that must be shown.
func (s *Subject) Success() (share, confidence float64) {
	share, confidence = s.Scenario.Asked.Success, s.Scenario.Asked.Confidence
	if share == 0 {
		share = DefaultSuccess
	}
	if confidence == 0 {
		confidence = DefaultConfidence
	}
	return share, confidence
}

// Family returns the sources of the settings of some numbers.
func (s *Subject) Family(axes []study.Axis) study.Family {
	return func(values []float64) (study.Source, error) {
		settings := make([]scenario.Setting, len(axes))
		for i := range axes {
			settings[i] = scenario.Setting{Path: axes[i].Path, Value: values[i]}
		}
		return s.Trials.With(settings...)
	}
}

// Axis makes the axis of a number; low and high must be within what it may be.
func (s *Subject) Axis(path string, low, high float64, steps int) (study.Axis, error) {
	f, _, whole, err := s.Scenario.Number(path)
	if err != nil {
		return study.Axis{}, err
	}
	if !(low >= f.Min && high <= f.Max) {
		return study.Axis{}, fmt.Errorf("%s must be between %g and %g %s; %g to %g was asked for", path, f.Min, f.Max, f.Unit, low, high)
	}
	return study.Axis{Path: path, Low: low, High: high, Steps: steps, Whole: whole}, nil
}

// Grid returns the cells that the density of the ways is counted in.
func (s *Subject) Grid() *study.Grid {
	return study.NewGrid(s.Scenario.Floor.Width, s.Scenario.Floor.Height, 96)
}

// Link returns the link data of a trial, "" when there is none.
func (s *Subject) Link(trial int) string {
	t, err := s.Trials.Trial(trial)
	if err != nil {
		return ""
	}
	return t.Encode()
}
