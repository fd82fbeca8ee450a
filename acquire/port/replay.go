package port

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"sync"
)

// replay is a text file of wire lines in a board's place, read as fast as it
// will go. It ends in io.EOF, which is neither a loss nor an own Close: there is
// no more to come. Commands written to it go nowhere.
type replay struct {
	name   string
	mu     sync.Mutex // Close waits for a Read under way
	file   *os.File
	closed bool
}

func openFile(path string) (io.ReadWriteCloser, error) {
	name := "file:" + path
	if path == "" {
		return nil, fmt.Errorf("%w: %q; write file: and the path of a text file of wire lines", ErrBadName, name)
	}
	f, err := os.Open(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil, &absentError{fmt.Sprintf("opening %s: no such file; check the path", name), err}
	case errors.Is(err, fs.ErrPermission):
		return nil, fmt.Errorf("opening %s: %w (%w); check who may read the file", name, ErrDenied, err)
	case err != nil:
		return nil, fmt.Errorf("opening %s: %w (%w)", name, ErrBadName, err)
	}
	if info, err := f.Stat(); err != nil || !info.Mode().IsRegular() {
		return nil, errors.Join(fmt.Errorf("opening %s: %w: not a file of text", name, ErrBadName), err, f.Close())
	}
	return &replay{name: name, file: f}, nil
}

// Read gives the next bytes of the file, then io.EOF.
func (r *replay) Read(p []byte) (int, error) {
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.closed {
		return 0, fmt.Errorf("%s: %w", r.name, ErrClosed)
	}
	if len(p) == 0 {
		return 0, fmt.Errorf("reading %s: %w", r.name, io.ErrShortBuffer)
	}
	n, err := r.file.Read(p)
	if err != nil && !errors.Is(err, io.EOF) {
		err = fmt.Errorf("%s: %w: %w", r.name, ErrGone, err)
	}
	return n, err
}

// Write drops the bytes.
func (r *replay) Write(p []byte) (int, error) {
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.closed {
		return 0, fmt.Errorf("%s: %w", r.name, ErrClosed)
	}
	return len(p), nil
}

// Close closes the file.
func (r *replay) Close() error {
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.closed {
		return nil
	}
	r.closed = true
	return r.file.Close()
}
