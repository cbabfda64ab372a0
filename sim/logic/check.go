package logic

import (
	"fmt"
	"math"
)

// Problem is one fault of a logic: the field path inside it, named as in files
// ("transitions[2].when[0].threshold"), and a sentence.
type Problem struct{ Path, Text string }

// Check returns every fault that keeps the logic from running, all at once; none
// for a valid logic.
func (l *Logic) Check() []Problem {
	k := &checker{}
	if len(l.Modes) == 0 {
		k.add("modes", "A logic needs at least one mode.")
	}
	if l.Start < 0 || l.Start >= len(l.Modes) {
		k.add("start", "The mode to start in is number %d, and there are %d.", l.Start, len(l.Modes))
	}
	if !(l.Sector >= 0 && l.Sector <= math.Pi) {
		k.add("sector_deg", "The half width of the sectors must lie between 0° and 180°.")
	}
	k.notNegative("margin_m", "The margin", l.Margin)
	names := map[string]int{}
	for i := range l.Modes {
		k.mode(fmt.Sprintf("modes[%d]", i), &l.Modes[i])
		if j, taken := names[l.Modes[i].Name]; taken {
			k.add(fmt.Sprintf("modes[%d].name", i), "Mode number %d has the same name, %q.", j, l.Modes[i].Name)
		} else {
			names[l.Modes[i].Name] = i
		}
	}
	for i := range l.Transitions {
		k.transition(fmt.Sprintf("transitions[%d]", i), l, &l.Transitions[i])
	}
	return k.list
}

type checker struct{ list []Problem }

func (k *checker) add(path, text string, args ...any) {
	k.list = append(k.list, Problem{path, fmt.Sprintf(text, args...)})
}

func (k *checker) notNegative(path, what string, x float64) {
	if !(x >= 0) || math.IsInf(x, 1) {
		k.add(path, "%s must be a finite number, 0 or more.", what)
	}
}

func (k *checker) mode(at string, m *Mode) {
	if m.Name == "" {
		k.add(at+".name", "A mode needs a name.")
	}
	if m.Behaviour >= numBehaviours {
		k.add(at+".behaviour", "There is no behaviour number %d.", m.Behaviour)
	}
	if m.Ending >= numEndings {
		k.add(at+".ending", "There is no ending number %d.", m.Ending)
	}
	if m.Side >= numSideRules {
		k.add(at+".side", "There is no side rule number %d.", m.Side)
	}
	k.notNegative(at+".stand_off_m", "The gap to hold", m.StandOff)
	k.notNegative(at+".goal_gain_per_s", "The goal gain", m.GoalGain)
	if !(m.Speed >= 0 && m.Speed <= 1) {
		k.add(at+".speed_share", "The share of the speed must lie between 0 and 1.")
	}
}

func (k *checker) transition(at string, l *Logic, t *Transition) {
	n := len(l.Modes)
	if t.From != AnyMode {
		if t.From < 0 || t.From >= n {
			k.add(at+".from", "It leaves mode number %d, and there are %d.", t.From, n)
		} else if l.Modes[t.From].Ending != GoesOn {
			k.add(at+".from", "It leaves %s, which ends the run.", l.Modes[t.From].Name)
		}
	}
	if t.To < 0 || t.To >= n {
		k.add(at+".to", "It enters mode number %d, and there are %d.", t.To, n)
	}
	k.notNegative(at+".min_time_s", "The least time in the mode", t.MinTime)
	k.notNegative(at+".hold_s", "The holding time", t.Hold)
	if len(t.When) == 0 && t.MinTime == 0 && t.Hold == 0 {
		k.add(at+".when", "Without a condition or a time it would fire at once.")
	}
	for i := range t.When {
		k.condition(fmt.Sprintf("%s.when[%d]", at, i), &t.When[i])
	}
}

func (k *checker) condition(at string, c *Condition) {
	if c.Reading >= NumReadings {
		k.add(at+".reading", "There is no reading number %d.", c.Reading)
	}
	if c.Rel >= numRelations {
		k.add(at+".relation", "There is no relation number %d.", c.Rel)
	}
	if math.IsNaN(c.Threshold) || math.IsInf(c.Threshold, 0) {
		k.add(at+".threshold", "The threshold must be a finite number.")
	}
	k.notNegative(at+".band", "The release band", c.Band)
	if c.HasAgainst {
		switch {
		case c.Against >= NumReadings:
			k.add(at+".against", "There is no reading number %d.", c.Against)
		case c.Against == c.Reading:
			k.add(at+".against", "A reading compared with itself says nothing.")
		}
	}
}
