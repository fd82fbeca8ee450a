package main

import (
	"bytes"
	"fmt"
	"os"
	"strings"

	"tautramp/acquire/mill"
)

// listThresholds prints the one table of them; a profile's own beside it.
func listThresholds(path string, e env) error {
	var p *mill.Profile
	if path != "" {
		text, err := os.ReadFile(path)
		if err != nil {
			return err
		}
		if p, err = mill.Parse(text); err != nil {
			return fmt.Errorf("%s: %w", path, err)
		}
	}
	var b bytes.Buffer
	for _, t := range mill.Thresholds() {
		line := fmt.Sprintf("%s = %g", t.Key, t.Value)
		if t.Unit != "" {
			line += " " + t.Unit
		}
		if v, own := p.Threshold(t.Key); own && v != t.Value {
			line += fmt.Sprintf(", here %g", v)
		}
		fmt.Fprintf(&b, "%s\n    %s; %s\n", line, strings.TrimSuffix(t.Says, "."), t.Status)
	}
	_, err := b.WriteTo(e.stdout)
	return err
}
