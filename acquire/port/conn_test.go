package port

import (
	"errors"
	"io"
	"io/fs"
	"strings"
	"testing"
	"testing/synctest"
	"time"
)

// script is a stream that does as each test says.
type script struct {
	read  func([]byte) (int, error)
	write func([]byte) (int, error)
	close func() error
}

func (s script) Read(p []byte) (int, error)  { return s.read(p) }
func (s script) Write(p []byte) (int, error) { return s.write(p) }
func (s script) Close() error {
	if s.close == nil {
		return nil
	}
	return s.close()
}

func TestReadGoesOnAfterEmptyReads(t *testing.T) {
	left := 500 // five times what bufio.Scanner would bear
	c := Wrap(script{read: func(p []byte) (int, error) {
		if left--; left >= 0 {
			return 0, nil
		}
		return copy(p, "x"), nil
	}}, "fake", Options{})
	if n, err := c.Read(make([]byte, 4)); n != 1 || err != nil {
		t.Errorf("got %d, %v", n, err)
	}
}

// The same read error means a loss or the own Close; only the conn knows which.
func TestReadTellsLossFromClose(t *testing.T) {
	raw := &fs.PathError{Op: "read", Path: "COM3", Err: errors.New("the device does not recognize the command")}
	for _, why := range []error{raw, io.EOF, fs.ErrClosed} {
		c := Wrap(script{read: func([]byte) (int, error) { return 0, why }}, "COM3", Options{})
		if _, err := c.Read(make([]byte, 4)); !errors.Is(err, ErrGone) || !strings.Contains(err.Error(), "COM3") {
			t.Errorf("%v: got %v, want a loss that names the port", why, err)
		}
		c = Wrap(script{read: func([]byte) (int, error) { return 0, why }}, "COM3", Options{})
		if err := c.Close(); err != nil {
			t.Fatal(err)
		}
		if _, err := c.Read(make([]byte, 4)); !errors.Is(err, ErrClosed) {
			t.Errorf("%v: got %v, want the own close", why, err)
		}
	}
}

func TestReadGivesBytesBeforeTheLoss(t *testing.T) {
	calls := 0
	c := Wrap(script{read: func(p []byte) (int, error) {
		if calls++; calls > 1 {
			return 0, io.EOF
		}
		return copy(p, "last"), io.EOF
	}}, "fake", Options{})
	got, err := io.ReadAll(c)
	if string(got) != "last" || !errors.Is(err, ErrGone) {
		t.Errorf("got %q, %v", got, err)
	}
}

func TestWriteLoopsOverShortWrites(t *testing.T) {
	var got []byte
	c := Wrap(script{write: func(p []byte) (int, error) {
		n := min(3, len(p))
		got = append(got, p[:n]...)
		return n, nil
	}}, "fake", Options{})
	if n, err := c.Write([]byte("a whole command\n")); n != 16 || err != nil || string(got) != "a whole command\n" {
		t.Errorf("wrote %d, %v: %q", n, err, got)
	}
}

func TestWriteOfNothingIsALoss(t *testing.T) {
	for _, n := range []int{0, -1} {
		c := Wrap(script{write: func([]byte) (int, error) { return n, nil }}, "fake", Options{})
		if _, err := c.Write([]byte("x")); !errors.Is(err, ErrGone) || !errors.Is(err, io.ErrShortWrite) {
			t.Errorf("%d: got %v", n, err)
		}
	}
}

// A driver may hold a Write for ever: neither Write nor Close waits for it, and
// the bytes under way are not the caller's any more.
func TestStuckDriverHoldsNobody(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		held := make(chan struct{})
		var seen []byte
		s := stream{Reader: nil, Closer: script{}, name: "fake", timeout: 2 * time.Second,
			Writer:       writerFunc(func(p []byte) (int, error) { <-held; seen = append(seen, p...); return len(p), nil }),
			releaseWrite: func() {}} // which does not help here
		c := newConn(s)
		start := time.Now()
		mine := []byte("run\n")
		if _, err := c.Write(mine); !errors.Is(err, ErrStuck) {
			t.Errorf("got %v", err)
		}
		copy(mine, "XXXX")
		if _, err := c.Write([]byte("who\n")); !errors.Is(err, ErrStuck) {
			t.Errorf("behind a stuck write: got %v", err)
		}
		if took := time.Since(start); took != 4*time.Second {
			t.Errorf("two writes took %v, want their timeouts", took)
		}
		if err := c.Close(); err != nil {
			t.Fatal(err)
		}
		if took := time.Since(start); took > 5*time.Second {
			t.Errorf("close took until %v", took)
		}
		close(held)
		synctest.Wait()
		if string(seen) != "run\n" {
			t.Errorf("the driver saw %q", seen)
		}
	})
}

// A descriptor closed under a reader may be another file's by the time that it
// is read.
func TestCloseWaitsForThePollingReader(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		inRead, overlapped := false, false
		s := stream{
			Reader: readerFunc(func([]byte) (int, error) {
				inRead = true
				time.Sleep(pollEvery)
				inRead = false
				return 0, nil
			}),
			Closer:    script{close: func() error { overlapped = inRead; return nil }},
			pollEvery: pollEvery, name: "fake", timeout: time.Second,
		}
		c := newConn(s)
		read := make(chan error)
		go func() { _, err := c.Read(make([]byte, 1)); read <- err }()
		time.Sleep(3*pollEvery + pollEvery/2) // in the middle of a poll
		if err := c.Close(); err != nil {
			t.Fatal(err)
		}
		if err := <-read; !errors.Is(err, ErrClosed) {
			t.Errorf("read: %v", err)
		}
		if overlapped {
			t.Error("closed under the reader")
		}
	})
}

func TestCloseReportsOnce(t *testing.T) {
	broken := errors.New("broken")
	c := Wrap(script{close: func() error { return broken }}, "fake", Options{})
	if err := c.Close(); !errors.Is(err, broken) {
		t.Errorf("first close: %v", err)
	}
	if err := c.Close(); err != nil {
		t.Errorf("second close: %v", err)
	}
}

type (
	writerFunc func([]byte) (int, error)
	readerFunc func([]byte) (int, error)
)

func (f writerFunc) Write(p []byte) (int, error) { return f(p) }
func (f readerFunc) Read(p []byte) (int, error)  { return f(p) }
