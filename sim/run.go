package sim

import (
	"math"

	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/ring"
	"leeway/sim/steer"
)

// Run is one closed loop from its start to its Status.
type Run struct {
	cfg  Config // as given, with the numbers that edits have changed since
	dt   float64
	tick int64

	world  *floor.World
	ring   *ring.Ring
	drive  *drive.Drive
	engine *logic.Engine
	input  logic.Input

	pose    geom.Pose
	goal    geom.Vec
	u       geom.Vec     // wanted velocity, in the believed frame
	cmd     drive.Wheels // commanded wheel speeds
	limited bool         // the saturation rule had to limit them
	since   int64        // tick from which what is asked "within" counts
	ended   int64        // tick at which the run ended, if it has
	idled   int64        // ticks passed in ended states before the present one

	edits []Edit
	due   int // edits[:due] are done

	switches []logic.Switch
	contacts []Contact
	touching touches

	// room is a lower bound of the distance from the hull's centre to anything
	// solid. As long as it is larger than what matters, neither contact nor
	// clearance has to be asked for; in open floor that is almost always.
	room      float64
	moverStep float64 // the farthest that any mover goes in a tick, m

	saturated int64
	measures  Outcome
}

// Contact is one touch of the hull, from when it began.
type Contact struct {
	Tick  int64
	Time  float64  // s
	Point geom.Vec // on the thing touched
	Ref   floor.Ref
}

// New checks the config and returns a run that stands at tick 0. The error is
// a joined list of *ConfigError.
func New(c Config) (*Run, error) {
	m, err := floor.NewMap(c.Floor, reach(&c))
	if err != nil {
		return nil, err
	}
	return NewOn(m, c)
}

// NewOn is New on a floor map that other runs share; m must have been built
// from the same floor.
func NewOn(m *floor.Map, c Config) (*Run, error) {
	r := &Run{
		switches: make([]logic.Switch, 0, 256),
		contacts: make([]Contact, 0, 64),
	}
	if err := r.Reset(m, c); err != nil {
		return nil, err
	}
	return r, nil
}

// reach is how far the floor will be asked: it tunes the index only.
func reach(c *Config) float64 { return c.Ring.Mount + c.Ring.Max }

// idealise throws the switches of the config: what a shadow is, and nothing else.
func (r *Run) idealise() {
	c := &r.cfg
	if c.Ideal&PointMotion != 0 {
		c.Drive.Model = drive.Point
		r.pose.Pos = r.put(r.pose.Pos)
	}
	if c.Ideal&NoWheelLimits != 0 {
		c.Drive.MaxWheelSpeed, c.Drive.MaxWheelAccel, c.Steer.MaxWheelSpeed = 0, 0, 0
	}
	if c.Ideal&NoLag != 0 {
		c.Drive.Lag, c.Drive.DeadTime = 0, 0
	}
	if c.Ideal&AllRoundSight != 0 {
		c.Ring.AllRound = true
	}
	if c.Ideal&NoiselessSight != 0 {
		c.Ring.Noiseless = true
	}
	if c.Ideal&TruePosition != 0 {
		c.Drive.DeadReckoning = false
	}
	if c.Drive.Model != drive.TwoWheels {
		c.Drive.MaxWheelSpeed, c.Drive.MaxWheelAccel, c.Steer.MaxWheelSpeed = 0, 0, 0
		c.Drive.Lag, c.Drive.DeadTime = 0, 0
	}
}

// put returns where the hull's centre goes when the robot is put at p. That is p,
// but for a point under the look-ahead rule: the point that the plan is for is the
// one ahead of the axle.
func (r *Run) put(p geom.Vec) geom.Vec {
	if r.cfg.Drive.Model == drive.Point && r.cfg.Steer.Rule == steer.LookAhead {
		return p.AddScaled(r.cfg.Steer.Ahead, geom.Heading(r.pose.Theta))
	}
	return p
}

