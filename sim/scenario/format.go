package scenario

import "reflect"

// Version is the version of the format that this package writes, and the newest it reads.
const Version = 1

// Limits that keep a hostile file from hurting a server.
const (
	MaxBytes     = 4 << 20   // of a file, and of a link once unpacked
	MaxDepth     = 12        // of nesting
	MaxValues    = 1_000_000 // numbers, texts, lists and objects of a file
	MaxLinkChars = 1 << 20   // accepted
	LongLink     = 8000      // characters beyond which a file is offered instead
	MaxPieces    = 60_000    // straight pieces of wall, sides of solids included
	MaxWallLen   = 10_000    // points of one wall
	MaxCorners   = 200       // of one solid
	MaxSolids    = 5_000
	MaxMovers    = 200
	MaxRoute     = 200 // way points of one mover
	MaxBeams     = 720
	MaxRays      = 3_600  // beams times the rays of a cone
	MaxEdits     = 20_000 // ten minutes of dragging
	MaxModes     = 50
	MaxProblems  = 50 // reported at once; the rest is counted
)

// Scenario is the file as Go values, in the units of the file (metres, degrees).
// New returns one with every default; Parse fills in what a file leaves out.
type Scenario struct {
	// Version of the format.
	Version int `json:"leeway" jsonschema:"required"`
	// Name, a few words.
	Name string `json:"name"`
	// Purpose says in one line what the scenario is for.
	Purpose string `json:"purpose"`
	// Seed of everything random. The same seed gives the same run.
	Seed int64 `json:"seed"`
	// Floor: walls, solids and movers.
	Floor Floor `json:"floor" jsonschema:"required"`
	// Robot: hull, wheels, position keeping, steering.
	Robot Robot `json:"robot"`
	// Ring of range sensors.
	Ring Ring `json:"ring"`
	// Logic that switches between modes.
	Logic Logic `json:"logic"`
	// Start pose of the hull's centre.
	Start Start `json:"start" jsonschema:"required"`
	// Goal to reach.
	Goal Goal `json:"goal" jsonschema:"required"`
	// Asked is what the run must show.
	Asked Asked `json:"asked"`
	// Timing of the run.
	Timing Timing `json:"timing"`
	// Ideal lists what is idealised, each a switch of its own.
	Ideal []string `json:"ideal" jsonschema:"uniqueItems=true"`
	// What a touch does to the run.
	OnContact string `json:"on_contact"`
	// Edits that people made while the run went on, in order of tick.
	Edits []Edit `json:"edits"`
	// Vary says what differs from trial to trial when the scenario is tried many times.
	Vary Vary `json:"vary,omitempty"`
}

// Point is a place [x, y] in metres, x to the east and y to the north of the floor's south-west corner.
type Point [2]float64

// Floor is the world a robot drives in.
type Floor struct {
	// Width of the floor (west to east).
	Width float64 `json:"width_m" jsonschema:"required"`
	// Height of the floor (south to north).
	Height float64 `json:"height_m" jsonschema:"required"`
	// Enclosed floors have a wall along their whole border.
	Enclosed bool `json:"enclosed"`
	// Walls are thin and felt from both sides.
	Walls []Wall `json:"walls"`
	// Solids are filled.
	Solids []Solid `json:"solids"`
	// Movers follow a route by themselves.
	Movers []Mover `json:"movers"`
}

// Wall is a chain of thin straight pieces, left open.
type Wall struct {
	// Id of the wall, its own among walls, solids and movers; w1, w2, … when left out.
	ID string `json:"id"`
	// Points that the wall joins in order.
	Points []Point `json:"points_m" jsonschema:"required"`
}

// Solid is a filled thing: a polygon (corners_m) or a disc (center_m and radius_m).
type Solid struct {
	// Id of the solid, its own among walls, solids and movers; s1, s2, … when left out.
	ID string `json:"id"`
	// Corners of a simple polygon, convex or not, in either winding; the last is joined to the first.
	Corners []Point `json:"corners_m" form:"polygon" jsonschema:"required"`
	// Center of a disc.
	Center Point `json:"center_m" form:"disc" jsonschema:"required"`
	// Radius of a disc.
	Radius float64 `json:"radius_m" form:"disc" jsonschema:"required"`
}

