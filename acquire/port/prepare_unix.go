//go:build unix

package port

import (
	"errors"
	"fmt"
	"io"
	"os"
	"time"

	"go.bug.st/serial"
	"golang.org/x/sys/unix"
)

const (
	exampleName = "/dev/ttyACM0"
	deniedHint  = "add yourself to the group of the device (commonly: sudo usermod -aG dialout $USER, then log in again)"

	// mostFiles leaves room below 1024: the serial library waits with select(2),
	// which has no place for a higher descriptor, and would panic.
	mostFiles = unix.FD_SETSIZE - 32
)

// hold is a descriptor of our own on the device, beside the serial library's. It
// carries the lock that keeps other programs out, because the exclusive mode
// that the library sets does not stop root; and it writes, because the library's
// Write blocks in the driver with nothing to end it, while this descriptor is
// polled.
type hold struct{ f *os.File }

// prepare opens the hold and does with it, before the library opens the device,
// what the library has no call for. Close it with the port.
func prepare(name string) (hold, error) {
	if err := checkDevice(name); err != nil {
		return hold{}, err
	}
	fd, err := unix.Open(name, unix.O_RDWR|unix.O_NOCTTY|unix.O_NONBLOCK|unix.O_CLOEXEC, 0)
	if err != nil {
		return hold{}, openError(name, err)
	}
	h := hold{os.NewFile(uintptr(fd), name)}
	if fd >= mostFiles {
		err := fmt.Errorf("opening %s: %w: too many files are open (%d); open ports first", name, ErrBusy, fd)
		return hold{}, errors.Join(err, h.Close())
	}
	// Any other failure means that this system cannot lock devices; the library's
	// exclusive mode is then all there is.
	if err := unix.Flock(fd, unix.LOCK_EX|unix.LOCK_NB); isBusy(err) {
		return hold{}, errors.Join(openError(name, err), h.Close())
	}
	tune(fd)
	return h, nil
}

// writer is the hold itself, or the library where the system cannot poll the
// device.
func (h hold) writer(p serial.Port, timeout time.Duration) (w io.Writer, release func()) {
	if h.f.SetWriteDeadline(time.Time{}) != nil {
		return byLibrary(p)
	}
	t := timed{h.f, timeout}
	return t, t.release
}

// Close lets go of the lock.
func (h hold) Close() error { return h.f.Close() }

// checkDevice refuses what is no device before it is opened for writing.
func checkDevice(name string) error {
	info, err := os.Stat(name)
	if err != nil {
		return openError(name, err)
	}
	if info.Mode()&os.ModeCharDevice == 0 {
		return fmt.Errorf("opening %s: %w; %s", name, ErrBadName, notSerialHint)
	}
	return nil
}

func isBusy(err error) bool {
	return errors.Is(err, unix.EBUSY) || errors.Is(err, unix.EWOULDBLOCK)
}
