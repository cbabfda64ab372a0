package studies

import (
	"cmp"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"

	"leeway/sim"
	"leeway/sim/study"
)

// Rows collects results for a table; its Keep is for [study.Runner].
type Rows struct {
	keys    []study.Key
	results []study.Result
}

// Keep adds a result.
func (r *Rows) Keep(k study.Key, x study.Result) {
	x.Cells = nil
	r.keys, r.results = append(r.keys, k), append(r.results, x)
}

// WriteCSV writes a table with one row a run, sorted by setting, idealisations and
// trial, so that the same study gives the same table however it was run. Axes are the
// paths of the numbers that were set; each has a column under its own name. What does
// not exist stays empty, which readers of such tables take as a missing value.
func (r *Rows) WriteCSV(w io.Writer, axes []study.Axis) error {
	order := make([]int, len(r.keys))
	values := make([][]float64, len(r.keys))
	audit, named := false, false
	for i, k := range r.keys {
		order[i] = i
		values[i] = valuesOf(k.Setting, axes)
		audit = audit || k.Ideal != study.AsIs
		named = named || k.Setting != "" && len(axes) == 0
	}
	slices.SortFunc(order, func(a, b int) int {
		x, y := r.keys[a], r.keys[b]
		return cmp.Or(slices.Compare(values[a], values[b]), cmp.Compare(x.Setting, y.Setting), cmp.Compare(x.Trial, y.Trial), cmp.Compare(x.Ideal, y.Ideal))
	})
	var head []string
	if named {
		head = append(head, "design")
	}
	for _, a := range axes {
		head = append(head, strings.ReplaceAll(a.Path, ".", "_"))
	}
	if audit {
		for _, a := range study.Assumptions() {
			head = append(head, strings.ReplaceAll(a.Name, " ", "_")+"_real")
		}
	}
	head = append(head, "trial", "seed", "success", "outcome", "status", "time_s", "leeway_m", "way_m", "straight_m", "switches", "contacts",
		"estimate_error_m", "start_x_m", "start_y_m", "end_x_m", "end_y_m", "goal_x_m", "goal_y_m", "hash", "fault")
	if _, err := io.WriteString(w, strings.Join(head, ",")+"\n"); err != nil {
		return err
	}
	var row []string
	for _, i := range order {
		k, x := r.keys[i], &r.results[i]
		row = row[:0]
		if named {
			row = append(row, quoted(k.Setting))
		}
		for _, v := range values[i] {
			row = append(row, field(v))
		}
		if audit {
			for _, a := range study.Assumptions() {
				row = append(row, yes(sim.Ideal(k.Ideal)&a.Bit == 0))
			}
		}
		row = append(row, strconv.Itoa(x.Trial), strconv.FormatUint(x.Seed, 10), yes(x.Success()), x.Why(), statusOf(x), micro(x.Time), micro(x.Leeway), micro(x.Way), micro(x.Straight),
			strconv.Itoa(x.Switches), strconv.Itoa(x.Contacts), micro(x.Error), micro(x.Start.X), micro(x.Start.Y), micro(x.End.X), micro(x.End.Y), micro(x.Goal.X), micro(x.Goal.Y),
			fmt.Sprintf("h%016x", x.Hash), quoted(x.Fault)) // with a letter, lest a reader take it for a number
		if _, err := io.WriteString(w, strings.Join(row, ",")+"\n"); err != nil {
			return err
		}
	}
	return nil
}

// valuesOf reads a setting's name back: "path=value path=value".
func valuesOf(setting string, axes []study.Axis) []float64 {
	if len(axes) == 0 {
		return nil
	}
	out := make([]float64, len(axes))
	for i, part := range strings.Fields(setting) {
		if _, v, ok := strings.Cut(part, "="); ok && i < len(out) {
			out[i], _ = strconv.ParseFloat(v, 64)
		}
	}
	return out
}

func statusOf(x *study.Result) string {
	if x.Miss == study.Broke && x.Status == sim.Running {
		return ""
	}
	return x.Status.String()
}

func yes(b bool) string {
	if b {
		return "1"
	}
	return "0"
}

func field(v float64) string {
	if math.IsInf(v, 0) || math.IsNaN(v) {
		return ""
	}
	return strconv.FormatFloat(v, 'f', -1, 64)
}

// micro writes a number to a millionth.
func micro(v float64) string { return field(math.Round(v*1e6)/1e6 + 0) }

// quoted writes a text, in quotes where it needs them; one that a spreadsheet would
// take for a formula gets a space in front.
func quoted(s string) string {
	if s != "" && strings.ContainsRune("=+-@\t", rune(s[0])) {
		s = " " + s
	}
	if !strings.ContainsAny(s, ",\"\r\n") {
		return s
	}
	return `"` + strings.ReplaceAll(s, `"`, `""`) + `"`
}
