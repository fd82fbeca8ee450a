//go:build unix

package port

import (
	"errors"
	"fmt"
	"io"
	"os"

	"golang.org/x/sys/unix"
)

const (
	exampleName = "/dev/ttyACM0"
	deniedHint  = "add yourself to the group of the device (commonly: sudo usermod -aG dialout $USER, then log in again)"

	// mostFiles leaves room below 1024: the serial library waits with select(2),
	// which has no place for a higher descriptor, and would panic.
	mostFiles = unix.FD_SETSIZE - 32
)

// prepare does, before the serial library opens the device, what the library has
// no call for, and holds the lock that keeps other programs out: the exclusive
// mode that the library sets does not stop root. Close what it returns after the
// port.
func prepare(name string) (io.Closer, error) {
	if err := checkDevice(name); err != nil {
		return nil, err
	}
	fd, err := unix.Open(name, unix.O_RDWR|unix.O_NOCTTY|unix.O_NONBLOCK|unix.O_CLOEXEC, 0)
	if err != nil {
		return nil, openError(name, err)
	}
	hold := os.NewFile(uintptr(fd), name)
	if fd >= mostFiles {
		return nil, errors.Join(fmt.Errorf("opening %s: %w: %d files are open already; open ports first", name, ErrBusy, fd), hold.Close())
	}
	if err := unix.Flock(fd, unix.LOCK_EX|unix.LOCK_NB); err != nil {
		return nil, errors.Join(openError(name, err), hold.Close())
	}
	tune(fd)
	return hold, nil
}

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

// isNoDevice tells a device node without a device behind it.
func isNoDevice(err error) bool {
	return errors.Is(err, unix.ENXIO) || errors.Is(err, unix.ENODEV)
}
