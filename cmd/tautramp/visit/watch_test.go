package visit

import (
	"errors"
	"math"
	"slices"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
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
		"pump up slowly, to about half of the target only, and hold", "hold",
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

// press gives a key to a watch and returns the answer.
func press(w *watch, kind recording.EventKind) Reply {
	w.entry(recording.Entry{Device: -1, At: w.now, HasAt: true, Event: &recording.Event{Kind: kind}})
	return w.drawn.Reply
}

// At 70 psi T-1's wheel is not lifted yet (83.5 psi without friction), and no
// zero is taken by itself.
func TestOperatorsZeroMarkIsUsedAndUndone(t *testing.T) {
	w, _ := run(t, config(t), lines(t, t1(1), from(70).rest(5)))
	if !math.IsNaN(w.drawn.StressPa) {
		t.Fatalf("stress %g", w.drawn.StressPa)
	}
	r := press(w, recording.ZeroMark)
	if r.Kind != ZeroTaken || r.At != w.now {
		t.Errorf("reply %+v", r)
	}
	near(t, "setting in the reply, psi", r.SettingSI/psiPa, 70, 1)
	near(t, "stress after the mark", w.status().StressPa, 0, 1)
	if r := press(w, recording.Undo); r.Kind != Undone || !math.IsNaN(w.drawn.StressPa) {
		t.Errorf("reply %+v, stress %g after the undo", r, w.drawn.StressPa)
	}
	if r := press(w, recording.Undo); r.Kind != NothingToDo {
		t.Errorf("reply %+v", r)
	}
}

// A zero taken on a loaded band would make the stress read low.
func TestZeroMarkOnALoadedBandIsRefused(t *testing.T) {
	for name, c := range map[string]*script{
		"held under load":          from(35).rest(10).to(500, 8).rest(8),
		"on the way up, low":       from(35).rest(10).to(75, 8),
		"before anything is known": from(20).rest(0.5),
	} {
		w, _ := run(t, config(t), lines(t, t1(1), c))
		before := w.status().StressPa
		if r := press(w, recording.ZeroMark); r.Kind != ZeroRefused {
			t.Errorf("%s: reply %+v", name, r)
		}
		if after := w.status().StressPa; math.Float64bits(after) != math.Float64bits(before) {
			t.Errorf("%s: stress %g, was %g", name, after, before)
		}
		// The recording keeps it, so undo takes back this one and no other.
		if r := press(w, recording.Undo); r.Kind != Undone {
			t.Errorf("%s: reply %+v", name, r)
		}
	}
}

func TestUndoKeepsAZeroReadSinceFromTheSlackBand(t *testing.T) {
	r := t1(1)
	entries := lines(t, r, from(70).rest(5).to(20, 10).rest(6))
	w, _ := run(t, config(t), entries[:len(entries)*5/16])
	if got := press(w, recording.ZeroMark); got.Kind != ZeroTaken {
		t.Fatalf("reply %+v", got)
	}
	for _, e := range entries[len(entries)*5/16:] {
		w.entry(e)
	}
	before := w.status().StressPa
	press(w, recording.Undo)
	if after := w.status().StressPa; math.IsNaN(before) || after != before {
		t.Errorf("stress %g, was %g", after, before)
	}
}

func TestMarksAreCountedAndUndoneInTurn(t *testing.T) {
	w, _ := run(t, config(t), lines(t, t1(1), from(35).rest(5)))
	press(w, recording.Mark)
	if r := press(w, recording.Mark); r.Kind != MarkTaken || r.Number != 2 {
		t.Errorf("reply %+v", r)
	}
	press(w, recording.Undo)
	b := &board{t: t, seq: 6000}
	w.entry(b.entry(w.now.Seconds()+0.2, protocol.Button{ID: '1', Seq: 7000, Tick: uint32(w.now.Microseconds() + 200000), Down: true}))
	if r := w.status().Reply; r.Kind != MarkTaken || r.Number != 2 {
		t.Errorf("reply to the board's button %+v", r)
	}
}

func TestNothingOldIsShownAsIfReadNow(t *testing.T) {
	unknown := func(w *watch) bool {
		s := w.status()
		return math.IsNaN(s.SettingSI) && math.IsNaN(s.StretchM) && math.IsNaN(s.StressPa) && math.IsNaN(s.RateSI)
	}
	start := func() (*watch, func(float64, recording.EventKind)) {
		w, _ := run(t, config(t), lines(t, t1(1), from(35).rest(10).to(300, 8)))
		if unknown(w) {
			t.Fatal("nothing is known of a running board")
		}
		return w, func(later float64, kind recording.EventKind) {
			w.entry(recording.Entry{Device: 0, At: w.now + time.Duration(later*1e9), HasAt: true, Event: &recording.Event{Kind: kind}})
		}
	}
	for _, kind := range []recording.EventKind{recording.LostPort, recording.Silent, recording.Restarted} {
		w, host := start()
		host(0.01, kind)
		if s := w.status(); !unknown(w) || s.Link[0] == "" || s.Next != nextAway || !math.IsNaN(s.GoalSI) {
			t.Errorf("after %s: %+v", kind, s)
		}
	}
	w, host := start()
	if host(1.9, recording.WallTime); unknown(w) {
		t.Error("readings of 1.9 s ago are refused")
	}
	if host(0.2, recording.WallTime); !unknown(w) || w.status().Link[0] != linkQuiet {
		t.Errorf("readings of 2.1 s ago: %+v", w.status())
	}
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

// The length of a spring under load gets shorter or longer: a limit on it might
// be on the wrong side.
func TestSpringLengthIsRefused(t *testing.T) {
	cfg := config(t)
	cfg.Header.Parsed.Tensioners[0].SetBy = mill.SetBySpring
	var bad *mill.ProfileError
	if _, err := Run(t.Context(), cfg); !errors.As(err, &bad) || bad.Key != "tensioner.set_by" || !strings.Contains(bad.Problem, "nothing says whether that falls") {
		t.Errorf("%v", err)
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
