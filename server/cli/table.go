package cli

import (
	"io"
	"math"
	"strconv"
	"strings"

	"leeway/sim"
	"leeway/sim/drive"
)

// columns of the table: each name ends in its unit where it has one.
var columns = []string{
	"tick", "time_s",
	"x_m", "y_m", "heading_deg",
	"believed_x_m", "believed_y_m", "believed_heading_deg",
	"goal_x_m", "goal_y_m",
	"mode", "side",
	"wanted_x_m_s", "wanted_y_m_s", "v_m_s", "omega_rad_s", "left_wheel_rad_s", "right_wheel_rad_s",
	"gap_m", "nearest_echo_m", "way_m", "switches", "contacts", "status",
}

// table writes a run as comma-separated values: a row for every control tick and
// one for the end. What is not there (a gap on an empty floor) is left empty, which
// readers of such tables take as a missing value.
type table struct {
	w    io.Writer
	line []byte
}

func newTable(w io.Writer) *table {
	io.WriteString(w, strings.Join(columns, ",")+"\n")
	return &table{w: w}
}

// row writes where the run is, when it is at a control tick or has ended. An error
// of the writer is kept by it.
func (t *table) row(r *sim.Run) {
	o, c := r.Outcome(), r.Config()
	if o.Ticks%int64(c.DecideEvery) != 0 && o.Status == sim.Running {
		return
	}
	b := t.line[:0]
	b = strconv.AppendInt(b, o.Ticks, 10)
	p, e, g, u := r.Pose(), r.Belief(), r.Goal(), r.Wanted()
	b = num(b, o.Time)
	b = num(b, p.Pos.X)
	b = num(b, p.Pos.Y)
	b = num(b, degrees(p.Theta))
	b = num(b, e.X)
	b = num(b, e.Y)
	b = num(b, degrees(e.Theta))
	b = num(b, g.X)
	b = num(b, g.Y)
	b = word(b, c.Logic.Modes[r.Engine().Mode()].Name)
	b = word(b, [...]string{"right", "none", "left"}[r.Engine().Side()+1])
	b = num(b, u.X)
	b = num(b, u.Y)
	v, omega := u.Norm(), 0.0
	if c.Drive.Model != drive.Point {
		v, omega = r.Drive().Twist()
	}
	b = num(b, v)
	b = num(b, omega)
	w := r.Drive().Turning()
	b = num(b, w.Left)
	b = num(b, w.Right)
	b = num(b, r.Gap())
	b = num(b, nearestEcho(r))
	b = num(b, o.Way)
	b = num(b, float64(o.Switches))
	b = num(b, float64(o.Contacts))
	b = word(b, o.Status.String())
	t.line = append(b, '\n')
	t.w.Write(t.line)
}

// nearestEcho is the shortest range that the ring has read; +Inf: no echo.
func nearestEcho(r *sim.Run) float64 {
	s := r.Scan()
	least := math.Inf(1)
	for i, hit := range s.Hit {
		if hit {
			least = min(least, s.Range[i])
		}
	}
	return least
}

func degrees(rad float64) float64 { return rad * 180 / math.Pi }

// num writes a number to a millionth; what is not finite stays empty.
func num(b []byte, v float64) []byte {
	b = append(b, ',')
	if math.IsInf(v, 0) || math.IsNaN(v) {
		return b
	}
	return strconv.AppendFloat(b, math.Round(v*1e6)/1e6, 'f', -1, 64)
}

// word writes a text, in quotes where it needs them. A text that a spreadsheet
// would take for a formula gets a space in front: mode names come from files.
func word(b []byte, s string) []byte {
	b = append(b, ',')
	if s != "" && strings.ContainsRune("=+-@", rune(s[0])) {
		s = " " + s
	}
	if !strings.ContainsAny(s, ",\"\r\n") {
		return append(b, s...)
	}
	return append(b, `"`+strings.ReplaceAll(s, `"`, `""`)+`"`...)
}
