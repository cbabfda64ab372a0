package geom

import (
	"math"
	"math/rand/v2"
	"testing"
)

// angles returns headings as a run meets them: turning slowly, or all over the place.
func angles(wild bool) []float64 {
	r := rand.New(rand.NewPCG(1, 2))
	a := make([]float64, 1024)
	x := 0.3
	for i := range a {
		if wild {
			a[i] = (r.Float64() - 0.5) * 100
		} else {
			x += 0.01 * r.Float64()
			a[i] = x
		}
	}
	return a
}

var sink float64

func benchmark(b *testing.B, f func(x float64) float64, in []float64) {
	b.ReportAllocs()
	s := 0.0
	for i := 0; b.Loop(); i++ {
		s += f(in[i&1023])
	}
	sink = s
}

func BenchmarkSincos(b *testing.B) {
	ours := func(x float64) float64 { s, c := Sincos(x); return s + c }
	maths := func(x float64) float64 { s, c := math.Sincos(x); return s + c }
	b.Run("slow/geom", func(b *testing.B) { benchmark(b, ours, angles(false)) })
	b.Run("slow/math", func(b *testing.B) { benchmark(b, maths, angles(false)) })
	b.Run("wild/geom", func(b *testing.B) { benchmark(b, ours, angles(true)) })
	b.Run("wild/math", func(b *testing.B) { benchmark(b, maths, angles(true)) })
	far := angles(true)
	for i := range far {
		far[i] *= 1e6
	}
	b.Run("far/geom", func(b *testing.B) { benchmark(b, ours, far) })
	b.Run("far/math", func(b *testing.B) { benchmark(b, maths, far) })
}

func BenchmarkAtan2(b *testing.B) {
	in := angles(true)
	b.Run("geom", func(b *testing.B) { benchmark(b, func(x float64) float64 { return Atan2(x, 7-x) }, in) })
	b.Run("math", func(b *testing.B) { benchmark(b, func(x float64) float64 { return math.Atan2(x, 7-x) }, in) })
	slow := angles(false)
	b.Run("slow/geom", func(b *testing.B) { benchmark(b, func(x float64) float64 { return Atan2(x, 7-x) }, slow) })
	b.Run("slow/math", func(b *testing.B) { benchmark(b, func(x float64) float64 { return math.Atan2(x, 7-x) }, slow) })
}

func BenchmarkExp(b *testing.B) {
	in := angles(true)
	b.Run("geom", func(b *testing.B) { benchmark(b, Exp, in) })
	b.Run("math", func(b *testing.B) { benchmark(b, math.Exp, in) })
}

func BenchmarkLog(b *testing.B) {
	in := angles(true)
	b.Run("geom", func(b *testing.B) { benchmark(b, func(x float64) float64 { return Log(x * x) }, in) })
	b.Run("math", func(b *testing.B) { benchmark(b, func(x float64) float64 { return math.Log(x * x) }, in) })
}

func BenchmarkWrap(b *testing.B) {
	b.Run("near", func(b *testing.B) {
		benchmark(b, Wrap, angles(false)[:1024])
	})
	b.Run("wild", func(b *testing.B) { benchmark(b, Wrap, angles(true)) })
	b.Run("wild/math.Remainder", func(b *testing.B) {
		benchmark(b, func(x float64) float64 { return math.Remainder(x, 2*math.Pi) }, angles(true))
	})
}
