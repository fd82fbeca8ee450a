package station_test

import (
	"errors"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/recording"
	"tautramp/cmd/tautramp/station"
)

// cut is the recording up to an entry, as a killed program leaves it.
func cut(rec *recording.Recording, entries int, seal string) *recording.Recording {
	return &recording.Recording{Header: rec.Header, Entries: rec.Entries[:entries], Outcome: recording.Torn, Seal: seal}
}

// afterPoint finds the entry with which so many points were taken.
func afterPoint(t *testing.T, s *session, n int) int {
	t.Helper()
	for i, e := range s.rec.Entries {
		if e.Event != nil && e.Event.Kind == recording.Taken && strings.HasPrefix(e.Event.Text, "point ") {
			if n--; n == 0 {
				return i + 1
			}
		}
	}
	t.Fatal("so many points were not taken")
	return 0
}

// next is a recording of the same test that continues from its entry on, as if
// started afresh: its board has not booted, so its identity is said again.
func next(rec *recording.Recording, from int, seal string) *recording.Recording {
	h := rec.Header
	bench := *h.Bench
	bench.Earlier = "first.ramp"
	h.Bench, h.Continues = &bench, seal
	start := rec.Entries[from].At
	h.Started = h.Started.Add(start)
	var entries []recording.Entry
	for _, e := range rec.Entries[:from] {
		if e.Event == nil && (strings.HasPrefix(string(e.Wire), "here ") || strings.HasPrefix(string(e.Wire), "chan ")) {
			e.At = 0
			entries = append(entries, e)
		}
	}
	for _, e := range rec.Entries[from:] {
		e.At -= start
		entries = append(entries, e)
	}
	return &recording.Recording{Header: h, Entries: entries, Outcome: recording.Complete, Seal: "second"}
}

// A test that was cut in two at any point of a rise goes on in the second
// recording, and its points are those of the uncut test.
func TestACutTestGoesOnAtTheNextPoint(t *testing.T) {
	p := dialPlan(t, `directions = "up and down"`)
	s := run(t, p, onBench(p), nil)
	s.finished(t)
	for _, n := range []int{1, 4, 10, 13} {
		at := afterPoint(t, s, n)
		b, err := station.Read(cut(s.rec, at, "one"), next(s.rec, at, "one"))
		if err != nil {
			t.Fatal(err)
		}
		test := b.Test("second")
		if len(test.Points) != 19 || !b.Finished() {
			t.Errorf("cut after %d points: %d points at the end, finished %v", n, len(test.Points), b.Finished())
		}
		for i := range test.Points {
			if test.Points[i].Index != s.again(t).Test("").Points[i].Index {
				t.Errorf("cut after %d: point %d is of mark %d", n, i, test.Points[i].Index)
			}
		}
	}
}

// Where the reference stands lower on a rise than it did before the cut, it may
// have been anywhere: the series starts again.
func TestACutTestThatWentBackStartsItsSeriesAgain(t *testing.T) {
	p := dialPlan(t, `directions = "up and down"`)
	s := run(t, p, onBench(p), nil)
	s.finished(t)
	// The second recording begins where the first point was about to be taken, so
	// the reference stands at 100 psi where the first one left it at 500.
	early, late := afterPoint(t, s, 1), afterPoint(t, s, 5)
	b, err := station.Read(cut(s.rec, late, "one"), next(s.rec, early, "one"))
	if err != nil {
		t.Fatal(err)
	}
	if n := b.Status().Taken; n != 0 {
		t.Errorf("after going back on the rise: %d points stand", n)
	}
	// And down: standing higher than before is going back.
	early, late = afterPoint(t, s, 12), afterPoint(t, s, 16)
	if b, err = station.Read(cut(s.rec, late, "one"), next(s.rec, early, "one")); err != nil {
		t.Fatal(err)
	}
	if n := b.Status().Taken; n != 0 {
		t.Errorf("after going back up on the fall: %d points stand", n)
	}
}

// A test that stood for too long starts its series again, wherever the
// reference stands.
func TestACutTestThatStoodTooLongStartsItsSeriesAgain(t *testing.T) {
	p := dialPlan(t, `directions = "up"`)
	s := run(t, p, onBench(p), nil)
	at := afterPoint(t, s, 4)
	second := next(s.rec, at, "one")
	second.Header.Started = second.Header.Started.Add(11 * time.Minute)
	b, err := station.Read(cut(s.rec, at, "one"), second)
	if err != nil {
		t.Fatal(err)
	}
	if n := b.Status().Taken; n != 0 {
		t.Errorf("%d points stand", n)
	}
}

func TestOnlyTheRightRecordingContinues(t *testing.T) {
	p := dialPlan(t, `directions = "up"`)
	s := run(t, p, onBench(p), nil)
	at := afterPoint(t, s, 2)
	if _, err := station.Read(cut(s.rec, at, "one"), next(s.rec, at, "another")); !errors.Is(err, station.ErrNotNext) {
		t.Errorf("another seal: %v", err)
	}
	other := next(s.rec, at, "one")
	other.Header.Bench.Plan += "\n"
	if _, err := station.Read(cut(s.rec, at, "one"), other); !errors.Is(err, station.ErrNotNext) {
		t.Errorf("another plan: %v", err)
	}
	visit := *s.rec
	visit.Header.Bench = nil
	if _, err := station.Read(&visit); !errors.Is(err, station.ErrNotBench) {
		t.Errorf("a visit: %v", err)
	}
}
