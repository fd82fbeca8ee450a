package protocol_test

import (
	"bytes"
	"errors"
	"io"
	"slices"
	"strings"
	"testing"
	"testing/iotest"

	"tautramp/protocol"
	"tautramp/protocol/protocoltest"
)

// kept is a Line whose text is its own.
type kept struct {
	text   string
	number int
	offset int64
	record protocol.Record
	class  protocol.Class
}

func keep(into *[]kept) func(protocol.Line) {
	return func(l protocol.Line) {
		k := kept{text: string(l.Text), number: l.Number, offset: l.Offset, record: l.Record}
		if l.Err != nil {
			k.class = l.Err.Class
		}
		*into = append(*into, k)
	}
}

// everything is all decode vectors in one stream.
func everything(tb testing.TB) []byte {
	tb.Helper()
	v, err := protocoltest.Load()
	if err != nil {
		tb.Fatal(err)
	}
	var all []byte
	for _, d := range v.Decode {
		all = append(append(all, d.Stream...), '\n')
	}
	return all
}

func TestAStreamCutAnywhereGivesTheSameLines(t *testing.T) {
	stream := everything(t)
	var want []kept
	if err := scan(bytes.NewReader(stream), keep(&want)); err != nil {
		t.Fatal(err)
	}
	if len(want) < 700 {
		t.Fatalf("only %d lines", len(want))
	}
	for at := 0; at <= len(stream); at += 211 {
		var a protocol.Assembler
		var got []kept
		a.Feed(stream[:at], keep(&got))
		a.Feed(stream[at:], keep(&got))
		a.Flush(keep(&got))
		if !slices.Equal(got, want) {
			t.Fatalf("cut at byte %d: other lines", at)
		}
	}
}

func TestTextParsesAgainToTheSame(t *testing.T) {
	var lines []kept
	if err := scan(bytes.NewReader(everything(t)), keep(&lines)); err != nil {
		t.Fatal(err)
	}
	for _, l := range lines {
		r, bad := protocol.Parse([]byte(l.text))
		if r != l.record || (bad == nil) != (l.class == "") || bad != nil && bad.Class != l.class {
			t.Errorf("%q: first %v %s, again %v %v", l.text, l.record, l.class, r, bad)
		}
	}
}

func TestGarbageWithoutALineEndIsNotKept(t *testing.T) {
	garbage := bytes.Repeat([]byte{0xa5}, 1<<16)
	var a protocol.Assembler
	if allocs := testing.AllocsPerRun(20, func() { a.Feed(garbage, func(protocol.Line) {}) }); allocs != 0 {
		t.Errorf("%v allocations for garbage", allocs)
	}
	var got []kept
	a.Feed([]byte("\nnote a;b"), keep(&got))
	a.Flush(keep(&got))
	if len(got) != 2 || got[0].class != protocol.TooLong || len(got[0].text) != protocol.MaxLine ||
		got[1].class != protocol.Unfinished || got[1].offset != 21<<16+1 {
		t.Errorf("%+v", got)
	}
}

func TestFlushBeginsANewLine(t *testing.T) {
	var a protocol.Assembler
	var got []kept
	a.Feed([]byte("note tor"), keep(&got))
	a.Flush(keep(&got))
	a.Flush(keep(&got))
	a.Feed([]byte("echo 03 0007a120;cef6\n"), keep(&got))
	want := []kept{
		{"note tor", 1, 0, nil, protocol.Unfinished},
		{"echo 03 0007a120;cef6", 2, 8, protocol.Echo{Token: 3, Tick: 500000}, ""},
	}
	if !slices.Equal(got, want) {
		t.Errorf("%+v", got)
	}
}

func TestAStreamErrorComesAfterTheOpenLine(t *testing.T) {
	gone := errors.New("port is gone")
	s := protocol.NewScanner(io.MultiReader(strings.NewReader("echo 03 0007a120;cef6\necho 0"), iotest.ErrReader(gone)))
	var got []kept
	for s.Scan() {
		keep(&got)(s.Line())
	}
	if len(got) != 2 || got[0].class != "" || got[1].class != protocol.Unfinished {
		t.Errorf("%+v", got)
	}
	if !errors.Is(s.Err(), gone) {
		t.Errorf("error %v", s.Err())
	}
	if s.Scan() {
		t.Error("scans on after the error")
	}
}

type silent struct{}

func (silent) Read([]byte) (int, error) { return 0, nil }

func TestAReaderThatGivesNothingEnds(t *testing.T) {
	s := protocol.NewScanner(silent{})
	if s.Scan() || !errors.Is(s.Err(), io.ErrNoProgress) {
		t.Errorf("error %v", s.Err())
	}
}

func TestErrorsSayWhereAndWhy(t *testing.T) {
	s := protocol.NewScanner(strings.NewReader("\necho 03 0007a120;cef7\n"))
	if !s.Scan() || s.Line().Err == nil {
		t.Fatal("not refused")
	}
	const want = "line 2 (byte 1): bad-check: check is cef7, the line makes cef6 (wire rule 2.6)"
	if got := s.Line().Err.Error(); got != want {
		t.Errorf("%s, want %s", got, want)
	}
}
