package port

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"time"

	"go.bug.st/serial"
)

// pollEvery is how long one Read of the serial library may take.
const pollEvery = 50 * time.Millisecond

// openSerial opens a device by its path or its COM name.
func openSerial(ctx context.Context, name string, o Options) (io.ReadWriteCloser, error) {
	if err := ctx.Err(); err != nil {
		return nil, fmt.Errorf("opening %s: %w", name, err)
	}
	hold, err := prepare(name)
	if err != nil {
		return nil, err
	}
	// InitialStatusBits stays nil, which means DTR and RTS on: a pseudo-terminal
	// has no such lines and refuses to have them set.
	p, err := serial.Open(name, &serial.Mode{BaudRate: o.Baud})
	if err != nil {
		return nil, errors.Join(openError(name, err), hold.Close())
	}
	// Set once, before the first Read: setting it later races with Read. With no
	// time limit at all, only closing the descriptor would end a Read.
	if err := p.SetReadTimeout(pollEvery); err != nil {
		return nil, errors.Join(openError(name, err), p.Close(), hold.Close())
	}
	return newConn(stream{
		ReadWriteCloser: held{p, hold},
		name:            name,
		timeout:         o.WriteTimeout,
		pollEvery:       pollEvery,
		// The library's Close does not release a Write that the driver blocks.
		discardOut: func() { _ = p.ResetOutputBuffer() }, // fails only when the port is gone
	}), nil
}

// held is a serial port with what prepare holds for it.
type held struct {
	serial.Port
	hold io.Closer
}

func (h held) Close() error { return errors.Join(h.Port.Close(), h.hold.Close()) }

// openError puts the library's error into our classes. Its PortError has no
// Unwrap, and some failures come as raw system errors.
func openError(name string, err error) error {
	class, hint := classify(err)
	var lib *serial.PortError
	if errors.As(err, &lib) {
		switch lib.Code() {
		case serial.PortBusy:
			class, hint = ErrBusy, busyHint
		case serial.PortNotFound:
			class, hint = ErrNotFound, missingHint
		case serial.PermissionDenied:
			class, hint = ErrDenied, deniedHint
		case serial.InvalidSerialPort:
			class, hint = ErrBadName, notSerialHint
		}
	}
	return fmt.Errorf("opening %s: %w (%w); %s", name, class, err, hint)
}

// classify sorts a raw system error.
func classify(err error) (class error, hint string) {
	switch {
	case errors.Is(err, fs.ErrNotExist) || isNoDevice(err):
		return ErrNotFound, missingHint
	case errors.Is(err, fs.ErrPermission):
		return ErrDenied, deniedHint
	case isBusy(err):
		return ErrBusy, busyHint
	}
	return ErrBadName, notSerialHint
}

const (
	missingHint   = `plug it in; "tautramp ports" lists what is there`
	busyHint      = "close the other program that has it open"
	notSerialHint = `it is not a serial port; "tautramp ports" lists those, and file:PATH replays a text file`
)
