package recording

import (
	"bytes"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/protocol"
)

func TestCreateNeverOverwrites(t *testing.T) {
	path := filepath.Join(t.TempDir(), "visit.ramp")
	w, err := Create(path, testHeader(), 0)
	if err != nil {
		t.Fatal(err)
	}
	if err := errors.Join(w.Write(wire(0, 1, "x")), w.Close(time.Second, testStart)); err != nil {
		t.Fatal(err)
	}
	before, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := Create(path, testHeader(), 0); !errors.Is(err, fs.ErrExist) {
		t.Errorf("created again: %v", err)
	}
	after, err := os.ReadFile(path)
	if err != nil || !bytes.Equal(before, after) {
		t.Error("the file was touched")
	}
	rec, err := ReadFile(path)
	if err != nil || rec.Outcome != Complete || len(rec.Entries) != 2 {
		t.Errorf("%v: %+v", err, rec)
	}
}

func TestReadFileNamesTheFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "notes.txt")
	if err := os.WriteFile(path, []byte("lunch at 12"), 0o600); err != nil {
		t.Fatal(err)
	}
	if _, err := ReadFile(path); !errors.Is(err, ErrNotRecording) || !strings.Contains(err.Error(), "notes.txt") {
		t.Errorf("%v", err)
	}
	if _, err := ReadFile(path + "x"); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("%v", err)
	}
}

func TestBlocksAreSealedAtTheInterval(t *testing.T) {
	for name, test := range map[string]struct {
		factor float64
		every  time.Duration
		want   int // blocks in 10 s of recording, looked at each 10 ms
	}{
		"half a second":                   {1, 0, 20},
		"half a real second in rehearsal": {4, 0, 5},
		"as the caller says":              {1, 2 * time.Second, 5},
	} {
		h := testHeader()
		h.ClockFactor = test.factor
		var f memory
		w, err := NewWriter(&f, h, test.every)
		if err != nil {
			t.Fatal(err)
		}
		synced := f.syncs
		for at := time.Duration(0); at <= 10*time.Second; at += 10 * time.Millisecond {
			if err := w.Tick(at, testStart.Add(at)); err != nil {
				t.Fatal(err)
			}
		}
		blocks := strings.Count(f.String(), "\n"+sealTag) - 1
		if blocks != test.want || f.syncs-synced != test.want || strings.Count(f.String(), " wall ") != test.want {
			t.Errorf("%s: %d blocks, %d syncs, want %d of each, each with the wall clock", name, blocks, f.syncs-synced, test.want)
		}
	}
}

// What Tick has sealed is in the file, whatever becomes of the process.
func TestTickLeavesNothingInMemory(t *testing.T) {
	var f memory
	w, err := NewWriter(&f, testHeader(), time.Second)
	if err != nil {
		t.Fatal(err)
	}
	for i := range 50 {
		at := time.Duration(i) * 100 * time.Millisecond
		if err := errors.Join(w.Write(wire(0, at, "x")), w.Tick(at, testStart)); err != nil {
			t.Fatal(err)
		}
		rec, err := Read(bytes.NewReader(f.Bytes()))
		if err != nil {
			t.Fatal(err)
		}
		kept := len(withoutWall(rec.Entries))
		if behind := i + 1 - kept; behind > 10 {
			t.Fatalf("after %v %d entries are not on disk", at, behind)
		}
	}
}

// A point that the operator was told is taken is on disk with the next tick,
// and the interval begins again.
func TestATakenPointWaitsForNoInterval(t *testing.T) {
	var f memory
	w, err := NewWriter(&f, testHeader(), time.Minute)
	if err != nil {
		t.Fatal(err)
	}
	taken := Entry{Device: -1, At: time.Second, HasAt: true, Event: &Event{Kind: Taken, Text: "point 1 of 2 taken"}}
	if err := errors.Join(w.Write(wire(0, time.Second, "x")), w.Tick(time.Second, testStart)); err != nil || w.block != 1 {
		t.Fatalf("sealed too early: block %d, %v", w.block, err)
	}
	if err := errors.Join(w.Write(taken), w.Tick(time.Second, testStart)); err != nil {
		t.Fatal(err)
	}
	rec, err := Read(bytes.NewReader(f.Bytes()))
	if err != nil || len(withoutWall(rec.Entries)) != 2 {
		t.Errorf("%d entries are on disk, %v", len(rec.Entries), err)
	}
	if w.Due(2 * time.Second) {
		t.Error("due again at once")
	}
}

