package scenario

import (
	"bytes"
	"encoding/json"
	"flag"
	"os"
	"reflect"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	generate "github.com/invopop/jsonschema"
	check "github.com/santhosh-tekuri/jsonschema/v6"
)

var update = flag.Bool("update", false, "write the golden files anew")

// golden compares got with a committed file, or writes it under -update.
func golden(t *testing.T, file string, got []byte) {
	t.Helper()
	if *update {
		if err := os.WriteFile(file, got, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, want) {
		t.Errorf("%s is not what the code makes (go test ./sim/scenario -update writes it anew; look at the difference before committing):\n%s", file, cmp.Diff(string(want), string(got)))
	}
}

// generateSchema makes the schema: shapes, names, what is required and the descriptions from the Go structs
// and their comments, ranges and choices from the rules, defaults from what Parse fills in.
func generateSchema(t *testing.T) []byte {
	t.Helper()
	r := generate.Reflector{
		ExpandedStruct: true, RequiredFromJSONSchemaTags: true, Anonymous: true,
		Mapper: func(t reflect.Type) *generate.Schema {
			if t != reflect.TypeFor[Point]() { // a pair like any other, not a definition of its own
				return nil
			}
			two := uint64(2)
			return &generate.Schema{Type: "array", Items: &generate.Schema{Type: "number"}, MinItems: &two, MaxItems: &two}
		},
	}
	if err := r.AddGoComments("leeway/sim/scenario", ".", generate.WithFullComment()); err != nil {
		t.Fatal(err)
	}
	for name, comment := range r.CommentMap { // the package path of the current folder is given as "."
		r.CommentMap[strings.Replace(name, "leeway/sim/scenario/.", "leeway/sim/scenario", 1)] = comment
	}
	s := r.Reflect(&Scenario{})
	s.ID = SchemaID
	s.Title = "Leeway scenario"
	s.Description = "A floor, a robot, its ring of range sensors, its logic, a start, a goal, and what is asked of the run. Lengths are metres, angles degrees."
	g := generator{t, s.Definitions}
	d := defaults()
	g.refine(s, root(), reflect.ValueOf(d))
	text, err := json.MarshalIndent(s, "", "  ")
	if err != nil {
		t.Fatal(err)
	}
	return append(text, '\n')
}

type generator struct {
	t    *testing.T
	defs generate.Definitions
}

func (g generator) refine(s *generate.Schema, p *spec, def reflect.Value) {
	r := p.rule
	switch p.typ.Kind() {
	case reflect.Pointer:
		g.refine(s, p.elem, reflect.Value{})
	case reflect.Struct:
		if s.Ref != "" {
			s = g.defs[strings.TrimPrefix(s.Ref, "#/$defs/")]
		}
		if s.OneOf != nil { // a region, which has two places in the file, under the same rules
			return
		}
		if s.Description == "" {
			g.t.Errorf("%v has no description", p.typ)
		}
		if !def.IsValid() {
			def = reflect.Zero(p.typ)
			if d := preset(p.typ, ""); d != nil {
				def = reflect.ValueOf(d)
			}
		}
		for _, f := range p.fields {
			q, ok := s.Properties.Get(f.name)
			if !ok {
				g.t.Fatalf("%v has no property %s", p.typ, f.name)
			}
			if q.Description == "" {
				g.t.Errorf("%v: %s has no description", p.typ, f.name)
			}
			v := def.Field(f.index)
			g.refine(q, f.spec, v)
			if k := v.Kind(); !f.required && f.fields == nil && k != reflect.Pointer && !(k == reflect.String && v.String() == "" && f.rule.nonEmpty) && f.name != "leeway" {
				if q.Default = v.Interface(); k == reflect.Slice {
					q.Default = []any{}
				}
			}
		}
		g.split(s, p)
	case reflect.Slice:
		least, most := uint64(r.Min), uint64(r.Max)
		s.MaxItems = &most
		if least > 0 {
			s.MinItems = &least
		}
		g.refine(s.Items, p.elem, reflect.Value{})
	case reflect.Array:
		g.refine(s.Items, p.elem, reflect.Value{})
	case reflect.String:
		if r.Options != nil {
			for _, o := range r.Options {
				s.Enum = append(s.Enum, o.Value)
			}
			return
		}
		most := uint64(r.chars)
		s.MaxLength = &most
		if r.nonEmpty {
			one := uint64(1)
			s.MinLength = &one
		}
	case reflect.Float64, reflect.Int, reflect.Int64:
		s.Minimum, s.Maximum = json.Number(short(r.Min)), json.Number(short(r.Max))
	}
}

// split gives a struct of several forms one schema a form.
func (g generator) split(s *generate.Schema, p *spec) {
	for _, form := range p.forms {
		one := &generate.Schema{Type: "object", Title: form, Properties: generate.NewProperties(), AdditionalProperties: generate.FalseSchema}
		for _, f := range p.fields {
			if !f.in(form) {
				continue
			}
			q, _ := s.Properties.Get(f.name)
			if f.name == "kind" || f.name == "what" {
				only := *q
				only.Enum, only.Const, only.Default = nil, form, nil
				q = &only
			}
			if p.typ == reflect.TypeFor[Logic]() && q.Default != nil { // the forms of a logic have defaults of their own
				own := *q
				own.Default = reflect.ValueOf(preset(p.typ, form)).Field(f.index).Interface()
				q = &own
			}
			one.Properties.Set(f.name, q)
			if f.required || f.name == "kind" && form != defaults().Logic.Kind {
				one.Required = append(one.Required, f.name)
			}
		}
		s.OneOf = append(s.OneOf, one)
	}
	if s.OneOf != nil {
		s.Type, s.Properties, s.Required, s.AdditionalProperties = "", nil, nil, nil
	}
}

func TestSchema(t *testing.T) {
	golden(t, "schema.json", generateSchema(t))
}

func compileSchema(t testing.TB) *check.Schema {
	t.Helper()
	doc, err := check.UnmarshalJSON(bytes.NewReader(Schema()))
	if err != nil {
		t.Fatal(err)
	}
	c := check.NewCompiler()
	if err := c.AddResource(SchemaID, doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile(SchemaID)
	if err != nil {
		t.Fatal(err)
	}
	return s
}
