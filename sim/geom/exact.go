package geom

import "math"

// Wrap returns the angle a brought into (−π, π].
func Wrap(a float64) float64 {
	if a > -math.Pi && a <= math.Pi {
		return a
	}
	const turn = 2 * math.Pi
	k := math.Ceil((a - math.Pi) / turn)
	a -= float64(k * turn)
	if a <= -math.Pi {
		a = math.Pi
	} else if a > math.Pi {
		a = math.Pi
	}
	return a
}

// Sincos returns sin x and cos x.
func Sincos(x float64) (sin, cos float64) { return math.Sincos(x) }

// Atan2 returns the angle of (x, y) in (−π, π].
func Atan2(y, x float64) float64 { return math.Atan2(y, x) }

// Exp returns eˣ.
func Exp(x float64) float64 { return math.Exp(x) }

// Log returns the natural logarithm.
func Log(x float64) float64 { return math.Log(x) }
