package protocoltest_test

import (
	"bytes"
	"io"
	"testing"

	"tautramp/protocol"
	"tautramp/protocol/protocoltest"
)

func decode(r io.Reader, yield func(protocol.Line)) error {
	s := protocol.NewScanner(r)
	for s.Scan() {
		yield(s.Line())
	}
	return s.Err()
}

func encode(r protocol.Record) ([]byte, error)       { return protocol.Append(nil, r) }
func writing(c protocol.Command) ([]byte, error)     { return protocol.AppendCommand(nil, c) }
func vectors(t *testing.T) (v *protocoltest.Vectors) { return must(protocoltest.Load())(t) }

func must[T any](v T, err error) func(*testing.T) T {
	return func(t *testing.T) T {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
}

func TestARightImplementationPasses(t *testing.T) {
	protocoltest.Run(t, protocoltest.Implementation{
		Decode: decode, Encode: encode, ReadCommand: protocol.ParseCommand, WriteCommand: writing,
	})
}

func TestAnImplementationWithoutClausesPasses(t *testing.T) {
	err := vectors(t).Check(protocoltest.Implementation{
		ReadCommand: func(line []byte) (protocol.Command, *protocol.SyntaxError) {
			c, bad := protocol.ParseCommand(line)
			if bad != nil {
				bad.Clause = ""
			}
			return c, bad
		},
	})
	if err != nil {
		t.Error(err)
	}
}

// Each of these has one fault that a hasty implementation has.
func TestAWrongImplementationIsFound(t *testing.T) {
	for name, impl := range map[string]protocoltest.Implementation{
		"reads upper case":        {Decode: changed(bytes.ToLower)},
		"trims spaces":            {Decode: changed(bytes.TrimSpace)},
		"takes CR for a line end": {Decode: changed(func(b []byte) []byte { return bytes.ReplaceAll(b, []byte{'\r'}, []byte{'\n'}) })},
		"drops bad bytes":         {Decode: changed(func(b []byte) []byte { return bytes.ReplaceAll(b, []byte{0}, nil) })},
		"stops at the first refusal": {Decode: func(r io.Reader, yield func(protocol.Line)) error {
			s := protocol.NewScanner(r)
			for s.Scan() && s.Line().Err == nil {
				yield(s.Line())
			}
			return s.Err()
		}},
		"loses count of empty lines": {Decode: func(r io.Reader, yield func(protocol.Line)) error {
			n := 0
			return decode(r, func(l protocol.Line) {
				n++
				l.Number = n
				yield(l)
			})
		}},
		"reads one buffer only": {Decode: func(r io.Reader, yield func(protocol.Line)) error {
			buf := make([]byte, 1<<16)
			n, _ := r.Read(buf)
			return decode(bytes.NewReader(buf[:n]), yield)
		}},
		"takes a missing count for zero": {Decode: func(r io.Reader, yield func(protocol.Line)) error {
			return decode(r, func(l protocol.Line) {
				if v, ok := l.Record.(protocol.Val); ok {
					v.HasCount = true
					l.Record = v
				}
				yield(l)
			})
		}},
		"writes CR": {Encode: func(r protocol.Record) ([]byte, error) {
			line, err := protocol.Append(nil, r)
			return bytes.Replace(line, []byte{'\n'}, []byte("\r\n"), 1), err
		}},
		"writes what cannot be read": {Encode: func(r protocol.Record) ([]byte, error) {
			line, err := protocol.Append(nil, r)
			if err != nil {
				return []byte("note ?;0000\n"), nil
			}
			return line, nil
		}},
		"asks for a check of a bare who": {ReadCommand: func(line []byte) (protocol.Command, *protocol.SyntaxError) {
			return protocol.ParseCommand(bytes.Replace(line, []byte("who"), []byte("who;"), 1))
		}},
		"does not look at the check": {ReadCommand: func(line []byte) (protocol.Command, *protocol.SyntaxError) {
			c, bad := protocol.ParseCommand(line)
			if bad != nil && bad.Class == protocol.BadCheck {
				return protocol.Command{Verb: protocol.Run, Token: 1}, nil
			}
			return c, bad
		}},
		"answers what cannot be answered": {ReadCommand: func(line []byte) (protocol.Command, *protocol.SyntaxError) {
			c, bad := protocol.ParseCommand(line)
			if bad != nil {
				c.Verb = protocol.Run
			}
			return c, bad
		}},
		"writes tokens in upper case": {WriteCommand: func(c protocol.Command) ([]byte, error) {
			line, err := protocol.AppendCommand(nil, c)
			return bytes.ToUpper(line), err
		}},
	} {
		if vectors(t).Check(impl) == nil {
			t.Errorf("an implementation that %s passes every vector", name)
		}
	}
}

func changed(change func([]byte) []byte) func(io.Reader, func(protocol.Line)) error {
	return func(r io.Reader, yield func(protocol.Line)) error {
		stream, err := io.ReadAll(r)
		if err != nil {
			return err
		}
		return decode(bytes.NewReader(change(stream)), yield)
	}
}
