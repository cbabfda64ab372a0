package scenario

// Vary says what differs from trial to trial. What is not named stays as the
// scenario has it.
type Vary struct {
	// When true every trial has the scenario's own seed; else each has one of its own.
	SameSeed bool `json:"same_seed"`
	// Start regions: the start is somewhere in one of them, all places alike.
	Start []Region `json:"start"`
	// Turn is how far either way the start heading is turned at most.
	Turn float64 `json:"turn_deg"`
	// Goal regions: the goal is somewhere in one of them, all places alike.
	Goal []Region `json:"goal"`
	// Margin that hull and solids keep at a drawn start and goal; the leeway asked, if that is more.
	Margin float64 `json:"margin_m"`
	// Apart is the least distance from a drawn start or goal to the other.
	Apart float64 `json:"apart_m"`
	// Numbers that are drawn.
	Numbers []Varied `json:"numbers"`
	// Walls and solids that are shifted.
	Solids []VariedSolid `json:"solids"`
	// Movers that start elsewhere in their timetables.
	Movers []VariedMover `json:"movers"`
}

// Region is a part of the floor: a box along the axes (from_m and to_m) or a disc (center_m and radius_m).
type Region struct {
	// From is one corner of a box.
	From Point `json:"from_m" form:"box" jsonschema:"required"`
	// To is the opposite corner.
	To Point `json:"to_m" form:"box" jsonschema:"required"`
	// Center of a disc.
	Center Point `json:"center_m" form:"disc" jsonschema:"required"`
	// Radius of a disc.
	Radius float64 `json:"radius_m" form:"disc" jsonschema:"required"`
}

// Varied is a number of the scenario that is drawn for every trial.
type Varied struct {
	// Path of the number, as in robot.speed_m_s.
	Path string `json:"path" jsonschema:"required"`
	// Kind of draw: evenly in a range, evenly among whole steps of a range, evenly from a list, or normally distributed.
	Kind string `json:"kind" jsonschema:"required"`
	// Low end of the range, in the number's unit.
	Low float64 `json:"low" form:"uniform,steps" jsonschema:"required"`
	// High end of the range.
	High float64 `json:"high" form:"uniform,steps" jsonschema:"required"`
	// Step from one value of the range to the next.
	Step float64 `json:"step" form:"steps" jsonschema:"required"`
	// Mean of a normal distribution; what would lie outside what the number may be is drawn again.
	Mean float64 `json:"mean" form:"normal" jsonschema:"required"`
	// Standard deviation.
	Deviation float64 `json:"deviation" form:"normal" jsonschema:"required"`
	// Values of the list.
	Values []float64 `json:"values" form:"list" jsonschema:"required"`
}

// VariedSolid is a wall or solid that is shifted for every trial.
type VariedSolid struct {
	// Id of the wall or solid.
	ID string `json:"id" jsonschema:"required"`
	// How far it is shifted at most, in any direction, all places within alike.
	By float64 `json:"by_m" jsonschema:"required"`
}

// VariedMover is a mover that starts elsewhere in its timetable in every trial.
type VariedMover struct {
	// Id of the mover.
	ID string `json:"id" jsonschema:"required"`
	// Phase is how much further into its timetable it is at most.
	Phase float64 `json:"phase_s" jsonschema:"required"`
}

func (r Region) form() string {
	if r.Radius != 0 {
		return "disc"
	}
	return "box"
}

func (v Varied) form() string { return v.Kind }

// Empty reports whether nothing varies but the seed.
func (v *Vary) Empty() bool {
	return !v.SameSeed && len(v.Start)+len(v.Goal)+len(v.Numbers)+len(v.Solids)+len(v.Movers) == 0 && v.Turn == 0
}

// clone returns a deep copy.
func (v Vary) clone() Vary {
	v.Start, v.Goal = cloneOf(v.Start), cloneOf(v.Goal)
	v.Numbers, v.Solids, v.Movers = cloneOf(v.Numbers), cloneOf(v.Solids), cloneOf(v.Movers)
	for i := range v.Numbers {
		v.Numbers[i].Values = cloneOf(v.Numbers[i].Values)
	}
	return v
}

func cloneOf[T any](s []T) []T { return append([]T(nil), s...) }

// varyRules are the rules of what varies, in file order.
func varyRules() []rule {
	var list []rule
	for _, region := range []string{"start", "goal"} {
		at := "vary." + region
		if region == "goal" {
			list = append(list, inside("vary.turn_deg", "turn of the start heading", "°", 0, 180))
		}
		list = append(list,
			count(at, "regions", 0, 100),
			inside(at+"[].from_m[]", "coordinate", "m", 0, maxSide),
			inside(at+"[].to_m[]", "coordinate", "m", 0, maxSide),
			inside(at+"[].center_m[]", "coordinate", "m", 0, maxSide),
			inside(at+"[].radius_m", "radius", "m", 0.001, maxSide))
	}
	return append(list,
		inside("vary.margin_m", "margin of start and goal", "m", 0, 10),
		inside("vary.apart_m", "distance from start to goal", "m", 0, maxSide),
		count("vary.numbers", "numbers", 0, 50),
		text("vary.numbers[].path", "path", maxID, true),
		oneOf("vary.numbers[].kind", "kind", Option{"uniform", "evenly in a range"}, Option{"steps", "in steps of a range"},
			Option{"list", "from a list"}, Option{"normal", "normally"}),
		inside("vary.numbers[].low", "low end", "", -1e9, 1e9),
		inside("vary.numbers[].high", "high end", "", -1e9, 1e9),
		inside("vary.numbers[].step", "step", "", 1e-9, 1e9),
		inside("vary.numbers[].mean", "mean", "", -1e9, 1e9),
		inside("vary.numbers[].deviation", "standard deviation", "", 0, 1e9),
		count("vary.numbers[].values", "values", 1, 1000),
		inside("vary.numbers[].values[]", "value", "", -1e9, 1e9),
		count("vary.solids", "walls and solids", 0, MaxSolids),
		text("vary.solids[].id", "id", maxID, true),
		inside("vary.solids[].by_m", "shift", "m", 0, 100),
		count("vary.movers", "movers", 0, MaxMovers),
		text("vary.movers[].id", "id", maxID, true),
		inside("vary.movers[].phase_s", "phase", "s", 0, 86400),
	)
}
