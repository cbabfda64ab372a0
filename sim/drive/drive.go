package drive

import (
	"math"

	"leeway/sim/chance"
	"leeway/sim/geom"
)

// Drive is the state of one machine. Methods that step it do not allocate.
type Drive struct {
	model    Model
	actuator actuator
	left     wheel
	right    wheel
	limited  bool

	radius, track           float64 // nominal, m
	leftRadius, rightRadius float64 // true, m
	trueTrack               float64 // m

	slip                float64 // m
	slipLeft, slipRight chance.Stream

	odometer odometer
}

// New returns a machine at rest whose estimate is the start pose. tick is the
// physics step in seconds. c is taken as it is; sim checks it.
func New(c Config, tick float64, seed uint64, start geom.Pose) *Drive {
	d := new(Drive)
	d.Reset(c, tick, seed, start)
	return d
}

// Reset puts d back to rest, as New, keeping its memory.
func (d *Drive) Reset(c Config, tick float64, seed uint64, start geom.Pose) {
	line := d.actuator.line[:0]
	*d = Drive{
		model:       c.Model,
		radius:      c.WheelRadius,
		track:       c.Track,
		leftRadius:  float64(c.WheelRadius * scale(c.LeftScale)),
		rightRadius: float64(c.WheelRadius * scale(c.RightScale)),
		trueTrack:   float64(c.Track * scale(c.TrackScale)),
		slip:        c.Slip,
		slipLeft:    chance.New(seed, "slip left", 0),
		slipRight:   chance.New(seed, "slip right", 0),
		odometer:    newOdometer(&c, tick, seed, start),
	}
	d.actuator = actuator{tick: tick, maxSpeed: math.Inf(1), line: line}
	if c.Model != TwoWheels {
		return
	}
	a := &d.actuator
	if c.MaxWheelSpeed > 0 {
		a.maxSpeed = c.MaxWheelSpeed
	}
	a.maxAccel = c.MaxWheelAccel
	a.setLag(c.Lag)
	for n := ticks(c.DeadTime, tick); n > 0; n-- {
		a.line = append(a.line, Wheels{})
	}
}

// scale returns the factor that s stands for: 0 means 1.
func scale(s float64) float64 {
	if s == 0 {
		return 1
	}
	return s
}

// ticks returns the whole number of ticks nearest to a time, both in seconds.
func ticks(time, tick float64) int64 { return int64(math.Floor(time/tick + 0.5)) }

// CopyFrom makes d the same as src, keeping its memory.
func (d *Drive) CopyFrom(src *Drive) {
	line := append(d.actuator.line[:0], src.actuator.line...)
	*d = *src
	d.actuator.line = line
}

// SetLag changes the lag of a running machine, in seconds. Only two wheels have one.
func (d *Drive) SetLag(tau float64) {
	if d.model == TwoWheels {
		d.actuator.setLag(tau)
	}
}

// Actuate passes the commanded wheel speeds (rad/s) through dead time, speed
// and acceleration limit and lag for one tick. The unicycle's wheels do at once
// as they are told.
func (d *Drive) Actuate(cmd Wheels) {
	cmd = d.actuator.delayed(cmd)
	left := d.actuator.run(&d.left, cmd.Left)
	right := d.actuator.run(&d.right, cmd.Right)
	d.limited = left || right
}

// Command gives the unicycle its v (m/s) and omega (rad/s) for this tick. It is
// the Actuate of [WheelsFor] them with the nominal wheels.
func (d *Drive) Command(v, omega float64) {
	d.Actuate(WheelsFor(v, omega, d.radius, d.track))
}

// Move returns where this tick takes the robot from the true pose p, on its true
// wheels and with their slip, if nothing stops it: contact is the caller's
// business. Called once a tick, after Actuate. The encoders count what the
// wheels turned, wherever the hull ends up.
func (d *Drive) Move(p geom.Pose) geom.Pose {
	d.odometer.roll(Wheels{d.left.turn, d.right.turn})
	left := float64(d.left.turn * d.leftRadius)
	right := float64(d.right.turn * d.rightRadius)
	if d.slip > 0 {
		left = slipped(left, d.slip, &d.slipLeft)
		right = slipped(right, d.slip, &d.slipRight)
	}
	travel, turn := body(left, right, d.trueTrack)
	return Arc(p, travel, turn)
}

// slipped returns the ground travel of a wheel that turned far enough for
// travel metres. The variance grows with the distance (Siegwart & Nourbakhsh,
// Introduction to Autonomous Mobile Robots, 5.2.4), so that the size of the tick
// does not matter. A number is drawn every tick, moving or not: the n-th number
// belongs to the n-th tick in every run with this seed.
func slipped(travel, slip float64, s *chance.Stream) float64 {
	return travel + float64(math.Sqrt(float64(slip*math.Abs(travel)))*s.Normal())
}

// MovePoint moves a point robot from the true pose p by disp (world frame, m),
// heading kept, and lets the next Reckon count it. A point has no encoders that
// could err: it believes that it went disp, seen from the heading it believes
// in, whether something stops it or not.
func (d *Drive) MovePoint(p geom.Pose, disp geom.Vec) geom.Pose {
	d.odometer.shift(p.Theta, disp)
	return geom.Pose{Pos: p.Pos.Add(disp), Theta: p.Theta}
}

// Reckon updates the estimate from the encoders by what the wheels turned since
// the last Reckon (they count on while the hull is blocked), and takes a
// position fix of the true pose when one is due at this tick. With the position
// known, the estimate is the true pose.
func (d *Drive) Reckon(tick int64, truth geom.Pose) {
	d.odometer.reckon(tick, truth, d.radius, d.track)
}

// Estimate returns the believed pose.
func (d *Drive) Estimate() Estimate { return d.odometer.estimate }

// Carry sets the believed pose: a person picked the robot up and put it down.
// What the wheels turned before that is forgotten.
func (d *Drive) Carry(e Estimate) { d.odometer.carry(e) }

// Turning returns the actual wheel speeds at the end of the last tick, rad/s.
func (d *Drive) Turning() Wheels { return Wheels{d.left.speed, d.right.speed} }

// Twist returns the actual v (m/s) and omega (rad/s) at the end of the last
// tick: those of the true wheels, slip aside. A point has neither.
func (d *Drive) Twist() (v, omega float64) {
	return body(float64(d.left.speed*d.leftRadius), float64(d.right.speed*d.rightRadius), d.trueTrack)
}

// Saturated reports whether a limit was met in the last tick: a wheel was
// commanded above the speed limit, or could not reach its command within the
// tick for the acceleration limit.
func (d *Drive) Saturated() bool { return d.limited }
