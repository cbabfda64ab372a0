package scenario

import (
	"reflect"
	"slices"
	"strings"
	"sync"
)

// spec is the shape of one place of the file: the Go type that holds it, the
// names of its fields, and the rule for its value. Reading, checking, printing and
// field access all walk the same specs, so that they cannot disagree.
type spec struct {
	typ    reflect.Type
	fields []fieldSpec // of a struct
	elem   *spec       // of a list, a pair and a pointer
	rule   *rule
	forms  []string // all the forms of a struct that has several
}

type fieldSpec struct {
	*spec
	name     string
	index    int
	forms    []string // the forms it belongs to; nil: all
	required bool
	omit     bool // not printed when it is empty
}

func (f *fieldSpec) in(form string) bool {
	return f.forms == nil || slices.Contains(f.forms, form)
}

// form returns which of its forms a struct has, "" if it has only one.
func (s *spec) form(v reflect.Value) string {
	if s.forms == nil {
		return ""
	}
	return v.Interface().(former).form()
}

// field returns the field with this name, or nil.
func (s *spec) field(name string) *fieldSpec {
	for i := range s.fields {
		if s.fields[i].name == name {
			return &s.fields[i]
		}
	}
	return nil
}

// root is the spec of a whole file.
var root = sync.OnceValue(func() *spec { return newSpec(reflect.TypeFor[Scenario](), "") })

// newSpec builds the spec of the type at a place written as in rules.
func newSpec(t reflect.Type, at string) *spec {
	s := &spec{typ: t, rule: ruleAt()[at]}
	switch t.Kind() {
	case reflect.Struct:
		seen := map[string]bool{}
		for i := range t.NumField() {
			f := t.Field(i)
			name, options, _ := strings.Cut(f.Tag.Get("json"), ",")
			fs := fieldSpec{
				spec:     newSpec(f.Type, strings.TrimPrefix(at+"."+name, ".")),
				name:     name,
				index:    i,
				required: strings.Contains(f.Tag.Get("jsonschema"), "required"),
				omit:     options == "omitempty",
			}
			if forms := f.Tag.Get("form"); forms != "" {
				fs.forms = strings.Split(forms, ",")
				for _, g := range fs.forms {
					if !seen[g] {
						seen[g] = true
						s.forms = append(s.forms, g)
					}
				}
			}
			s.fields = append(s.fields, fs)
		}
	case reflect.Slice, reflect.Array:
		s.elem = newSpec(t.Elem(), at+"[]")
	case reflect.Pointer:
		s.elem = newSpec(t.Elem(), at)
	}
	return s
}
