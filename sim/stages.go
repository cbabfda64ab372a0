package sim

import (
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// maxLogged bounds the lists of switches and contacts: a chattering design
// fills them within minutes, and the counts go on without them.
const maxLogged = 4_000

// moveMovers is stage 1: what moves by itself moves to where it is at the end
// of this tick, pushing a hull that stands in its way.
func (r *Run) moveMovers() {
	if len(r.cfg.Floor.Movers) == 0 {
		return
	}
	r.world.Advance(float64(r.tick+1) * r.dt)
	r.room -= r.moverStep
	if r.room > r.cfg.Hull {
		return
	}
	end, c, touched := r.world.Shove(r.pose.Pos, r.cfg.Hull)
	if touched {
		r.touch(c)
		r.measures.Way += end.Sub(r.pose.Pos).Norm()
		r.pose.Pos = end
	}
	r.room = 0
}

// sense is stage 2: the beams that are due are cast from the true pose.
func (r *Run) sense() { r.ring.Sense(r.tick, r.pose, r.world) }

// estimate is stage 3: the robot reckons where it is.
func (r *Run) estimate() {
	r.drive.Reckon(r.tick, r.pose)
	e := r.drive.Estimate()
	off := geom.Vec{X: e.X, Y: e.Y}.Sub(r.pose.Pos).Norm()
	r.measures.EstimateError = max(r.measures.EstimateError, off)
}

// decide is stage 4: at a control tick the logic looks at its readings,
// switches at most once, and says what velocity it wants.
func (r *Run) decide() {
	if r.tick%int64(r.cfg.DecideEvery) != 0 {
		return
	}
	r.input.Tick, r.input.Time = r.tick, r.time()
	r.input.Belief, r.input.Goal, r.input.Speed = r.drive.Estimate(), r.goal, r.cfg.Speed
	d := r.engine.Decide(&r.input)
	r.u = d.U
	if d.Fired < 0 {
		return
	}
	r.measures.Switches++
	if s, ok := r.engine.LastSwitch(); ok && len(r.switches) < maxLogged {
		r.switches = append(r.switches, *s)
	}
}

// steer is stage 5: from the wanted velocity and the believed heading to wheel
// speeds within their limit.
func (r *Run) steer() {
	if r.cfg.Drive.Model == drive.Point {
		return
	}
	v, omega := r.cfg.Steer.TwistOver(r.u, r.drive.Estimate().Theta, r.dt)
	r.cmd, r.limited = r.cfg.Steer.Wheels(v, omega)
}

// actuate is stage 6: dead time, acceleration limit, lag.
func (r *Run) actuate() {
	if r.cfg.Drive.Model == drive.Point {
		return
	}
	r.drive.Actuate(r.cmd)
	if r.limited || r.drive.Saturated() {
		r.saturated++
	}
}

// move is stage 7: the exact arc, up to the first touch freely, then along what
// it touches.
func (r *Run) move() {
	var to geom.Pose
	if r.cfg.Drive.Model == drive.Point {
		s, c := geom.Sincos(r.pose.Theta - r.drive.Estimate().Theta)
		to = r.drive.MovePoint(r.pose, r.u.Rotate(s, c).Scale(r.dt))
	} else {
		to = r.drive.Move(r.pose)
	}
	from := r.pose.Pos
	d := to.Pos.Sub(from)
	r.pose.Theta = to.Theta
	r.pose.Pos = to.Pos // not from + d, which may round differently from what the encoders tell
	if r.room-d.Norm() <= r.cfg.Hull {
		if end, c, touched := r.world.Sweep(from, d, r.cfg.Hull); touched {
			r.pose.Pos = end
			r.touch(c)
		}
	}
	went := r.pose.Pos.Sub(from).Norm()
	r.room -= went
	r.measures.Way += went
	r.tick++
}

// measure is stage 8: what a person wants to know, from the truth alone.
func (r *Run) measure() {
	r.measureLeeway()
	r.hashTick()
	r.judge()
}

// touches remembers what the hull touches, so that a scrape of many ticks counts
// as one contact.
type touches struct {
	ref  [4]floor.Ref
	last [4]int64
	n    int
}

// sameTouch is how long, in seconds, the hull may be off a thing and come back to
// it within one and the same contact: a scrape along a wall is a chain of tiny
// touches.
const sameTouch = 0.5

// touch records a touch that happens during the current tick.
func (r *Run) touch(c floor.Contact) {
	t := &r.touching
	oldest := 0
	for i := 0; i < t.n; i++ {
		if t.ref[i] == c.Ref {
			fresh := float64(r.tick-t.last[i])*r.dt > sameTouch
			t.last[i] = r.tick
			if fresh {
				r.record(c)
			}
			return
		}
		if t.last[i] < t.last[oldest] {
			oldest = i
		}
	}
	if t.n < len(t.ref) {
		oldest = t.n
		t.n++
	}
	t.ref[oldest], t.last[oldest] = c.Ref, r.tick
	r.record(c)
}

func (r *Run) record(c floor.Contact) {
	r.measures.Contacts++
	if len(r.contacts) < maxLogged {
		r.contacts = append(r.contacts, Contact{Tick: r.tick, Time: r.time(), Point: c.Point, Ref: c.Ref})
	}
}
