package floor

import (
	"errors"
	"math"
	"strings"
	"testing"

	"leeway/sim/geom"
)

func TestCheck(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	solid := func(field string, item int, kind FaultKind) []Fault {
		return []Fault{{Ref{Index: 0}, field, item, kind}}
	}
	mover := func(field string, item int, kind FaultKind) []Fault {
		return []Fault{{Ref{Mover: true}, field, item, kind}}
	}
	route := []geom.Vec{at(0, 0), at(1, 0)}
	for _, c := range []struct {
		name string
		c    Config
		want []Fault
	}{
		{"fine", clutter(1, 10, 4), nil},
		{"wall of one point", Config{Solids: []Solid{wallOf(at(0, 0))}}, solid("Points", -1, TooFew)},
		{"wall piece of no length", Config{Solids: []Solid{wallOf(at(0, 0), at(1, 1), at(1, 1))}}, solid("Points", 2, ZeroLength)},
		{"wall nowhere", Config{Solids: []Solid{wallOf(at(0, 0), at(nan, 1))}}, solid("Points", 1, NotFinite)},
		{"wall without end", Config{Solids: []Solid{wallOf(at(0, -inf), at(1, 1))}}, solid("Points", 0, NotFinite)},
		{"wall too far", Config{Solids: []Solid{wallOf(at(0, 1), at(1, 1.1e5))}}, solid("Points", 1, TooFar)},
		{"two corners", Config{Solids: []Solid{{Kind: Polygon, Points: route}}}, solid("Points", -1, TooFew)},
		{"bow tie", Config{Solids: []Solid{{Kind: Polygon, Points: []geom.Vec{at(0, 0), at(1, 1), at(1, 0), at(0, 1)}}}}, solid("Points", -1, NotSimple)},
		{"disc of no size", Config{Solids: []Solid{{Kind: Disc, Points: route[:1]}}}, solid("Radius", -1, NotPositive)},
		{"disc of negative size", Config{Solids: []Solid{{Kind: Disc, Points: route[:1], Radius: -1}}}, solid("Radius", -1, NotPositive)},
		{"disc without measure", Config{Solids: []Solid{{Kind: Disc, Points: route[:1], Radius: inf}}}, solid("Radius", -1, NotFinite)},
		{"disc of two centres", Config{Solids: []Solid{{Kind: Disc, Points: route, Radius: 1}}}, solid("Points", -1, TooMany)},
		{"disc of no centre", Config{Solids: []Solid{{Kind: Disc, Radius: 1}}}, solid("Points", -1, TooFew)},
		{"no such kind", Config{Solids: []Solid{{Kind: 9}}}, solid("Kind", -1, UnknownKind)},
		{"no route", Config{Movers: []Mover{{Radius: 1}}}, mover("Route", -1, TooFew)},
		{"route nowhere", Config{Movers: []Mover{{Radius: 1, Route: []geom.Vec{at(0, 0), at(nan, 0)}}}}, mover("Route", 1, NotFinite)},
		{"way points at one place", Config{Movers: []Mover{{Radius: 1, Speed: 1, Route: []geom.Vec{at(0, 0), at(0, 0)}}}}, mover("Route", 1, Coincident)},
		{"loop that ends where it begins", Config{Movers: []Mover{{Radius: 1, Speed: 1, Loop: true, Route: []geom.Vec{at(0, 0), at(1, 0), at(0, 0)}}}}, mover("Route", 0, Coincident)},
		{"going backwards", Config{Movers: []Mover{{Radius: 1, Speed: -1, Route: route}}}, mover("Speed", -1, Negative)},
		{"negative rest", Config{Movers: []Mover{{Radius: 1, Pause: -1, Route: route}}}, mover("Pause", -1, Negative)},
		{"no offset", Config{Movers: []Mover{{Radius: 1, Offset: nan, Route: route}}}, mover("Offset", -1, NotFinite)},
		{"negative radius", Config{Movers: []Mover{{Radius: -1, Route: route}}}, mover("Radius", -1, Negative)},
		{"flat box", Config{Movers: []Mover{{Half: at(1, 0), Route: route}}}, mover("Half.Y", -1, NotPositive)},
		{"box without heading", Config{Movers: []Mover{{Half: at(1, 1), Heading: inf, Route: route}}}, mover("Heading", -1, NotFinite)},
	} {
		m, err := NewMap(c.c, 3)
		if c.want == nil {
			if err != nil || m == nil {
				t.Errorf("%s: %v", c.name, err)
			}
			continue
		}
		var got Faults
		if !errors.As(err, &got) || m != nil {
			t.Errorf("%s: error %v, map %v", c.name, err, m)
			continue
		}
		if len(got) != len(c.want) || got[0] != c.want[0] {
			t.Errorf("%s: faults %+v, want %+v", c.name, got, c.want)
		}
	}
}

// All faults come at once, in the order of the floor.
func TestCheckTellsAll(t *testing.T) {
	c := Config{
		Solids: []Solid{wallOf(at(0, 0), at(1, 0)), {Kind: Disc, Points: []geom.Vec{at(math.NaN(), 0)}}, wallOf(at(2, 2), at(2, 2))},
		Movers: []Mover{{Radius: 1, Speed: -2}},
	}
	_, err := NewMap(c, 3)
	want := []string{
		"solid 1: Points[0] is not a finite number",
		"solid 1: Radius must be above zero",
		"solid 2: Points[1] is the same point as the one before",
		"mover 0: Speed must not be below zero",
		"mover 0: Route has too few points",
	}
	if err == nil || err.Error() != strings.Join(want, "\n") {
		t.Errorf("got\n%v\nwant\n%s", err, strings.Join(want, "\n"))
	}
}
