package port

import (
	"fmt"
	"strings"
)

// Info is one serial port of this machine. Only USB ports have more than a
// path.
type Info struct {
	Path    string
	Product string // what the board calls itself
	Vendor  string // USB vendor id, 4 hex digits
	Model   string // USB product id, 4 hex digits
	Serial  string // USB serial number
}

// List shows the serial ports of this machine. It opens built-in ports for a
// moment to see whether they are real: call it when somebody asks, never on a
// timer. Pseudo-terminals are not in it.
func List() ([]Info, error) {
	all, err := list()
	if err != nil {
		return nil, fmt.Errorf("listing serial ports: %w", err)
	}
	return all, nil
}

// find gives the path at which a USB board is among all. Boards without a serial
// number of their own cannot be told apart: with two alike it is ErrBadName, with
// none ErrNotFound.
func find(all []Info, board Info) (string, error) {
	if board.Vendor == "" {
		return "", fmt.Errorf("%w: %s is no USB board, it has only its path", ErrBadName, board.Path)
	}
	var at []string
	for _, i := range all {
		if strings.EqualFold(i.Vendor, board.Vendor) && strings.EqualFold(i.Model, board.Model) && i.Serial == board.Serial {
			at = append(at, i.Path)
		}
	}
	switch len(at) {
	case 0:
		return "", fmt.Errorf("%w: USB board %s:%s %s; %s", ErrNotFound, board.Vendor, board.Model, board.Serial, missingHint)
	case 1:
		return at[0], nil
	}
	return "", fmt.Errorf("%w: USB board %s:%s is at %s alike; name one", ErrBadName, board.Vendor, board.Model, strings.Join(at, " and "))
}
