package steer

import (
	"math"

	"leeway/sim/geom"
)

// TwistOver is Twist for a machine that holds (v, ω) for dt seconds. The heading
// servo is the same. The look-ahead rule is made exact for the tick: the point ahead
// moves by u·dt, to rounding, where the continuous rule held for dt would leave an
// error of first order in dt.
//
// Over the tick the axle moves by a chord s along m = θ + h and the heading turns
// by 2h, so the point ahead moves by s·e(m) + 2ℓ sin h·e⊥(m). Setting that equal
// to u·dt gives (derived)
//
//	tan h = dt·u·e⊥(θ) / (2ℓ + dt·u·e(θ)),   s = dt·u·e(m),   ω = 2h/dt,   v = s/dt · h/sin h
//
// which tends to the continuous rule as dt → 0.
func (c *Config) TwistOver(u geom.Vec, theta, dt float64) (v, omega float64) {
	if c.Rule != LookAhead || u == (geom.Vec{}) {
		return c.Twist(u, theta)
	}
	heading := geom.Heading(theta)
	along, aside := u.Dot(heading), heading.Cross(u)
	h := geom.Atan2(float64(aside*dt), float64(2*c.Ahead)+float64(along*dt))
	sin, cos := geom.Sincos(h)
	v = float64(along*cos) + float64(aside*sin)
	if math.Abs(h) < 1e-4 {
		v *= 1 + float64(h*h)/6 // the next term, 7h⁴/360, is below rounding
	} else {
		v *= h / sin
	}
	return v, 2 * h / dt
}
