package scenario

import (
	"slices"
	"sync"

	"leeway/sim"
)

// Field describes a number or a choice of the file that a person can change by itself.
type Field struct {
	Path           string
	Label          string // "hull radius"
	Unit           string // "m", "m/s", "", "beams"
	Min, Max, Step float64
	Decimals       int      // worth showing
	Options        []Option // of a choice; nil for a number
	Live           bool     // applies to a running robot (sim.SetNumber); else the run restarts
	Number         sim.Number
	Asked          bool // what is asked: applies at once and changes nothing about the run but when it ends and how it is judged
}

// Option is one value of a choice.
type Option struct{ Value, Label string }

// rule is what one place of the file may hold. Places inside lists are written with [] ("floor.walls[].points_m").
type rule struct {
	Field
	edit     bool // a person can change it by itself
	items    bool // Min and Max count the elements of a list
	chars    int  // longest text
	oneLine  bool // text without control characters
	nonEmpty bool
}

func num(path, label, unit string, min, max, step float64, decimals int) rule {
	return rule{Field: Field{Path: path, Label: label, Unit: unit, Min: min, Max: max, Step: step, Decimals: decimals}, edit: true}
}

// inside is a number that no person changes by itself.
func inside(path, label, unit string, min, max float64) rule {
	return rule{Field: Field{Path: path, Label: label, Unit: unit, Min: min, Max: max}}
}

func live(r rule, n sim.Number) rule { r.Live, r.Number = true, n; return r }
func asked(r rule) rule              { r.Asked = true; return r }

func choice(path, label string, options ...Option) rule {
	return rule{Field: Field{Path: path, Label: label, Options: options}, edit: true}
}

func onOff(path, label, no, yes string) rule {
	return choice(path, label, Option{"false", no}, Option{"true", yes})
}

func oneOf(path, label string, options ...Option) rule {
	return rule{Field: Field{Path: path, Label: label, Options: options}}
}

func count(path, label string, min, max float64) rule {
	return rule{Field: Field{Path: path, Label: label, Min: min, Max: max}, items: true}
}

func text(path, label string, chars int, nonEmpty bool) rule {
	return rule{Field: Field{Path: path, Label: label}, chars: chars, oneLine: true, nonEmpty: nonEmpty}
}

const (
	maxSide  = 500  // m, of a floor
	maxReach = 1000 // m, of any coordinate: a thing dragged to the other end of a floor may stick out of it
	maxTicks = 1_000_000_000
	maxName  = 200
	maxID    = 60
	maxSeed  = 1<<53 - 1 // the largest whole number that every JSON reader keeps
)

