// Package sim steps one closed loop: a floor, a robot, its ring of range
// sensors and its switching logic. It is the core of Leeway.
//
// # Basics
//
// A [Config] says all there is to a run, in SI units; [New] checks it and
// returns a [Run] that stands at tick 0; [Run.Step] goes on by one tick, always
// through the same eight stages; [Run.Finish] goes on to the end. [Outcome]
// holds the measures, above all the leeway: the least distance between the hull
// and anything solid. A person's changes enter by [Run.Edit] and become part of
// the run: the same config with that edit list gives the same run again.
//
// # Caveats
//
// A run is a pure function of its config, bit for bit, on every machine; the
// state hash in Outcome tells. It must therefore never look at a clock, a map's
// order or a shared random source, and it must be stepped by one goroutine at a
// time. The truth and what the robot believes are different types: guards and
// behaviours see the ring's readings and the estimated pose, measures see the
// true pose, and nothing sees both.
package sim
