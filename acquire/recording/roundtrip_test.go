package recording

import (
	"bytes"
	"math/rand/v2"
	"reflect"
	"testing"
	"time"

	"tautramp/acquire/mill"
)

// memory is a File in memory.
type memory struct {
	bytes.Buffer
	syncs, closes int
}

func (m *memory) Sync() error  { m.syncs++; return nil }
func (m *memory) Close() error { m.closes++; return nil }

var testStart = time.Date(2026, 3, 14, 8, 30, 0, 123456789, time.FixedZone("", -5*3600))

func testHeader() Header {
	return Header{
		Program: "tautramp 0.1", Started: testStart, Source: Live, ClockFactor: 1,
		Devices: []string{"/dev/ttyUSB0", "/dev/ttyUSB1"}, Tensioner: "T-1", Band: "QW-6",
		Plan: Plan{Exercise: 1, Ramps: 3}, Profile: mill.Example(),
	}
}

func wire(device int, at time.Duration, text string) Entry {
	return Entry{Device: device, At: at, HasAt: true, Wire: []byte(text)}
}

func event(device int, at time.Duration, kind EventKind, text string) Entry {
	return Entry{Device: device, At: at, HasAt: true, Event: &Event{Kind: kind, Text: text}}
}

// write writes a whole file; blocks end after the entries whose index is in
// seals.
func write(t testing.TB, f File, h Header, entries []Entry, seals ...int) {
	t.Helper()
	w, err := NewWriter(f, h, time.Nanosecond)
	if err != nil {
		t.Fatal(err)
	}
	at := time.Duration(0)
	for i, e := range entries {
		if err := w.Write(e); err != nil {
			t.Fatalf("entry %d: %v", i, err)
		}
		at = max(at, e.At)
		for _, s := range seals {
			if s == i {
				if err := w.Tick(at, h.Started.Add(at)); err != nil {
					t.Fatal(err)
				}
			}
		}
	}
	if err := w.Close(at+1, h.Started.Add(at+1)); err != nil {
		t.Fatal(err)
	}
}

// withoutWall drops the entries that the Writer adds by itself.
func withoutWall(entries []Entry) (kept []Entry) {
	for _, e := range entries {
		if e.Event == nil || e.Event.Kind != WallTime {
			kept = append(kept, e)
		}
	}
	return kept
}

// hostile is what a line can hold at worst, the forgeries of this format first.
func hostile() []Entry {
	zeros := string(bytes.Repeat([]byte{'0'}, 64))
	texts := []string{
		"seal 1 " + zeros, "end 2 3 " + zeros, "\nseal 1 " + zeros + "\n", "\nend 2 3 " + zeros + "\n",
		"w 0 1 x", "\ne - 5 mark forged\n", "\\", "\\\\", "\\0a", "\\0", "\r", "\x00", " ", "", "\xff\xfe", "\x7f",
		"h factor 9", "p [mill]",
	}
	all := make([]byte, 256)
	for i := range all {
		all[i] = byte(i)
	}
	texts = append(texts, string(all))
	entries := make([]Entry, 0, 2*len(texts))
	for i, text := range texts {
		at := time.Duration(i) * time.Millisecond
		entries = append(entries, wire(i%2, at, text), event(i%3-1, at, Mark, text))
	}
	return entries
}

func TestEveryEntryReadsBackAsWritten(t *testing.T) {
	var f memory
	want := hostile()
	write(t, &f, testHeader(), want, 3, 10)
	rec, err := Read(&f)
	if err != nil {
		t.Fatal(err)
	}
	if rec.Outcome != Complete || rec.TailBytes != 0 || !isSeal(rec.Seal) {
		t.Errorf("outcome %q, tail %d, seal %q", rec.Outcome, rec.TailBytes, rec.Seal)
	}
	got := withoutWall(rec.Entries)
	if len(got) != len(want) || len(rec.Entries) != len(want)+3 {
		t.Fatalf("%d entries, want %d and 3 of the wall clock", len(rec.Entries), len(want))
	}
	for i := range want {
		if !reflect.DeepEqual(got[i], want[i]) {
			t.Errorf("entry %d: got %+v %q, want %+v %q", i, got[i], got[i].Wire, want[i], want[i].Wire)
		}
	}
}

func TestRandomBytesReadBack(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for round := range 200 {
		var want []Entry
		for range random.IntN(20) {
			text := make([]byte, random.IntN(130))
			for i := range text {
				text[i] = byte(random.Uint32())
			}
			want = append(want, Entry{Device: random.IntN(2), Wire: text})
		}
		var f memory
		h := testHeader()
		h.Profile = []byte(tinyProfile)
		write(t, &f, h, want, random.IntN(20))
		rec, err := Read(&f)
		if err != nil || !reflect.DeepEqual(withoutWall(rec.Entries), want) {
			t.Fatalf("round %d (seed 1, 2): %v, entries differ", round, err)
		}
	}
}

func TestHeaderReadsBackAsWritten(t *testing.T) {
	crlf := bytes.ReplaceAll(mill.Example(), []byte("\n"), []byte("\r\n"))
	for name, change := range map[string]func(*Header){
		"plain":             func(*Header) {},
		"rehearsal":         func(h *Header) { h.ClockFactor = 37.5 },
		"imported":          func(h *Header) { h.Source = Imported },
		"continues":         func(h *Header) { h.Continues = string(bytes.Repeat([]byte("0a"), 32)) },
		"names of any text": func(h *Header) { h.Devices = []string{"a\nh b \\ c", ""}; h.Program = "é\x00" },
		"no names":          func(h *Header) { h.Tensioner, h.Band = "", "" },
		"CR LF profile":     func(h *Header) { h.Profile = crlf },
		"no LF at its end":  func(h *Header) { h.Profile = bytes.TrimRight(h.Profile, "\n") },
		"more LF at its end": func(h *Header) {
			h.Profile = append(bytes.Clone(h.Profile), "\n\n# ½ in\n\n"...)
		},
	} {
		t.Run(name, func(t *testing.T) {
			want := testHeader()
			change(&want)
			var f memory
			write(t, &f, want, nil)
			rec, err := Read(&f)
			if err != nil {
				t.Fatal(err)
			}
			got := rec.Header
			if !got.Started.Equal(want.Started) {
				t.Errorf("started %v, want %v", got.Started, want.Started)
			}
			if got.Parsed == nil || got.Parsed.Mill.Name == "" {
				t.Error("the profile is not parsed")
			}
			got.Started, got.Parsed = want.Started, nil
			if !reflect.DeepEqual(got, want) {
				t.Errorf("got %+v\nwant %+v", got, want)
			}
		})
	}
}
