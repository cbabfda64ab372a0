package drive

import (
	"math"

	"leeway/sim/geom"
)

// actuator is what both wheels have in common.
type actuator struct {
	tick     float64 // s
	maxSpeed float64 // rad/s, +Inf: no limit
	maxAccel float64 // rad/s², 0: no limit
	lag      float64 // s
	whole    decay   // over a whole tick

	line []Wheels // the dead time, a command a tick
	next int      // the oldest in line
}

// wheel is the state of one.
type wheel struct {
	wanted float64 // what the lag follows: the command within the limits, rad/s
	speed  float64 // rad/s
	turn   float64 // in this tick, rad
}

// decay is what a first-order lag does in a stretch of time.
type decay struct {
	keep float64 // share of a difference that is still there at its end, e^(−h/τ)
	mean float64 // integral of the decaying share over it, τ(1 − e^(−h/τ)), s
}

func newDecay(h, lag float64) decay {
	if lag == 0 {
		return decay{}
	}
	lost := fall(h / lag)
	return decay{keep: 1 - lost, mean: float64(lag * lost)}
}

// fall returns 1 − e^(−x) for x ≥ 0. For small x the difference would cancel;
// the series is cut after x⁹/9!, which below 1/16 leaves out less than 5·10⁻¹⁸
// of the result.
func fall(x float64) float64 {
	if x >= 1.0/16 {
		return 1 - geom.Exp(-x)
	}
	s := 1.0/40320 - float64(x*(1.0/362880))
	s = 1.0/5040 - float64(x*s)
	s = 1.0/720 - float64(x*s)
	s = 1.0/120 - float64(x*s)
	s = 1.0/24 - float64(x*s)
	s = 1.0/6 - float64(x*s)
	s = 1.0/2 - float64(x*s)
	s = 1 - float64(x*s)
	return float64(x * s)
}

// delayed puts a command into the dead time and returns the one that comes out.
func (a *actuator) delayed(cmd Wheels) Wheels {
	if len(a.line) == 0 {
		return cmd
	}
	out := a.line[a.next]
	a.line[a.next] = cmd
	a.next++
	if a.next == len(a.line) {
		a.next = 0
	}
	return out
}

// run takes w through one tick under the command cmd and reports whether a limit
// was met.
//
// With an acceleration limit, what the lag follows rises at that rate until it
// reaches the command and then stays there, so that the way of the wheel goes
// over into that without a limit as the limit is raised.
func (a *actuator) run(w *wheel, cmd float64) (limited bool) {
	if cmd > a.maxSpeed {
		cmd, limited = a.maxSpeed, true
	} else if cmd < -a.maxSpeed {
		cmd, limited = -a.maxSpeed, true
	}
	w.turn = 0
	step := cmd - w.wanted
	if a.maxAccel == 0 || step == 0 {
		w.wanted = cmd
		a.follow(w, cmd, 0, a.tick, a.whole)
		return limited
	}
	rate := math.Copysign(a.maxAccel, step)
	if math.Abs(step) > float64(a.maxAccel*a.tick) {
		from := w.wanted
		w.wanted += float64(rate * a.tick)
		a.follow(w, from, rate, a.tick, a.whole)
		return true
	}
	rise := step / rate
	hold := a.tick - rise
	a.follow(w, w.wanted, rate, rise, newDecay(rise, a.lag))
	w.wanted = cmd
	a.follow(w, cmd, 0, hold, newDecay(hold, a.lag))
	return limited
}

// follow lets the wheel follow from + rate·t through the lag for h seconds, d
// being the decay over them. With x for what is followed,
//
//	τ ẏ = x − y:   y(h) = x(0) + rate·(h − m) + (y(0) − x(0))·e^(−h/τ)
//	               ∫y   = x(0)·h + rate·(h²/2 − τ(h − m)) + (y(0) − x(0))·m
//
// where m = τ(1 − e^(−h/τ)). Without lag both reduce to those of x itself.
func (a *actuator) follow(w *wheel, from, rate, h float64, d decay) {
	behind := w.speed - from
	w.turn += float64(from*h) + float64(behind*d.mean)
	w.speed = from + float64(behind*d.keep)
	if rate != 0 {
		late := h - d.mean
		w.turn += float64(rate * (float64(h*h/2) - float64(a.lag*late)))
		w.speed += float64(rate * late)
	}
}

// setLag changes the time constant. The wheels keep their speeds.
func (a *actuator) setLag(tau float64) {
	a.lag = tau
	a.whole = newDecay(a.tick, tau)
}
