// Package scenario is the file format: what a person writes, shares and opens.
package scenario

import (
	"leeway/sim"
)

// Problem is one fault of a file: where and what. Line and Column count from 1 (0: not from a file).
type Problem struct {
	Line   int    `json:"line,omitempty"`
	Column int    `json:"column,omitempty"`
	Path   string `json:"path,omitempty"` // "robot.radius_m", "floor.walls[3].points_m[1]"
	Text   string `json:"text"`
}

// Problems is an error that holds every fault found.
type Problems []Problem

func (p Problems) Error() string { panic("contract") }

// Scenario is the file as Go values, in the units of the file (metres, degrees). Its fields are exported structs with json tags.
type Scenario struct { /* Name, Purpose, Seed, Floor, Robot, Ring, Logic, Start, Goal, Asked, Timing, Ideal, OnContact, Edits */
}

// Limits that keep a hostile file from hurting a server.
const (
	MaxBytes     = 4 << 20 // of a file, and of a link once unpacked
	MaxLinkChars = 1 << 20 // accepted
	LongLink     = 8000    // characters beyond which a file is offered instead
)

// Parse reads and validates a file. The error is Problems, all of them at once.
func Parse(data []byte) (*Scenario, error) { panic("contract") }

// Validate reports every impossible value (without positions).
func (s *Scenario) Validate() Problems { panic("contract") }

// Print returns the canonical text: byte-stable, ends in a newline.
func (s *Scenario) Print() []byte { panic("contract") }

// Clone returns a deep copy.
func (s *Scenario) Clone() *Scenario { panic("contract") }

// Config returns the run that the scenario describes. s must be valid.
func (s *Scenario) Config() (sim.Config, error) { panic("contract") }

// Schema returns the JSON Schema of the format.
func Schema() []byte { panic("contract") }

// Encode returns the scenario as link data: canonical text, compressed, base64url without padding.
func (s *Scenario) Encode() string { panic("contract") }

// Decode reads link data, or a whole link (everything after '#').
func Decode(link string) (*Scenario, error) { panic("contract") }

// Field describes a number or a choice of the file that a person can change by itself.
type Field struct {
	Path           string
	Label          string // "hull radius"
	Unit           string // "m", "m/s", "", "beams"
	Min, Max, Step float64
	Decimals       int
	Options        []Option // of a choice; nil for a number
	Live           bool     // applies to a running robot (sim.SetNumber); else the run restarts
	Number         sim.Number
}

// Option is one value of a choice.
type Option struct{ Value, Label string }

// Fields returns all of them, in file order. FieldAt finds one.
func Fields() []Field                   { panic("contract") }
func FieldAt(path string) (Field, bool) { panic("contract") }

// NumberAt, SetNumber, ChoiceAt, SetChoice read and change a field by its path; the error says the range or the options.
func (s *Scenario) NumberAt(path string) (float64, error)  { panic("contract") }
func (s *Scenario) SetNumber(path string, v float64) error { panic("contract") }
func (s *Scenario) ChoiceAt(path string) (string, error)   { panic("contract") }
func (s *Scenario) SetChoice(path, value string) error     { panic("contract") }

// WithEdits returns a copy whose Edits are those that a run recorded.
func (s *Scenario) WithEdits(edits []sim.Edit) *Scenario { panic("contract") }

// Folded returns a copy with the edits done for good (goal, solids, movers and numbers where they end up; a carried robot is forgotten) and none left.
func (s *Scenario) Folded() *Scenario { panic("contract") }

// Index returns the place of the solid or mover with this id in sim's floor.Config; fixed says it is a border wall.
func (s *Scenario) SolidIndex(id string) (i int, fixed, ok bool) { panic("contract") }
func (s *Scenario) MoverIndex(id string) (i int, ok bool)        { panic("contract") }
