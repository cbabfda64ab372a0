// Package gen draws random floors with a start and a goal, for experiments with
// many floors, and large office floors for benchmarks. A floor is a pure
// function of its seed, kind and options, the same on every machine.
//
// # What a floor promises
//
// With clear = 2·Hull + Margin:
//
//   - The hull grown by Margin is free at the start and at the goal.
//   - Two solids either touch or leave a gap of at least clear. (Not so within one solid: a polygon with a notch
//     may narrow to nothing.)
//   - Either there is no way for the hull from start to goal, or there is one
//     along which the hull keeps Margin/2 from everything. So a floor with a way
//     is never one where the hull just squeezes through. Package reach decides.
//   - Start and goal are at least a third of the floor's width apart.
//   - About one floor in ten has no way, mostly because the goal is walled in.
//
// # Caveats
//
// The kinds are our own idea of what robots meet, and not a sample of anything.
package gen

import (
	"fmt"
	"math"

	"leeway/sim/chance"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/reach"
)

// Kind is a kind of floor.
type Kind uint8

// The kinds.
const (
	Scattered Kind = iota // boxes, polygons convex and not, discs and loose walls
	Rooms                 // a grid of rooms with doors and furniture; some rooms are closed
	Pockets               // U, L and spiral shapes that face the start or hold the goal
	Mazes                 // a maze of cells, no deeper than a few turns
	numKinds
)

// Kinds returns all kinds.
func Kinds() []Kind { return []Kind{Scattered, Rooms, Pockets, Mazes} }

// String returns the kind as one word.
func (k Kind) String() string {
	if k < numKinds {
		return [numKinds]string{"scattered", "rooms", "pockets", "mazes"}[k]
	}
	return fmt.Sprintf("kind %d", uint8(k))
}

// Options shape a floor. A zero means the default, or, for the size, a drawn one.
type Options struct {
	Hull       float64 // hull radius, m; 0.21
	Margin     float64 // m; 0.25
	GoalRadius float64 // m; 0.15
	Width      float64 // of the floor, m; drawn from 9 to 16
	Height     float64 // m; drawn from 8 to 12
}

func (o Options) withDefaults() Options {
	def := func(x *float64, d float64) {
		if *x == 0 {
			*x = d
		}
	}
	def(&o.Hull, 0.21)
	def(&o.Margin, 0.25)
	def(&o.GoalRadius, 0.15)
	return o
}

func (o Options) check() error {
	for _, x := range []struct {
		name       string
		value, min float64
	}{
		{"hull radius", o.Hull, reach.MinHull}, {"margin", o.Margin, 0}, {"goal radius", o.GoalRadius, 0}, {"width", o.Width, 0}, {"height", o.Height, 0},
	} {
		if !(x.value >= x.min) || math.IsInf(x.value, 0) {
			return fmt.Errorf("%s %v m is not a finite number of at least %v", x.name, x.value, x.min)
		}
	}
	return nil
}

// clear is the narrowest gap that is left between two solids.
func (o Options) clear() float64 { return 2*o.Hull + o.Margin }

// Scene is a floor with a start and a goal.
type Scene struct {
	Name       string // "rooms 17"
	Floor      floor.Config
	Width      float64 // the floor spans (0, 0) to (Width, Height), m
	Height     float64
	Hull       float64 // m
	Margin     float64 // m
	Start      geom.Pose
	Goal       geom.Vec
	GoalRadius float64 // m
}

// Shortest returns the shortest feasible way from start to goal.
func (s *Scene) Shortest() (reach.Result, error) {
	return reach.Shortest(s.Floor, s.Hull, s.Start.Pos, s.Goal, s.GoalRadius)
}

// attempts is how many floors are drawn before the options are called
// impossible. With the defaults three in four are good at once.
const attempts = 200

// Floor draws the floor of this seed and kind. The error says which option
// cannot be, or that no floor of such a size holds such a hull.
func Floor(seed uint64, kind Kind, o Options) (Scene, error) {
	o = o.withDefaults()
	if kind >= numKinds {
		return Scene{}, fmt.Errorf("there is no %v", kind)
	}
	if err := o.check(); err != nil {
		return Scene{}, err
	}
	// Decided before the first attempt, so that floors hard to wall in are not passed over.
	fate := dice{chance.New(seed, "walled in", int(kind))}
	walledIn := fate.chance(0.1)
	for i := range attempts {
		d := &draft{dice: dice{chance.New(seed, "floor "+kind.String(), i)}, Options: o, walledIn: walledIn}
		if !d.draw(kind) {
			continue
		}
		s := d.scene(fmt.Sprintf("%s %d", kind, seed))
		ok, err := s.sound()
		if err != nil {
			return Scene{}, err
		}
		if ok {
			return s, nil
		}
	}
	return Scene{}, fmt.Errorf("%s: no floor in %d attempts for a hull of radius %g m with a margin of %g m", kind, attempts, o.Hull, o.Margin)
}

// draw lays out a floor; it reports whether that worked out.
func (d *draft) draw(kind Kind) bool {
	if d.Width == 0 {
		d.Width = d.between(9, 16)
	}
	if d.Height == 0 {
		d.Height = d.between(8, 12)
	}
	switch kind {
	case Scattered:
		return d.scattered()
	case Rooms:
		return d.rooms()
	case Pockets:
		return d.pockets()
	}
	return d.maze()
}

func (d *draft) scene(name string) Scene {
	return Scene{
		Name: name, Floor: floor.Config{Solids: d.solids}, Width: d.Width, Height: d.Height,
		Hull: d.Hull, Margin: d.Margin, GoalRadius: d.GoalRadius,
		Start: geom.Pose{Pos: d.start, Theta: d.angle()}, Goal: d.goal,
	}
}

// sound reports whether the scene keeps the promises that its drawing does not ensure by itself.
func (s *Scene) sound() (bool, error) {
	if s.Start.Pos.Sub(s.Goal).Norm() < s.Width/3 {
		return false, nil
	}
	grown, err := reach.New(s.Floor, s.Hull+s.Margin)
	if err != nil {
		return false, err
	}
	if !grown.Free(s.Start.Pos) || !grown.Free(s.Goal) {
		return false, nil
	}
	roomy, err := reach.Shortest(s.Floor, s.Hull+float64(s.Margin/2), s.Start.Pos, s.Goal, s.GoalRadius)
	if err != nil || roomy.Reachable {
		return err == nil, err
	}
	tight, err := s.Shortest()
	return err == nil && !tight.Reachable, err
}
