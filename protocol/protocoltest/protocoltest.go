// Package protocoltest runs the shared vectors of testdata/protocol against any
// implementation of the wire: this program's own, a rig's, a board's. Use Run
// from a test; fill in the functions that the implementation has.
//
// Deliberately absent: the making of vectors (make_vectors.py beside them does
// that, and knows nothing of this program) and any judgement about conduct
// over time.
package protocoltest

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"testing"
	"testing/iotest"

	"tautramp/protocol"
)

// Implementation is one side or both sides of the wire. A nil function is a
// part that the implementation does not have; its vectors are skipped.
//
// A refusal is a *protocol.SyntaxError. An implementation that does not know
// clauses leaves Clause empty; one whose encoder knows no classes may return
// any other error.
type Implementation struct {
	// Decode reads a whole device stream and yields its lines, empty ones left
	// out. Its error is about the stream alone.
	Decode func(stream io.Reader, yield func(protocol.Line)) error
	// Encode makes the whole line of a record.
	Encode func(protocol.Record) ([]byte, error)
	// ReadCommand reads one command, its LF taken off. When it is refused and
	// can be answered, Verb and Token are set (SPEC 7.3).
	ReadCommand func(line []byte) (protocol.Command, *protocol.SyntaxError)
	// WriteCommand makes the whole line of a command.
	WriteCommand func(protocol.Command) ([]byte, error)
}

// Run checks every vector that the implementation has a function for, one
// subtest each.
func Run(t *testing.T, impl Implementation) {
	t.Helper()
	v, err := Load()
	if err != nil {
		t.Fatal(err)
	}
	v.each(impl, func(name string, check func() error) {
		t.Run(name, func(t *testing.T) {
			if err := check(); err != nil {
				t.Error(err)
			}
		})
	})
}

// Check is Run without a test: all faults found, joined, or nil.
func (v *Vectors) Check(impl Implementation) error {
	var faults []error
	v.each(impl, func(name string, check func() error) {
		if err := check(); err != nil {
			faults = append(faults, fmt.Errorf("%s: %w", name, err))
		}
	})
	return errors.Join(faults...)
}

func (v *Vectors) each(impl Implementation, do func(name string, check func() error)) {
	for _, d := range v.Decode {
		if impl.Decode != nil {
			do("decode/"+d.Name, func() error { return d.check(impl.Decode) })
		}
	}
	for _, e := range v.Encode {
		if impl.Encode != nil {
			do("encode/"+e.Name, func() error { return e.check(impl.Encode) })
		}
	}
	for _, c := range v.Commands {
		if impl.ReadCommand != nil && c.Way != "write" {
			do("read command/"+c.Name, func() error { return c.checkRead(impl.ReadCommand) })
		}
		if impl.WriteCommand != nil && c.Way != "read" {
			do("write command/"+c.Name, func() error { return c.checkWrite(impl.WriteCommand) })
		}
	}
}

// readers are the ways in which a stream may come in.
func readers() map[string]func(io.Reader) io.Reader {
	return map[string]func(io.Reader) io.Reader{
		"whole":            func(r io.Reader) io.Reader { return r },
		"byte by byte":     iotest.OneByteReader,
		"in halves":        iotest.HalfReader,
		"data with error":  iotest.DataErrReader,
		"bytes with error": func(r io.Reader) io.Reader { return iotest.DataErrReader(iotest.OneByteReader(r)) },
	}
}

func (d DecodeVector) check(decode func(io.Reader, func(protocol.Line)) error) error {
	var faults []error
	for way, wrap := range readers() {
		i := 0
		err := decode(wrap(bytes.NewReader(d.Stream)), func(got protocol.Line) {
			if i >= len(d.Lines) {
				faults = append(faults, fmt.Errorf("%s: a line too many: %s", way, describe(got)))
				return
			}
			if err := d.Lines[i].compare(got); err != nil {
				faults = append(faults, fmt.Errorf("%s: %w", way, err))
			}
			i++
		})
		if err != nil {
			faults = append(faults, fmt.Errorf("%s: stream: %w", way, err))
		}
		if i < len(d.Lines) {
			faults = append(faults, fmt.Errorf("%s: %d lines, want %d", way, i, len(d.Lines)))
		}
	}
	return errors.Join(faults...)
}

func (want DecodeLine) compare(got protocol.Line) error {
	switch {
	case got.Number != want.Number || got.Offset != want.Offset:
		return fmt.Errorf("line %d at byte %d, want line %d at byte %d", got.Number, got.Offset, want.Number, want.Offset)
	case want.Record == nil:
		if got.Err != nil && (got.Err.Line != want.Number || got.Err.Offset != want.Offset) {
			return fmt.Errorf("the error names line %d at byte %d", got.Err.Line, got.Err.Offset)
		}
		return sameRefusal(got.Err, want.Class, want.Clause, describe(got))
	case got.Err != nil:
		return fmt.Errorf("line %d: %w, want %+v", want.Number, got.Err, want.Record)
	case got.Record != want.Record:
		return fmt.Errorf("line %d: %+v, want %+v", want.Number, got.Record, want.Record)
	}
	return nil
}

func describe(l protocol.Line) string {
	if l.Err != nil {
		return l.Err.Error()
	}
	return fmt.Sprintf("%+v", l.Record)
}

func sameRefusal(got *protocol.SyntaxError, class protocol.Class, clause, what string) error {
	switch {
	case got == nil:
		return fmt.Errorf("%s, want %s by clause %s", what, class, clause)
	case got.Class != class:
		return fmt.Errorf("class %s (%s), want %s", got.Class, got.Detail, class)
	case got.Clause != "" && clause != "" && got.Clause != clause:
		return fmt.Errorf("%s by clause %s, want clause %s", class, got.Clause, clause)
	}
	return nil
}

func (e EncodeVector) check(encode func(protocol.Record) ([]byte, error)) error {
	got, err := encode(e.Record)
	return sameBytes(got, err, e.Line, e.Class)
}

func sameBytes(got []byte, err error, want []byte, class protocol.Class) error {
	var refusal *protocol.SyntaxError
	switch {
	case class != "" && err == nil:
		return fmt.Errorf("written as %q, want %s", got, class)
	case class != "" && errors.As(err, &refusal):
		return sameRefusal(refusal, class, "", "")
	case class != "":
		return nil
	case err != nil:
		return err
	case !bytes.Equal(got, want):
		return fmt.Errorf("%q, want %q", got, want)
	}
	return nil
}

func (c CommandVector) checkRead(read func([]byte) (protocol.Command, *protocol.SyntaxError)) error {
	got, err := read(bytes.TrimSuffix(c.Line, []byte{'\n'}))
	if c.Class == "" {
		if err != nil {
			return err
		}
		if got != c.Command {
			return fmt.Errorf("%+v, want %+v", got, c.Command)
		}
		return nil
	}
	if err := sameRefusal(err, c.Class, c.Clause, fmt.Sprintf("%+v", got)); err != nil {
		return err
	}
	if got.Verb != c.Command.Verb || got.Token != c.Command.Token {
		return fmt.Errorf("answer to %q token %02x, want %q token %02x", got.Verb, got.Token, c.Command.Verb, c.Command.Token)
	}
	return nil
}

func (c CommandVector) checkWrite(write func(protocol.Command) ([]byte, error)) error {
	got, err := write(c.Command)
	return sameBytes(got, err, c.Line, c.Class)
}
