// Package brief writes a scenario as sentences: what robot drives where, by what
// logic, and what is asked of it. The numbers and choices in them keep the paths
// of their fields, so that a page can let a person change them in place; [Text]
// is the same sentences to read.
package brief

import (
	"strconv"
	"strings"

	"leeway/sim/scenario"
)

// Part is a piece of the brief: a text, or a number or a choice of the scenario.
type Part struct {
	Text   string `json:"text,omitempty"`
	Number string `json:"number,omitempty"` // path of the field
	Choice string `json:"choice,omitempty"` // path of the field

	Value    any      `json:"value,omitempty"` // a float64 or a string
	Unit     string   `json:"unit,omitempty"`
	Min      *float64 `json:"min,omitempty"`
	Max      *float64 `json:"max,omitempty"`
	Step     float64  `json:"step,omitempty"`
	Decimals *int     `json:"decimals,omitempty"`
	Options  []Option `json:"options,omitempty"`
	Applies  string   `json:"applies,omitempty"` // "now" or "restart"
	Label    string   `json:"label,omitempty"`
}

// Option is one value of a choice.
type Option struct {
	Value string `json:"value"`
	Label string `json:"label"`
}

// Of returns the brief of a valid scenario.
func Of(sc *scenario.Scenario) []Part {
	w := &writer{sc: sc}
	r := &sc.Robot
	wheels := r.Motion == "two_wheels"

	w.say("A robot of radius ", "robot.radius_m", " moves ", "robot.motion")
	if wheels {
		w.say(" ", "robot.track_m", " apart")
	}
	w.say(" at ", "robot.speed_m_s")
	if wheels {
		w.say(" with a wheel lag of ", "robot.wheel_lag_s")
	}
	w.say(", sees ")
	if len(sc.Ring.Bearings) == 0 {
		w.say("", "ring.beams")
	} else {
		w.text("beams at bearings of its own")
	}
	w.say(" out to ", "ring.range_max_m", " give or take ", "ring.noise_m", ", finds its way by ", "robot.position")
	w.say(", and must reach the goal within ", "asked.within_s", " keeping ", "asked.leeway_m", " of leeway.")

	if r.Motion != "point" {
		w.say(" Steered by ", "robot.steering")
		if r.Steering == "look_ahead" {
			w.say(" ", "robot.look_ahead_m", " ahead")
		} else {
			w.say(" of gain ", "robot.steering_gain_per_s", ", it turns ", "robot.speed_law")
		}
		if wheels {
			w.say("; a wheel at its limit ", "robot.saturation")
		}
		w.say(".")
	}
	if sc.Logic.Kind == "default" {
		w.say(" It takes notice of what is nearer than ", "logic.notice_m", ", follows a wall at ", "logic.stand_off_m",
			" on ", "logic.side", ", and backs off below ", "logic.safe_m", ".")
	} else {
		w.text(" Its logic is a table of its own: " + sc.Logic.Name + ".")
	}
	w.say(" A touch ", "on_contact", ". Chance has the seed ", "seed", ".")
	if len(sc.Ideal) > 0 {
		w.text(" Idealised: " + strings.ReplaceAll(strings.Join(sc.Ideal, ", "), "_", " ") + ".")
	}
	return w.parts
}

type writer struct {
	sc    *scenario.Scenario
	parts []Part
}

// say adds texts and fields in turn.
func (w *writer) say(pieces ...string) {
	for i, p := range pieces {
		if i%2 == 0 {
			w.text(p)
		} else {
			w.field(p)
		}
	}
}

func (w *writer) text(s string) {
	if s == "" {
		return
	}
	if n := len(w.parts); n > 0 && w.parts[n-1].Number == "" && w.parts[n-1].Choice == "" {
		w.parts[n-1].Text += s
		return
	}
	w.parts = append(w.parts, Part{Text: s})
}

func (w *writer) field(path string) {
	f, ok := scenario.FieldAt(path)
	if !ok {
		return
	}
	p := Part{Label: f.Label, Applies: "restart"}
	if f.Live || f.Asked {
		p.Applies = "now"
	}
	if f.Options != nil {
		v, err := w.sc.ChoiceAt(path)
		if err != nil {
			return
		}
		p.Choice, p.Value = path, v
		for _, o := range f.Options {
			p.Options = append(p.Options, Option(o))
		}
	} else {
		v, err := w.sc.NumberAt(path)
		if err != nil {
			return
		}
		p.Number, p.Value, p.Unit, p.Min, p.Max, p.Step, p.Decimals = path, v, f.Unit, &f.Min, &f.Max, f.Step, &f.Decimals
	}
	w.parts = append(w.parts, p)
}

// Shown returns the value of a number or a choice as it is read, without its unit;
// of a text, the text.
func (p Part) Shown() string {
	switch v := p.Value.(type) {
	case float64:
		decimals := -1
		if p.Decimals != nil {
			decimals = *p.Decimals
		}
		return strconv.FormatFloat(v, 'f', decimals, 64)
	case string:
		for _, o := range p.Options {
			if o.Value == v {
				return o.Label
			}
		}
		return v
	}
	return p.Text
}

// Text returns the brief as it is read.
func Text(parts []Part) string {
	var b strings.Builder
	for _, p := range parts {
		b.WriteString(p.Shown())
		if p.Number != "" && p.Unit != "" {
			b.WriteString(" " + p.Unit)
		}
	}
	return b.String()
}
