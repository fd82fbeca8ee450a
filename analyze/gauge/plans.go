package gauge

import (
	"embed"
	"fmt"
	"path"
	"strings"

	"tautramp/acquire/mill"
)

//go:embed plans/*.toml
var plans embed.FS

// PlanNames are the plans that the program brings, in the order of their names.
func PlanNames() []string {
	files, err := plans.ReadDir("plans")
	if err != nil {
		return nil // embedded: cannot be
	}
	names := make([]string, len(files))
	for i, f := range files {
		names[i] = strings.TrimSuffix(f.Name(), ".toml")
	}
	return names
}

// PlanText is the text of a plan that the program brings, to be written out,
// changed and read back. The error is a mill.ErrUnknownName.
func PlanText(name string) ([]byte, error) {
	text, err := plans.ReadFile(path.Join("plans", name+".toml"))
	if err != nil {
		return nil, fmt.Errorf("%w: no plan %q; known: %s", mill.ErrUnknownName, name, strings.Join(PlanNames(), ", "))
	}
	return text, nil
}
