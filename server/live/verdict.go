package live

import (
	"math"
	"strconv"

	"leeway/sim"
	"leeway/sim/logic"
	"leeway/sim/shadow"
)

// shadowNow is where a shadow is.
type shadowNow struct {
	Pose   [3]float64
	Mode   int
	Side   int
	Status string
	Gap    float64
}

// exitNow is a way out of the robot's mode.
type exitNow struct {
	To     int // mode
	Name   string
	Hold   float64 // s
	Held   float64 // s
	Gauges []logic.Gauge
}

// verdict compares the models so far.
type verdict struct {
	Shortest    float64 // m; NaN: there is no such way, or it is not known
	ShortestWhy string  // then, why
	Models      []measures
}

// measures is one model so far. The distances are from the robot; the robot has none.
type measures struct {
	Who         shadow.Who
	Status      string
	Time        float64 // s, when it ended, or now
	Leeway      float64 // m; not finite: nothing was near
	Way         float64 // m
	Switches    int
	Contacts    int
	Saturated   float64 // share of the time
	Estimate    float64 // m
	Largest     float64 // m
	LargestAt   float64 // s
	RMS         float64 // m
	Parting     string  // the most telling, in a sentence
	PartingTick int64
}

// fillShadows says where the shadows are.
func (f *frame) fillShadows(set *shadow.Set) {
	f.Shadows = f.Shadows[:0]
	for w := shadow.Robot + 1; w < shadow.Models; w++ {
		r := set.Run(w)
		if r == nil {
			return
		}
		p := r.Pose()
		f.Shadows = append(f.Shadows, shadowNow{
			[3]float64{p.Pos.X, p.Pos.Y, p.Theta}, r.Engine().Mode(), int(r.Engine().Side()), r.Status().String(), r.Gap(),
		})
	}
}

// fillExits says how each way out of the robot's mode stood at its last decision.
// There is nothing to say before the first, nor when a change has just set an ended
// run going anew: its logic has no readings yet.
func (f *frame) fillExits(r *sim.Run) {
	f.Exits = f.Exits[:0]
	if *r.Engine().Readings() == ([logic.NumReadings]float64{}) {
		return
	}
	c := r.Config()
	every := int64(c.DecideEvery)
	decided := float64((r.Outcome().Ticks-1)/every*every) * c.Tick
	for _, x := range r.Engine().Exits(decided) {
		f.Exits = append(f.Exits, exitNow{x.To, c.Logic.Modes[x.To].Name, x.Hold, x.Held, x.Gauges})
	}
}

// fillModels says how each model has done so far.
func (v *verdict) fillModels(set *shadow.Set) {
	v.Models = v.Models[:0]
	for w := range shadow.Models {
		r := set.Run(w)
		if r == nil {
			return
		}
		o, d := r.Outcome(), set.Deviation(w)
		m := measures{
			Who: w, Status: o.Status.String(), Time: o.Time, Leeway: o.Leeway, Way: o.Way, Switches: o.Switches, Contacts: o.Contacts,
			Saturated: o.Saturated, Estimate: o.EstimateError, Largest: d.Largest, LargestAt: d.At, RMS: d.RMS,
		}
		if p, ok := shadow.MostTelling(set.Partings(w)); ok {
			m.Parting, m.PartingTick = p.Text, p.Tick
		}
		v.Models = append(v.Models, m)
	}
}

func appendShadows(b []byte, shadows []shadowNow) []byte {
	b = append(b, '[')
	for i := range shadows {
		x := &shadows[i]
		if i > 0 {
			b = append(b, ',')
		}
		b = append(b, `{"pose":`...)
		b = appendList(b, x.Pose[:])
		b = appendCount(b, "mode", x.Mode)
		b = appendCount(b, "side", x.Side)
		b = append(b, `,"status":`...)
		b = appendText(b, x.Status)
		b = appendField(b, "gap", x.Gap)
		b = append(b, '}')
	}
	return append(b, ']')
}

func appendExits(b []byte, exits []exitNow) []byte {
	b = append(b, '[')
	for i := range exits {
		x := &exits[i]
		if i > 0 {
			b = append(b, ',')
		}
		b = append(b, `{"to":`...)
		b = strconv.AppendInt(b, int64(x.To), 10)
		b = append(b, `,"name":`...)
		b = appendText(b, x.Name)
		b = appendField(b, "hold", x.Hold)
		b = appendField(b, "held", x.Held)
		b = append(b, `,"gauges":[`...)
		for k := range x.Gauges {
			if k > 0 {
				b = append(b, ',')
			}
			b = appendGauge(b, &x.Gauges[k])
		}
		b = append(b, "]}"...)
	}
	return append(b, ']')
}

func appendGauge(b []byte, g *logic.Gauge) []byte {
	b = append(b, `{"label":`...)
	b = appendText(b, g.Label)
	b = append(b, `,"text":`...)
	b = appendText(b, g.Text)
	b = append(b, `,"met":`...)
	b = strconv.AppendBool(b, g.Met)
	b = appendField(b, "share", g.Share)
	b = appendField(b, "mark", g.Mark)
	b = appendField(b, "release", g.Release)
	return append(b, '}')
}

func (v *verdict) append(b []byte) []byte {
	b = append(b, `{"shortest":`...)
	b = appendNumber(b, v.Shortest)
	if math.IsNaN(v.Shortest) {
		b = append(b, `,"shortest_why":`...)
		b = appendText(b, v.ShortestWhy)
	}
	b = append(b, `,"models":[`...)
	for i := range v.Models {
		if i > 0 {
			b = append(b, ',')
		}
		b = v.Models[i].append(b)
	}
	return append(b, "]}"...)
}

func (m *measures) append(b []byte) []byte {
	b = append(b, `{"who":`...)
	b = strconv.AppendInt(b, int64(m.Who), 10)
	b = append(b, `,"status":`...)
	b = appendText(b, m.Status)
	b = appendField(b, "time", m.Time)
	b = appendField(b, "leeway", m.Leeway)
	b = appendField(b, "way", m.Way)
	b = appendCount(b, "switches", m.Switches)
	b = appendCount(b, "contacts", m.Contacts)
	b = appendField(b, "saturated", m.Saturated)
	b = appendField(b, "estimate_error", m.Estimate)
	b = appendField(b, "largest", m.Largest)
	b = appendField(b, "largest_at", m.LargestAt)
	b = appendField(b, "rms", m.RMS)
	b = append(b, `,"parting":`...)
	b = appendText(b, m.Parting)
	b = append(b, `,"parting_tick":`...)
	b = strconv.AppendInt(b, m.PartingTick, 10)
	return append(b, '}')
}
