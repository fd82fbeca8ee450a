//go:build !linux && !darwin

package port

import (
	"fmt"
	"time"
)

// Pair is a pseudo-terminal, which this system has not: no Pair is ever made.
type Pair struct{ Path string }

// NewPair gives ErrNoTerminal.
func NewPair() (*Pair, error) {
	return nil, fmt.Errorf("%w; use a tcp:// port", ErrNoTerminal)
}

// Read gives ErrNoTerminal.
func (*Pair) Read([]byte) (int, error) { return 0, ErrNoTerminal }

// Write gives ErrNoTerminal.
func (*Pair) Write([]byte) (int, error) { return 0, ErrNoTerminal }

// SetDeadline gives ErrNoTerminal.
func (*Pair) SetDeadline(time.Time) error { return ErrNoTerminal }

// Close has nothing to close.
func (*Pair) Close() error { return nil }

// Unplug has nothing to unplug.
func (*Pair) Unplug() error { return nil }
