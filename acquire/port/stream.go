package port

import (
	"io"
	"time"
)

// stream is what a conn puts the contract around.
type stream struct {
	io.Reader
	io.Writer
	io.Closer
	name    string        // for messages
	timeout time.Duration // of one Write

	// pollEvery, when above zero, promises that Read returns at least that often
	// with (0, nil). Close then waits for the reader before it closes: a file
	// descriptor must not be closed under a system call, or the next file that
	// gets its number is read instead.
	pollEvery time.Duration

	// releaseWrite ends a Write under way; nil when only Close does.
	releaseWrite func()
}

// Wrap puts the contract of Open around any stream whose Close releases its
// Read and Write, such as one end of a net.Pipe.
func Wrap(rwc io.ReadWriteCloser, name string, o Options) io.ReadWriteCloser {
	s := stream{Reader: rwc, Writer: rwc, Closer: rwc, name: name, timeout: o.withDefaults().WriteTimeout}
	if d, ok := rwc.(deadlineWriter); ok {
		t := timed{d, s.timeout}
		s.Writer, s.releaseWrite = t, t.release
	}
	return newConn(s)
}

// deadlineWriter is a writer whose Write can be limited in time.
type deadlineWriter interface {
	io.Writer
	SetWriteDeadline(time.Time) error
}

// timed gives every Write the same time.
type timed struct {
	w       deadlineWriter
	timeout time.Duration
}

func (t timed) Write(p []byte) (int, error) {
	if err := t.w.SetWriteDeadline(time.Now().Add(t.timeout)); err != nil {
		return 0, err
	}
	return t.w.Write(p)
}

// release ends a Write under way.
func (t timed) release() {
	_ = t.w.SetWriteDeadline(time.Unix(1, 0)) // fails only when it is closed, which ends the Write too
}
