package scenario

import (
	"fmt"
	"math"
	"reflect"
	"slices"
	"strconv"
	"strings"
)

// Parse reads and validates a file. The error is Problems, all of them at once.
func Parse(data []byte) (*Scenario, error) {
	var r report
	tree, fault := parseTree(string(data))
	if fault != nil {
		r.add("", fault.at, true, fault.text)
		return nil, r.problems(data)
	}
	s := readVersion(&tree, &r)
	if s == nil {
		return nil, r.problems(data)
	}
	s.check(&r)
	for i := range r.list {
		f := &r.list[i]
		for _, p := range append([]string{f.Path}, f.clash...) {
			if f.at < 0 || !f.found {
				f.at, f.found = tree.locate(p)
			}
		}
	}
	if p := r.problems(data); p != nil {
		return nil, p
	}
	return s, nil
}

// readVersion looks at the version first, because it decides what everything else means.
// Once there is a second version, the structs of the first stay as they are under another name, are
// read by a reader of their own, and are brought up by one function a step; Print and everything
// else know the newest only.
func readVersion(tree *node, r *report) *Scenario {
	if tree.kind != object {
		r.add("", int(tree.at), false, "a scenario is an object in braces, { … }; this is "+tree.kind.String())
		return nil
	}
	v := tree.get("leeway")
	switch {
	case v == nil:
		r.add("leeway", int(tree.at), false, `leeway is missing: "leeway": 1 says which version of the format the file is written in`)
		return nil
	case v.kind != number:
		break // said by the reader, with everything else
	default:
		if f, _ := strconv.ParseFloat(v.text, 64); f > Version && f == math.Trunc(f) {
			r.add("leeway", int(v.at), false, fmt.Sprintf("this file is of version %s of the format; this Leeway reads up to version %d", shorten(v.text), Version))
			return nil
		}
	}
	s := defaults()
	reader{r}.read(root(), tree, reflect.ValueOf(&s).Elem(), nil)
	if ring := tree.get("ring"); ring != nil && ring.get("beams") == nil && len(s.Ring.Bearings) > 0 {
		s.Ring.Beams = len(s.Ring.Bearings)
	}
	s.normalise()
	return &s
}

// reader turns nodes into values by a spec and reports what does not fit.
type reader struct{ *report }

func (r reader) say(p *path, n *node, beyond bool, format string, args ...any) {
	if r.full() {
		return
	}
	at := p.String()
	if at == "" {
		at = "the file"
	}
	r.add(p.String(), int(n.at), beyond, fmt.Sprintf(format, append([]any{at}, args...)...))
}

// read reads a node into the value at p.
func (r reader) read(s *spec, n *node, v reflect.Value, p *path) {
	if n.kind == bad {
		r.say(p, n, false, n.text)
		return
	}
	if want := kindFor(v.Kind()); n.kind != want && v.Kind() != reflect.Pointer {
		hint := ""
		if n.kind == null {
			hint = "; leave the field out instead"
		}
		r.say(p, n, false, "%s must be %v; it is %v%s", want, n.kind, hint)
		return
	}
	switch v.Kind() {
	case reflect.Pointer:
		e := reflect.New(v.Type().Elem())
		r.read(s.elem, n, e.Elem(), p)
		v.Set(e)
	case reflect.Struct:
		r.object(s, n, v, p)
	case reflect.Slice:
		r.list(s, n, v, p)
	case reflect.Array:
		if len(n.items) != v.Len() {
			r.say(p, n, false, "%s must hold %d numbers; it holds %d", v.Len(), len(n.items))
			return
		}
		for i := range n.items {
			r.read(s.elem, &n.items[i], v.Index(i), &path{up: p, index: i})
		}
	case reflect.String:
		v.SetString(strings.Clone(n.text)) // not a part of the whole file
		if n.text == "" && s.rule != nil && s.rule.nonEmpty {
			r.say(p, n, false, "%s must not be empty")
		}
	case reflect.Bool:
		v.SetBool(n.text == "true")
	case reflect.Float64:
		f, _ := strconv.ParseFloat(n.text, 64) // the tree holds finite numbers only
		v.SetFloat(f + 0)                      // −0 becomes 0
	default:
		f, _ := strconv.ParseFloat(n.text, 64)
		if f != math.Trunc(f) {
			r.say(p, n, false, "%s must be a whole number; it is %s", shorten(n.text))
		} else if math.Abs(f) > maxSeed {
			r.say(p, n, false, "%s must be %s; it is %s", between(s.rule), shorten(n.text))
		} else {
			v.SetInt(int64(f))
		}
	}
}

