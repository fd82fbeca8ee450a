package main

import (
	"os"
	"path/filepath"
	"testing"

	"tautramp/acquire/mill"
)

// writeExample writes the example profile and returns its path.
func writeExample(t *testing.T) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "mill.toml")
	if err := os.WriteFile(path, mill.Example(), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}
