package scenario

import "strings"

// suggestField says what may have been meant by an unknown name.
func suggestField(s *spec, p *path, name string) string {
	var names []string
	for _, f := range s.fields {
		names = append(names, f.name)
	}
	if best := nearest(name, names); best != "" {
		return "; did you mean " + best + "?"
	}
	if p == nil || p.up == nil { // of the file or of a section
		for _, f := range rules() {
			if f.edit && strings.HasSuffix(f.Path, "."+name) {
				return "; " + name + " belongs in " + parent(f.Path)
			}
		}
	}
	return ""
}

// nearest returns the name that a slip of the pen may have turned into what is written, or "".
func nearest(written string, names []string) string {
	if len(written) > maxID {
		return ""
	}
	plain := func(s string) string {
		return strings.NewReplacer("_", "", "-", "", " ", "").Replace(strings.ToLower(s))
	}
	w := plain(written)
	best, least := "", 3
	for _, n := range names {
		m := plain(n)
		d := slips(w, m)
		if d > max(1, len(m)/3) && !(len(w) >= 4 && strings.HasPrefix(m, w)) {
			continue
		}
		if strings.HasPrefix(m, w) { // the unit was left out
			d = min(d, 2)
		}
		if d < least {
			best, least = n, d
		}
	}
	return best
}

// slips counts the letters to insert, delete, replace or swap with their neighbour to get from a to b
// (optimal string alignment).
func slips(a, b string) int {
	rows := [3][]int{make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)}
	before, last, now := rows[0], rows[1], rows[2]
	for j := range last {
		last[j] = j
	}
	for i := 1; i <= len(a); i++ {
		now[0] = i
		for j := 1; j <= len(b); j++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			now[j] = min(last[j]+1, now[j-1]+1, last[j-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				now[j] = min(now[j], before[j-2]+1)
			}
		}
		before, last, now = last, now, before
	}
	return last[len(b)]
}