// kindFor returns the kind of node that a Go kind is read from.
func kindFor(k reflect.Kind) kind {
	switch k {
	case reflect.Struct:
		return object
	case reflect.Slice, reflect.Array:
		return list
	case reflect.String:
		return str
	case reflect.Bool:
		return boolean
	}
	return number
}

func (r reader) list(s *spec, n *node, v reflect.Value, p *path) {
	if len(n.items) == 0 {
		v.SetZero()
		return
	}
	if most := int(s.rule.Max); len(n.items) > most {
		r.say(p, n, false, "%s may hold at most %d %s; it holds %d", most, s.rule.Label, len(n.items))
		return
	}
	v.Set(reflect.MakeSlice(v.Type(), len(n.items), len(n.items)))
	for i := range n.items {
		r.read(s.elem, &n.items[i], v.Index(i), &path{up: p, index: i})
	}
}

func (r reader) object(s *spec, n *node, v reflect.Value, p *path) {
	form, ok := "", true
	if s.forms != nil {
		if form, ok = r.shape(s, n, p); !ok {
			r.distrust(p.String()) // nothing of it has been read
			return
		}
	}
	if d := preset(s.typ, form); d != nil {
		v.Set(reflect.ValueOf(d))
	}
	for i, k := range n.keys {
		at := &path{up: p, name: k.name}
		f := s.field(k.name)
		first := n.index(k.name)
		switch {
		case f == nil && r.full(): // suggestions cost time
		case f == nil:
			r.add(at.String(), int(k.at), false, "unknown field "+shortenPath(at)+suggestField(s, p, k.name))
		case first < i:
			r.add(at.String(), int(k.at), true, at.String()+" is given twice")
		case !f.in(form):
			r.add(at.String(), int(k.at), false, at.String()+" has no place in "+describeForm(s, form))
		default:
			r.read(f.spec, &n.items[i], v.Field(f.index), at)
		}
	}
	if s.form(v) != form {
		// What makes the form is there but worth nothing (no corners, a radius of 0), so that the value
		// alone no longer tells its form: judge it here.
		for _, f := range s.fields {
			if f.forms != nil && f.in(form) {
				checker{report: r.report}.value(f.spec, v.Field(f.index), &path{up: p, name: f.name})
			}
		}
		r.distrust(p.String())
	}
	for _, f := range s.fields {
		if f.required && f.in(form) && n.get(f.name) == nil {
			at := &path{up: p, name: f.name}
			r.add(at.String(), int(n.at), false, at.String()+" is missing")
		}
	}
}

// shape finds out which of its forms an object has.
func (r reader) shape(s *spec, n *node, p *path) (form string, ok bool) {
	switch reflect.New(s.typ).Elem().Interface().(type) {
	case Solid:
		if n.get("corners_m") != nil {
			return "polygon", true
		}
		if n.get("center_m") != nil || n.get("radius_m") != nil {
			return "disc", true
		}
		r.say(p, n, false, "%s needs corners_m, or center_m and radius_m")
	case Mover:
		if n.get("radius_m") != nil {
			return "disc", true
		}
		if n.get("box_m") != nil {
			return "box", true
		}
		r.say(p, n, false, "%s needs box_m or radius_m")
	case Logic:
		k := n.get("kind")
		if k == nil {
			return "default", true
		}
		return r.named(s, k, &path{up: p, name: "kind"})
	case Region:
		if n.get("radius_m") != nil || n.get("center_m") != nil {
			return "disc", true
		}
		if n.get("from_m") != nil || n.get("to_m") != nil {
			return "box", true
		}
		r.say(p, n, false, "%s needs from_m and to_m, or center_m and radius_m")
	case Varied:
		k := n.get("kind")
		if k == nil {
			r.say(&path{up: p, name: "kind"}, n, false, "%s is missing")
			return "", false
		}
		return r.named(s, k, &path{up: p, name: "kind"})
	case Edit:
		k := n.get("what")
		if k == nil {
			r.say(&path{up: p, name: "what"}, n, false, "%s is missing")
			return "", false
		}
		return r.named(s, k, &path{up: p, name: "what"})
	}
	return "", false
}

