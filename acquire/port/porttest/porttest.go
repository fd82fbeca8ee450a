// Package porttest checks the contract that port.Open states, on anything that
// claims to keep it. Use Check.
//
// Deliberately absent: checks of how a port is found and opened; the kinds of
// port differ there.
package porttest

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"runtime"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/port"
)

// tooMuch is more bytes than any line keeps under way.
const tooMuch = 8 << 20

// Ends is one open line. Board need not keep the contract, but its Read must
// return what the host wrote.
type Ends struct {
	Host   io.ReadWriteCloser // under test
	Board  io.ReadWriteCloser
	Unplug func() error // takes the board away
}

// Check runs the contract, each point on a line freshly opened. It takes a call
// that is not back after ten seconds for one that hangs: far more than any needs
// on a busy machine.
func Check(t *testing.T, open func(t *testing.T, o port.Options) Ends) {
	t.Helper()
	points := []struct {
		name         string
		check        func(e Ends) error
		writeTimeout time.Duration
	}{
		{"bytes pass both ways", bothWays, time.Minute},
		{"a read waits for the first byte", readWaits, time.Minute},
		{"a read of no bytes is an error", emptyRead, time.Minute},
		{"an own close releases a read", closeReleasesRead, time.Minute},
		{"an own close releases a write", closeReleasesWrite, time.Minute},
		{"closing again is no error", closeAgain, time.Minute},
		{"an unplug ends a read", unplugEndsRead, time.Minute},
		{"a write that nobody takes runs out of time", writeRunsOut, 100 * time.Millisecond},
		{"a megabyte arrives whole at the host", megabyteIn, time.Minute},
		{"a megabyte arrives whole at the board", megabyteOut, time.Minute},
	}
	for _, p := range points {
		t.Run(p.name, func(t *testing.T) {
			before := runtime.NumGoroutine()
			e := open(t, port.Options{WriteTimeout: p.writeTimeout})
			if err := p.check(e); err != nil {
				t.Error(err)
			}
			if err := errors.Join(e.Host.Close(), e.Board.Close()); err != nil {
				t.Errorf("closing: %v", err)
			}
			if err := settled(before); err != nil {
				t.Error(err)
			}
		})
	}
}

// bothWays sends a line each way.
func bothWays(e Ends) error {
	got := make([]byte, 4)
	sent := start(func() (int, error) { return e.Host.Write([]byte("who\n")) })
	if _, err := io.ReadFull(e.Board, got); err != nil || string(got) != "who\n" {
		return fmt.Errorf("board got %q, %v", got, err)
	}
	if r := sent.wait(); r.err != nil || r.n != 4 {
		return fmt.Errorf("host wrote %d bytes, %v", r.n, r.err)
	}
	sent = start(func() (int, error) { return e.Board.Write([]byte("here")) })
	if _, err := io.ReadFull(e.Host, got); err != nil || string(got) != "here" {
		return fmt.Errorf("host got %q, %v", got, err)
	}
	return sent.wait().err
}

// readWaits finds reads that come back with nothing.
func readWaits(e Ends) error {
	read := start(func() (int, error) { return e.Host.Read(make([]byte, 10)) })
	if r, ok := read.within(100 * time.Millisecond); ok {
		return fmt.Errorf("read came back with %d bytes, %v before anything was sent", r.n, r.err)
	}
	sent := start(func() (int, error) { return e.Board.Write([]byte("x")) })
	if r := read.wait(); r.n != 1 || r.err != nil {
		return fmt.Errorf("read gave %d bytes, %v, want the one sent", r.n, r.err)
	}
	return sent.wait().err
}

func emptyRead(e Ends) error {
	read := start(func() (int, error) { return e.Host.Read(nil) })
	if r := read.wait(); r.err == nil {
		return errors.New("a read into no buffer gave no error")
	}
	return bothWays(e) // and must not have ended the line
}

func closeReleasesRead(e Ends) error {
	read := start(func() (int, error) { return e.Host.Read(make([]byte, 10)) })
	if _, ok := read.within(20 * time.Millisecond); ok {
		return errors.New("read did not wait")
	}
	if err := e.Host.Close(); err != nil {
		return fmt.Errorf("close: %w", err)
	}
	return expect("read", read.wait(), port.ErrClosed)
}