// Mover is a box (box_m) or a disc (radius_m) that follows a route by itself, whatever is in its way.
type Mover struct {
	// Id of the mover, its own among walls, solids and movers; m1, m2, … when left out.
	ID string `json:"id"`
	// Box is its length and width.
	Box [2]float64 `json:"box_m" form:"box" jsonschema:"required"`
	// Radius of a round mover.
	Radius float64 `json:"radius_m" form:"disc" jsonschema:"required"`
	// Heading of its length; it stays as it is along the route.
	Heading float64 `json:"heading_deg"`
	// Route of its centre; one point stands still.
	Route []Point `json:"route_m" jsonschema:"required"`
	// Loop goes from the last point straight to the first; else it goes back the way it came.
	Loop bool `json:"loop"`
	// Speed along the route.
	Speed float64 `json:"speed_m_s"`
	// Pause at every point of the route.
	Pause float64 `json:"pause_s"`
	// Offset is how far into its timetable it is when the run starts.
	Offset float64 `json:"offset_s"`
}

// Robot is the machine.
type Robot struct {
	// Radius of the hull, a disc.
	Radius float64 `json:"radius_m"`
	// Motion model: a point that goes wherever it is told, a unicycle without limits, or two driven wheels.
	Motion string `json:"motion"`
	// Speed that it drives at where nothing holds it back.
	Speed float64 `json:"speed_m_s"`
	// Wheel radius as the robot believes it to be.
	WheelRadius float64 `json:"wheel_radius_m"`
	// Distance from wheel to wheel as the robot believes it to be.
	Track float64 `json:"track_m"`
	// The fastest a wheel turns; 0 for no limit.
	WheelSpeedMax float64 `json:"wheel_speed_max_rad_s"`
	// The hardest a wheel speeds up or slows down; 0 for no limit.
	WheelAccelMax float64 `json:"wheel_accel_max_rad_s2"`
	// Wheel lag: the time constant with which wheel speeds follow their commands.
	WheelLag float64 `json:"wheel_lag_s"`
	// Dead time that passes before a command has any effect.
	WheelDeadTime float64 `json:"wheel_dead_time_s"`
	// Position keeping: dead reckoning from the wheels, or the true pose.
	Position string `json:"position"`
	// Encoder counts of one turn of a wheel; 0 for perfect encoders.
	EncoderCounts int `json:"encoder_counts_per_turn"`
	// The true radius of the right wheel over the believed one.
	RightWheelScale float64 `json:"right_wheel_scale"`
	// The true radius of the left wheel over the believed one.
	LeftWheelScale float64 `json:"left_wheel_scale"`
	// The true track over the believed one.
	TrackScale float64 `json:"track_scale"`
	// Slip is the variance of a wheel's travel for each metre it turns (m² per m).
	Slip float64 `json:"slip_m"`
	// Time between position fixes; 0 for none.
	FixEvery float64 `json:"fix_every_s"`
	// Standard deviation of a fix in x and in y.
	FixNoise float64 `json:"fix_noise_m"`
	// Standard deviation of a fix in heading.
	FixTurnNoise float64 `json:"fix_noise_deg"`
	// Steering rule, from the wanted velocity to turning and driving.
	Steering string `json:"steering"`
	// Gain of the heading servo.
	SteeringGain float64 `json:"steering_gain_per_s"`
	// Says how fast the heading servo drives while it turns.
	SpeedLaw string `json:"speed_law"`
	// The heading error beyond which stop-and-turn stops.
	TurnBeyond float64 `json:"turn_beyond_deg"`
	// How far ahead of the axle the look-ahead point lies.
	LookAhead float64 `json:"look_ahead_m"`
	// Saturation says what gives way when a wheel would have to turn too fast.
	Saturation string `json:"saturation"`
}

// Ring is the ring of range sensors.
type Ring struct {
	// Beams, spread evenly, the first dead ahead; with bearings_deg, the number of those.
	Beams int `json:"beams"`
	// Bearings of the beams, counter-clockwise from dead ahead, when they are not spread evenly.
	Bearings []float64 `json:"bearings_deg"`
	// Distance of the sensors from the hull's centre.
	Mount float64 `json:"mount_m"`
	// The shortest distance that a sensor measures.
	RangeMin float64 `json:"range_min_m"`
	// The longest distance that a sensor measures.
	RangeMax float64 `json:"range_max_m"`
	// Standard deviation of a reading at no distance.
	Noise float64 `json:"noise_m"`
	// What each metre of distance adds to the standard deviation.
	NoisePerM float64 `json:"noise_per_m"`
	// Probability that an echo is lost.
	Dropout float64 `json:"dropout"`
	// Probability of a reading that has nothing to do with the floor.
	Random float64 `json:"random"`
	// Step of which readings are whole multiples; 0 for none.
	Step float64 `json:"step_m"`
	// Period between two readings of a beam, a whole number of ticks.
	Period float64 `json:"period_s"`
	// When true, beams fire one after the other, spread over the period; else all at once.
	InTurn bool `json:"in_turn"`
	// Opening angle of a beam; 0 for a thin ray.
	Cone float64 `json:"cone_deg"`
	// Number of rays that make up a cone; the nearest echo counts.
	ConeRays int `json:"cone_rays"`
}

