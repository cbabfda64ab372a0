package study

import (
	"math"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// Source draws trials. Config must be a pure function of i and safe for several
// goroutines; the map it returns is shared by the runs on it.
type Source interface {
	Config(i int) (sim.Config, *floor.Map, error)
}

// Key names a run within a study: which of the study's settings it belongs to (a
// name that the study gives, "" for the source as it is), which trial it is, and
// which idealisations it had.
type Key struct {
	Setting string
	Trial   int
	Ideal   Ideal
}

// Ideal says which idealisations a run has instead of those of its config: AsIs
// for none, or a sim.Ideal.
type Ideal int

// AsIs leaves a config the idealisations that it has.
const AsIs Ideal = -1

// Result is what a study keeps of a run.
type Result struct {
	Trial    int
	Seed     uint64
	Status   sim.Status
	Reason   string
	Time     float64 // s
	Leeway   float64 // m; +Inf: nothing solid was ever near
	Way      float64 // m
	Straight float64 // from start to goal as the crow flies, m
	Switches int
	Contacts int
	Error    float64 // largest distance between belief and truth, m
	Hash     uint64

	Start, End geom.Vec // of the hull's centre
	Goal       geom.Vec // at the end
	Tight      geom.Vec // the hull's centre where it was closest to anything solid

	Miss  Miss    // why it is not what was asked
	Fault string  // what broke, if something did
	Cells []int32 // where it went (Grid), if that was asked for
}

// Miss is the first reason why a run is not what was asked.
type Miss uint8

// The reasons, in the order in which they are looked for.
const (
	Met         Miss = iota // it is what was asked
	Broke                   // it panicked or diverged
	NotThere                // it did not arrive; Status says how
	TooClose                // it arrived with less leeway than asked
	TooRestless             // it arrived with more switches than asked
)

// String returns the reason in words.
func (m Miss) String() string {
	return [...]string{"met", "broke", "not arrived", "too close", "too many switches"}[m]
}

// Success reports whether the run did all that was asked of it.
func (r *Result) Success() bool { return r.Miss == Met }

// Why says in a word or two how it ended: the status when it did not arrive.
func (r *Result) Why() string {
	if r.Miss == NotThere {
		return r.Status.String()
	}
	return r.Miss.String()
}

// Place is where it missed what was asked: where it got too close, else where it ended.
func (r *Result) Place() geom.Vec {
	if r.Miss == TooClose {
		return r.Tight
	}
	return r.End
}

// mostLeeway (m) is what a leeway counts for at most where leeways are averaged:
// beyond a few hulls it makes no difference, and on an empty floor it has no end.
const mostLeeway = 1.0

// Margin returns the leeway as it goes into means: at most mostLeeway.
func (r *Result) Margin() float64 {
	if r.Miss == Broke {
		return 0
	}
	return min(r.Leeway, mostLeeway)
}

// resultOf reads a run that has ended.
func resultOf(trial int, r *sim.Run) Result {
	o, c := r.Outcome(), r.Config()
	x := Result{
		Trial: trial, Seed: c.Seed, Status: o.Status, Reason: o.Reason, Time: o.Time, Leeway: o.Leeway, Way: o.Way,
		Switches: o.Switches, Contacts: o.Contacts, Error: o.EstimateError, Hash: o.Hash,
		Start: c.Start.Pos, End: r.Pose().Pos, Goal: r.Goal(), Tight: o.LeewayPose.Pos,
		Straight: c.Goal.Sub(c.Start.Pos).Norm(),
	}
	switch {
	case o.Status == sim.Diverged:
		x.Miss, x.Fault = Broke, o.Reason
		x.End, x.Way, x.Error = x.Start, finite(x.Way), finite(x.Error)
	case o.Status != sim.Arrived:
		x.Miss = NotThere
	case o.Leeway < c.Asked.Leeway:
		x.Miss = TooClose
	case c.Asked.Switches >= 0 && o.Switches > c.Asked.Switches:
		x.Miss = TooRestless
	}
	return x
}

func finite(x float64) float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return 0
	}
	return x
}
