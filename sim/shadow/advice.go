package shadow

import (
	"fmt"
	"math"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/ring"
	"leeway/sim/steer"
)

// Advice is one statement about the numbers of a design, worked out before it runs.
type Advice struct {
	// About is what it is about: "exact", "gain", "braking" or "missed".
	About string
	// Holds is false where the numbers ask for more than the statement allows.
	Holds bool
	Text  string
}

// Advise says where the abstraction is exact for these numbers, which gain the delays allow, how far the robot
// brakes against how far it sees, and what its ring can miss at that distance. The formulas are those of steer
// (ceiling, gain limits), drive (braking) and ring (missed width), with their sources there.
//
// It is advice on a model. Protective stops, speeds and separation distances are the business of ISO 13855,
// ISO 3691-4, ISO 13482 and of competent people on site.
func Advise(c sim.Config) []Advice {
	if c.Ideal&sim.PointMotion != 0 {
		c.Drive.Model = drive.Point
	}
	if c.Ideal&sim.NoWheelLimits != 0 || c.Drive.Model == drive.Unicycle {
		c.Drive.MaxWheelSpeed, c.Drive.MaxWheelAccel, c.Steer.MaxWheelSpeed = 0, 0, 0
	}
	if c.Ideal&sim.NoLag != 0 || c.Drive.Model == drive.Unicycle {
		c.Drive.Lag, c.Drive.DeadTime = 0, 0
	}
	if c.Drive.Model == drive.Point {
		return nil
	}
	var out []Advice
	if c.Steer.Rule == steer.LookAhead {
		out = append(out, exactness(&c))
	} else {
		out = append(out, gain(&c)...)
	}
	brake, reach := braking(&c)
	out = append(out, brake...)
	if c.Ideal&sim.AllRoundSight == 0 {
		out = append(out, missed(&c, reach))
	}
	return out
}

// exactness states the speed ceiling of the look-ahead rule, |u| ≤ v_wheel/√(1+(L/2ℓ)²).
func exactness(c *sim.Config) Advice {
	ceiling := c.Steer.Ceiling()
	if math.IsInf(ceiling, 1) {
		return Advice{"exact", true, fmt.Sprintf("The point %.2f m ahead of the axle moves exactly as the plan says at any speed: the wheels have no limit. The axle stays %.2f m from it.", c.Steer.Ahead, c.Steer.Ahead)}
	}
	text := fmt.Sprintf("The point %.2f m ahead of the axle moves exactly as the plan says up to %.2f m/s; above that, some headings ask a wheel for more than it has.", c.Steer.Ahead, ceiling)
	holds := c.Speed <= ceiling
	if holds {
		text += fmt.Sprintf(" At %.2f m/s it holds, and the axle stays %.2f m from the plan", c.Speed, c.Steer.Ahead)
	} else {
		text += fmt.Sprintf(" At %.2f m/s it does not hold", c.Speed)
	}
	if c.Drive.Lag > 0 || c.Drive.DeadTime > 0 || c.Drive.MaxWheelAccel > 0 {
		text += ", as far as lag, dead time and acceleration allow."
	} else {
		text += "."
	}
	return Advice{"exact", holds, text}
}

// gain states which servo gain sampling, delay and lag allow without swinging: k·T ≤ 1/e for a pure delay, k·τ ≤ 1/4
// for a lag, k·T_s ≤ 1 for sampling alone (rows C-07, C-08, C-09).
func gain(c *sim.Config) []Advice {
	k := c.Steer.Gain
	limit, what := 1/c.Tick, "looking once a tick" // steering looks at the heading once a tick
	if d := c.Drive.DeadTime; d > 0 && 1/(math.E*d) < limit {
		limit, what = 1/(math.E*d), fmt.Sprintf("this dead time of %.2f s", d)
	}
	if tau := c.Drive.Lag; tau > 0 && 1/(4*tau) < limit {
		limit, what = 1/(4*tau), fmt.Sprintf("this lag of %.2f s", tau)
	}
	a := Advice{"gain", k <= limit, ""}
	if a.Holds {
		a.Text = fmt.Sprintf("A gain of %.1f/s turns without swinging: %s allows up to %.1f/s.", k, what, limit)
		return []Advice{a}
	}
	a.Text = fmt.Sprintf("A gain of %.1f/s is past the %.1f/s that %s allows without swinging", k, limit, what)
	if tau := c.Drive.Lag; tau > 0 && limit == 1/(4*tau) {
		if z := steer.LagDamping(k, tau); z < 1 {
			a.Text += fmt.Sprintf("; it overshoots a turn by %.0f %%", 100*steer.Overshoot(z))
		}
	}
	out := []Advice{{a.About, a.Holds, a.Text + "."}}
	if d := c.Drive.DeadTime; d > 0 && d >= steer.DelayLimit(k) {
		out = append(out, Advice{"gain", false, fmt.Sprintf("With a dead time of %.2f s it never settles: from %.2f s on the swings grow.", d, steer.DelayLimit(k))})
	}
	return out
}

// braking compares the way to a stand with how far the ring sees, and returns also that way, from the hull, m.
func braking(c *sim.Config) ([]Advice, float64) {
	period := float64(c.Ring.Period) * c.Tick
	reaction := drive.WorstReaction(period, float64(c.DecideEvery)*c.Tick, c.Drive.DeadTime)
	var way float64
	how := fmt.Sprintf("%.2f s of reaction", reaction)
	if a := c.Drive.MaxWheelAccel * c.Drive.WheelRadius; a > 0 {
		way = drive.StoppingDistance(c.Speed, a, reaction+c.Drive.Lag)
		how += fmt.Sprintf(", %.2f s of lag and %.1f m/s² of braking", c.Drive.Lag, a)
	} else {
		way = float64(c.Speed*reaction) + drive.Overrun(c.Speed, 0, c.Drive.Lag)
		how += fmt.Sprintf(" and %.2f s of lag", c.Drive.Lag)
	}
	sight := c.Ring.Max + c.Ring.Mount - c.Hull // of the hull's edge
	a := Advice{"braking", way <= sight, fmt.Sprintf("At %.2f m/s it comes to a stand within %.2f m (%s); it sees %.2f m beyond its hull.", c.Speed, way, how, sight)}
	if !a.Holds {
		a.Text += " It cannot stop for what it has just seen."
		if acc := c.Drive.MaxWheelAccel * c.Drive.WheelRadius; acc > 0 && sight > 0 {
			a.Text += fmt.Sprintf(" Up to %.2f m/s it could.", drive.SafeSpeed(sight, acc, reaction+c.Drive.Lag))
		}
	}
	return []Advice{a}, way
}

// missed states the width of what can stand unseen between two beams at the braking distance (rows S-01 to S-03).
func missed(c *sim.Config, way float64) Advice {
	r := ring.Config{Bearings: c.Ring.Bearings}
	width := r.MissedWidth(c.Hull + way)
	if math.IsInf(width, 1) {
		return Advice{"missed", false, "The beams leave half the way round unseen: anything can stand there."}
	}
	a := Advice{"missed", width <= 2*c.Hull, fmt.Sprintf("At that distance a thing less than %.2f m wide can stand unseen between two beams.", width)}
	if !a.Holds {
		a.Text += " That is wider than the robot."
	}
	return a
}
