// Package logic is the switching automaton: what a robot does, and when it
// changes to doing something else, as data, and the engine that runs any such data.
//
// # The data
//
// A [Logic] is a table. It has modes, each with a behaviour and its numbers, and
// transitions in order of priority. A transition is a list of conditions that must
// all hold, perhaps for some time and in a mode of some age. A condition compares a
// [Reading] with a threshold, or with another reading, and may have a release band.
// [Default] makes the table that Leeway ships; nothing about it is known to the engine.
//
// # The engine
//
// An [Engine] is asked once a control tick. [Engine.Decide] looks at what the ring
// and the estimated pose tell, works out every reading, makes at most one
// transition, and returns the velocity u that the mode then wants. It sees
// nothing else: the truth is not among its inputs. A [Switch] records each
// transition with every reading, and [Logic.Why] makes a sentence of it.
//
// The engine is deterministic, does not allocate once it knows the ring, and is a
// value that [Engine.CopyFrom] copies, with all that it remembers.
//
// # Meeting and leaving obstacles
//
// A transition marked Meet begins to deal with an obstacle: the side is chosen,
// d_min (BestDistance) starts, and the boundary is watched for closing. The
// readings FreeWay, BestDistance and Gain are F, d_min and d_min − (d − F) of DistBug (Kamon & Rivlin,
// "Sensory-based motion planning with global proofs", IEEE Trans. Robotics and
// Automation 13(6), 1997), whose proof of progress rests on leaving an obstacle only for a way
// that is free until nearer to the goal than the robot has been. Rings with gaps
// see free ways that are not there; so a robot that meets the next obstacle without having
// come nearer keeps its d_min, and goes round it the other way (see Engine.meet).
//
// # Going along a wall
//
// The followed wall is one place: the nearest on the wall's side, carried along as
// the robot moves, never across a gap that the hull could pass (follow.go). From
// its direction a ray is turned away from the wall until the hull fits (sweep.go), and on
// until the stand-off is kept, at most to the middle of the opening. So inside
// corners, outside corners, thin ends, doors and narrow passages are one case.
//
// # Caveats
//
// Distances are only as good as the estimate: a robot that drifts may not find the place where it
// met a boundary, and believes to have arrived where it has not. What stands between
// two beams is not seen; places that the beams have swept over are remembered for
// four seconds, which helps along walls, not ahead. There is no map: an obstacle is
// gone round the wrong way as often as not.
//
// # Reading the source
//
// table.go, engine.go (Decide), sight.go, track.go, readings.go, behave.go,
// follow.go, sweep.go; then default.go, why.go, check.go, names.go.
package logic
