package port

import (
	"unsafe"

	"golang.org/x/sys/unix"
)

// serialStruct is struct serial_struct of linux/serial.h up to its flags, with
// room for the rest.
type serialStruct struct {
	_     [4]int32 // type, line, port, irq
	flags int32
	_     [108]byte
}

// asyncLowLatency is ASYNC_LOW_LATENCY of linux/tty_flags.h.
const asyncLowLatency = 1 << 13

// tune asks the driver to pass bytes on at once, where USB bridges otherwise
// keep them for up to 16 ms, and to leave DTR up when the port is closed, so
// that closing and opening again does not restart the board. Both are wishes: a
// driver without them works all the same.
func tune(fd int) {
	var s serialStruct
	if _, _, errno := unix.Syscall(unix.SYS_IOCTL, uintptr(fd), unix.TIOCGSERIAL, uintptr(unsafe.Pointer(&s))); errno == 0 {
		s.flags |= asyncLowLatency
		_, _, _ = unix.Syscall(unix.SYS_IOCTL, uintptr(fd), unix.TIOCSSERIAL, uintptr(unsafe.Pointer(&s)))
	}
	if t, err := unix.IoctlGetTermios(fd, unix.TCGETS); err == nil {
		t.Cflag &^= unix.HUPCL
		_ = unix.IoctlSetTermios(fd, unix.TCSETS, t)
	}
}
