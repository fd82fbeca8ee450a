package recording

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"reflect"
	"testing"
	"time"

	"tautramp/acquire/mill"
)

// tinyProfile is the least that mill.Parse takes, so that tests at every byte
// stay quick.
const tinyProfile = `[mill]
name="m"
[[tensioner]]
name="T-1"
set_by="pressure"
setting_limit="900 psi"
cylinders=2
bore="2.5 in"
[[band]]
name="QW-6"
thickness="0.058 in"
net_width="5.25 in"
modulus="30e6 psi"
[rig]
gauge_length="20 in"
`

// small is a complete file of a header and three blocks, and the offsets after
// each seal, in order; the last block is Close's own.
func small(t testing.TB) (file []byte, entries []Entry, seals []int) {
	t.Helper()
	entries = []Entry{
		wire(0, 5, "here"), event(-1, 6, Opened, ""), wire(1, 900, "\xffgarbage\r"),
		event(0, 1000, Sent, "who 01"), wire(0, 2_000_000, "seal 1 x"),
	}
	var f memory
	h := testHeader()
	h.Profile = []byte(tinyProfile)
	write(t, &f, h, entries, 1, 3)
	file = f.Bytes()
	for at := 0; ; {
		n := bytes.IndexByte(file[at:], '\n')
		if n < 0 {
			return file, entries, seals
		}
		if bytes.HasPrefix(file[at:], []byte(sealTag)) {
			seals = append(seals, at+n+1)
		}
		at += n + 1
	}
}

// sealedAt is how many entries of small, wall clock included, are sealed in
// its first n bytes; -1 means not even the header.
func sealedAt(n int, seals []int) int {
	entries := -1
	for i, end := range seals {
		if n >= end {
			entries = []int{0, 3, 6, 8}[i]
		}
	}
	return entries
}

func TestCutAtEveryByteLeavesTheSealedPrefix(t *testing.T) {
	file, _, seals := small(t)
	whole, err := Read(bytes.NewReader(file))
	if err != nil || len(whole.Entries) != 8 || len(seals) != 4 {
		t.Fatalf("%v: %d entries, %d seals", err, len(whole.Entries), len(seals))
	}
	for n := range len(file) {
		rec, err := Read(bytes.NewReader(file[:n]))
		want := sealedAt(n, seals)
		if want < 0 {
			if !errors.Is(err, ErrNotRecording) || !errors.Is(err, ErrNoHeader) || rec != nil {
				t.Errorf("cut at %d: %v, %v; want no recording and both errors", n, rec, err)
			}
			continue
		}
		if err != nil || rec.Outcome != Torn {
			t.Errorf("cut at %d: %v, %v; want a torn recording", n, rec, err)
			continue
		}
		if !reflect.DeepEqual(rec.Entries, whole.Entries[:want:want]) && want+len(rec.Entries) > 0 {
			t.Errorf("cut at %d: %d entries, want the first %d", n, len(rec.Entries), want)
		}
		if rec.TailBytes != int64(n-lastSeal(n, seals)) {
			t.Errorf("cut at %d: a tail of %d bytes, want %d", n, rec.TailBytes, n-lastSeal(n, seals))
		}
	}
}

func lastSeal(n int, seals []int) (end int) {
	for _, s := range seals {
		if s <= n {
			end = s
		}
	}
	return end
}

// Every other value of every byte would be 255 times the file; every bit is
// enough to show that no byte is outside a check sum.
func TestFlipOfEveryBitIsSeen(t *testing.T) {
	file, _, seals := small(t)
	whole, err := Read(bytes.NewReader(file))
	if err != nil {
		t.Fatal(err)
	}
	end := seals[len(seals)-1]
	for n := range len(file) {
		for bit := range 8 {
			if testing.Short() && bit != n%8 {
				continue
			}
			broken := bytes.Clone(file)
			broken[n] ^= 1 << bit
			rec, err := Read(bytes.NewReader(broken))
			if reason := unseen(rec, err, whole, n, end, seals); reason != "" {
				t.Fatalf("byte %d, bit %d: %s (%v)", n, bit, reason, err)
			}
		}
	}
}