// named reads a form that is written out.
func (r reader) named(s *spec, n *node, p *path) (string, bool) {
	rule := s.field(p.name).rule
	if n.kind == str && rule.allows(n.text) {
		return n.text, true
	}
	var got string
	r.read(&spec{}, n, reflect.ValueOf(&got).Elem(), p)
	if n.kind == str {
		r.say(p, n, false, "%s %s", rule.mustBe(got))
	}
	return "", false
}

func describeForm(s *spec, form string) string {
	switch s.typ {
	case reflect.TypeFor[Edit]():
		return `an edit with "what": ` + strconv.Quote(form)
	case reflect.TypeFor[Logic]():
		return `a logic with "kind": ` + strconv.Quote(form)
	case reflect.TypeFor[Region]():
		return "a round region (it has center_m or radius_m)"
	case reflect.TypeFor[Varied]():
		return `a number with "kind": ` + strconv.Quote(form)
	case reflect.TypeFor[Mover]():
		return "a round mover (it has radius_m)"
	}
	return "a solid with corners_m"
}

func shortenPath(p *path) string {
	s := p.String()
	if r := []rune(s); len(r) > 80 {
		return string(r[:80]) + "…"
	}
	return s
}

// locate returns the byte offset of the value at a path and true, or that of the deepest thing on the way to it and false.
func (n *node) locate(path string) (offset int, found bool) {
	at := n
	for _, step := range strings.FieldsFunc(path, func(r rune) bool { return r == '.' || r == '[' }) {
		var next *node
		if i, found := strings.CutSuffix(step, "]"); found {
			if k, err := strconv.Atoi(i); err == nil && k < len(at.items) && at.kind == list {
				next = &at.items[k]
			}
		} else {
			next = at.get(step)
		}
		if next == nil {
			return int(at.at), false
		}
		at = next
	}
	return int(at.at), true
}

// normalise gives names to what has none and puts what has no order of its own in the canonical one.
func (s *Scenario) normalise() {
	taken := map[string]bool{}
	ids := s.ids()
	for _, id := range ids {
		taken[*id] = true
	}
	number := func(prefix string, ids []*string) {
		last := 0
		for i, id := range ids {
			if *id == "" {
				for last = max(last, i) + 1; taken[prefix+strconv.Itoa(last)]; last++ {
				}
				*id = prefix + strconv.Itoa(last)
			}
		}
	}
	walls, solids := len(s.Floor.Walls), len(s.Floor.Solids)
	number("w", ids[:walls])
	number("s", ids[walls:walls+solids])
	number("m", ids[walls+solids:])
	order := ruleAt()["ideal[]"].Options
	slices.SortStableFunc(s.Ideal, func(a, b string) int {
		place := func(v string) int { return slices.IndexFunc(order, func(o Option) bool { return o.Value == v }) }
		return place(a) - place(b)
	})
}

// ids returns the ids of walls, solids and movers, in this order.
func (s *Scenario) ids() []*string {
	var out []*string
	for i := range s.Floor.Walls {
		out = append(out, &s.Floor.Walls[i].ID)
	}
	for i := range s.Floor.Solids {
		out = append(out, &s.Floor.Solids[i].ID)
	}
	for i := range s.Floor.Movers {
		out = append(out, &s.Floor.Movers[i].ID)
	}
	return out
}