// Logic is the switching table: the default one with its numbers, or a whole table.
type Logic struct {
	// Kind of logic: the default one, or a table of one's own.
	Kind string `json:"kind"`
	// How near something on the way to the goal must be to be followed; left out, it follows hull and speed.
	Notice *float64 `json:"notice_m,omitempty" form:"default"`
	// Gap to a followed wall; left out, it follows hull and speed.
	StandOff *float64 `json:"stand_off_m,omitempty" form:"default"`
	// Gap below which avoidance takes over; left out, it follows hull and speed.
	Safe *float64 `json:"safe_m,omitempty" form:"default"`
	// How far beyond the safe gap avoidance lets go; left out, it follows hull and speed.
	Band *float64 `json:"band_m,omitempty" form:"default"`
	// How much nearer to the goal a wall must be left than it was met; left out, it follows hull and speed.
	Gain *float64 `json:"gain_m,omitempty" form:"default"`
	// Least time in a mode before it is left for another way; left out, it follows hull and speed.
	MinTime *float64 `json:"min_time_s,omitempty" form:"default"`
	// Side on which a wall is kept.
	Side string `json:"side" form:"default"`
	// Name of the table.
	Name string `json:"name" form:"table"`
	// Start is the name of the mode a run starts in.
	Start string `json:"start" form:"table" jsonschema:"required"`
	// Sector is the half width of the sectors in which ahead, front, left and right look.
	Sector float64 `json:"sector_deg" form:"table"`
	// Margin: least clearance on either side of the hull that a way must have to count as free.
	Margin float64 `json:"margin_m" form:"table"`
	// Modes of the table.
	Modes []Mode `json:"modes" form:"table" jsonschema:"required"`
	// Transitions in order of priority.
	Transitions []Transition `json:"transitions" form:"table" jsonschema:"required"`
}

// Mode is one mode of a table.
type Mode struct {
	// Name of the mode, its own in the table.
	Name string `json:"name" jsonschema:"required"`
	// Behaviour in the mode.
	Behaviour string `json:"behaviour" jsonschema:"required"`
	// Ending says whether reaching the mode ends the run, and how.
	Ending string `json:"ending"`
	// Side on which a wall is kept.
	Side string `json:"side"`
	// Gap to a followed wall.
	StandOff float64 `json:"stand_off_m"`
	// Slows the robot down near the goal: v = gain × distance, up to its speed.
	GoalGain float64 `json:"goal_gain_per_s"`
	// Share of the robot's speed used in the mode.
	SpeedShare float64 `json:"speed_share"`
}

// Transition leads from one mode to another when all its conditions hold.
type Transition struct {
	// From is the name of the mode that is left, or any.
	From string `json:"from" jsonschema:"required"`
	// To is the name of the mode that is entered.
	To string `json:"to" jsonschema:"required"`
	// When lists the conditions, all of which must hold; without any, min_time_s or hold_s fires the transition.
	When []Condition `json:"when" jsonschema:"required"`
	// Least time in the mode before the transition may fire.
	MinTime float64 `json:"min_time_s"`
	// Hold is how long the conditions must have held.
	Hold float64 `json:"hold_s"`
	// Meet marks that an obstacle is met: side, meeting point and best distance start here.
	Meet bool `json:"meet"`
}

// Condition compares a reading with a threshold.
type Condition struct {
	// Reading that is looked at.
	Reading string `json:"reading" jsonschema:"required"`
	// Relation of the reading to the threshold.
	Relation string `json:"relation" jsonschema:"required"`
	// Threshold of the reading, in its unit.
	Threshold float64 `json:"threshold"`
	// Band beyond the threshold within which a condition that held goes on holding.
	Band float64 `json:"band"`
	// Against is a second reading that is added to the threshold.
	Against string `json:"against,omitempty"`
}

// Start is the pose the robot starts from.
type Start struct {
	// X of the hull's centre.
	X float64 `json:"x_m" jsonschema:"required"`
	// Y of the hull's centre.
	Y float64 `json:"y_m" jsonschema:"required"`
	// Heading, counter-clockwise from east.
	Heading float64 `json:"heading_deg"`
}

// Goal is where the robot must get to.
type Goal struct {
	// X of the goal's centre.
	X float64 `json:"x_m" jsonschema:"required"`
	// Y of the goal's centre.
	Y float64 `json:"y_m" jsonschema:"required"`
	// Radius within which the robot has arrived.
	Radius float64 `json:"radius_m"`
}