// unseen says how a file with one bit flipped in byte n was not dealt with as
// SPEC 7 says, or "".
func unseen(rec *Recording, err error, whole *Recording, n, end int, seals []int) string {
	var corrupt *CorruptError
	known := errors.As(err, &corrupt)
	if n <= len(magic+version) && (errors.Is(err, ErrNotRecording) || errors.Is(err, ErrVersion)) {
		return "" // another file altogether
	}
	switch {
	case rec == nil:
		return "no recording"
	case err != nil && !known:
		return "another error"
	case known && (rec.Outcome != Corrupt || corrupt.Offset != int64(lastSeal(n, seals))):
		return fmt.Sprintf("outcome %q at %d, want the last seal before it", rec.Outcome, corrupt.Offset)
	case !known && (n < end || rec.Outcome != Torn):
		return fmt.Sprintf("outcome %q", rec.Outcome)
	}
	kept := max(0, sealedAt(n, seals))
	if len(rec.Entries) != kept || kept > 0 && !reflect.DeepEqual(rec.Entries, whole.Entries[:kept]) {
		return fmt.Sprintf("%d entries, want the first %d unchanged", len(rec.Entries), kept)
	}
	return ""
}

func TestWhatFollowsTheLastSeal(t *testing.T) {
	file, _, seals := small(t)
	sealed := file[:seals[2]]
	zeros := string(bytes.Repeat([]byte{'0'}, 64))
	for name, test := range map[string]struct {
		tail string
		want Outcome
	}{
		"nothing":                  {"", Torn},
		"half a line":              {"w 0 12 va", Torn},
		"a line":                   {"w 0 12 val\n", Torn},
		"no line of ours":          {"\x00\x00\x00\n\xff\n", Torn},
		"half a seal":              {"w 0 12 val\nseal 3 " + zeros, Torn},
		"a seal that does not fit": {"w 0 12 val\nseal 3 " + zeros + "\n", Corrupt},
		"a seal without a sum":     {"seal 3\n", Corrupt},
		"a seal in upper case":     {"seal 3 " + string(bytes.Repeat([]byte{'A'}, 64)) + "\n", Corrupt},
		"an end that does not fit": {"end 3 6 " + zeros + "\n", Corrupt},
	} {
		t.Run(name, func(t *testing.T) {
			rec, err := Read(bytes.NewReader(append(bytes.Clone(sealed), test.tail...)))
			var corrupt *CorruptError
			if (test.want == Corrupt) != errors.As(err, &corrupt) || err != nil && test.want == Torn {
				t.Fatalf("error %v", err)
			}
			if rec.Outcome != test.want || len(rec.Entries) != 6 || rec.TailBytes != int64(len(test.tail)) {
				t.Errorf("outcome %q, %d entries, tail %d; want %q, 6 and %d", rec.Outcome, len(rec.Entries), rec.TailBytes, test.want, len(test.tail))
			}
		})
	}
}

func TestBytesAfterTheEndAreDamage(t *testing.T) {
	file, _, _ := small(t)
	rec, err := Read(bytes.NewReader(append(bytes.Clone(file), 'w')))
	var corrupt *CorruptError
	if !errors.As(err, &corrupt) || corrupt.Offset != int64(len(file)) || rec.Outcome != Corrupt || len(rec.Entries) != 8 {
		t.Errorf("%v, %+v", err, rec.Outcome)
	}
}

// A block that is moved, left out or put in twice fits no seal.
func TestBlocksCannotBeRearranged(t *testing.T) {
	file, _, seals := small(t)
	head, a, b, rest := file[:seals[0]], file[seals[0]:seals[1]], file[seals[1]:seals[2]], file[seals[2]:]
	for name, parts := range map[string][][]byte{
		"left out":  {head, b, rest},
		"swapped":   {head, b, a, rest},
		"twice":     {head, a, a, b, rest},
		"end early": {head, a, file[seals[3]:]},
	} {
		rec, err := Read(bytes.NewReader(bytes.Join(parts, nil)))
		var corrupt *CorruptError
		if !errors.As(err, &corrupt) || rec.Outcome != Corrupt {
			t.Errorf("%s: outcome %v, error %v", name, rec.Outcome, err)
		}
	}
}

// failing fails at its n-th call of Write or Sync, counted from 1, having
// written half.
type failing struct {
	memory
	left int
}

var errDisk = errors.New("no space left")

func (f *failing) step() bool { f.left--; return f.left == 0 }

func (f *failing) Write(p []byte) (int, error) {
	if f.left < 1 {
		return 0, errors.New("written to after an error")
	}
	if f.step() {
		n, _ := f.memory.Write(p[:len(p)/2])
		return n, errDisk
	}
	return f.memory.Write(p)
}

func (f *failing) Sync() error {
	if f.step() {
		return errDisk
	}
	return f.memory.Sync()
}

