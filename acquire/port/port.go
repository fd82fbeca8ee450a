// Package port opens the line to a measuring board: a serial port, a TCP
// address, or a text file of wire lines to replay. All of them keep one
// contract, which Open states and package porttest checks. Start with Open, or
// with Dialer to open the same board again after a loss; List shows what is
// plugged in; NewPair is a board's end without a board.
//
// Deliberately absent: lines, records and anything that knows what the bytes
// mean; when to open again after a loss, which is the caller's to decide.
package port

import (
	"context"
	"errors"
	"fmt"
	"io"
	"strings"
	"time"
)

// How a port fails. Every error of this package wraps one of them, but for
// io.EOF at the end of a replay, io.ErrShortBuffer for a Read of no bytes, and
// the context's own.
var (
	ErrBadName    = errors.New("not the name of a port")
	ErrNotFound   = errors.New("port not found")
	ErrBusy       = errors.New("port in use")
	ErrDenied     = errors.New("no permission to use the port")
	ErrClosed     = errors.New("port closed")              // by the own Close
	ErrGone       = errors.New("port gone")                // unplugged, hung up, far end closed
	ErrStuck      = errors.New("port takes no bytes")      // a Write ran out of time
	ErrNoTerminal = errors.New("no pseudo-terminals here") // NewPair on this system
)

// Options is how a port is opened. The zero value is right for most boards.
type Options struct {
	Baud         int           // serial only; 0 means 115200. USB boards mostly ignore it
	WriteTimeout time.Duration // for one Write; 0 means 2 s
	DialTimeout  time.Duration // tcp only; 0 means 5 s
}

// Open opens a port by its name: a device path or COMn, "tcp://host:port", or
// "file:PATH" to replay a text file of wire lines. An explicit name never lists
// the machine's ports: listing opens some of them (see List).
//
// Read blocks until at least one byte, the own Close (ErrClosed) or a loss
// (ErrGone), and never returns (0, nil); what it returned before a loss is all
// that there was. Only a replay ends in io.EOF. Write writes all of its bytes
// or fails within the timeout (ErrStuck). Close may be called at any time, from
// any goroutine and again; it releases a blocked Read and Write. One Read and
// one Write may run at the same time; more queue up.
//
// A serial board may restart when it is opened, for opening raises DTR: expect
// its boot line.
func Open(ctx context.Context, name string, o Options) (io.ReadWriteCloser, error) {
	o = o.withDefaults()
	scheme, rest, hasScheme := strings.Cut(name, ":")
	switch {
	case strings.TrimSpace(name) == "" || strings.ContainsRune(name, 0):
		return nil, fmt.Errorf("%w: %q; \"tautramp ports\" lists what is there", ErrBadName, name)
	case hasScheme && scheme == "tcp":
		return openTCP(ctx, name, o)
	case hasScheme && scheme == "file":
		return openFile(rest)
	case strings.Contains(name, "://"):
		return nil, fmt.Errorf("%w: %q; write a port such as %s, or tcp://host:port", ErrBadName, name, exampleName)
	}
	return openSerial(ctx, name, o)
}

func (o Options) withDefaults() Options {
	if o.Baud == 0 {
		o.Baud = 115200
	}
	if o.WriteTimeout == 0 {
		o.WriteTimeout = 2 * time.Second
	}
	if o.DialTimeout == 0 {
		o.DialTimeout = 5 * time.Second
	}
	return o
}

// absentError is an ErrNotFound in words of its own.
type absentError struct {
	text  string
	cause error
}

func (e *absentError) Error() string   { return e.text }
func (e *absentError) Unwrap() []error { return []error{ErrNotFound, e.cause} }
