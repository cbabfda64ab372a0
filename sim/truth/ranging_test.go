package truth

import (
	"math"
	"testing"
)

// Rows S-06 and S-07 speak of how a sensor comes by a range: the speed of sound
// and triangulation. The ring simulates ranges and their errors, not the physics
// behind them, so no code of Leeway computes these; the formulas stand here to
// keep the table honest, for whoever picks a noise figure from a sensor's data.

// S-06 (ideal-gas law): speed of sound in air, and what a wrong temperature does.
func TestTimeOfFlight(t *testing.T) {
	sound := func(celsius float64) float64 { return 331.3 * math.Sqrt(1+celsius/273.15) }
	c := Values(t, "S-06", "c")
	Close(t, "c at 20 °C", sound(20), c[0], 1e-4)
	Close(t, "c at 35 °C", sound(35), c[1], 1e-4)
	echo := 2 * 1 / sound(35) // s, there and back over 1 m
	Close(t, "range if 20 °C is assumed", echo*sound(20)/2, Value(t, "S-06", "range"), 1e-4)
	const light = 299792458 // m/s, by definition
	Close(t, "round trip of light over 1 m", 2*1/float64(light), Value(t, "S-06", "t"), 1e-4)
}

// S-07 (similar triangles): d = f·B/p, and the error that a shifted spot makes.
func TestTriangulation(t *testing.T) {
	const f, base, spot, d = 0.008, 0.020, 5e-6, 0.4
	Close(t, "first-order error", d*d*spot/(f*base), Value(t, "S-07", "δd"), 1e-6)
	p := f * base / d
	Close(t, "error on the far side", f*base/(p-spot)-d, Value(t, "S-07", "exact far"), 1e-6)
}
