package report

import _ "embed"

//go:embed result.schema.json
var schemaJSON string

// Schema is the JSON Schema (draft 2020-12) of what JSON writes. Its
// descriptions name the unit of every number. The caller owns the bytes.
func Schema() []byte { return []byte(schemaJSON) }
