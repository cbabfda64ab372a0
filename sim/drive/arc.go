package drive

import "leeway/sim/geom"

// Arc returns the pose after an arc of constant curvature from p: travel metres
// along the heading (negative: backwards) while turning left by turn radians.
// This is exact, with no division by the turn:
//
//	chord  travel · sin(turn/2)/(turn/2)  in the direction  θ + turn/2
//
// (Dudek & Jenkin, Computational Principles of Mobile Robotics; Thrun, Burgard &
// Fox, Probabilistic Robotics, 5.3, in the form without a radius.) The heading
// is not wrapped. Mirrored arguments give the mirrored result, bit for bit.
func Arc(p geom.Pose, travel, turn float64) geom.Pose {
	half := float64(turn / 2) // a division by 2 is fused, too
	sin, cos := geom.Sincos(p.Theta + half)
	chord := float64(travel * sinc(half))
	return geom.Pose{
		Pos:   geom.Vec{X: p.Pos.X + float64(chord*cos), Y: p.Pos.Y + float64(chord*sin)},
		Theta: p.Theta + turn,
	}
}

// sinc returns sin(x)/x. Below 1/8 the series is cut after x⁸/9!, which leaves
// out less than 3·10⁻¹⁷; a robot's turn within a tick is far below that.
func sinc(x float64) float64 {
	if x > -0.125 && x < 0.125 {
		q := float64(x * x)
		s := 1.0/5040 - float64(q*(1.0/362880))
		s = 1.0/120 - float64(q*s)
		s = 1.0/6 - float64(q*s)
		return 1 - float64(q*s)
	}
	sin, _ := geom.Sincos(x)
	return sin / x
}
