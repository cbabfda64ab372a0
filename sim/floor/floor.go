// Package floor is the world a robot drives in: what stands there, what moves
// by itself, what a sensor sees of it and what a hull feels of it.
//
// # Basics
//
// A [Config] lists solids (thin walls, filled polygons, filled discs) and movers
// (a disc or a box that follows its route by a timetable). [NewMap] checks it and
// builds a [Map], an index that never changes and that any number of runs and
// goroutines may share. Each run asks its own [World], made by [Map.NewWorld]:
//
//	m, err := floor.NewMap(config, 3)
//	w := m.NewWorld()
//	w.Advance(t)                            // movers to where they are at t
//	w.Cast(rays, 3, ranges)                 // what a ring sees
//	near, ok := w.Nearest(p, 1)             // how close it is
//	p, contact, touched := w.Sweep(p, d, r) // drive into it and scrape along
//	p, contact, touched = w.Shove(p, r)     // be run into
//
// A person may move any solid or mover while a run goes on ([World.MoveSolid],
// [World.MoveMover]); other worlds of the same map know nothing of it.
//
// Answers do not depend on the index: each is the least over the primitives (wall pieces,
// polygon edges, discs) of a function of one primitive, ties going to the thing that comes
// first in the Config, solids before movers. The index only leaves out what cannot be the
// least. So a floor answers with the same bits whether a solid stood there from the beginning
// or was moved there.
//
// # Caveats
//
// Floors are level and hulls are round. Contact has no friction, no bounce and
// no weight: the part of a motion that points into a solid is lost, a mover
// pushes whatever it meets, and what it pushes never pushes back.
//
// A World belongs to one goroutine; a Map to all.
//
// A ray or a point near a filled polygon asks all of that polygon's edges whether it is inside,
// so a polygon of hundreds of corners costs more nearby than the same outline made of walls.
//
// All lengths are metres. Coordinates beyond [Limit] are refused, so that rounding stays well
// below [Skin].
//
// # Reading the source
//
// world.go says what a world is, map.go and check.go how a floor is made and refused,
// timetable.go where movers are. Questions: cast.go (rays), nearest.go, sweep.go and touch.go
// (contact). Indices: grid.go (what reaches into a cell) and sight.go (what a ray from a cell may meet).
package floor

import "leeway/sim/geom"

// Limit is the largest coordinate, radius or half size that a floor may have, in
// metres. At this distance from the origin neighbouring floating-point numbers are 1.5e-11 m apart.
const Limit = 1e5

// Skin is how far a hull keeps off what it touches, in metres. A swept hull stops
// Skin short and rests there; touching means a gap of Skin or less, overlapping a gap
// below zero. It must lie well above the rounding of a coordinate, so that a hull that rests or slides for
// hours does not creep in, and well below anything that matters on a floor.
const Skin = 1e-9

// Kind says what a solid is made of.
type Kind uint8

// The kinds of solid.
const (
	Wall    Kind = iota // a polyline of thin wall, seen and felt from both sides
	Polygon             // a filled simple polygon, convex or not
	Disc                // a filled disc
)

// Solid is one thing that stands on the floor.
type Solid struct {
	ID   string
	Kind Kind
	// Points: a wall has two or more, joined in order and left open; a polygon
	// three or more, closed; a disc one, its centre. Metres.
	Points []geom.Vec
	Radius float64 // of a disc, metres
}

// Mover is a disc or a box that follows a route by itself, whatever is in its way.
type Mover struct {
	ID string
	// Radius > 0 makes it a disc; otherwise it is a box of half sizes Half
	// (along, across), turned by Heading, which stays as it is along the route.
	Radius  float64
	Half    geom.Vec
	Heading float64
	Route   []geom.Vec // way points of its centre; one point stands still
	Loop    bool       // from the last way point to the first; else back and forth
	Speed   float64    // m/s along the route
	Pause   float64    // seconds of rest at every way point
	Offset  float64    // seconds along its timetable already passed at t = 0
}

// Config is a whole floor.
type Config struct {
	Solids []Solid
	Movers []Mover
}

// Ref names a thing on the floor: a solid or a mover by its place in Config.
type Ref struct {
	Mover bool
	Index int // −1: nothing
}

// Near is the answer to "what is nearest".
type Near struct {
	Distance float64 // from the point to the boundary; negative inside a filled solid
	Point    geom.Vec
	Ref      Ref
}

// Contact is one touch of the hull.
type Contact struct {
	At     float64  // fraction of the motion at which it first touched, in [0, 1]
	Point  geom.Vec // the place of the touch, on the solid
	Normal geom.Vec // unit, from the solid to the hull
	Ref    Ref
}

// Ray starts at Origin and runs along the unit vector Dir.
type Ray struct{ Origin, Dir geom.Vec }
