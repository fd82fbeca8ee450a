package mill

import _ "embed"

//go:embed example.toml
var example string

// Example is a whole mill.toml with a comment on every line to fill in: the
// invented Quillfern Mill.
func Example() []byte { return []byte(example) }
