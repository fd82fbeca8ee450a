//go:build !unix

package port

import (
	"fmt"
	"io"
	"strings"
	"time"

	"go.bug.st/serial"
)

const (
	exampleName = "COM3"
	deniedHint  = "close the other program that has it open"
)

// hold holds nothing: the system itself opens a serial port only once.
type hold struct{}

// prepare refuses names that are no serial port's: the serial library opens any
// name below \\.\, a disk's too.
func prepare(name string) (hold, error) {
	short := strings.ToUpper(strings.TrimPrefix(name, `\\.\`))
	digits, isCom := strings.CutPrefix(short, "COM")
	if !isCom || digits == "" || strings.Trim(digits, "0123456789") != "" {
		return hold{}, fmt.Errorf("opening %s: %w; %s", name, ErrBadName, notSerialHint)
	}
	return hold{}, nil
}

func (hold) writer(p serial.Port, _ time.Duration) (w io.Writer, release func()) {
	return byLibrary(p)
}

// Close has nothing to let go of.
func (hold) Close() error { return nil }

func isBusy(error) bool { return false }