// Asked is what is asked of a run.
type Asked struct {
	// Time in which the robot must arrive; the run ends there.
	Within float64 `json:"within_s"`
	// Least gap that must be kept between hull and anything solid.
	Leeway float64 `json:"leeway_m"`
	// Most changes of mode; -1 when nothing is asked of them.
	Switches int `json:"switches"`
	// Success is the share of trials that must show all this; left out or 0, it is 0.9.
	Success float64 `json:"success,omitempty"`
	// Confidence with which that share must be shown; left out or 0, it is 0.95.
	Confidence float64 `json:"confidence,omitempty"`
}

// Timing is how the run is cut into ticks.
type Timing struct {
	// Step of the physics.
	Tick float64 `json:"tick_s"`
	// Time between two decisions of the logic, a whole number of ticks.
	DecideEvery float64 `json:"decide_every_s"`
}

// Edit is one change that a person made in a running scenario, due at the start of a tick.
type Edit struct {
	// Tick at which it is due.
	Tick int64 `json:"tick" jsonschema:"required"`
	// What was changed.
	What string `json:"what" jsonschema:"required"`
	// Id of the wall, solid or mover.
	ID string `json:"id" form:"solid,mover" jsonschema:"required"`
	// To is where its anchor went: the goal's or hull's centre, a wall's first point, a solid's first corner or centre, the first point of a mover's route.
	To Point `json:"to_m" form:"goal,robot,solid,mover" jsonschema:"required"`
	// Name of the number.
	Name string `json:"name" form:"number" jsonschema:"required"`
	// Value of the number from then on.
	Value float64 `json:"value" form:"number" jsonschema:"required"`
}

// former is a value of one of several forms; the fields of the others are zero.
type former interface{ form() string }

func (s Solid) form() string {
	if len(s.Corners) > 0 {
		return "polygon"
	}
	return "disc"
}

func (m Mover) form() string {
	if m.Radius != 0 {
		return "disc"
	}
	return "box"
}

func (l Logic) form() string { return l.Kind }
func (e Edit) form() string  { return e.What }

// New returns a scenario with every default, on an enclosed floor of the given
// size (m) without anything on it, from its south-west to its north-east corner.
func New(width, height float64) *Scenario {
	s := defaults()
	s.Floor.Width, s.Floor.Height = width, height
	s.Start.X, s.Start.Y = min(1, width/4), min(1, height/4)
	s.Goal.X, s.Goal.Y = width-s.Start.X, height-s.Start.Y
	return &s
}

func defaults() Scenario {
	return Scenario{
		Version: Version,
		Name:    "Untitled",
		Seed:    1,
		Floor:   Floor{Enclosed: true},
		Robot: Robot{
			Radius: 0.21, Motion: "two_wheels", Speed: 0.45,
			WheelRadius: 0.05, Track: 0.30,
			WheelSpeedMax: 14, WheelAccelMax: 40, WheelLag: 0.08, WheelDeadTime: 0.02,
			Position: "dead_reckoning", EncoderCounts: 1024,
			RightWheelScale: 1, LeftWheelScale: 1, TrackScale: 1, Slip: 0.00001,
			FixEvery: 5, FixNoise: 0.02, FixTurnNoise: 1,
			Steering: "heading_servo", SteeringGain: 3, SpeedLaw: "cosine", TurnBeyond: 60, LookAhead: 0.10,
			Saturation: "keep_curve",
		},
		Ring: Ring{
			Beams: 16, Mount: 0.19, RangeMin: 0.02, RangeMax: 3,
			Noise: 0.01, NoisePerM: 0.005, Dropout: 0.005, Step: 0.001,
			Period: 0.05, ConeRays: 1,
		},
		Logic:     preset(reflect.TypeFor[Logic](), "default").(Logic),
		Goal:      Goal{Radius: 0.15},
		Asked:     Asked{Within: 90, Leeway: 0.05, Switches: -1},
		Timing:    Timing{Tick: 0.005, DecideEvery: 0.02},
		OnContact: "scrape",
	}
}

// preset returns what a struct in a list, or of several forms, holds where the file says nothing; nil for nothing.
func preset(t reflect.Type, form string) any {
	switch {
	case t == reflect.TypeFor[Mover]():
		return Mover{Speed: 0.4}
	case t == reflect.TypeFor[Mode]():
		return Mode{Ending: "goes_on", Side: "better", SpeedShare: 1}
	case t == reflect.TypeFor[Logic]() && form == "default":
		return Logic{Kind: "default", Side: "better"}
	case t == reflect.TypeFor[Logic]():
		return Logic{Kind: "table", Name: "A table", Sector: 30, Margin: 0.04}
	}
	return nil
}
