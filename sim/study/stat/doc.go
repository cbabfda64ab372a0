// Package stat holds the statistics that studies need: intervals for shares and
// quantiles, sequential decisions, comparisons on common seeds, fair shares of a
// loss, and points that fill a space evenly.
//
// # Basics
//
// A confidence is the probability, 0.95 for instance, with which an interval
// covers the truth; two-sided unless the name says lower or upper. Everything is a
// pure function; what resamples takes the seed of a stream of its own, so that the
// same data give the same interval.
//
// # Caveats
//
// Intervals hold for one look at the data. Looking again and again until one looks
// good is what [SPRT] and [Looks] are for.
package stat

// Interval is a range of a number.
type Interval struct{ Low, High float64 }

// Width returns High − Low.
func (i Interval) Width() float64 { return i.High - i.Low }

// Holds reports whether v lies in the interval.
func (i Interval) Holds(v float64) bool { return v >= i.Low && v <= i.High }
