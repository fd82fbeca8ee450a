//go:build !unix

package port

import (
	"fmt"
	"io"
	"strings"
)

const (
	exampleName = "COM3"
	deniedHint  = "close the other program that has it open"
)

// nothing is held: the system itself opens a serial port only once.
type nothing struct{}

func (nothing) Close() error { return nil }

// prepare refuses names that are no serial port's: the serial library opens any
// name below \\.\, a disk's too.
func prepare(name string) (io.Closer, error) {
	short := strings.ToUpper(strings.TrimPrefix(name, `\\.\`))
	digits, isCom := strings.CutPrefix(short, "COM")
	if !isCom || digits == "" || strings.Trim(digits, "0123456789") != "" {
		return nil, fmt.Errorf("opening %s: %w; %s", name, ErrBadName, notSerialHint)
	}
	return nothing{}, nil
}

func isBusy(error) bool { return false }

func isNoDevice(error) bool { return false }
