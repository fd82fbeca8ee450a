package acquire

import (
	"errors"
	"io"
	"time"
)

var errWriteHangs = errors.New("the port takes no more bytes")

// conn is one open connection. Its reader blocks in Read and stamps what comes;
// its writer keeps a Write that hangs from stopping the conversation.
type conn struct {
	rwc    io.ReadWriteCloser
	chunks chan chunk  // unbuffered: a chunk's bytes are valid until the next is taken
	out    chan []byte // one command at most
	failed chan error  // of Write
	done   chan struct{}
	ended  chan struct{} // the reader has returned
}

// chunk is what one Read returned, and when it did.
type chunk struct {
	data []byte
	at   time.Duration
	wall time.Time
	err  error
}

func connect(rwc io.ReadWriteCloser, clock Clock) *conn {
	c := &conn{
		rwc: rwc, chunks: make(chan chunk), out: make(chan []byte, 1), failed: make(chan error, 1),
		done: make(chan struct{}), ended: make(chan struct{}),
	}
	go c.read(clock)
	go c.write()
	return c
}

// maxEmptyReads is how often in a row a port may return nothing without error.
const maxEmptyReads = 100

func (c *conn) read(clock Clock) {
	defer close(c.ended)
	var bufs [2][4096]byte
	empty := 0
	for i := 0; ; i ^= 1 {
		n, err := c.rwc.Read(bufs[i][:])
		got := chunk{data: bufs[i][:n], at: clock.Now(), wall: clock.Wall(), err: err}
		if empty++; n > 0 {
			empty = 0
		}
		if err == nil && empty > maxEmptyReads {
			got.err = io.ErrNoProgress
		}
		select {
		case c.chunks <- got:
		case <-c.done:
			return
		}
		if got.err != nil {
			return
		}
	}
}

func (c *conn) write() {
	for {
		select {
		case line := <-c.out:
			n, err := c.rwc.Write(line)
			if err == nil && n < len(line) {
				err = io.ErrShortWrite
			}
			if err != nil {
				c.failed <- err
				return
			}
		case <-c.done:
			return
		}
	}
}

// send hands a command to the writer.
func (c *conn) send(line []byte) error {
	select {
	case c.out <- line:
		return nil
	default:
		return errWriteHangs
	}
}

// close closes the port and waits for the reader, which Close releases; what the
// reader has still read goes to rest. It does not wait for a Write that hangs: no
// system promises to release that.
func (c *conn) close(rest func(chunk)) error {
	err := c.rwc.Close()
	for {
		select {
		case got := <-c.chunks:
			rest(got)
		case <-c.ended:
			close(c.done)
			return err
		}
	}
}
