package port

import (
	"errors"
	"fmt"
	"io"
	"os"
	"sync/atomic"
	"time"
)

// conn keeps the contract of Open on top of a stream that need not.
type conn struct {
	s      stream
	reader chan struct{} // holds one token: the right to be in s.Read
	writer chan struct{} // holds one token: the right to be in s.Write
	ending atomic.Bool
	end    chan struct{} // closed when the conn has ended
	cause  error         // why it ended; read only after end is closed
}

// newConn uses channels where locks would do, so that tests may run it on a
// clock of their own.
func newConn(s stream) *conn {
	c := &conn{s: s, reader: make(chan struct{}, 1), writer: make(chan struct{}, 1), end: make(chan struct{})}
	c.reader <- struct{}{}
	c.writer <- struct{}{}
	return c
}

// Read blocks until a byte, the own Close or a loss.
func (c *conn) Read(p []byte) (int, error) {
	if len(p) == 0 { // the serial library takes the empty read for a closed port
		return 0, fmt.Errorf("reading %s: %w", c.s.name, io.ErrShortBuffer)
	}
	select {
	case <-c.reader:
	case <-c.end:
		return 0, c.cause
	}
	n, err := c.readSome(p)
	c.reader <- struct{}{}
	if err != nil {
		c.lose(err)
	}
	if n == 0 {
		return 0, c.cause
	}
	return n, nil
}

// readSome reads until there is something to give; nothing and no error is the
// end. It drops an error beside bytes: that comes again with the next Read.
func (c *conn) readSome(p []byte) (int, error) {
	for !c.ended() {
		n, err := c.s.Read(p)
		if n > 0 {
			return n, nil
		}
		if err != nil {
			return 0, err
		}
	}
	return 0, nil
}

// Write writes all of p or fails within the timeout.
func (c *conn) Write(p []byte) (int, error) {
	timer := time.NewTimer(c.s.timeout)
	defer timer.Stop()
	select {
	case <-c.writer:
	case <-c.end:
		return 0, c.cause
	case <-timer.C:
		return 0, c.stuck()
	}
	if c.ended() {
		c.writer <- struct{}{}
		return 0, c.cause
	}
	w := &write{rest: append([]byte(nil), p...), done: make(chan error, 1)}
	go func() { // the system call may block for ever: it gets a goroutine and bytes of its own
		w.done <- w.run(c)
		c.writer <- struct{}{}
	}()
	select {
	case err := <-w.done:
		return int(w.n.Load()), c.written(err)
	case <-c.end:
		return int(w.n.Load()), c.cause
	case <-timer.C:
		w.abandoned.Store(true)
		if c.s.releaseWrite != nil {
			c.s.releaseWrite()
		}
		return int(w.n.Load()), c.stuck()
	}
}

// written explains how a write came back by itself.
func (c *conn) written(err error) error {
	switch {
	case err == nil:
		return nil
	case errors.Is(err, os.ErrDeadlineExceeded):
		return c.stuck()
	case !errors.Is(err, errAbandoned):
		c.lose(err)
	}
	return c.cause
}

// errAbandoned ends a write whose caller no longer waits.
var errAbandoned = errors.New("write abandoned")

// write is one Write under way.
type write struct {
	rest      []byte
	n         atomic.Int64 // bytes written
	abandoned atomic.Bool
	done      chan error
}

// run writes all bytes; the stream may take fewer than it was given without an
// error, and none at all is a failure.
func (w *write) run(c *conn) error {
	for len(w.rest) > 0 {
		if c.ended() || w.abandoned.Load() {
			return errAbandoned
		}
		n, err := c.s.Write(w.rest)
		if n > 0 {
			w.n.Add(int64(n))
			w.rest = w.rest[n:]
		}
		if err != nil {
			return err
		}
		if n <= 0 {
			return io.ErrShortWrite
		}
	}
	return nil
}

// stuck is a Write out of time, unless the conn has ended meanwhile.
func (c *conn) stuck() error {
	if c.ended() {
		return c.cause
	}
	return fmt.Errorf("writing to %s: %w for %v; is the right board on it, and does it run?", c.s.name, ErrStuck, c.s.timeout)
}

// Close ends the conn as the caller's own doing.
func (c *conn) Close() error {
	if c.ending.Swap(true) {
		return nil
	}
	c.cause = fmt.Errorf("%s: %w", c.s.name, ErrClosed)
	close(c.end)
	return c.release()
}

// lose ends the conn as a loss, whatever the stream's error says: unplugging
// and closing look the same to it, and each system has its own words. The
// stream is closed at once: as long as it is held, a board that is plugged in
// again comes back under another name.
func (c *conn) lose(why error) {
	if c.ending.Swap(true) {
		<-c.end
		return
	}
	c.cause = lossError(c.s.name, why)
	close(c.end)
	_ = c.release() // of a stream that is gone: its error says nothing new
}

func lossError(name string, why error) error {
	if errors.Is(why, io.EOF) {
		return fmt.Errorf("%s: %w: the far end closed it", name, ErrGone)
	}
	return fmt.Errorf("%s: %w: %w", name, ErrGone, why)
}

// release lets go of the stream once no Read and, within reason, no Write is in
// it.
func (c *conn) release() error {
	if c.s.releaseWrite != nil {
		c.freeWriter()
	}
	if c.s.pollEvery > 0 {
		<-c.reader // kept: nobody shall read any more
	}
	return c.s.Close()
}

// freeWriter waits until the writer has come back. A driver that will not let go
// keeps its goroutine; the caller of Write does not wait for it.
func (c *conn) freeWriter() {
	for range 20 {
		select {
		case <-c.writer: // kept: nobody shall write any more
			return
		case <-time.After(5 * time.Millisecond):
			c.s.releaseWrite()
		}
	}
}

func (c *conn) ended() bool {
	select {
	case <-c.end:
		return true
	default:
		return false
	}
}
