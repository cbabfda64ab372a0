package scenario

import (
	"bytes"
	_ "embed"
)

// SchemaID identifies the JSON Schema of the format. Nothing is served there.
const SchemaID = "https://leeway.invalid/schema/1"

//go:generate go test -run ^TestSchema$ -update

// schema is generated from format.go and rules.go.
//
//go:embed schema.json
var schema []byte

// Schema returns the JSON Schema (draft 2020-12) of the format. It says what can be said
// of each value by itself; what does not go together only Parse finds.
func Schema() []byte { return bytes.Clone(schema) }
