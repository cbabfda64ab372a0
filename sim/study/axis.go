package study

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Axis is a number that a study sets, and how far.
type Axis struct {
	Path      string // "robot.speed_m_s"
	Low, High float64
	Steps     int  // values on a grid, ends included; 0 where a study picks them
	Whole     bool // whole numbers only
}

// Family makes the source for a setting of the axes' numbers, in their order. All
// sources draw the same trials but for those numbers. Safe for one goroutine.
type Family func(values []float64) (Source, error)

// at returns the value at u in [0, 1] of the axis.
func (a *Axis) at(u float64) float64 {
	if a.Whole {
		return a.Low + math.Floor(min(u*(a.High-a.Low+1), a.High-a.Low))
	}
	// to six digits, so that settings read as a person would write them
	return min(a.High, max(a.Low, digits(a.Low+u*(a.High-a.Low))))
}

// grid returns the values of the axis' steps, without repeats.
func (a *Axis) grid() []float64 {
	var out []float64
	for i := range max(a.Steps, 1) {
		x := a.Low
		if a.Steps > 1 {
			x = digits(a.Low + (a.High-a.Low)*float64(i)/float64(a.Steps-1))
		}
		if a.Whole {
			x = math.Round(x)
		}
		if n := len(out); n == 0 || out[n-1] != x {
			out = append(out, x)
		}
	}
	return out
}

func digits(x float64) float64 {
	y, err := strconv.ParseFloat(strconv.FormatFloat(x, 'g', 6, 64), 64)
	if err != nil {
		return x
	}
	return y
}

func (a *Axis) check() error {
	switch {
	case !(a.Low < a.High) && !(a.Steps == 1 && a.Low == a.High):
		return fmt.Errorf("%s: the low end %g must be below the high end %g", a.Path, a.Low, a.High)
	case math.IsInf(a.Low, 0) || math.IsInf(a.High, 0):
		return fmt.Errorf("%s: from %g to %g has no end", a.Path, a.Low, a.High)
	case a.Whole && (a.Low != math.Trunc(a.Low) || a.High != math.Trunc(a.High)):
		return fmt.Errorf("%s is a whole number; %g to %g is not", a.Path, a.Low, a.High)
	}
	return nil
}

// setting names a setting in a Key: "robot.speed_m_s=0.3 ring.beams=12".
func setting(axes []Axis, values []float64) string {
	parts := make([]string, len(axes))
	for i := range axes {
		parts[i] = axes[i].Path + "=" + strconv.FormatFloat(values[i], 'g', -1, 64)
	}
	return strings.Join(parts, " ")
}