func closeReleasesWrite(e Ends) error {
	write := start(func() (int, error) { return e.Host.Write(make([]byte, tooMuch)) })
	if r, ok := write.within(50 * time.Millisecond); ok {
		return fmt.Errorf("8 MB that nobody read were written: %d, %v", r.n, r.err)
	}
	if err := e.Host.Close(); err != nil {
		return fmt.Errorf("close: %w", err)
	}
	return expect("write", write.wait(), port.ErrClosed)
}

// closeAgain closes from several goroutines, then uses the port.
func closeAgain(e Ends) error {
	closers := make([]*call, 4)
	for i := range closers {
		closers[i] = start(func() (int, error) { return 0, e.Host.Close() })
	}
	for _, c := range closers {
		if r := c.wait(); r.err != nil {
			return fmt.Errorf("close: %w", r.err)
		}
	}
	read := start(func() (int, error) { return e.Host.Read(make([]byte, 1)) })
	write := start(func() (int, error) { return e.Host.Write([]byte("x")) })
	return errors.Join(expect("read", read.wait(), port.ErrClosed), expect("write", write.wait(), port.ErrClosed))
}

func unplugEndsRead(e Ends) error {
	read := start(func() (int, error) { return e.Host.Read(make([]byte, 10)) })
	if _, ok := read.within(20 * time.Millisecond); ok {
		return errors.New("read did not wait")
	}
	if err := e.Unplug(); err != nil {
		return fmt.Errorf("unplug: %w", err)
	}
	if err := expect("read", read.wait(), port.ErrGone); err != nil {
		return err
	}
	again := start(func() (int, error) { return e.Host.Read(make([]byte, 10)) })
	write := start(func() (int, error) { return e.Host.Write([]byte("x")) })
	return errors.Join(expect("read again", again.wait(), port.ErrGone), expect("write", write.wait(), port.ErrGone))
}

func writeRunsOut(e Ends) error {
	for range 2 { // the second finds the first's bytes still in the way
		write := start(func() (int, error) { return e.Host.Write(make([]byte, tooMuch)) })
		if err := expect("write", write.wait(), port.ErrStuck); err != nil {
			return err
		}
	}
	return nil
}

func megabyteIn(e Ends) error { return megabyte(e.Board, e.Host) }

func megabyteOut(e Ends) error { return megabyte(e.Host, e.Board) }

// megabyte sends lines one after the other and compares what arrives.
func megabyte(from io.Writer, to io.Reader) error {
	line := []byte(strings.Repeat("0123456789abcdef", 4))
	want := bytes.Repeat(line, 1<<20/len(line))
	sent := start(func() (int, error) {
		for rest := want; len(rest) > 0; rest = rest[1024:] {
			if n, err := from.Write(rest[:1024]); err != nil || n != 1024 {
				return n, fmt.Errorf("wrote %d of 1024 bytes: %w", n, err)
			}
		}
		return 0, nil
	})
	got := make([]byte, len(want))
	n, err := io.ReadFull(to, got)
	if err != nil {
		return fmt.Errorf("after %d bytes: %w", n, err)
	}
	if !bytes.Equal(got, want) {
		return errors.New("bytes arrived changed")
	}
	return sent.wait().err
}

// expect demands the class of an error and no bytes past what it allows.
func expect(what string, r result, class error) error {
	if !errors.Is(r.err, class) {
		return fmt.Errorf("%s gave %d bytes, %v; want an error that is %q", what, r.n, r.err, class)
	}
	return nil
}

// settled waits until no goroutine is left over.
func settled(before int) error {
	for range 100 {
		if runtime.NumGoroutine() <= before {
			return nil
		}
		time.Sleep(20 * time.Millisecond)
	}
	buf := make([]byte, 1<<16)
	return fmt.Errorf("%d goroutines before, %d after:\n%s", before, runtime.NumGoroutine(), buf[:runtime.Stack(buf, true)])
}
