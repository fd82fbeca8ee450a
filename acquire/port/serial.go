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
	h, err := prepare(name)
	if err != nil {
		return nil, err
	}
	// InitialStatusBits stays nil, which means DTR and RTS on: a pseudo-terminal
	// has no such lines and refuses to have them set. DTR going up restarts many
	// boards; the conversation waits for their boot line.
	p, err := serial.Open(name, &serial.Mode{BaudRate: o.Baud})
	if err != nil {
		return nil, errors.Join(openError(name, err), h.Close())
	}
	// Set once, before the first Read: setting it later races with Read. With no
	// time limit at all, only closing the descriptor would end a Read.
	if err := p.SetReadTimeout(pollEvery); err != nil {
		return nil, errors.Join(openError(name, err), p.Close(), h.Close())
	}
	w, release := h.writer(p, o.WriteTimeout)
	return newConn(stream{
		Reader:       p,
		Writer:       w,
		Closer:       both{p, h},
		releaseWrite: release,
		pollEvery:    pollEvery,
		name:         name,
		timeout:      o.WriteTimeout,
	}), nil
}

// both closes the port, then what prepare holds for it.
type both struct{ port, hold io.Closer }

func (b both) Close() error { return errors.Join(b.port.Close(), b.hold.Close()) }

// Nothing here throws away what has come in: on Windows that ends a Read as if
// the port were closed. Whoever wants to start afresh reads to a line end.

// byLibrary writes through the serial library, whose Write blocks in the driver.
// Its Close does not end that, but throwing away what is not sent yet does.
func byLibrary(p serial.Port) (w io.Writer, release func()) {
	return p, func() { _ = p.ResetOutputBuffer() } // fails only when the port is gone, which ends the Write too
}

// openError puts the library's error into our classes. Its PortError has no
// Unwrap, and some failures come as raw system errors.
func openError(name string, err error) error {
	hint, class := classify(err)
	var lib *serial.PortError
	if errors.As(err, &lib) {
		switch lib.Code() {
		case serial.PortBusy:
			hint, class = busyHint, ErrBusy
		case serial.PortNotFound:
			hint, class = missingHint, ErrNotFound
		case serial.PermissionDenied:
			hint, class = deniedHint, ErrDenied
		case serial.InvalidSerialPort:
			hint, class = notSerialHint, ErrBadName
		}
	}
	return fmt.Errorf("opening %s: %w (%w); %s", name, class, err, hint)
}

// classify sorts a raw system error. What is none of the known ones, such as a
// bridge that does not answer, comes from a device that is not all there.
func classify(err error) (hint string, class error) {
	switch {
	case errors.Is(err, fs.ErrPermission):
		return deniedHint, ErrDenied
	case isBusy(err):
		return busyHint, ErrBusy
	}
	return missingHint, ErrNotFound
}

const (
	missingHint   = `plug it in; "tautramp ports" lists what is there`
	busyHint      = "close the other program that has it open"
	notSerialHint = `it is not a serial port; "tautramp ports" lists those, and file:PATH replays a text file`
)
