// Package scenario is Leeway's file format: what a person writes, shares and
// opens. A scenario is a floor, a robot, its ring of sensors, its logic, a start,
// a goal, what is asked of the run, and the edits that people made while it ran.
//
// # Basics
//
// Parse reads a file and reports everything that is wrong with it at once, each
// fault with line, column, field path and a sentence. Print writes the one
// canonical text of a scenario. Config turns it into the run that package sim
// steps. Encode and Decode put a whole scenario into a link.
//
//	s, err := scenario.Parse(data)
//	if err != nil {
//		fmt.Println(err) // every problem, a line each
//	}
//	c, err := s.Config()
//	run, err := sim.New(c)
//
// A scenario may say what differs from trial to trial (vary.go). Trials draws those
// trials, each of them a plain scenario again.
//
// The file is JSON, strictly: duplicate keys, unknown keys, keys in the wrong
// case and trailing data are faults. Lengths are metres and angles degrees, and
// each name says so (radius_m, heading_deg). Everything is optional but the version,
// the size of the floor, the start and the goal.
//
// # Reading the source
//
// format.go declares the file as Go structs; rules.go is the one table of ranges,
// choices, labels and units. A text becomes a tree with positions (syntax.go), the
// tree becomes a Scenario (read.go), and the Scenario is checked (check.go,
// check_floor.go, check_logic.go, check_vary.go); positions come from the tree again. print.go is
// the way back; trial.go draws trials. schema.json is generated from format.go and rules.go by the tests.
//
// # Caveats
//
// Numbers of the file are never computed from radians, so going back and forth does
// not make them drift. The numbers of the default logic may be left out; they then
// follow the hull's radius and the speed, and Print leaves them out too.
// The limits (MaxBytes and its neighbours) keep a hostile file from hurting a server;
// they do not make every accepted file cheap to run.
package scenario
