package recording

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io"
)

// Errors of Read. A file that was stopped before its header was sealed is both
// ErrNotRecording and ErrNoHeader.
var (
	ErrNotRecording = errors.New("not a recording of this program")
	ErrNoHeader     = errors.New("it ends before its header was sealed, nothing was captured")
	ErrVersion      = errors.New("a recording of a version that this program cannot read")
)

// CorruptError says where a recording stops fitting its seals. Everything
// before Offset is intact.
type CorruptError struct {
	Offset int64 // first byte after the last good seal
	Reason string
}

func (e *CorruptError) Error() string {
	return fmt.Sprintf("the recording is damaged after byte %d: %s; "+
		"what was sealed before that is intact", e.Offset, e.Reason)
}

// Read reads a whole recording into memory and checks every seal. Wire lines
// share one buffer. A torn file is no error. With a *CorruptError the intact
// prefix is returned beside it, and so is the recording when its profile is
// refused by mill.Parse: Header.Parsed is nil then.
func Read(r io.Reader) (*Recording, error) {
	data, err := io.ReadAll(r)
	if err != nil {
		return nil, fmt.Errorf("read a recording: %w", err)
	}
	return readAll(data)
}

func readAll(data []byte) (*Recording, error) {
	rec, err := parse(data)
	if rec == nil || len(rec.Header.Profile) == 0 {
		return rec, err
	}
	profile, bad := parseProfile(rec.Header.Profile)
	rec.Header.Parsed = profile
	return rec, errors.Join(err, bad)
}

// reader walks through the bytes of a file, seal by seal.
type reader struct {
	data    []byte
	pos     int // first byte after the last good seal
	block   int // number of the block that starts at pos
	sum     hash.Hash
	rec     *Recording
	devices int
}

// parse overwrites data and keeps it.
func parse(data []byte) (*Recording, error) {
	if err := checkMagic(data); err != nil {
		return nil, err
	}
	r := &reader{data: data, sum: newSum(), rec: &Recording{}}
	r.rec.Entries = make([]Entry, 0, bytes.Count(data, []byte{'\n'})) // growing costs more than reading
	err := r.walk()
	if err == nil && r.block == 0 {
		return nil, fmt.Errorf("%w: %w", ErrNotRecording, ErrNoHeader)
	}
	r.rec.TailBytes = int64(len(data) - r.pos)
	if err != nil {
		r.rec.Outcome = Corrupt
		err = &CorruptError{Offset: int64(r.pos), Reason: err.Error()}
	} else if r.rec.Outcome == "" {
		r.rec.Outcome = Torn
	}
	return r.rec, err
}

// walk takes block after block to the end of what is whole.
func (r *reader) walk() error {
	for {
		more, err := r.next()
		if err != nil || !more {
			return err
		}
	}
}

func checkMagic(data []byte) error {
	first := data[:min(len(data), len(magic))]
	line, _, whole := bytes.Cut(data[:min(len(data), 64)], []byte{'\n'})
	switch {
	case string(first) != magic[:len(first)]:
		return ErrNotRecording
	case !whole && len(data) < 64:
		return fmt.Errorf("%w: %w", ErrNotRecording, ErrNoHeader)
	case string(line) == magic+version+"\r":
		return fmt.Errorf("%w: its line ends were changed on the way; copy it as a binary file", ErrNotRecording)
	case string(line) != magic+version:
		return fmt.Errorf("%w: %q", ErrVersion, line)
	}
	return nil
}

// next takes one block or the end record; false means that nothing whole
// follows.
func (r *reader) next() (bool, error) {
	if r.rec.Outcome == Complete {
		if r.pos < len(r.data) {
			return false, errors.New("bytes follow the end record")
		}
		return false, nil
	}
	start, end := r.findSum()
	if start < 0 {
		return false, nil
	}
	body, line := r.data[r.pos:start], r.data[start:end]
	covered, digest, err := splitSum(line)
	if err != nil {
		return false, err
	}
	r.sum.Write(body)
	r.sum.Write(covered)
	sum := r.sum.Sum(nil)
	r.sum.Reset()
	r.sum.Write(sum)
	if !bytes.Equal(sum, digest) {
		return false, fmt.Errorf("the check sum of block %d does not fit", r.block)
	}
	if err := r.take(body, covered, digest); err != nil {
		return false, err
	}
	r.pos = end + 1
	return true, nil
}

// findSum finds the next whole seal or end line at or after pos: its first
// byte and the place of its LF, or -1.
func (r *reader) findSum() (start, end int) {
	for at := r.pos; ; {
		n := bytes.IndexByte(r.data[at:], '\n')
		if n < 0 {
			return -1, -1
		}
		line := r.data[at : at+n]
		if bytes.HasPrefix(line, []byte(sealTag)) || bytes.HasPrefix(line, []byte(endTag)) {
			return at, at + n
		}
		at += n + 1
	}
}

// splitSum cuts a seal or end line into what its check sum covers and the
// check sum.
func splitSum(line []byte) (covered, digest []byte, err error) {
	n := len(line) - 2*sha256.Size
	if n < 0 || !isSeal(string(line[n:])) {
		return nil, nil, errors.New("a seal does not end with a check sum")
	}
	digest, err = hex.DecodeString(string(line[n:]))
	return line[:n], digest, err
}

// take reads the body of a block whose check sum fits, or the end record.
func (r *reader) take(body, covered, digest []byte) error {
	if bytes.HasPrefix(covered, []byte(endTag)) {
		if len(body) != 0 || r.block == 0 || string(covered) != string(appendEnd(nil, r.block, len(r.rec.Entries))) {
			return errors.New("the end record does not count what is there")
		}
		r.rec.Outcome = Complete
		return nil
	}
	if string(covered) != string(appendSeal(nil, r.block)) {
		return fmt.Errorf("block %d is not numbered so", r.block)
	}
	if err := r.takeBody(body); err != nil {
		return err
	}
	r.rec.Seal = hex.EncodeToString(digest)
	r.block++
	return nil
}

func (r *reader) takeBody(body []byte) error {
	if r.block == 0 {
		return r.takeHeader(body)
	}
	kept := len(r.rec.Entries)
	for len(body) > 0 {
		line, rest, _ := bytes.Cut(body, []byte{'\n'})
		e, err := parseEntry(line, r.devices)
		if err != nil {
			r.rec.Entries = r.rec.Entries[:kept]
			return fmt.Errorf("block %d is sealed, but %w", r.block, err)
		}
		r.rec.Entries = append(r.rec.Entries, e)
		body = rest
	}
	return nil
}

func (r *reader) takeHeader(body []byte) error {
	_, rest, _ := bytes.Cut(body, []byte{'\n'}) // the magic, already checked
	p := headerParser{seen: map[string]bool{}}
	for len(rest) > 0 {
		var line []byte
		line, rest, _ = bytes.Cut(rest, []byte{'\n'})
		if err := p.line(line); err != nil {
			return err
		}
	}
	h, err := p.header()
	if err != nil {
		return err
	}
	r.rec.Header = h
	r.devices = len(h.Devices)
	return nil
}
