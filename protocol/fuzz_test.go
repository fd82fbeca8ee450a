package protocol_test

import (
	"bytes"
	"slices"
	"testing"

	"tautramp/protocol"
	"tautramp/protocol/protocoltest"
)

// FuzzParse: what is read can be written, and reads back the same; what is
// refused has a class and a clause.
func FuzzParse(f *testing.F) {
	for line := range bytes.Lines(everything(f)) {
		f.Add(bytes.TrimSuffix(line, []byte{'\n'}))
	}
	f.Fuzz(func(t *testing.T, line []byte) {
		r, bad := protocol.Parse(line)
		if bad != nil {
			if r != nil || bad.Class == "" || bad.Clause == "" || bad.Detail == "" {
				t.Fatalf("%q: %v %#v", line, r, bad)
			}
			resealed(t, line)
			return
		}
		written, err := protocol.Append([]byte("kept"), r)
		if err != nil || !bytes.HasPrefix(written, []byte("kept")) {
			t.Fatalf("%q: %v", line, err)
		}
		written = written[len("kept"):]
		if len(written) > protocol.MaxLine {
			t.Fatalf("%q: written as %d bytes", line, len(written))
		}
		again, bad := protocol.Parse(written[:len(written)-1])
		if bad != nil || again != r {
			t.Fatalf("%q: %+v, then %+v %v", line, r, again, bad)
		}
	})
}

// resealed tries the line as a body with a good check, so that the fuzzer gets
// past the check sum.
func resealed(t *testing.T, body []byte) {
	t.Helper()
	line := protocol.Seal(nil, body)
	r, bad := protocol.Parse(line[:len(line)-1])
	if bad != nil {
		return
	}
	written, err := protocol.Append(nil, r)
	if err != nil {
		t.Fatalf("%q: %v", body, err)
	}
	if again, bad := protocol.Parse(written[:len(written)-1]); bad != nil || again != r {
		t.Fatalf("%q: %+v, then %+v %v", body, r, again, bad)
	}
}

// FuzzScanner: after any garbage and an LF the next good line is read, and the
// two readers agree however the bytes come in.
func FuzzScanner(f *testing.F) {
	v, err := protocoltest.Load()
	if err != nil {
		f.Fatal(err)
	}
	for i, d := range v.Decode {
		f.Add(d.Stream, uint8(i))
	}
	good := protocol.Val{Channel: 'a', Seq: 1, Tick: 2, Status: protocol.Good, Count: 5, HasCount: true}
	line, err := protocol.Append(nil, good)
	if err != nil {
		f.Fatal(err)
	}
	f.Fuzz(func(t *testing.T, garbage []byte, size uint8) {
		stream := slices.Concat(garbage, []byte{'\n'}, line)
		var got, fed []kept
		if err := scan(bytes.NewReader(stream), keep(&got)); err != nil {
			t.Fatal(err)
		}
		var a protocol.Assembler
		for chunk := range slices.Chunk(stream, int(size)+1) {
			a.Feed(chunk, keep(&fed))
		}
		a.Flush(keep(&fed))
		if !slices.Equal(got, fed) {
			t.Fatalf("scanner %+v, assembler %+v", got, fed)
		}
		want := kept{string(line[:len(line)-1]), bytes.Count(garbage, []byte{'\n'}) + 2, int64(len(garbage) + 1), good, ""}
		if got[len(got)-1] != want {
			t.Fatalf("last line %+v, want %+v", got[len(got)-1], want)
		}
	})
}

// FuzzCommand: as FuzzParse, for commands.
func FuzzCommand(f *testing.F) {
	v, err := protocoltest.Load()
	if err != nil {
		f.Fatal(err)
	}
	for _, c := range v.Commands {
		f.Add(bytes.TrimSuffix(c.Line, []byte{'\n'}))
	}
	f.Fuzz(func(t *testing.T, line []byte) {
		for _, line := range [][]byte{line, bytes.TrimSuffix(protocol.Seal(nil, line), []byte{'\n'})} {
			c, bad := protocol.ParseCommand(line)
			if bad != nil {
				if bad.Class == "" || bad.Clause == "" || c.Bare {
					t.Fatalf("%q: %+v %#v", line, c, bad)
				}
				continue
			}
			written, err := protocol.AppendCommand(nil, c)
			if err != nil || len(written) > protocol.MaxCommand {
				t.Fatalf("%q: %q %v", line, written, err)
			}
			if again, bad := protocol.ParseCommand(written[:len(written)-1]); bad != nil || again != c {
				t.Fatalf("%q: %+v, then %+v %v", line, c, again, bad)
			}
		}
	})
}
