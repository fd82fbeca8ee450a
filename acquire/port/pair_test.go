//go:build linux || darwin

package port

import (
	"errors"
	"io"
	"os"
	"testing"
	"time"

	"golang.org/x/sys/unix"
)

func TestPairPassesEveryByteUnchanged(t *testing.T) {
	pair, host := openPair(t)
	var all [256]byte
	for i := range all {
		all[i] = byte(i) // with those that a terminal would act on: ^C ^D ^Q ^S CR LF DEL
	}
	for _, way := range []struct {
		name     string
		from, to io.ReadWriter
	}{{"to the host", pair, host}, {"to the board", host, pair}} {
		if _, err := way.from.Write(all[:]); err != nil {
			t.Fatalf("%s: %v", way.name, err)
		}
		var got [256]byte
		if _, err := io.ReadFull(way.to, got[:]); err != nil || got != all {
			t.Errorf("%s: got %x, %v", way.name, got, err)
		}
	}
}

func TestPairDoesNotEchoBeforeAnybodyOpensIt(t *testing.T) {
	pair, err := NewPair()
	if err != nil {
		t.Skip(err)
	}
	defer pair.Close()
	if _, err := pair.Write([]byte("boot\n")); err != nil {
		t.Fatal(err)
	}
	if err := pair.SetDeadline(time.Now().Add(50 * time.Millisecond)); err != nil {
		t.Fatal(err)
	}
	if n, err := pair.Read(make([]byte, 10)); n != 0 || !errors.Is(err, os.ErrDeadlineExceeded) {
		t.Errorf("read gave %d bytes, %v; want the deadline", n, err)
	}
}

func TestPairTellsCloseFromUnplug(t *testing.T) {
	for _, c := range []struct {
		name string
		end  func(*Pair) error
		want error
	}{{"close", (*Pair).Close, ErrClosed}, {"unplug", (*Pair).Unplug, ErrGone}} {
		t.Run(c.name, func(t *testing.T) {
			pair, err := NewPair()
			if err != nil {
				t.Skip(err)
			}
			read := make(chan error)
			go func() { _, err := pair.Read(make([]byte, 1)); read <- err }()
			if err := c.end(pair); err != nil {
				t.Fatal(err)
			}
			if err := <-read; !errors.Is(err, c.want) {
				t.Errorf("read: %v, want %q", err, c.want)
			}
			if _, err := pair.Write([]byte("x")); !errors.Is(err, c.want) {
				t.Errorf("write: %v, want %q", err, c.want)
			}
			if err := errors.Join(pair.Close(), pair.Unplug()); err != nil {
				t.Errorf("ending again: %v", err)
			}
		})
	}
}

// Dropping DTR when the port is closed would restart many boards.
func TestOpenKeepsTheLineUpOnClose(t *testing.T) {
	pair, _ := openPair(t)
	tio, err := unix.IoctlGetTermios(pair.kept, getTermios)
	if err != nil {
		t.Fatal(err)
	}
	if tio.Cflag&unix.HUPCL != 0 {
		t.Error("the terminal hangs up on close")
	}
}

// Raw system errors by class; ENOENT for a missing device is the library's own
// way on Linux.
func TestSystemErrorsByClass(t *testing.T) {
	for errno, class := range map[unix.Errno]error{
		unix.ENOENT: ErrNotFound,
		unix.ENXIO:  ErrNotFound,
		unix.EIO:    ErrNotFound,
		unix.EACCES: ErrDenied,
		unix.EPERM:  ErrDenied,
		unix.EBUSY:  ErrBusy,
		unix.EAGAIN: ErrBusy,
	} {
		err := openError("/dev/ttyACM0", errno)
		if !errors.Is(err, class) || !errors.Is(err, errno) {
			t.Errorf("%v: got %v", errno, err)
		}
	}
}

// openPair opens a pair at both ends, until the test ends.
func openPair(t *testing.T) (*Pair, io.ReadWriteCloser) {
	t.Helper()
	pair, err := NewPair()
	if err != nil {
		t.Skip(err)
	}
	host, err := Open(t.Context(), pair.Path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if err := errors.Join(host.Close(), pair.Close()); err != nil {
			t.Error(err)
		}
	})
	return pair, host
}
