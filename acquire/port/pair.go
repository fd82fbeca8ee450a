//go:build linux || darwin

package port

import (
	"errors"
	"fmt"
	"io"
	"os"
	"sync"
	"time"

	"golang.org/x/sys/unix"
)

// Pair is a pseudo-terminal: a serial port at Path whose other end is this
// Read, Write and Close, as a board has it. A Write blocks once the port has
// some kilobytes unread.
type Pair struct {
	Path string // what a capture opens

	master *os.File
	// kept is one descriptor of the port itself. Without it, what the board
	// writes before anybody opens the port would be lost, and the board would see
	// a hang-up whenever a capture closes.
	kept  int
	once  sync.Once
	cause error // ErrClosed or ErrGone; set before master is closed
}

// NewPair makes a pseudo-terminal that passes bytes on as they are from the
// start. Other systems than Linux and macOS give ErrNoTerminal.
func NewPair() (*Pair, error) {
	fd, err := unix.Open("/dev/ptmx", unix.O_RDWR|unix.O_NOCTTY|unix.O_CLOEXEC|unix.O_NONBLOCK, 0)
	if err != nil {
		return nil, fmt.Errorf("%w: opening /dev/ptmx: %w; use a tcp:// port", ErrNoTerminal, err)
	}
	// Non-blocking before NewFile: the runtime then polls it, and Close and the
	// deadlines reach a blocked Read and Write.
	master := os.NewFile(uintptr(fd), "/dev/ptmx")
	path, err := unlock(fd)
	if err != nil {
		return nil, errors.Join(fmt.Errorf("%w: %w; use a tcp:// port", ErrNoTerminal, err), master.Close())
	}
	kept, err := unix.Open(path, unix.O_RDWR|unix.O_NOCTTY|unix.O_CLOEXEC, 0)
	if err != nil {
		return nil, errors.Join(fmt.Errorf("%w: opening %s: %w; use a tcp:// port", ErrNoTerminal, path, err), master.Close())
	}
	if err := makeRaw(kept); err != nil {
		return nil, errors.Join(fmt.Errorf("%w: setting up %s: %w; use a tcp:// port", ErrNoTerminal, path, err), unix.Close(kept), master.Close())
	}
	return &Pair{Path: path, master: master, kept: kept}, nil
}

// makeRaw turns echo, line editing and every translation off.
func makeRaw(fd int) error {
	t, err := unix.IoctlGetTermios(fd, getTermios)
	if err != nil {
		return err
	}
	t.Iflag, t.Oflag, t.Lflag = 0, 0, 0
	t.Cflag &^= unix.CSIZE | unix.PARENB
	t.Cflag |= unix.CS8 | unix.CREAD | unix.CLOCAL
	t.Cc[unix.VMIN], t.Cc[unix.VTIME] = 1, 0
	return unix.IoctlSetTermios(fd, setTermios, t)
}

// Read gives what the host wrote: it blocks until a byte, Close (ErrClosed),
// Unplug (ErrGone) or the deadline.
func (p *Pair) Read(b []byte) (int, error) {
	if len(b) == 0 {
		return 0, fmt.Errorf("reading %s: %w", p.Path, io.ErrShortBuffer)
	}
	n, err := p.master.Read(b)
	return n, p.explain(err)
}

// Write sends to the host. It blocks while the host leaves too much unread.
func (p *Pair) Write(b []byte) (int, error) {
	n, err := p.master.Write(b)
	return n, p.explain(err)
}

// SetDeadline limits Read and Write to come; the zero time lifts the limit. Past
// it they give os.ErrDeadlineExceeded.
func (p *Pair) SetDeadline(t time.Time) error { return p.explain(p.master.SetDeadline(t)) }

// Close ends the pair. Closing twice is no error.
func (p *Pair) Close() error { return p.end(ErrClosed) }

// Unplug takes the board away as a pulled cable does: the host's port is gone,
// and what it had not read yet with it.
func (p *Pair) Unplug() error { return p.end(ErrGone) }

func (p *Pair) end(cause error) error {
	var err error
	p.once.Do(func() {
		p.cause = cause
		err = errors.Join(p.master.Close(), unix.Close(p.kept))
	})
	return err
}

// explain puts the system's error into our classes.
func (p *Pair) explain(err error) error {
	switch {
	case err == nil:
		return nil
	case errors.Is(err, os.ErrDeadlineExceeded):
		return fmt.Errorf("%s: %w", p.Path, err)
	case errors.Is(err, os.ErrClosed):
		return fmt.Errorf("%s: %w", p.Path, p.cause)
	}
	return fmt.Errorf("%s: %w: %w", p.Path, ErrGone, err)
}
