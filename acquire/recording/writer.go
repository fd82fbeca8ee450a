package recording

import (
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io"
	"time"
)

// File is what a Writer writes to; *os.File is one.
type File interface {
	io.Writer
	Sync() error
	Close() error
}

// SyncInterval is the real time after which a block is sealed and synced (SPEC
// 6.3): what a power cut can cost, beside the time that the sealing takes.
const SyncInterval = 500 * time.Millisecond

const (
	flushBytes = 64 << 10 // buffered bytes handed to the file early
	blockBytes = 1 << 16  // a block this long is sealed without waiting for Tick
)

// Writer writes one recording. It is for one goroutine. The first error of the
// file stays: every later call returns it, and nothing more is written.
type Writer struct {
	f      File
	header Header
	taken  bool // since the last tick that sealed
	every  time.Duration

	line    []byte // scratch
	buf     []byte // not yet handed to the file
	block   int    // number of the open block
	size    int    // bytes in the open block
	entries int    // in the whole file
	sealed  time.Duration
	sum     hash.Hash // of the last check sum and every byte since
	err     error
	closed  bool
}

// NewWriter writes and seals the header, and syncs it; a profile that could
// not be read back is refused. every is the recording time between seals; 0
// means SyncInterval of real time. The Writer owns f from here, also when an
// error is returned: then f is closed.
func NewWriter(f File, h Header, every time.Duration) (*Writer, error) {
	block, err := appendHeader(nil, h)
	if err == nil {
		h.Parsed, err = parseProfile(h.Profile)
	}
	if err != nil {
		return nil, errors.Join(err, f.Close())
	}
	if every <= 0 {
		every = time.Duration(float64(SyncInterval) * h.ClockFactor)
	}
	w := &Writer{
		f: f, header: h, every: every, sum: newSum(),
	}
	w.add(block)
	if err := w.seal(); err != nil {
		return nil, errors.Join(err, f.Close())
	}
	return w, nil
}

// Header is what the file says at its top, with Parsed filled in.
func (w *Writer) Header() Header { return w.header }

// Write adds one entry. It reaches the disk with the next seal. An entry that
// cannot be written down is refused; the file stays good, without it, and the
// caller decides what that means.
func (w *Writer) Write(e Entry) error {
	if err := w.usable(); err != nil {
		return err
	}
	if err := checkEntry(e, len(w.header.Devices)); err != nil {
		return err
	}
	w.line = appendEntry(w.line[:0], e)
	w.add(w.line)
	w.entries++
	w.taken = w.taken || e.Event != nil && e.Event.Kind == Taken
	if w.size >= blockBytes {
		return w.seal()
	}
	if len(w.buf) >= flushBytes {
		return w.flush()
	}
	return nil
}

// Due reports whether Tick would seal a block at this time: the interval has
// passed, or the operator was told that a point is taken, which must then last.
func (w *Writer) Due(at time.Duration) bool { return w.taken || at-w.sealed >= w.every }

// Tick seals and syncs the open block when it is due, with the
// wall clock as its last entry (WallEntry). Call it often, also when nothing
// comes in.
func (w *Writer) Tick(at time.Duration, wall time.Time) error {
	if err := w.usable(); err != nil {
		return err
	}
	if !w.Due(at) {
		return nil
	}
	if err := w.Write(w.wallEntry(at, wall)); err != nil {
		return err
	}
	w.sealed, w.taken = at, false
	return w.seal()
}

// Close seals the last block, writes the end record, syncs and closes the
// file. After an error it only closes, so that the file stays a torn one. A
// second Close does nothing and returns the first error, if there was one.
func (w *Writer) Close(at time.Duration, wall time.Time) error {
	if w.closed {
		return w.err
	}
	if w.err == nil {
		w.finish(at, wall)
	}
	w.closed = true
	if err := w.f.Close(); err != nil && w.err == nil {
		w.err = fmt.Errorf("close the recording: %w", err)
	}
	return w.err
}

func (w *Writer) finish(at time.Duration, wall time.Time) {
	if err := w.Write(w.wallEntry(at, wall)); err != nil {
		w.fail(err)
		return
	}
	if w.seal() != nil {
		return
	}
	w.add(appendEnd(nil, w.block, w.entries))
	w.addSum()
	if w.flush() == nil {
		w.sync()
	}
}

// WallEntry is the entry that Tick and Close write for this moment.
func WallEntry(at time.Duration, wall time.Time) Entry {
	text := wall.Round(0).Format(time.RFC3339Nano)
	return Entry{Device: -1, At: at, HasAt: true, Event: &Event{Kind: WallTime, Text: text}}
}

func (w *Writer) wallEntry(at time.Duration, wall time.Time) Entry {
	e := WallEntry(max(at, 0), wall)
	e.HasAt = w.header.Source == Live
	return e
}

// seal closes the open block on disk and opens the next.
func (w *Writer) seal() error {
	w.add(appendSeal(nil, w.block))
	w.addSum()
	w.block++
	w.size = 0
	if err := w.flush(); err != nil {
		return err
	}
	return w.sync()
}

// add buffers bytes that the next check sum covers.
func (w *Writer) add(text []byte) {
	w.buf = append(w.buf, text...)
	w.sum.Write(text)
	w.size += len(text)
}

// addSum ends a line with the check sum, from which the next one starts.
func (w *Writer) addSum() {
	digest := w.sum.Sum(nil)
	w.buf = hex.AppendEncode(w.buf, digest)
	w.buf = append(w.buf, '\n')
	w.sum.Reset()
	w.sum.Write(digest)
}

// flush hands the buffered bytes to the file.
func (w *Writer) flush() error {
	n, err := w.f.Write(w.buf)
	if err == nil && n < len(w.buf) {
		err = io.ErrShortWrite
	}
	if err != nil {
		return w.fail(fmt.Errorf("write the recording: %w", err))
	}
	w.buf = w.buf[:0]
	return nil
}

func (w *Writer) sync() error {
	if err := w.f.Sync(); err != nil {
		return w.fail(fmt.Errorf("sync the recording to disk: %w", err))
	}
	return nil
}

func (w *Writer) fail(err error) error {
	if w.err == nil {
		w.err = err
	}
	return w.err
}

func (w *Writer) usable() error {
	if w.err == nil && w.closed {
		return errors.New("write the recording: it is closed")
	}
	return w.err
}
