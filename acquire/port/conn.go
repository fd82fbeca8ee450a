package port

import (
	"errors"
	"fmt"
	"io"
	"sync"
	"sync/atomic"
	"time"
)

// stream is what a conn puts the contract around.
type stream struct {
	io.ReadWriteCloser
	name    string        // for messages
	timeout time.Duration // of one Write

	// pollEvery, when above zero, promises that Read returns at least that often
	// with (0, nil). Close then waits for the reader before it closes: a file
	// descriptor must not be closed under a system call, or the next file that
	// gets its number is read instead.
	pollEvery time.Duration

	// discardOut throws away what is written but not yet sent, to release a
	// blocked Write; nil when Close releases it.
	discardOut func()
}

// Wrap puts the contract of Open around any stream whose Close releases its
// Read and Write, such as one end of a net.Pipe.
func Wrap(rwc io.ReadWriteCloser, name string, o Options) io.ReadWriteCloser {
	return newConn(stream{ReadWriteCloser: rwc, name: name, timeout: o.withDefaults().WriteTimeout})
}

// conn keeps the contract of Open on top of a stream that need not.
type conn struct {
	s       stream
	slot    chan struct{} // holds one token: the right to write
	end     chan struct{} // closed when the conn has ended
	ending  sync.Once
	cause   error      // why it ended; read only after end is closed
	reading sync.Mutex // held while s.Read runs
}

func newConn(s stream) *conn {
	c := &conn{s: s, slot: make(chan struct{}, 1), end: make(chan struct{})}
	c.slot <- struct{}{}
	return c
}

// Read blocks until a byte, the own Close or a loss.
func (c *conn) Read(p []byte) (int, error) {
	if len(p) == 0 { // the serial library takes the empty read for a closed port
		return 0, fmt.Errorf("reading %s: %w", c.s.name, io.ErrShortBuffer)
	}
	c.reading.Lock()
	for !c.ended() {
		n, err := c.s.Read(p)
		if n > 0 { // an error beside it comes again with the next Read
			c.reading.Unlock()
			return n, nil
		}
		if err != nil {
			c.reading.Unlock()
			c.lose(err)
			return 0, c.cause
		}
	}
	c.reading.Unlock()
	return 0, c.cause
}

// Write writes all of p or fails within the timeout.
func (c *conn) Write(p []byte) (int, error) {
	timer := time.NewTimer(c.s.timeout)
	defer timer.Stop()
	select {
	case <-c.slot:
	case <-c.end:
		return 0, c.cause
	case <-timer.C:
		return 0, c.stuck()
	}
	if c.ended() {
		c.slot <- struct{}{}
		return 0, c.cause
	}
	w := &write{rest: append([]byte(nil), p...), done: make(chan error, 1)}
	go func() { // the system call may block for ever: it gets a goroutine and bytes of its own
		w.done <- w.run(c)
		c.slot <- struct{}{}
	}()
	select {
	case err := <-w.done:
		if err != nil && !errors.Is(err, errAbandoned) {
			c.lose(err)
		}
		if err != nil {
			return int(w.n.Load()), c.cause
		}
		return len(p), nil
	case <-c.end:
		return int(w.n.Load()), c.cause
	case <-timer.C:
		w.abandoned.Store(true)
		if c.s.discardOut != nil {
			c.s.discardOut()
		}
		return int(w.n.Load()), c.stuck()
	}
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

func (c *conn) stuck() error {
	return fmt.Errorf("writing to %s: %w for %v; is the right board on it, and does it run?", c.s.name, ErrStuck, c.s.timeout)
}

// Close ends the conn as the caller's own doing.
func (c *conn) Close() error {
	var err error
	c.ending.Do(func() {
		c.cause = fmt.Errorf("%s: %w", c.s.name, ErrClosed)
		close(c.end)
		err = c.release()
	})
	return err
}

// lose ends the conn as a loss, whatever the stream's error says: unplugging
// and closing look the same to it, and each system has its own words. The
// stream is closed at once: as long as it is held, a board that is plugged in
// again comes back under another name.
func (c *conn) lose(why error) {
	c.ending.Do(func() {
		c.cause = lossError(c.s.name, why)
		close(c.end)
		_ = c.release() // of a stream that is gone: its error says nothing new
	})
	<-c.end
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
	if c.s.discardOut != nil {
		c.freeWriter()
	}
	if c.s.pollEvery > 0 {
		c.reading.Lock()
		defer c.reading.Unlock()
	}
	return c.s.Close()
}

// freeWriter discards output until the writer has come back. A driver that will
// not let go keeps its goroutine; the caller of Write does not wait for it.
func (c *conn) freeWriter() {
	for range 20 {
		select {
		case <-c.slot: // kept: nobody shall write any more
			return
		default:
		}
		c.s.discardOut()
		time.Sleep(5 * time.Millisecond)
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
