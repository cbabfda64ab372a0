package scenario

import (
	"bytes"
	"encoding/json"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	check "github.com/santhosh-tekuri/jsonschema/v6"
)

// findings returns what the parser finds, before it is cut and sorted; ok is false when the text
// cannot be understood as a tree at all.
func findings(text []byte) (list []finding, ok bool) {
	var r report
	tree, fault := parseTree(string(text))
	if fault != nil {
		return nil, false
	}
	if s := readVersion(&tree, &r); s != nil {
		s.check(&r)
	}
	return r.list, true
}

// agree checks that schema and parser judge a text the same, as far as a schema can judge.
// It reports whether the text was accepted by the schema.
func agree(t *testing.T, schema *check.Schema, text []byte) bool {
	t.Helper()
	value, err := check.UnmarshalJSON(bytes.NewReader(text))
	found, ok := findings(text)
	if err != nil || !ok {
		return false // not a matter for a schema
	}
	said := schema.Validate(value)
	plain := slices.IndexFunc(found, func(f finding) bool { return !f.beyond })
	switch {
	case said == nil && plain >= 0:
		t.Errorf("the schema accepts what the parser finds wrong with the value itself: %s\nin:\n%s", found[plain].Text, text)
	case said != nil && plain < 0:
		var texts []string
		for _, f := range found {
			texts = append(texts, f.Text)
		}
		t.Errorf("the schema refuses what the parser accepts (apart from %q): %v\nin:\n%s", texts, said, text)
	}
	return said == nil
}

// TestSchemaAgreesWithParser judges the shipped files, the bad files, and thousands of files
// with one place changed by both.
func TestSchemaAgreesWithParser(t *testing.T) {
	schema := compileSchema(t)
	texts := [][]byte{[]byte(plain), []byte(everything), []byte(tableLogic), []byte(varied)}
	for _, text := range texts {
		if !agree(t, schema, text) {
			t.Errorf("refused:\n%s", text)
		}
	}
	for file, text := range shipped(t) {
		if !agree(t, schema, text) {
			t.Errorf("%s: refused by the schema", file)
		}
	}
	for _, f := range badFiles(t) {
		// Duplicate keys are gone before a schema sees them.
		if !strings.Contains(f.name, "duplicate") && !strings.Contains(f.name, "twice") {
			agree(t, schema, []byte(f.text))
		}
	}
	random := rand.New(rand.NewPCG(1, 2))
	accepted := 0
	rounds := 2400
	if testing.Short() {
		rounds = 300
	}
	for i := range rounds {
		// Printing first makes every optional field explicit, so that all of them get their turn.
		text := mustParse(t, string(texts[i%len(texts)])).Print()
		var v any
		d := json.NewDecoder(bytes.NewReader(text))
		d.UseNumber()
		if err := d.Decode(&v); err != nil {
			t.Fatal(err)
		}
		mutate(random, v)
		changed, err := json.Marshal(v)
		if err != nil {
			t.Fatal(err)
		}
		if agree(t, schema, changed) {
			accepted++
		}
		if t.Failed() {
			break
		}
	}
	if accepted < rounds/10 || accepted > rounds*9/10 {
		t.Errorf("%d of %d changed files accepted: the changes test little", accepted, rounds)
	}
}

// mutate changes one place somewhere in v.
func mutate(r *rand.Rand, v any) {
	type place struct {
		get func() any
		set func(any)
		del func()
	}
	var places []place
	var walk func(v any)
	walk = func(v any) {
		switch v := v.(type) {
		case map[string]any:
			for _, k := range slices.Sorted(func(yield func(string) bool) {
				for k := range v {
					if !yield(k) {
						return
					}
				}
			}) {
				places = append(places, place{func() any { return v[k] }, func(x any) { v[k] = x }, func() { delete(v, k) }})
				walk(v[k])
			}
		case []any:
			for i := range v {
				places = append(places, place{func() any { return v[i] }, func(x any) { v[i] = x }, nil})
				walk(v[i])
			}
		}
	}
	walk(v)
	p := places[r.IntN(len(places))]
	values := []any{nil, true, false, "", "any", "default", "table", "no_lag", strings.Repeat("x", 61), strings.Repeat("ä", 201), 0, 1, -1, 0.5, 2, 1e9, -1e9, 720, 721, 1e300, json.Number("1e0"), json.Number("-0.0"),
		[]any{}, []any{1, 2}, []any{1, 2, 3}, []any{[]any{1, 2}, []any{3, 4}}, []any{"no_lag", "no_lag"}, map[string]any{}, map[string]any{"kind": "table"}, map[string]any{"x": 1}}
	switch old := p.get(); r.IntN(6) {
	case 0:
		if p.del != nil {
			p.del()
			return
		}
		p.set(nil)
	case 1:
		if m, ok := old.(map[string]any); ok {
			m[[]string{"id", "extra", "radius_m", "box_m", "kind", "to_m", "corners_m", "center_m", "against"}[r.IntN(9)]] = values[r.IntN(len(values))]
			return
		}
		fallthrough
	case 2:
		if l, ok := old.([]any); ok && len(l) > 0 {
			if r.IntN(2) == 0 {
				p.set(l[1:])
			} else {
				p.set(append(slices.Clone(l), l[0]))
			}
			return
		}
		fallthrough
	case 3:
		if n, ok := old.(json.Number); ok {
			f, _ := n.Float64()
			p.set([]any{-f, f + 0.25, f * 2, f * 100, f / 100, f + 1}[r.IntN(6)])
			return
		}
		fallthrough
	default:
		p.set(values[r.IntN(len(values))])
	}
}