func TestLongBlocksAreSealedWithoutTick(t *testing.T) {
	var f memory
	w, err := NewWriter(&f, testHeader(), time.Hour)
	if err != nil {
		t.Fatal(err)
	}
	line := strings.Repeat("v", 100)
	for i := range 3 * blockBytes / 100 {
		if err := w.Write(wire(0, time.Duration(i), line)); err != nil {
			t.Fatal(err)
		}
	}
	if got := strings.Count(f.String(), "\n"+sealTag); got < 4 {
		t.Errorf("%d seals in %d bytes", got, f.Len())
	}
	if cap(w.buf) > 2*flushBytes {
		t.Errorf("%d bytes are held in memory", cap(w.buf))
	}
}

func TestEntriesThatCannotBeWritten(t *testing.T) {
	var f memory
	w, err := NewWriter(&f, testHeader(), time.Second)
	if err != nil {
		t.Fatal(err)
	}
	for name, e := range map[string]Entry{
		"nothing":             {},
		"both":                {Wire: []byte("x"), Event: &Event{Kind: Mark}},
		"an unknown device":   wire(2, 1, "x"),
		"a line of no device": wire(-1, 1, "x"),
		"before the start":    wire(0, -1, "x"),
		"an empty kind":       event(0, 1, "", ""),
		"a kind of two words": event(0, 1, "two words", ""),
		"a kind in capitals":  event(0, 1, "Mark", ""),
	} {
		if w.Write(e) == nil {
			t.Errorf("%s: written", name)
		}
	}
	if err := errors.Join(w.Write(wire(0, 5, "x")), w.Close(6, testStart), w.Close(7, testStart)); err != nil {
		t.Errorf("refused entries did harm: %v", err)
	}
	if w.Write(wire(0, 8, "x")) == nil || w.Tick(time.Hour, testStart) == nil {
		t.Error("written after Close")
	}
	if rec, err := Read(&f); err != nil || rec.Outcome != Complete || len(rec.Entries) != 2 || f.closes != 1 {
		t.Errorf("%v: %+v, closed %d times", err, rec, f.closes)
	}
}

func TestImportedRecordingsHaveNoTimes(t *testing.T) {
	h := testHeader()
	h.Source = Imported
	var f memory
	write(t, &f, h, []Entry{{Device: 0, Wire: []byte("val")}})
	rec, err := Read(&f)
	if err != nil {
		t.Fatal(err)
	}
	for i, e := range rec.Entries {
		if e.HasAt {
			t.Errorf("entry %d has a time", i)
		}
	}
}

func TestSettingQuantityFollowsTheTensioner(t *testing.T) {
	for by, want := range map[mill.SetBy]protocol.Quantity{
		mill.SetByPressure: protocol.Pressure, mill.SetByTorque: protocol.Torque,
		mill.SetByTurns: protocol.Angle, mill.SetBySpring: protocol.Spring,
	} {
		h := Header{Tensioner: "a", Parsed: &mill.Profile{Tensioners: []mill.Tensioner{{Name: "b"}, {Name: "a", SetBy: by}}}}
		if got, err := h.SettingQuantity(); err != nil || got != want {
			t.Errorf("%s: %q, %v; want %q", by, got, err, want)
		}
	}
	for name, h := range map[string]Header{
		"not read":  {Tensioner: "a"},
		"not there": {Tensioner: "c", Parsed: &mill.Profile{Tensioners: []mill.Tensioner{{Name: "a"}}}},
		"set by ?":  {Tensioner: "a", Parsed: &mill.Profile{Tensioners: []mill.Tensioner{{Name: "a", SetBy: "wind"}}}},
	} {
		if got, err := h.SettingQuantity(); err == nil {
			t.Errorf("%s: %q", name, got)
		}
	}
}
