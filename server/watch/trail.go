// Package watch holds what a person sees of a run, whoever shows it: the trail
// that the robot leaves, how each mode is painted, the finished picture, and the
// outcome in words.
package watch

import (
	"leeway/sim"
	"leeway/sim/geom"
)

// Spot is one place of a trail and the mode (its place in the logic's list) in
// which the robot got there.
type Spot struct {
	X, Y float64
	Mode int
}

const (
	// spacing, in metres, between the spots of a fresh trail: finer than a line
	// on screen can show, and about twenty spots a second for a walking-pace robot.
	spacing = 0.02
	// MaxSpots bounds a trail, and with it the largest message to a viewer.
	MaxSpots = 6000
)

// Trail is the way of a hull's centre, thinned: a spot at least every so many
// metres, and one wherever the mode changed. When it grows beyond MaxSpots,
// every other spot is dropped and the spacing doubled. The zero value is ready.
type Trail struct {
	spots []Spot
	apart float64
}

// Reset forgets the trail, keeping its memory.
func (t *Trail) Reset() { t.spots, t.apart = t.spots[:0], spacing }

// Note looks at where the run is now. It reports whether the trail was thinned,
// which changes the numbers of all spots.
func (t *Trail) Note(r *sim.Run) (thinned bool) {
	return t.add(r.Pose().Pos, r.Engine().Mode())
}

func (t *Trail) add(p geom.Vec, mode int) (thinned bool) {
	if t.apart == 0 {
		t.Reset()
	}
	if n := len(t.spots); n > 0 {
		last := &t.spots[n-1]
		dx, dy := p.X-last.X, p.Y-last.Y
		if mode == last.Mode && dx*dx+dy*dy < t.apart*t.apart {
			return false
		}
	}
	if len(t.spots) >= MaxSpots {
		t.thin()
		thinned = true
	}
	t.spots = append(t.spots, Spot{p.X, p.Y, mode})
	return thinned
}

func (t *Trail) thin() {
	kept := t.spots[:0]
	for i, s := range t.spots {
		if i%2 == 0 {
			kept = append(kept, s)
		}
	}
	t.spots = kept
	t.apart *= 2
}

// Spots returns the trail. Read only; valid until the next Note.
func (t *Trail) Spots() []Spot { return t.spots }
