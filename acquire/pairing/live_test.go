package pairing

import (
	"math"
	"math/rand/v2"
	"reflect"
	"testing"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

func live(t testing.TB, h recording.Header, entries []recording.Entry) (*Live, []Pair) {
	t.Helper()
	l, err := NewLive(h)
	if err != nil {
		t.Fatal(err)
	}
	var all []Pair
	for _, e := range entries {
		all = append(all, l.Add(e)...)
	}
	return l, all
}

func TestLiveAgreesWithTheRecordingOnOneBoard(t *testing.T) {
	b := oneBoard(t, 60)
	l, got := live(t, header(t, 1), b.lines)
	want := build(t, header(t, 1), b.lines)
	if len(got) != len(want.Pairs) {
		t.Fatalf("%d pairs live, %d from the recording", len(got), len(want.Pairs))
	}
	for i, p := range got {
		near(t, "setting", p.Setting, want.Pairs[i].Setting, 1e-9*psiPa)
		near(t, "extension", p.Extension, want.Pairs[i].Extension, 0)
	}
	if !reflect.DeepEqual(l.Counters(), want.Counters) {
		t.Errorf("counters %+v, want %+v", l.Counters(), want.Counters)
	}
	setting, extension := l.Latest()
	near(t, "newest setting", setting.Value, 599.9*psiPa, 1e-6)
	near(t, "newest extension", extension.Value, 5994*5e-5*inM, 1e-12)
}

func TestLiveAgreesWithTheRecordingOnTwoBoards(t *testing.T) {
	entries, _, _ := twoBoards(t, 7, 120, 0.011, 0.097)
	_, got := live(t, header(t, 2), entries)
	want := build(t, header(t, 2), entries).Pairs
	if len(got) < len(want)-3 {
		t.Fatalf("%d pairs live, %d from the recording", len(got), len(want))
	}
	// Both are the same readings from the same end; their doubts are not
	// independent, so that the sum of three of each is generous but scale-free.
	for i := range got {
		g, w := got[len(got)-1-i], want[len(want)-1-i]
		if g.Extension != w.Extension {
			t.Fatalf("pair %d from the end is another reading", i)
		}
		near(t, "setting in psi", g.Setting/psiPa, w.Setting/psiPa, 3*(g.SettingStd+w.SettingStd)/psiPa)
	}
}

func TestLivePairsComeInOrderAndAtOnce(t *testing.T) {
	entries, _, _ := twoBoards(t, 8, 60, 0.011, 0.097)
	l, err := NewLive(header(t, 2))
	if err != nil {
		t.Fatal(err)
	}
	last := math.Inf(-1)
	for _, e := range entries {
		for _, p := range l.Add(e) {
			if p.T <= last {
				t.Fatalf("a pair at %g after one at %g", p.T, last)
			}
			last = p.T
			if age := e.At.Seconds() - p.T; age > 0.1 {
				t.Fatalf("the pair of %g s came %g s late", p.T, age)
			}
		}
	}
}

func TestLiveWaitsForTheIdentity(t *testing.T) {
	b := oneBoard(t, 5)
	_, all := live(t, header(t, 1), b.lines[3:])
	if len(all) != 0 {
		t.Errorf("%d pairs of a board that never said who it is", len(all))
	}
}

func TestLiveGoesOnAfterARestart(t *testing.T) {
	first, second := oneBoard(t, 5), oneBoard(t, 5)
	second.lines[0].Wire = wire(t, protocol.Here{Version: 1, Model: "two-port", Serial: "0000", TickHz: 1e6, Channels: 2, Up: 1000, Cause: protocol.CausePower, Boot: 2, HasBoot: true})
	for i := range second.lines {
		second.lines[i].At += 8 * time.Second
	}
	l, all := live(t, header(t, 1), append(first.lines, second.lines...))
	if len(all) != 100 || all[99].Part == all[0].Part || l.Counters()[0].Restarts != 1 {
		t.Errorf("%d pairs, counters %+v", len(all), l.Counters())
	}
	near(t, "last instant", all[99].T, 12.9431, 1e-3)
}

func TestLiveMemoryIsBounded(t *testing.T) {
	b := &board{t: t, hz: 1e6, delayS: noDelay}
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 10000), extensionChan('b', 10000))
	l, _ := live(t, header(t, 1), b.lines)
	v := protocol.Val{Channel: 'b', Status: protocol.Good, Count: 5, HasCount: true}
	for i := range 20_000 { // no setting ever comes, then only settings
		if i == 10_000 {
			v.Channel = 'a'
		}
		v.Seq, v.Tick = uint16(i), uint32(i)*1000
		l.Add(recording.Entry{At: time.Duration(i) * time.Millisecond, HasAt: true, Wire: wire(t, v)})
	}
	if len(l.settings) > 2*settingsMax || len(l.waiting) > 2*waitingMax {
		t.Errorf("%d settings and %d extensions kept", len(l.settings), len(l.waiting))
	}
	if e := l.in.devices[0].seg.env; len(e.whole.hull) > hullMax || len(e.blocks) > blocksMax {
		t.Errorf("%d points and %d stretches kept", len(e.whole.hull), len(e.blocks))
	}
}