// rules is the one table of what the file may hold, in file order.
var rules = sync.OnceValue(func() []rule {
	turn := 360.0
	sides := []Option{{"better", "the better side"}, {"left", "the left"}, {"right", "the right"}}
	return append([]rule{
		inside("leeway", "version of the format", "", Version, Version),
		text("name", "name", maxName, false),
		text("purpose", "purpose", maxName, false),
		num("seed", "seed", "", 0, maxSeed, 1, 0),

		num("floor.width_m", "width of the floor", "m", 1, maxSide, 0.5, 2),
		num("floor.height_m", "height of the floor", "m", 1, maxSide, 0.5, 2),
		onOff("floor.enclosed", "border", "open", "walled"),
		count("floor.walls", "walls", 0, MaxPieces),
		text("floor.walls[].id", "id", maxID, true),
		count("floor.walls[].points_m", "points", 2, MaxWallLen),
		inside("floor.walls[].points_m[][]", "coordinate", "m", -maxReach, maxReach),
		count("floor.solids", "solids", 0, MaxSolids),
		text("floor.solids[].id", "id", maxID, true),
		count("floor.solids[].corners_m", "corners", 3, MaxCorners),
		inside("floor.solids[].corners_m[][]", "coordinate", "m", -maxReach, maxReach),
		inside("floor.solids[].center_m[]", "coordinate", "m", -maxReach, maxReach),
		inside("floor.solids[].radius_m", "radius", "m", 0.001, maxSide),
		count("floor.movers", "movers", 0, MaxMovers),
		text("floor.movers[].id", "id", maxID, true),
		inside("floor.movers[].box_m[]", "side", "m", 0.01, 50),
		inside("floor.movers[].radius_m", "radius", "m", 0.01, 25),
		inside("floor.movers[].heading_deg", "heading", "°", -turn, turn),
		count("floor.movers[].route_m", "points", 1, MaxRoute),
		inside("floor.movers[].route_m[][]", "coordinate", "m", -maxReach, maxReach),
		inside("floor.movers[].speed_m_s", "speed", "m/s", 0.001, 20),
		inside("floor.movers[].pause_s", "pause", "s", 0, 3600),
		inside("floor.movers[].offset_s", "offset", "s", 0, 86400),

		num("robot.radius_m", "hull radius", "m", 0.02, 2, 0.01, 2),
		choice("robot.motion", "motion", Option{"point", "as a point"}, Option{"unicycle", "as a unicycle"}, Option{"two_wheels", "on two wheels"}),
		live(num("robot.speed_m_s", "speed", "m/s", 0.01, 5, 0.01, 2), sim.SpeedNumber),
		num("robot.wheel_radius_m", "wheel radius", "m", 0.005, 1, 0.005, 3),
		num("robot.track_m", "track", "m", 0.01, 4, 0.01, 2),
		num("robot.wheel_speed_max_rad_s", "wheel speed limit", "rad/s", 0, 1000, 0.5, 1),
		num("robot.wheel_accel_max_rad_s2", "wheel acceleration limit", "rad/s²", 0, 10000, 1, 1),
		live(num("robot.wheel_lag_s", "wheel lag", "s", 0, 5, 0.01, 2), sim.LagNumber),
		num("robot.wheel_dead_time_s", "dead time", "s", 0, 2, 0.005, 3),
		choice("robot.position", "position", Option{"dead_reckoning", "dead reckoning"}, Option{"true_pose", "knowing its true pose"}),
		num("robot.encoder_counts_per_turn", "encoder counts a turn", "", 0, 1e6, 1, 0),
		num("robot.right_wheel_scale", "right wheel, true over believed", "", 0.5, 2, 0.001, 4),
		num("robot.left_wheel_scale", "left wheel, true over believed", "", 0.5, 2, 0.001, 4),
		num("robot.track_scale", "track, true over believed", "", 0.5, 2, 0.001, 4),
		num("robot.slip_m", "slip", "m", 0, 0.1, 0.00001, 5),
		num("robot.fix_every_s", "time between position fixes", "s", 0, 3600, 0.5, 1),
		num("robot.fix_noise_m", "noise of a fix", "m", 0, 10, 0.01, 2),
		num("robot.fix_noise_deg", "noise of a fix in heading", "°", 0, 180, 0.5, 1),
		choice("robot.steering", "steering", Option{"heading_servo", "heading servo"}, Option{"look_ahead", "look-ahead point"}),
		live(num("robot.steering_gain_per_s", "steering gain", "1/s", 0.1, 50, 0.1, 1), sim.GainNumber),
		choice("robot.speed_law", "speed while turning", Option{"cosine", "slowing by the cosine"}, Option{"full", "at full speed"}, Option{"stop_and_turn", "stopping to turn"}),
		num("robot.turn_beyond_deg", "stop and turn beyond", "°", 1, 180, 1, 0),
		num("robot.look_ahead_m", "look-ahead distance", "m", 0.01, 2, 0.01, 2),
		choice("robot.saturation", "a wheel at its limit", Option{"keep_curve", "keeps the curve"}, Option{"keep_turn", "keeps the turn"}, Option{"clip_each", "is clipped by itself"}),

		num("ring.beams", "beams", "beams", 1, MaxBeams, 1, 0),
		count("ring.bearings_deg", "bearings", 0, MaxBeams),
		inside("ring.bearings_deg[]", "bearing", "°", -turn, turn),
		num("ring.mount_m", "mount radius", "m", 0, 2, 0.01, 2),
		num("ring.range_min_m", "shortest range", "m", 0, 10, 0.01, 2),
		num("ring.range_max_m", "range", "m", 0.05, 100, 0.1, 2),
		live(num("ring.noise_m", "noise", "m", 0, 1, 0.001, 3), sim.NoiseNumber),
		live(num("ring.noise_per_m", "noise for each metre", "m/m", 0, 1, 0.001, 3), sim.NoiseGainNumber),
		live(num("ring.dropout", "lost echoes", "", 0, 1, 0.005, 3), sim.DropoutNumber),
		num("ring.random", "random readings", "", 0, 1, 0.005, 3),
		num("ring.step_m", "step of a reading", "m", 0, 1, 0.001, 3),
		num("ring.period_s", "time between readings", "s", 0.0005, 10, 0.005, 3),
		onOff("ring.in_turn", "firing", "all at once", "in turn"),
		num("ring.cone_deg", "opening angle of a beam", "°", 0, 120, 1, 1),
		num("ring.cone_rays", "rays in a cone", "", 1, 31, 1, 0),

		oneOf("logic.kind", "kind", Option{"default", "the default logic"}, Option{"table", "a table"}),
		num("logic.notice_m", "noticing obstacles at", "m", 0.01, 20, 0.01, 2),
		num("logic.stand_off_m", "gap to a followed wall", "m", 0.005, 10, 0.01, 2),
		num("logic.safe_m", "avoiding below", "m", 0, 10, 0.01, 2),
		num("logic.band_m", "release band", "m", 0, 10, 0.01, 2),
		num("logic.gain_m", "gain before leaving a wall", "m", 0, 100, 0.05, 2),
		num("logic.min_time_s", "least time in a mode", "s", 0, 60, 0.1, 1),
		choice("logic.side", "wall kept on", sides...),
		text("logic.name", "name of the table", maxName, false),
		text("logic.start", "start mode", maxName, true),
		inside("logic.sector_deg", "half width of the sectors", "°", 1, 180),
		inside("logic.margin_m", "margin", "m", 0, 10),
		count("logic.modes", "modes", 1, MaxModes),
		text("logic.modes[].name", "name", maxName, true),
		oneOf("logic.modes[].behaviour", "behaviour", behaviours()...),
		oneOf("logic.modes[].ending", "ending", Option{"goes_on", "goes on"}, Option{"arrived", "arrived"}, Option{"gave_up", "gave up"}),
		oneOf("logic.modes[].side", "wall kept on", sides...),
		inside("logic.modes[].stand_off_m", "gap to a followed wall", "m", 0, 10),
		inside("logic.modes[].goal_gain_per_s", "goal gain", "1/s", 0, 1000),
		inside("logic.modes[].speed_share", "share of the speed", "", 0.01, 1),
		count("logic.transitions", "transitions", 0, 500),
		text("logic.transitions[].from", "mode left", maxName, true),
		text("logic.transitions[].to", "mode entered", maxName, true),
		count("logic.transitions[].when", "conditions", 0, 20),
		oneOf("logic.transitions[].when[].reading", "reading", readings()...),
		oneOf("logic.transitions[].when[].relation", "relation", Option{"below", "below"}, Option{"at_least", "at least"}),
		inside("logic.transitions[].when[].threshold", "threshold", "", -1e6, 1e6),
		inside("logic.transitions[].when[].band", "release band", "", 0, 1e6),
		oneOf("logic.transitions[].when[].against", "reading added to the threshold", append([]Option{{"", "none"}}, readings()...)...),
		inside("logic.transitions[].min_time_s", "least time in the mode", "s", 0, 3600),
		inside("logic.transitions[].hold_s", "holding time", "s", 0, 60),

		num("start.x_m", "start, x", "m", 0, maxSide, 0.1, 2),
		num("start.y_m", "start, y", "m", 0, maxSide, 0.1, 2),
		num("start.heading_deg", "start heading", "°", -turn, turn, 5, 0),
		num("goal.x_m", "goal, x", "m", 0, maxSide, 0.1, 2),
		num("goal.y_m", "goal, y", "m", 0, maxSide, 0.1, 2),
		num("goal.radius_m", "goal radius", "m", 0.01, 10, 0.01, 2),
		asked(num("asked.within_s", "time asked", "s", 1, 3600, 5, 0)),
		asked(num("asked.leeway_m", "leeway asked", "m", 0, 5, 0.01, 2)),
		asked(num("asked.switches", "switches asked", "", -1, 1e6, 1, 0)),
		inside("asked.success", "share of trials asked", "", 0, 0.9999),
		inside("asked.confidence", "confidence asked", "", 0, 0.9999),
		num("timing.tick_s", "physics step", "s", 0.0005, 0.05, 0.0005, 4),
		num("timing.decide_every_s", "time between decisions", "s", 0.0005, 1, 0.005, 4),
		count("ideal", "idealisations", 0, 6),
		oneOf("ideal[]", "idealisation",
			Option{"point_motion", "point motion"}, Option{"no_wheel_limits", "no wheel limits"}, Option{"no_lag", "no lag"},
			Option{"all_round_sight", "all-round sight"}, Option{"noiseless_sight", "noiseless sight"}, Option{"true_position", "true position"}),
		choice("on_contact", "a touch", Option{"scrape", "scrapes along"}, Option{"end", "ends the run"}),
		count("edits", "edits", 0, MaxEdits),
		inside("edits[].tick", "tick", "", 0, maxTicks),
		oneOf("edits[].what", "what", Option{"goal", "goal"}, Option{"solid", "wall or solid"}, Option{"mover", "mover"}, Option{"robot", "robot"}, Option{"number", "number"}),
		text("edits[].id", "id", maxID, true),
		inside("edits[].to_m[]", "coordinate", "m", -maxReach, maxReach),
		text("edits[].name", "name of the number", maxID, true),
		inside("edits[].value", "value", "", -1e9, 1e9),
	}, varyRules()...)
})

var ruleAt = sync.OnceValue(func() map[string]*rule {
	m := map[string]*rule{}
	list := rules()
	for i := range list {
		m[list[i].Path] = &list[i]
	}
	return m
})

// Fields returns all numbers and choices that a person can change by themselves, in file order.
func Fields() []Field {
	var out []Field
	for _, r := range rules() {
		if r.edit {
			out = append(out, r.copyOfField())
		}
	}
	return out
}

// FieldAt returns the field with this path.
func FieldAt(path string) (Field, bool) {
	if r := ruleAt()[path]; r != nil && r.edit {
		return r.copyOfField(), true
	}
	return Field{}, false
}

func (r *rule) copyOfField() Field {
	f := r.Field
	f.Options = slices.Clone(f.Options)
	return f
}
