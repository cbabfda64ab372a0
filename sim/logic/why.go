package logic

import (
	"fmt"
	"math"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Why says in one sentence why the switch s happened, with its numbers:
// "Something stood 0.47 m away on the way to the goal, nearer than 0.50 m." For
// nil, before the first switch, it says that this is where the logic starts.
func (l *Logic) Why(s *Switch) string {
	if s == nil {
		return "This is where the logic starts."
	}
	if s.Transition < 0 || s.Transition >= len(l.Transitions) {
		return "This table has no such transition."
	}
	t := &l.Transitions[s.Transition]
	var parts []string
	asksTime := false
	for i := range t.When {
		c := &t.When[i]
		asksTime = asksTime || c.Reading == TimeInMode && c.Rel == AtLeast
		parts = append(parts, c.clause(&s.Readings))
	}
	if t.MinTime > 0 && !asksTime {
		c := Condition{Reading: TimeInMode, Rel: AtLeast, Threshold: t.MinTime}
		parts = append(parts, c.clause(&s.Readings))
	}
	if len(parts) == 0 {
		parts = []string{"nothing is asked for by this transition"}
	}
	text := join(parts)
	if t.Hold > 0 {
		text += fmt.Sprintf(", and that for %s", quantity{s: "s", decimals: 1}.show(t.Hold))
	}
	first, n := utf8.DecodeRuneInString(text)
	return string(unicode.ToUpper(first)) + text[n:] + "."
}

// join makes one sentence of clauses that have commas of their own.
func join(parts []string) string {
	n := len(parts)
	if n == 1 {
		return parts[0]
	}
	return strings.Join(parts[:n-1], "; ") + "; and " + parts[n-1]
}

// quantity is how the values of a reading are written.
type quantity struct {
	s        string  // unit, with its own spacing
	decimals int     // at least
	scale    float64 // from the value inside to the value shown; 0 means 1
}

var (
	metres  = quantity{s: "m", decimals: 2}
	seconds = quantity{s: "s", decimals: 1}
	degrees = quantity{s: "°", decimals: 0, scale: 180 / math.Pi}
	number  = quantity{decimals: 2}
)

func (q quantity) show(x float64) string { return q.with(q.decimals, x) }

func (q quantity) with(decimals int, x float64) string {
	if q.scale != 0 {
		x *= q.scale
	}
	text := fmt.Sprintf("%.*f", decimals, x)
	if strings.HasPrefix(text, "-") {
		text = "−" + text[1:]
		if strings.Trim(text, "−0.") == "" {
			text = strings.TrimPrefix(text, "−")
		}
	}
	switch q.s {
	case "", "°":
		return text + q.s
	}
	return text + " " + q.s
}

// pair writes a value and what it is compared with, with as many decimals as it
// takes to tell them apart.
func (q quantity) pair(a, b float64) (string, string) {
	d := q.decimals
	for d < 6 && a != b && q.with(d, a) == q.with(d, b) {
		d++
	}
	return q.with(d, a), q.with(d, b)
}

// phrase is how a reading is spoken of. %s stands for the value.
type phrase struct {
	quantity
	below   string // the value, where little of it is asked for
	atLeast string // the value, where much is asked for; empty: as below
	less    string // what being below is called; empty: "less than"
	noun    string // the reading, as something to compare with
}

var phrases = [NumReadings]phrase{
	GoalDistance:     {metres, "the goal was %s away", "", "nearer than", "the goal distance"},
	GoalBearing:      {degrees, "the goal lay %s off the heading", "", "", "the goal's bearing"},
	Nearest:          {metres, "the nearest thing stood %s away", "nothing stood nearer than %s", "nearer than", "the smallest gap"},
	Ahead:            {metres, "something stood %s away on the way to the goal", "nothing on the way to the goal stood nearer than %s", "nearer than", "the gap on the way to the goal"},
	Front:            {metres, "something stood %s away in front", "nothing in front stood nearer than %s", "nearer than", "the gap in front"},
	Left:             {metres, "something stood %s away on the left", "nothing on the left stood nearer than %s", "nearer than", "the gap on the left"},
	Right:            {metres, "something stood %s away on the right", "nothing on the right stood nearer than %s", "nearer than", "the gap on the right"},
	FreeWay:          {metres, "the way straight to the goal was free for %s", "", "", "the free way toward the goal"},
	BestDistance:     {metres, "the nearest it had been to the goal was %s", "", "", "the best goal distance"},
	Gain:             {metres, "straight on it could get %s nearer to the goal than it had been", "", "", "the gain"},
	Alignment:        {number, "the way to the goal agreed with the way out of the obstacles by %s", "", "", "the agreement of the ways"},
	TimeInMode:       {seconds, "it had been %s in the mode", "", "", "the time in the mode"},
	WayInMode:        {metres, "it had driven %s in the mode", "", "", "the way driven in the mode"},
	Closed:           {number, "the boundary had not been followed back to where it was met", "the boundary had been followed back to where it was met", "", "the closing of the boundary"},
	MeetDistance:     {metres, "the obstacle was met %s from the goal", "", "nearer than", "the goal distance at the meeting"},
	TimeSinceMeeting: {seconds, "the obstacle had been met %s before", "", "", "the time since the meeting"},
	LineOffset:       {metres, "it was %s off the straight line to the goal", "", "", "the distance off the straight line"},
}

// clause says that the condition held, with its numbers.
func (c *Condition) clause(r *[NumReadings]float64) string {
	if c.Reading >= NumReadings {
		return "an unknown reading was looked at"
	}
	p := &phrases[c.Reading]
	say := p.below
	if c.Rel == AtLeast && p.atLeast != "" {
		say = p.atLeast
	}
	if c.Reading == Closed && !c.HasAgainst && c.Threshold > 0 && c.Threshold <= 1 {
		return say
	}
	compare := "at least"
	if c.Rel == Below {
		compare = "less than"
		if p.less != "" {
			compare = p.less
		}
	}
	value := r[c.Reading]
	bound := c.bound(r)
	shown, limit := p.pair(value, bound)
	if c.Reading == Gain && value < 0 {
		say, shown = "straight on it would stay %s farther from the goal than it had been", p.with(2, -value)
		limit = "a gain of " + limit
	}
	if !strings.Contains(say, "%s") {
		say = p.noun + " was %s"
	}
	if c.HasAgainst && c.Against < NumReadings {
		limit = c.sum(p.quantity, r)
	}
	text := fmt.Sprintf(say, shown)
	if c.holds(r, false) {
		return text + ", " + compare + " " + limit
	}
	// It went on holding by its release band.
	release := bound + c.Band
	if c.Rel == AtLeast {
		release = bound - c.Band
	}
	return fmt.Sprintf("%s, and had been %s %s and not yet beyond %s", text, compare, limit, p.show(release))
}

// sum writes another reading with what is added to it.
func (c *Condition) sum(q quantity, r *[NumReadings]float64) string {
	text := fmt.Sprintf("%s of %s", phrases[c.Against].noun, phrases[c.Against].show(r[c.Against]))
	switch {
	case c.Threshold > 0:
		text += " plus " + q.show(c.Threshold)
	case c.Threshold < 0:
		text += " less " + q.show(-c.Threshold)
	}
	return text
}