// Step goes on by one tick. Once the run has ended, ticks only pass, as in Idle,
// while there are edits still to come that may set it going again; after the last
// of them Step does nothing, and Tick stays.
func (r *Run) Step() {
	r.applyEdits()
	if r.measures.Status != Running {
		if r.Going() {
			r.Idle()
		}
		return
	}
	r.moveMovers()
	r.sense()
	r.estimate()
	r.decide()
	r.steer()
	r.actuate()
	r.move()
	r.measure()
}

// Idle lets a tick pass in a run that has ended: the clock goes on and what moves
// by itself moves, but nothing is measured. In a run that has not ended it does
// nothing.
func (r *Run) Idle() {
	if r.measures.Status == Running {
		return
	}
	r.world.Advance(float64(r.tick+1) * r.dt)
	r.tick++
	r.since++
}

// Finish steps until the run has ended and no edit is left to revive it, and
// returns its outcome.
func (r *Run) Finish() Outcome {
	for r.Going() {
		r.Step()
	}
	return r.Outcome()
}

// Going reports whether a further Step would do anything: the run has not ended, or
// there are edits still to come.
func (r *Run) Going() bool { return r.measures.Status == Running || r.due < len(r.edits) }

// Outcome returns the measures so far.
func (r *Run) Outcome() Outcome {
	o := r.measures
	o.Ticks = r.tick
	if o.Status != Running {
		o.Ticks = r.ended
	}
	o.Time = float64(o.Ticks) * r.dt
	if driven := o.Ticks - r.idled; driven > 0 {
		o.Saturated = float64(r.saturated) / float64(driven)
	}
	return o
}

// Status returns how the run stands.
func (r *Run) Status() Status { return r.measures.Status }

func (r *Run) time() float64 { return float64(r.tick) * r.dt }

// Tick returns how many ticks have been stepped.
func (r *Run) Tick() int64 { return r.tick }

// Time returns the time of the run, s.
func (r *Run) Time() float64 { return r.time() }

// Config returns the config in force: idealised, and with the numbers that
// edits have changed. Read only.
func (r *Run) Config() *Config { return &r.cfg }

// Pose returns where the robot is.
func (r *Run) Pose() geom.Pose { return r.pose }

// Belief returns where the robot believed itself to be when it last reckoned.
func (r *Run) Belief() drive.Estimate { return r.drive.Estimate() }

// Wanted returns the velocity u that the logic asked for last, in the frame of
// the belief.
func (r *Run) Wanted() geom.Vec { return r.u }

// Command returns the wheel speeds commanded at the last tick, rad/s; a point has
// none.
func (r *Run) Command() drive.Wheels { return r.cmd }

// Twist returns the actual speed (m/s) and turning (rad/s); a point's speed is
// that of its velocity, and it does not turn.
func (r *Run) Twist() (v, omega float64) {
	if r.cfg.Drive.Model == drive.Point {
		return r.u.Norm(), 0
	}
	return r.drive.Twist()
}

// Drive returns the machine. Read only.
func (r *Run) Drive() *drive.Drive { return r.drive }

// Scan returns what the ring knows. Read only.
func (r *Run) Scan() *ring.Scan { return r.ring.Scan() }

// World returns the floor as it stands now. Read only.
func (r *Run) World() *floor.World { return r.world }

// Goal returns where the goal is now.
func (r *Run) Goal() geom.Vec { return r.goal }

// Engine returns the switching automaton's state. Read only.
func (r *Run) Engine() *logic.Engine { return r.engine }

// Switches returns every decision to change mode so far, with what was looked
// at; the first maxLogged of them.
func (r *Run) Switches() []logic.Switch { return r.switches }

// Contacts returns the touches so far; the first maxLogged of them.
func (r *Run) Contacts() []Contact { return r.contacts }

// Gap returns the distance from the hull to the nearest solid now, m: negative
// when it is pushed in, +Inf on an empty floor.
func (r *Run) Gap() float64 {
	n, ok := r.world.Nearest(r.pose.Pos, farthest)
	if !ok {
		return math.Inf(1)
	}
	return n.Distance - r.cfg.Hull
}

// Why says in one sentence why the current mode was entered.
func (r *Run) Why() string {
	s, ok := r.engine.LastSwitch()
	if !ok {
		return "This is where the logic starts."
	}
	return r.cfg.Logic.Why(s)
}
