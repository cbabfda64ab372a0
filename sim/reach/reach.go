// Package reach finds the shortest feasible way of a disc hull among the solids
// of a floor: whether there is a way at all, how long the shortest one is, and
// where it runs. It is the yardstick that a run's detour is measured by, and it
// decides which floors have no way.
//
// # How it works
//
// The hull shrinks to its centre and every solid grows by the hull radius r: a
// wall segment becomes a capsule, a corner a circle of radius r, a disc a
// larger disc. A shortest way of the centre among such shapes is a string
// pulled taut: straight lines that are tangent to circles, and arcs along those
// circles in between. So the search is one over bitangents. The free arcs of
// every circle are worked out when a Yard is made; the bitangents that leave an
// arc are listed when the search first gets there, and looked along for
// obstacles only when their turn comes (A* with the straight distance as its
// lower bound). A Yard keeps both for later questions.
//
// # How exact it is
//
// Circles and arcs are kept as such, nothing is rasterised. A way counts as free
// when the centre keeps r − Skin from everything, and its circles have the
// radius r. Hence, up to rounding, Length lies between the shortest length of a
// hull of radius r − Skin and that of one of radius r. A gap of exactly 2r lets
// the hull pass; a gap of 2r − 2·Skin or less does not; in between it may go
// either way.
//
// # Caveats
//
// Movers are ignored. Nothing keeps the way inside a floor but its walls: where
// a floor is open to the outside, the way may lead round it.
package reach

import (
	"fmt"
	"math"

	"leeway/sim/floor"
	"leeway/sim/geom"
)

const (
	// Skin is how far (m) a way may intrude on the hull radius, so that touching is not overlapping.
	Skin = 1e-9

	// MinHull is the smallest hull radius (m) taken. It stands far enough above
	// Skin that walls keep the thickness that stops a way.
	MinHull = 1e-6

	// Flatness is how far (m) Result.Way stays from the arcs it stands for.
	Flatness = 1e-4
)

// Result is the answer to one question.
type Result struct {
	Reachable bool
	Length    float64 // of the shortest way of the hull's centre, m; 0 when not Reachable

	// Way is the shortest way from the start to its end in the goal disc. Its
	// corners lie on the way itself; where the way is an arc, the chords between
	// them stay within Flatness of it, on the side of the solid.
	Way []geom.Vec

	Reason string // why there is no way, in one sentence; empty when Reachable
}

// Shortest returns the shortest way of a hull of the given radius (m) from one
// point to another, or to within goalRadius (m) of it, among the solids of c.
// The error is about the question: a solid, radius or point that cannot be.
func Shortest(c floor.Config, hull float64, from, to geom.Vec, goalRadius float64) (Result, error) {
	y, err := New(c, hull)
	if err != nil {
		return Result{}, err
	}
	return y.Shortest(from, to, goalRadius)
}

// Yard is a floor as one hull sees it. It remembers what it has found out from
// one question to the next, so it is for one goroutine at a time. What was asked
// before changes its answers by rounding at most, and which of two equally short
// ways is given.
type Yard struct {
	hull  float64
	ids   []string // of the solids, for reasons
	prims []prim
	fills []fill
	grid  grid

	arcs  []arc
	sides []side // side 2i goes counter-clockwise along arc i, side 2i+1 clockwise
	edges []edge

	horizon horizon
	search  search
}

// New prepares the floor for a hull of the given radius (m).
func New(c floor.Config, hull float64) (*Yard, error) {
	if !(hull >= MinHull) || math.IsInf(hull, 0) {
		return nil, fmt.Errorf("hull radius %v m is not a finite number of at least %v m", hull, MinHull)
	}
	y := &Yard{hull: hull}
	if err := y.build(c); err != nil {
		return nil, err
	}
	y.grid = newGrid(y.prims, hull)
	y.findArcs()
	return y, nil
}

// Hull returns the hull radius (m) that y was made for.
func (y *Yard) Hull() float64 { return y.hull }

// Free reports whether the hull can stand at p without overlapping a solid.
func (y *Yard) Free(p geom.Vec) bool {
	_, over := y.overlapped(p)
	return !over
}

// overlapped returns a solid that the hull overlaps at p.
func (y *Yard) overlapped(p geom.Vec) (solid int32, over bool) {
	for _, i := range y.grid.at(p) {
		if q := &y.prims[i]; q.covers(p, y.hull-Skin) {
			return q.solid, true
		}
	}
	return y.filling(p)
}

// filling returns a polygon that p lies in.
func (y *Yard) filling(p geom.Vec) (solid int32, in bool) {
	for i := range y.fills {
		if y.fills[i].contains(p) {
			return y.fills[i].solid, true
		}
	}
	return 0, false
}

// Shortest returns the shortest way from one point to another, or to within goalRadius (m) of it.
func (y *Yard) Shortest(from, to geom.Vec, goalRadius float64) (Result, error) {
	if !from.Finite() || !to.Finite() {
		return Result{}, fmt.Errorf("start %v or goal %v is not a finite point", from, to)
	}
	if !(goalRadius >= 0) || math.IsInf(goalRadius, 0) {
		return Result{}, fmt.Errorf("goal radius %v m is not a finite number of at least 0", goalRadius)
	}
	if solid, over := y.overlapped(from); over {
		return Result{Reason: fmt.Sprintf("the start overlaps: a hull of radius %g m there touches %s", y.hull, y.name(solid))}, nil
	}
	if from.Sub(to).Norm() <= goalRadius {
		return Result{Reachable: true, Way: []geom.Vec{from}}, nil
	}
	targets := y.targets(to, goalRadius)
	if len(targets) == 0 {
		solid, _ := y.overlapped(to)
		where := "at the goal"
		if goalRadius > 0 {
			where = fmt.Sprintf("anywhere within %g m of the goal", goalRadius)
		}
		return Result{Reason: fmt.Sprintf("the goal overlaps: a hull of radius %g m %s touches %s", y.hull, where, y.name(solid))}, nil
	}
	r, ok := y.find(from, to, goalRadius, targets)
	if !ok {
		return Result{Reason: fmt.Sprintf("no way: everything that leads from the start to the goal is closed to a hull of radius %g m", y.hull)}, nil
	}
	return r, nil
}

func (y *Yard) name(solid int32) string {
	if id := y.ids[solid]; id != "" {
		return fmt.Sprintf("%q", id)
	}
	return fmt.Sprintf("solid %d", solid)
}
