//go:build unix && !linux

package port

// tune has nothing to ask for here.
func tune(int) {}
