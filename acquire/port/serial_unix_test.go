//go:build linux || darwin

package port_test

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"syscall"
	"testing"

	"tautramp/acquire/port"
)

func TestOpenSerialRefusesByClass(t *testing.T) {
	dir := t.TempDir()
	text := filepath.Join(dir, "card.txt")
	if err := os.WriteFile(text, []byte("line\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name  string
		port  string
		class error
		says  string
	}{
		{"no such device", "/dev/ttyNOWHERE", port.ErrNotFound, "tautramp ports"},
		{"a text file", text, port.ErrBadName, "file:PATH"},
		{"a folder", dir, port.ErrBadName, "file:PATH"},
		{"a device that is no line", "/dev/null", port.ErrBadName, "not a serial port"},
	} {
		t.Run(c.name, func(t *testing.T) { wantRefused(t, c.port, c.class, c.says) })
	}
}

// Opening and closing while bytes pour in, as when a capture is started and
// stopped again and again.
func TestCloseUnderTraffic(t *testing.T) {
	pair := newPair(t)
	poured := make(chan error, 1)
	go func() {
		for {
			if _, err := pair.Write([]byte("0123456789abcdef\n")); err != nil {
				poured <- err
				return
			}
		}
	}()
	for range 10 {
		host, err := port.Open(t.Context(), pair.Path, port.Options{})
		if err != nil {
			t.Fatal(err)
		}
		read := make(chan error, 1)
		go func() {
			_, err := io.Copy(io.Discard, host)
			read <- err
		}()
		if _, err := host.Write([]byte("run\n")); err != nil {
			t.Error(err)
		}
		if err := host.Close(); err != nil {
			t.Error(err)
		}
		if err := <-read; !errors.Is(err, port.ErrClosed) {
			t.Errorf("read: %v", err)
		}
	}
	if err := pair.Unplug(); err != nil {
		t.Fatal(err)
	}
	if err := <-poured; !errors.Is(err, port.ErrGone) {
		t.Errorf("board's write: %v", err)
	}
}

// The exclusive mode of the terminal alone would let root in a second time.
func TestSecondOpenIsBusyUntilTheFirstCloses(t *testing.T) {
	pair := newPair(t)
	first, err := port.Open(t.Context(), pair.Path, port.Options{})
	if err != nil {
		t.Fatal(err)
	}
	wantRefused(t, pair.Path, port.ErrBusy, "close the other program")
	if err := first.Close(); err != nil {
		t.Fatal(err)
	}
	again, err := port.Open(t.Context(), pair.Path, port.Options{})
	if err != nil {
		t.Fatalf("after closing: %v", err)
	}
	if err := again.Close(); err != nil {
		t.Fatal(err)
	}
}

func TestBootLineFromBeforeTheOpenIsKept(t *testing.T) {
	pair := newPair(t)
	const boot = "boot line\r\n"
	if _, err := pair.Write([]byte(boot)); err != nil {
		t.Fatal(err)
	}
	host, err := port.Open(t.Context(), pair.Path, port.Options{})
	if err != nil {
		t.Fatal(err)
	}
	got := make([]byte, len(boot))
	if _, err := io.ReadFull(host, got); err != nil || string(got) != boot {
		t.Errorf("got %q, %v", got, err)
	}
	if err := host.Close(); err != nil {
		t.Fatal(err)
	}
}

// As long as a lost port is held, the board comes back under another name.
func TestLostPortIsLetGoAtOnce(t *testing.T) {
	pair := newPair(t)
	before := openFiles(t)
	host, err := port.Open(t.Context(), pair.Path, port.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if err := pair.Unplug(); err != nil {
		t.Fatal(err)
	}
	if _, err := host.Read(make([]byte, 1)); !errors.Is(err, port.ErrGone) {
		t.Fatalf("read: %v", err)
	}
	if after := openFiles(t); after > before-2 { // the pair's own two are gone as well
		t.Errorf("%d files open before, %d after the loss", before, after)
	}
	if err := host.Close(); err != nil {
		t.Errorf("closing a lost port: %v", err)
	}
}

// openFiles counts the descriptors of this process.
func openFiles(t *testing.T) int {
	t.Helper()
	entries, err := os.ReadDir("/dev/fd")
	if err != nil {
		t.Skip(err)
	}
	return len(entries)
}

// The serial library would panic on a descriptor that select(2) has no place
// for.
func TestHighDescriptorIsRefused(t *testing.T) {
	var limit syscall.Rlimit
	if err := syscall.Getrlimit(syscall.RLIMIT_NOFILE, &limit); err != nil || limit.Cur < 1200 {
		t.Skipf("this process may open only %d files, %v", limit.Cur, err)
	}
	pair := newPair(t)
	for range 1030 {
		f, err := os.Open("/dev/null")
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
	}
	wantRefused(t, pair.Path, port.ErrBusy, "too many files")
}
