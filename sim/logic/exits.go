package logic

import (
	"math"
	"unicode"
	"unicode/utf8"
)

// Gauge is one condition of an exit as it stands now.
type Gauge struct {
	Label string // "the gap on the way to the goal"
	Text  string // "0.44 ≥ 0.53 m"
	Met   bool

	// On a scale from 0 to 1: where the value is, where the threshold is, and how far the release band reaches
	// beyond it (equal to Mark without one).
	Share, Mark, Release float64
}

// Exit is a way out of the current mode.
type Exit struct {
	Transition int
	To         int     // mode
	Gauges     []Gauge // all must be met
	Hold       float64 // s for which they must have been; 0: none
	Held       float64 // s for which they have been
}

// gaugeSpan is how much of its threshold a gauge shows: 1 is the threshold itself.
const gaugeSpan = 2.5

// Exits returns the ways out of the current mode in order of priority, each with its conditions as they stood at the
// last Decide, which was at time now. A minimum time in the mode is shown as a condition. For display: it allocates.
func (e *Engine) Exits(now float64) []Exit {
	var out []Exit
	k := 0
	for i := range e.l.Transitions {
		t := &e.l.Transitions[i]
		if !e.l.leaves(t, e.mode) {
			k += len(t.When)
			continue
		}
		x := Exit{Transition: i, To: t.To, Hold: t.Hold}
		if t.Hold > 0 && !math.IsNaN(e.whole[i]) {
			x.Held = max(0, now-e.whole[i])
		}
		asksTime := false
		for j := range t.When {
			asksTime = asksTime || t.When[j].Reading == TimeInMode
			x.Gauges = append(x.Gauges, t.When[j].gauge(&e.readings, e.held[k]))
			k++
		}
		if t.MinTime > 0 && !asksTime {
			c := Condition{Reading: TimeInMode, Rel: AtLeast, Threshold: t.MinTime}
			r := e.readings
			r[TimeInMode] = now - e.since
			x.Gauges = append(x.Gauges, c.gauge(&r, false))
		}
		out = append(out, x)
	}
	return out
}

// gauge shows the condition for the readings; held says whether it held at the last look.
func (c *Condition) gauge(r *[NumReadings]float64, held bool) Gauge {
	if c.Reading >= NumReadings {
		return Gauge{}
	}
	p, value, bound := &phrases[c.Reading], r[c.Reading], c.bound(r)
	full := gaugeSpan * math.Abs(bound)
	if full == 0 {
		full = 1
	}
	place := func(x float64) float64 { return min(max(x/full, 0), 1) }
	sign, release := " < ", bound+c.Band
	if c.Rel == AtLeast {
		sign, release = " ≥ ", bound-c.Band
	}
	_, limit := p.pair(value, bound)
	shown := p.bare(value, bound)
	label := p.noun
	if first, n := utf8.DecodeRuneInString(label); n > 0 {
		label = string(unicode.ToUpper(first)) + label[n:]
	}
	return Gauge{
		Label: label, Text: shown + sign + limit, Met: c.holds(r, held),
		Share: place(value), Mark: place(bound), Release: place(release),
	}
}

// bare writes a value without its unit, with as many decimals as it takes to tell it from what it is compared with.
func (q quantity) bare(a, b float64) string {
	short := q
	short.s = ""
	d := q.decimals
	for d < 6 && a != b && q.with(d, a) == q.with(d, b) {
		d++
	}
	return short.with(d, a)
}
