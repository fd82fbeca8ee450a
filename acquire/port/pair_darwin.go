package port

import (
	"fmt"
	"unsafe"

	"golang.org/x/sys/unix"
)

const (
	getTermios = unix.TIOCGETA
	setTermios = unix.TIOCSETA
)

// unlock lets the port of the master be opened, and gives its path.
func unlock(master int) (string, error) {
	if err := unix.IoctlSetInt(master, unix.TIOCPTYGRANT, 0); err != nil {
		return "", fmt.Errorf("granting the pseudo-terminal: %w", err)
	}
	if err := unix.IoctlSetInt(master, unix.TIOCPTYUNLK, 0); err != nil {
		return "", fmt.Errorf("unlocking the pseudo-terminal: %w", err)
	}
	var name [128]byte // the size that the request's number encodes
	_, _, errno := unix.Syscall(unix.SYS_IOCTL, uintptr(master), unix.TIOCPTYGNAME, uintptr(unsafe.Pointer(&name[0])))
	if errno != 0 {
		return "", fmt.Errorf("naming the pseudo-terminal: %w", errno)
	}
	return unix.ByteSliceToString(name[:]), nil
}
