package floor

import (
	"fmt"
	"math"
	"strings"

	"leeway/sim/geom"
)

// FaultKind says what is wrong with a value.
type FaultKind uint8

// The kinds of fault.
const (
	NotFinite   FaultKind = iota // NaN or infinite
	TooFar                       // beyond Limit
	TooFew                       // not enough points
	TooMany                      // more points than the thing has a use for
	ZeroLength                   // a wall piece between two equal points
	NotSimple                    // a polygon that crosses, touches or folds onto itself
	NotPositive                  // a size of zero or less
	Negative                     // a value below zero
	Coincident                   // neighbouring way points at one place, with a speed
	UnknownKind                  // a Kind that does not exist
)

var faultText = [...]string{
	NotFinite:   "is not a finite number",
	TooFar:      "is more than 100 km from the origin",
	TooFew:      "has too few points",
	TooMany:     "has too many points",
	ZeroLength:  "is the same point as the one before",
	NotSimple:   "is not a simple polygon (it crosses, touches or folds onto itself)",
	NotPositive: "must be above zero",
	Negative:    "must not be below zero",
	Coincident:  "is the same place as the way point before, so it takes no time to reach",
	UnknownKind: "is no kind of solid",
}

// String returns the fault as the end of a sentence that begins with the field.
func (k FaultKind) String() string { return faultText[k] }

// Fault is one impossible value of a Config.
type Fault struct {
	Ref   Ref    // which solid or mover
	Field string // which field of it: "Points", "Radius", "Route", …
	Item  int    // which element of the field, −1 for the field as a whole
	Kind  FaultKind
}

// Error returns for instance "solid 3: Points[1] is not a finite number".
func (f Fault) Error() string {
	what := "solid"
	if f.Ref.Mover {
		what = "mover"
	}
	field := f.Field
	if f.Item >= 0 {
		field = fmt.Sprintf("%s[%d]", field, f.Item)
	}
	return fmt.Sprintf("%s %d: %s %s", what, f.Ref.Index, field, f.Kind)
}

// Faults is the error that NewMap, CheckSolid and CheckMover return: every fault found, in order.
type Faults []Fault

// Error joins the faults, one a line.
func (f Faults) Error() string {
	lines := make([]string, len(f))
	for i := range f {
		lines[i] = f[i].Error()
	}
	return strings.Join(lines, "\n")
}

// CheckSolid returns what is impossible about s as Faults with Ref.Index 0, or nil.
func CheckSolid(s Solid) error { return (&checker{}).solid(s).err() }

// CheckMover returns what is impossible about m as Faults with Ref.Index 0, or nil.
func CheckMover(m Mover) error { return (&checker{ref: Ref{Mover: true}}).mover(m).err() }

func check(c Config) error {
	k := &checker{}
	for i, s := range c.Solids {
		k.ref = Ref{Index: i}
		k.solid(s)
	}
	for i, m := range c.Movers {
		k.ref = Ref{Mover: true, Index: i}
		k.mover(m)
	}
	return k.err()
}

type checker struct {
	ref    Ref
	faults Faults
}

func (k *checker) err() error {
	if len(k.faults) == 0 {
		return nil
	}
	return k.faults
}

func (k *checker) add(field string, item int, kind FaultKind) {
	k.faults = append(k.faults, Fault{k.ref, field, item, kind})
}

// number reports whether x is finite, and notes if it is not.
func (k *checker) number(field string, x float64) bool {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		k.add(field, -1, NotFinite)
		return false
	}
	return true
}

func (k *checker) size(field string, x float64) {
	switch {
	case !k.number(field, x):
	case x <= 0:
		k.add(field, -1, NotPositive)
	case x > Limit:
		k.add(field, -1, TooFar)
	}
}

func (k *checker) notNegative(field string, x float64) {
	if k.number(field, x) && x < 0 {
		k.add(field, -1, Negative)
	}
}

// points reports whether all points are usable, and notes each that is not.
func (k *checker) points(field string, list []geom.Vec, least int) bool {
	ok := len(list) >= least
	if !ok {
		k.add(field, -1, TooFew)
	}
	for i, p := range list {
		switch {
		case !p.Finite():
			k.add(field, i, NotFinite)
		case math.Abs(p.X) > Limit || math.Abs(p.Y) > Limit:
			k.add(field, i, TooFar)
		default:
			continue
		}
		ok = false
	}
	return ok
}

func (k *checker) solid(s Solid) *checker {
	switch s.Kind {
	case Wall:
		k.points("Points", s.Points, 2)
		for i := 1; i < len(s.Points); i++ {
			if s.Points[i] == s.Points[i-1] {
				k.add("Points", i, ZeroLength)
			}
		}
	case Polygon:
		if k.points("Points", s.Points, 3) && !geom.Polygon(s.Points).Simple() {
			k.add("Points", -1, NotSimple)
		}
	case Disc:
		k.points("Points", s.Points, 1)
		if len(s.Points) > 1 {
			k.add("Points", -1, TooMany)
		}
		k.size("Radius", s.Radius)
	default:
		k.add("Kind", -1, UnknownKind)
	}
	return k
}

func (k *checker) mover(m Mover) *checker {
	switch {
	case !k.number("Radius", m.Radius):
	case m.Radius < 0:
		k.add("Radius", -1, Negative)
	case m.Radius > Limit:
		k.add("Radius", -1, TooFar)
	case m.Radius == 0:
		k.size("Half.X", m.Half.X)
		k.size("Half.Y", m.Half.Y)
		k.number("Heading", m.Heading)
	}
	k.notNegative("Speed", m.Speed)
	k.notNegative("Pause", m.Pause)
	k.number("Offset", m.Offset)
	if k.points("Route", m.Route, 1) && m.Speed > 0 {
		for i := 1; i < len(m.Route); i++ {
			if m.Route[i] == m.Route[i-1] {
				k.add("Route", i, Coincident)
			}
		}
		if n := len(m.Route); m.Loop && n > 2 && m.Route[0] == m.Route[n-1] {
			k.add("Route", 0, Coincident)
		}
	}
	return k
}
