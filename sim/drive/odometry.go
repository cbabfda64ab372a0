package drive

import (
	"math"

	"leeway/sim/chance"
	"leeway/sim/geom"
)

// odometer is how the robot knows where it is.
type odometer struct {
	estimate Estimate
	known    bool // the pose is simply known

	turned Wheels   // since the last reckoning, rad
	moved  geom.Vec // likewise for a point, in the believed frame, m

	count float64 // rad a count, 0: no quantisation
	rest  Wheels  // what the encoders have not shown yet, counts

	fixTicks               int64 // between position fixes, 0: none
	fixNoise, fixTurnNoise float64
	fix                    chance.Stream
}

func newOdometer(c *Config, tick float64, seed uint64, start geom.Pose) odometer {
	o := odometer{
		estimate:     estimateOf(start),
		known:        !c.DeadReckoning,
		fixNoise:     c.FixNoise,
		fixTurnNoise: c.FixTurnNoise,
		fix:          chance.New(seed, "fix", 0),
	}
	if c.CountsPerTurn > 0 {
		o.count = 2 * math.Pi / float64(c.CountsPerTurn)
	}
	if c.FixEvery > 0 {
		o.fixTicks = max(1, ticks(c.FixEvery, tick))
	}
	return o
}

// roll adds to what the encoders will be asked for.
func (o *odometer) roll(turn Wheels) {
	o.turned.Left += turn.Left
	o.turned.Right += turn.Right
}

// shift is roll for a point with this true heading.
func (o *odometer) shift(theta float64, disp geom.Vec) {
	sin, cos := geom.Sincos(o.estimate.Theta - theta)
	o.moved = o.moved.Add(disp.Rotate(sin, cos))
}

func (o *odometer) reckon(tick int64, truth geom.Pose, radius, track float64) {
	if o.known {
		o.carry(estimateOf(truth))
		return
	}
	if o.turned != (Wheels{}) {
		left := float64(o.read(o.turned.Left, &o.rest.Left) * radius)
		right := float64(o.read(o.turned.Right, &o.rest.Right) * radius)
		travel, turn := body(left, right, track)
		o.carry(estimateOf(Arc(o.estimate.pose(), travel, turn)))
	}
	if o.moved != (geom.Vec{}) {
		p := o.estimate.pose()
		p.Pos = p.Pos.Add(o.moved)
		o.carry(estimateOf(p))
	}
	if o.fixTicks > 0 && tick > 0 && tick%o.fixTicks == 0 {
		o.estimate = Estimate{
			X:     truth.Pos.X + float64(o.fixNoise*o.fix.Normal()),
			Y:     truth.Pos.Y + float64(o.fixNoise*o.fix.Normal()),
			Theta: truth.Theta + float64(o.fixTurnNoise*o.fix.Normal()),
		}
	}
}

// read returns what an encoder shows of a turn (rad): whole counts, the nearest
// to all that the wheel has turned, the rest being kept for later.
func (o *odometer) read(turn float64, rest *float64) float64 {
	if o.count == 0 {
		return turn
	}
	*rest += turn / o.count
	n := math.Floor(*rest + 0.5)
	*rest -= n
	return float64(n * o.count)
}

// carry sets the estimate as of now.
func (o *odometer) carry(e Estimate) {
	o.estimate = e
	o.turned, o.moved = Wheels{}, geom.Vec{}
}
