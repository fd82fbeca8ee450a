package acquire

import (
	"errors"
	"fmt"
)

// Errors that end a capture, wrapped in a *DeviceError that names the device.
var (
	ErrNoAnswer = errors.New("the board does not say who it is")
	ErrGaveUp   = errors.New("the board went away and did not come back")
	ErrNotOurs  = errors.New("the board does not fit this capture")
	ErrRefused  = errors.New("the board refuses a command")
)

// DeviceError is a failure of one device.
type DeviceError struct {
	Device int    // index into Config.Devices
	Name   string // its port, as the person knows it
	Err    error
}

func (e *DeviceError) Error() string {
	return fmt.Sprintf("board %d on %s: %v", e.Device+1, e.Name, e.Err)
}

func (e *DeviceError) Unwrap() error { return e.Err }
