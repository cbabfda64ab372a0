// Package floor is the world a robot drives in.
package floor

import "leeway/sim/geom"

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

// Map is the standing part of a floor with an index over it. It never changes
// once built and may be shared by any number of runs and goroutines.
type Map struct { /* … */
}

// NewMap builds the index. reach is the range (m) within which rays and
// distances will mostly be asked; it tunes the index, never the answers.
func NewMap(c Config, reach float64) (*Map, error) { panic("contract") }

// World is the floor of one run at one time: the shared map, the movers where
// they are now, and the solids that a person has moved.
type World struct { /* … */
}

// NewWorld returns the floor at t = 0.
func (m *Map) NewWorld() *World { panic("contract") }

// Reset puts w back to t = 0 of its map with no edits, keeping its memory.
func (w *World) Reset() { panic("contract") }

// CopyFrom makes w the same as src (same map or not), keeping its memory.
func (w *World) CopyFrom(src *World) { panic("contract") }

// Advance brings every mover to where its timetable has it at t seconds, a pure function of t
// and of the edits; it remembers the displacement since the last call for Shove.
func (w *World) Advance(t float64) { panic("contract") }

// MoveSolid and MoveMover shift a thing so that its anchor (the first point of
// a wall or polygon, the centre of a disc, the first way point of a mover's route) comes to lie at p.
func (w *World) MoveSolid(i int, p geom.Vec) { panic("contract") }
func (w *World) MoveMover(i int, p geom.Vec) { panic("contract") }

// SolidAt and MoverAt say where things are now. MoverAt returns the centre; a mover's heading is fixed.
func (w *World) SolidAt(i int) Solid    { panic("contract") }
func (w *World) MoverAt(i int) geom.Vec { panic("contract") }

// Cast writes to out[i] the distance along rays[i] to the first solid or mover,
// or +Inf where nothing is met within max. A ray that starts inside a filled
// solid reads 0. len(out) ≥ len(rays). No allocation.
func (w *World) Cast(rays []Ray, max float64, out []float64) { panic("contract") }

// Nearest returns what is nearest to p, if its boundary is within the given distance of p or
// p is inside it. ok is false when nothing is. No allocation.
func (w *World) Nearest(p geom.Vec, within float64) (n Near, ok bool) { panic("contract") }

// Sweep moves a disc hull from p by d: up to the first touch freely, then along
// what it touches, the normal part of the motion lost (repeated a few times
// within the step for corners). It returns where the hull ends, and the first touch.
// A hull that starts by overlapping may move out but not further in.
// It never passes through anything, however fast. Touching (within Skin) is not overlapping.
func (w *World) Sweep(p, d geom.Vec, radius float64) (end geom.Vec, c Contact, touched bool) {
	panic("contract")
}

// Shove says what the movers' displacement in the last Advance does to a hull
// standing at p: where it is pushed to (against standing solids it cannot be
// pushed through; then the mover overlaps it), and the first touch.
func (w *World) Shove(p geom.Vec, radius float64) (end geom.Vec, c Contact, touched bool) {
	panic("contract")
}
