package port

import (
	"fmt"

	"golang.org/x/sys/unix"
)

const (
	getTermios = unix.TCGETS
	setTermios = unix.TCSETS
)

// unlock lets the port of the master be opened, and gives its path.
func unlock(master int) (string, error) {
	if err := unix.IoctlSetPointerInt(master, unix.TIOCSPTLCK, 0); err != nil {
		return "", fmt.Errorf("unlocking the pseudo-terminal: %w", err)
	}
	n, err := unix.IoctlGetInt(master, unix.TIOCGPTN)
	if err != nil {
		return "", fmt.Errorf("numbering the pseudo-terminal: %w", err)
	}
	return fmt.Sprintf("/dev/pts/%d", n), nil
}