// noise is lines that obey the grammar and nothing else.
func noise(t testing.TB, seed uint64, n int) []recording.Entry {
	rng := rand.New(rand.NewPCG(seed, 2))
	statuses := []protocol.Status{protocol.Good, protocol.Low, protocol.High, protocol.Absent, protocol.Fault}
	records := []func() protocol.Record{
		func() protocol.Record {
			s := statuses[rng.IntN(len(statuses))]
			v := protocol.Val{Channel: 'a' + byte(rng.IntN(4)), Seq: uint16(rng.Uint32()), Tick: rng.Uint32(), Status: s}
			if s != protocol.Absent && s != protocol.Fault {
				v.Count, v.HasCount = rng.Int32N(9999), true
			}
			return v
		},
		func() protocol.Record {
			return protocol.Here{Version: 1 + rng.IntN(2), Model: "m", Serial: "s", TickHz: 1 + rng.Uint32N(1e6), Up: rng.Uint32(), Cause: protocol.CauseReset}
		},
		func() protocol.Record { return pressureChan('a'+byte(rng.IntN(3)), 1+rng.Uint32N(1e6)) },
		func() protocol.Record { return extensionChan('b'+byte(rng.IntN(3)), 1+rng.Uint32N(1e6)) },
		func() protocol.Record { return protocol.Beat{Seq: uint16(rng.Uint32()), Tick: rng.Uint32()} },
		func() protocol.Record {
			return protocol.Button{ID: '1', Seq: uint16(rng.Uint32()), Tick: rng.Uint32(), Down: true}
		},
	}
	events := []recording.EventKind{recording.Restarted, recording.Paused, recording.Undo, recording.Mark, recording.WallTime}
	var out []recording.Entry
	at := time.Duration(0)
	for range n {
		at += time.Duration(rng.ExpFloat64() * 1e9)
		e := recording.Entry{Device: rng.IntN(4) - 1, At: at, HasAt: rng.IntN(4) > 0}
		switch rng.IntN(8) {
		case 0:
			e.Event = &recording.Event{Kind: events[rng.IntN(len(events))], Text: "3.5"}
		case 1:
			e.Wire = []byte("val a;0000")
		default:
			e.Wire = wire(t, records[rng.IntN(len(records))]())
		}
		out = append(out, e)
	}
	return out
}

func TestNoiseDoesNoHarm(t *testing.T) {
	for seed := range trials() * 2 {
		entries := noise(t, seed, 400)
		h := header(t, 2)
		live(t, h, entries)
		set, err := FromRecording(&recording.Recording{Header: h, Entries: entries})
		if err != nil {
			continue
		}
		last := math.Inf(-1)
		for _, r := range set.Extension.Readings {
			if r.T <= last {
				t.Fatalf("seed %d: a reading at %g after one at %g", seed, r.T, last)
			}
			last = r.T
		}
	}
}

func BenchmarkFromRecording(b *testing.B) {
	board := oneBoard(b, 545.4) // 60,000 lines: ten minutes at 100 a second
	rec := &recording.Recording{Header: header(b, 1), Entries: board.lines}
	b.ReportAllocs()
	for b.Loop() {
		if _, err := FromRecording(rec); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(len(board.lines)), "lines")
}

func BenchmarkLive(b *testing.B) {
	board := oneBoard(b, 545.4)
	h := header(b, 1)
	b.ReportAllocs()
	for b.Loop() {
		live(b, h, board.lines)
	}
}
