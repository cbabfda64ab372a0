package drive

import (
	"math"
	"testing"
)

// The series of fall against the standard library, on both sides of its seam.
func TestFall(t *testing.T) {
	for _, x := range []float64{0, 5e-324, 1e-300, 1e-17, 1e-9, 1e-3, 0.01, 0.05, 0.0624999, 0.0625, 0.0625001, 0.2, 1, 40, 1e3, 1e300, math.Inf(1)} {
		got, want := fall(x), -math.Expm1(-x)
		limit := 4e-16 * want
		if x >= 0.0625 {
			limit = 2e-16 // beyond the seam the bound is absolute
		}
		if !(math.Abs(got-want) <= limit) {
			t.Errorf("fall(%g) = %.17g, want %.17g", x, got, want)
		}
	}
}
