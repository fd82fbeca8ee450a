package visit

import (
	"math"
	"slices"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// board writes the wire lines of one device that carries both sensors.
type board struct {
	t   testing.TB
	seq uint16
}

func (b *board) entry(now float64, r protocol.Record) recording.Entry {
	b.t.Helper()
	line, err := protocol.Append(nil, r)
	if err != nil {
		b.t.Fatal(err)
	}
	return recording.Entry{At: time.Duration(now * 1e9), HasAt: true, Wire: line[:len(line)-1]}
}

func (b *board) hello(now float64) []recording.Entry {
	return []recording.Entry{
		{At: time.Duration(now * 1e9), HasAt: true, Event: &recording.Event{Kind: recording.Opened}},
		b.entry(now, protocol.Here{Version: 1, Model: "m", Serial: "s", TickHz: 1e6, Channels: 2, Up: uint32(now * 1e6), Cause: protocol.CausePower}),
		b.entry(now, protocol.Chan{ID: 'a', Quantity: protocol.Pressure, Unit: "[psi]", Mantissa: 1, Exponent: -1, Low: -200, High: 15000, Res: 1, Period: 20000, Shows: protocol.ShowsRounded}),
		b.entry(now, protocol.Chan{ID: 'b', Quantity: protocol.Extension, Unit: "[in_i]", Mantissa: 5, Exponent: -5, Low: -1000, High: 19000, Res: 1, Period: 100000, Shows: protocol.ShowsRounded}),
	}
}

func (b *board) val(now float64, channel byte, count float64) recording.Entry {
	b.seq++
	return b.entry(now, protocol.Val{Channel: channel, Seq: b.seq - 1, Tick: uint32(now * 1e6), Status: protocol.Good, Count: int32(math.Round(count)), HasCount: true})
}

// lines is a script as a board sends it.
func lines(t testing.TB, r *pretend, s *script) []recording.Entry {
	b := &board{t: t}
	out := b.hello(0)
	end, _ := s.now()
	for i := 0; float64(i)*0.02 <= end; i++ {
		now := 1 + float64(i)*0.02
		psi := s.at(now - 1)
		out = append(out, b.val(now, 'a', psi*10+r.rng.NormFloat64()))
		if e := r.extension(psi * psiPa); i%5 == 0 {
			out = append(out, b.val(now, 'b', e/inM*20000))
		}
	}
	return out
}

// run gives the entries to a watch as a capture does: what it wants recorded
// comes back to it.
func run(t testing.TB, cfg Config, entries []recording.Entry) (*watch, []recording.Event) {
	t.Helper()
	w, err := newWatch(cfg)
	if err != nil {
		t.Fatal(err)
	}
	stopped := false
	w.stop = func() { stopped = true }
	var all []recording.Event
	for _, e := range entries {
		for more := w.entry(e); len(more) > 0; {
			ev := more[0]
			all = append(all, ev)
			more = append(more[1:], w.entry(recording.Entry{Device: -1, At: e.At, HasAt: true, Event: &ev})...)
		}
		if stopped {
			break
		}
	}
	return w, all
}

func config(t testing.TB) Config {
	h := header(t)
	return Config{Header: h, Plan: h.Plan}
}

func TestWholeVisitOverTheWire(t *testing.T) {
	cfg := config(t)
	cfg.Plan = recording.Plan{Exercise: 1, Ramps: 1}
	cfg.Cautions = []string{"first caution", "second caution"}
	var drawn []Status
	cfg.OnStatus = func(s Status) { drawn = append(drawn, s) }
	w, events := run(t, cfg, lines(t, t1(1), cycles(2, 12)))
	var kinds, prompts []string
	for _, e := range events {
		if e.Kind == recording.Prompted {
			prompts = append(prompts, e.Text)
		} else {
			kinds = append(kinds, string(e.Kind)+e.Text)
		}
	}
	if want := []string{"cycle1", "cycle2", "complete"}; !slices.Equal(kinds, want) {
		t.Errorf("events %q, want %q", kinds, want)
	}
	want := []string{"first caution", "second caution", "wait for the boards", "let the band go slack and keep still",
		"pump up slowly, to about half of the target only, near 378 psi, and hold", "pump up slowly", "hold",
		"open the valve slowly, all the way until the band is slack, then rest", "rest, then start the next ramp",
		"pump up slowly", "hold", "open the valve slowly, all the way until the band is slack, then rest",
		"all planned cycles are closed"}
	if !slices.Equal(prompts, want) {
		t.Errorf("prompts\n%s\nwant\n%s", strings.Join(prompts, "\n"), strings.Join(want, "\n"))
	}
	sum := w.end(t.Context(), nil)
	if sum.Cycles != 2 || !sum.Closed || sum.Alarm != "" || sum.Reason != nextDone || sum.Counters[0].Lost != 0 {
		t.Errorf("summary %+v", sum)
	}
	last := drawn[len(drawn)-1]
	if !last.Done || last.Cycle != 2 || last.Planned != 2 {
		t.Errorf("last status %+v", last)
	}
	seconds := w.now.Seconds()
	if n := float64(len(drawn)); n > 11*seconds || n < 5*seconds {
		t.Errorf("%g statuses in %.0f s", n, seconds)
	}
}

func TestStatusIsDrawnLessOftenOnAFastClock(t *testing.T) {
	cfg := config(t)
	cfg.Acquire.Clock = fastClock{}
	n := 0
	cfg.OnStatus = func(Status) { n++ }
	run(t, cfg, lines(t, t1(1), from(35).rest(60)))
	if n > 6+61/4 { // one each 100 ms of the wall are 4 s of a clock that runs 40 times as fast
		t.Errorf("%d statuses in 61 s", n)
	}
}

func TestLimitAlarmComesWithItsVeryEntry(t *testing.T) {
	cfg := config(t)
	var shown []AlarmKind
	cfg.OnStatus = func(s Status) { shown = append(shown, s.Alarm) }
	entries := lines(t, t1(1), from(35).rest(3))
	b := &board{t: t, seq: 1000}
	at := entries[len(entries)-1].At.Seconds() + 0.02
	entries = append(entries, b.val(at, 'a', 9499), b.val(at+0.02, 'a', 9500))
	w, events := run(t, cfg, entries[:len(entries)-1])
	if len(events) > 3 || shown[len(shown)-1] != NoAlarm {
		t.Fatalf("events %v", events)
	}
	events = w.entry(entries[len(entries)-1])
	if len(events) == 0 || events[0].Kind != recording.Alarm || !strings.HasPrefix(events[0].Text, "limit: the gauge stands at 950 psi") {
		t.Errorf("events %v", events)
	}
	if shown[len(shown)-1] != OverLimit {
		t.Error("the alarm is not shown at once")
	}
	if w.drawn.Next != "STOP - release the pressure slowly" || w.drawn.SettingSI != 950*psiPa {
		t.Errorf("status %+v", w.drawn)
	}
}

func TestFrozenExtensionIsRecordedAsAnAlarm(t *testing.T) {
	r := t1(1)
	r.frozenAbovePa = 500 * psiPa
	w, events := run(t, config(t), lines(t, r, cycles(0, 8).to(800, 8)))
	var alarms []string
	for _, e := range events {
		if e.Kind == recording.Alarm {
			alarms = append(alarms, e.Text)
		}
	}
	if len(alarms) != 1 || !strings.HasPrefix(alarms[0], "under-reading: the gauge rises and the stretch does not follow") {
		t.Errorf("alarms %q", alarms)
	}
	if w.drawn.Alarm != UnderReading || !strings.HasPrefix(w.drawn.Next, "STOP") {
		t.Errorf("status %+v", w.drawn)
	}
	if s := w.end(t.Context(), nil); !strings.Contains(s.Alarm, "does not follow") {
		t.Errorf("summary %+v", s)
	}
}

func TestLinkHealthAndLosses(t *testing.T) {
	w, _ := run(t, config(t), lines(t, t1(1), from(35).rest(3)))
	host := func(kind recording.EventKind) {
		w.entry(recording.Entry{Device: 0, At: w.now + time.Millisecond, HasAt: true, Event: &recording.Event{Kind: kind}})
	}
	for kind, want := range map[recording.EventKind]string{recording.LostPort: "lost, waiting for it", recording.Silent: "silent", recording.Restarted: "started again"} {
		host(kind)
		if got := w.status().Link[0]; got != want {
			t.Errorf("after %s the link is %q, want %q", kind, got, want)
		}
	}
	b := &board{t: t, seq: 5000}
	bad := b.val(w.now.Seconds()+0.1, 'a', 1)
	bad.Wire[0] ^= 1
	w.entry(bad)
	w.entry(b.val(w.now.Seconds()+0.2, 'a', 350))
	b.seq += 3
	w.entry(b.val(w.now.Seconds()+0.2, 'a', 350))
	s := w.status()
	if s.Link[0] != "" || s.Rejected != 1 || s.Lost != 3 {
		t.Errorf("link %q, refused %d, lost %d", s.Link[0], s.Rejected, s.Lost)
	}
}

func TestNoReadingIsSaidBeforePumping(t *testing.T) {
	entries := lines(t, t1(1), from(35).rest(4))
	w, _ := run(t, config(t), entries)
	b := &board{t: t, seq: 5000}
	for i := range 30 {
		w.entry(b.val(w.now.Seconds()+0.1, 'a', 350+float64(i%2)))
	}
	if w.drawn.Next != "wait: there is no reading of the stretch" || w.drawn.Alarm != NoAlarm {
		t.Errorf("next %q, alarm %q", w.drawn.Next, w.drawn.Alarm)
	}
}

func TestOperatorsZeroMarkIsUsed(t *testing.T) {
	w, _ := run(t, config(t), lines(t, t1(1), from(200).rest(5)))
	if !math.IsNaN(w.drawn.StressPa) {
		t.Fatalf("stress %g", w.drawn.StressPa)
	}
	w.entry(recording.Entry{Device: -1, At: w.now, HasAt: true, Event: &recording.Event{Kind: recording.ZeroMark}})
	near(t, "stress after the mark", w.status().StressPa, 0, 1)
}

func TestVisitNeedsAProfile(t *testing.T) {
	cfg := config(t)
	cfg.Header.Parsed = nil
	if _, err := Run(t.Context(), cfg); err == nil {
		t.Error("no error")
	}
	cfg = config(t)
	cfg.Header.Tensioner = "T-9"
	if _, err := Run(t.Context(), cfg); err == nil {
		t.Error("no error")
	}
}

func BenchmarkWatch(b *testing.B) {
	entries := lines(b, t1(1), cycles(3, 8))
	for b.Loop() {
		w, err := newWatch(config(b))
		if err != nil {
			b.Fatal(err)
		}
		for _, e := range entries {
			w.entry(e)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*len(entries)), "ns/line")
}