func TestFailureOfTheFileAtEveryStep(t *testing.T) {
	for n := 1; ; n++ {
		f := &failing{left: n}
		acknowledged, failed := writeUntilError(t, f)
		if failed == nil {
			if n < 7 {
				t.Fatalf("%d steps only", n)
			}
			return
		}
		if !errors.Is(failed, errDisk) || f.closes != 1 {
			t.Fatalf("step %d: error %v, closed %d times", n, failed, f.closes)
		}
		rec, err := Read(bytes.NewReader(f.Bytes()))
		if errors.Is(err, ErrNoHeader) && acknowledged < 0 {
			continue
		}
		if err != nil || len(rec.Entries) < acknowledged {
			t.Fatalf("step %d: %v; %d entries were synced, %d are there", n, err, acknowledged, len(rec.Entries))
		}
	}
}

// writeUntilError writes three blocks. It returns the error, which must stay,
// and the entries, wall clock included, that a seal had promised before it.
func writeUntilError(t *testing.T, f File) (promised int, failed error) {
	w, err := NewWriter(f, testHeader(), time.Second)
	if err != nil {
		return -1, err
	}
	for i := range 3 {
		at := time.Duration(i+1) * time.Second
		err := errors.Join(w.Write(wire(0, at, "x")), w.Tick(at, testStart.Add(at)))
		if err != nil {
			again := w.Write(wire(0, at, "x"))
			closed := w.Close(at, testStart)
			if !errors.Is(again, errDisk) || !errors.Is(closed, errDisk) {
				t.Fatalf("the error did not stay: %v, %v", again, closed)
			}
			return promised, closed
		}
		promised += 2
	}
	return promised, w.Close(4*time.Second, testStart)
}

// short writes less than it is given, and says nothing of it.
type short struct{ memory }

func (s *short) Write(p []byte) (int, error) { return s.memory.Write(p[:len(p)-1]) }

func TestShortWriteIsAnError(t *testing.T) {
	if _, err := NewWriter(&short{}, testHeader(), 0); !errors.Is(err, io.ErrShortWrite) {
		t.Errorf("%v", err)
	}
}

func TestFilesOfOtherKinds(t *testing.T) {
	file, _, _ := small(t)
	for name, test := range map[string]struct {
		file string
		want error
	}{
		"empty":            {"", ErrNoHeader},
		"another text":     {"time,psi\n0,120\n", ErrNotRecording},
		"a later version":  {"tautramp recording 2\nh x\n", ErrVersion},
		"no line at all":   {"tautramp recording 1" + string(make([]byte, 100)), ErrVersion},
		"line ends of DOS": {string(bytes.ReplaceAll(file, []byte("\n"), []byte("\r\n"))), ErrNotRecording},
	} {
		if rec, err := Read(bytes.NewReader([]byte(test.file))); !errors.Is(err, test.want) || rec != nil {
			t.Errorf("%s: %v, %v; want %v", name, rec, err, test.want)
		}
	}
}

func TestHeadersThatCannotBeWritten(t *testing.T) {
	for name, change := range map[string]func(*Header){
		"no device":             func(h *Header) { h.Devices = nil },
		"no source":             func(h *Header) { h.Source = "" },
		"no factor":             func(h *Header) { h.ClockFactor = 0 },
		"a negative plan":       func(h *Header) { h.Plan.Ramps = -1 },
		"a file for a seal":     func(h *Header) { h.Continues = "visit-1.ramp" },
		"no profile":            func(h *Header) { h.Profile = nil },
		"a profile of nonsense": func(h *Header) { h.Profile = []byte("[mill]\nname = 3\n") },
		"the year 20000":        func(h *Header) { h.Started = time.Date(20000, 1, 1, 0, 0, 0, 0, time.UTC) },
	} {
		h := testHeader()
		change(&h)
		path := filepath.Join(t.TempDir(), "x.ramp")
		if _, err := Create(path, h, 0); err == nil {
			t.Errorf("%s: written", name)
		}
		if _, err := os.Stat(path); !errors.Is(err, os.ErrNotExist) {
			t.Errorf("%s: a file is left behind", name)
		}
	}
}

// A file whose profile a later program refuses still gives its lines.
func TestProfileThatIsRefusedComesWithTheLines(t *testing.T) {
	h := testHeader()
	h.Profile = []byte("[mill]\nname = 3\n")
	block, err := appendHeader(nil, h)
	if err != nil {
		t.Fatal(err)
	}
	var f memory
	w := &Writer{f: &f, header: h, every: 1, sum: newSum()}
	w.add(block)
	if err := errors.Join(w.seal(), w.Write(wire(0, 1, "x")), w.Close(2, testStart)); err != nil {
		t.Fatal(err)
	}
	rec, err := Read(&f)
	var bad *mill.ProfileError
	if !errors.As(err, &bad) || rec == nil || len(rec.Entries) != 2 || rec.Header.Parsed != nil {
		t.Errorf("%v, %+v; want the profile's error and 2 entries", err, rec)
	}
}
