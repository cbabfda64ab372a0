// Package shadow runs the same design on simpler models beside the robot, and
// says how far apart they come and why.
//
// # Basics
//
// A [Set] holds a robot and its shadows: the point, which goes wherever it is
// told, sees all round and knows where it is; and the unicycle, which is all of
// that but must turn before it goes. A shadow is the same scenario with
// idealisations switched on, nothing else: the same seed, and the same edits at
// the same times. [Set.Step] steps all that have not ended. [Set.Deviation] says
// how far a shadow and the robot were apart at the same times, [Frechet] how far
// their ways alone are, and [Set.Partings] where they took different decisions
// or drifted apart, each with a sentence of what the one and the other read.
//
// # Caveats
//
// The unicycle's shadow has ideal sight and position, as the point's has: what
// parts the unicycle from the point is the motion alone, and what parts the robot
// from the unicycle is everything else. A deviation at the same time counts lag
// along the way as distance; the deviation of the ways does not.
package shadow
