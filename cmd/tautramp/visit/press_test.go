package visit

import (
	"math"
	"testing"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// step on a board's switch for so long, in the middle of a rise.
func stepOn(t *testing.T, cfg Config, seconds float64) (*watch, []recording.Event) {
	entries := lines(t, t1(1), from(35).rest(8).to(300, 8).rest(8))
	b := &board{t: t, seq: 9000}
	down, up := 25.0, 25.0+seconds
	var all []recording.Entry
	for _, e := range entries {
		for _, edge := range []struct {
			at   float64
			down bool
		}{{down, true}, {up, false}} {
			if s := e.At.Seconds(); s > edge.at && s-0.03 <= edge.at && (len(all) == 0 || all[len(all)-1].At.Seconds() <= edge.at) {
				b.seq++
				all = append(all, b.entry(edge.at, protocol.Button{ID: '1', Seq: b.seq, Tick: uint32(edge.at * 1e6), Down: edge.down}))
			}
		}
		all = append(all, e)
	}
	w, events := run(t, cfg, all)
	return w, events
}

func kindsOf(events []recording.Event, of ...recording.EventKind) map[recording.EventKind]int {
	n := map[recording.EventKind]int{}
	for _, e := range events {
		for _, k := range of {
			if e.Kind == k {
				n[k]++
			}
		}
	}
	return n
}

func TestHowLongASwitchIsHeldSaysWhatItMeans(t *testing.T) {
	stepped := config(t)
	stepped.Header.Presses = recording.Presses{As: recording.PressDial, Marks: []string{"300 psi"}}
	for name, c := range map[string]struct {
		cfg           Config
		seconds       float64
		undos, aborts int
	}{
		"short":                         {config(t), 0.3, 0, 0},
		"almost long":                   {config(t), 1.4, 0, 0},
		"long":                          {config(t), 1.6, 2, 0}, // its own mark, and the last one
		"held":                          {config(t), 6, 1, 1},   // its own mark
		"long, where presses say marks": {stepped, 1.6, 0, 0},   // a reader takes it back: recording SPEC 5.6
		"held, where presses say marks": {stepped, 6, 0, 1},
	} {
		t.Run(name, func(t *testing.T) {
			w, events := stepOn(t, c.cfg, c.seconds)
			n := kindsOf(events, recording.Undo, recording.Abort)
			if n[recording.Undo] != c.undos || n[recording.Abort] != c.aborts {
				t.Errorf("%v", events)
			}
			if stop := w.status().Alarm == Aborted; stop != (c.aborts > 0) {
				t.Errorf("alarm %q", w.status().Alarm)
			}
		})
	}
}

// A held switch means stop and release slowly: the alarm stays until the
// setting is down.
func TestAbortLastsUntilTheSettingIsDown(t *testing.T) {
	entries := lines(t, t1(1), from(35).rest(8).to(500, 10).to(100, 10).rest(3))
	cfg := config(t)
	w, err := newWatch(cfg)
	if err != nil {
		t.Fatal(err)
	}
	said := false
	for _, e := range entries {
		w.entry(e)
		if s := w.status(); !said && s.SettingSI > 480*psiPa {
			said = true
			w.entry(recording.Entry{Device: -1, At: e.At, HasAt: true, Event: &recording.Event{Kind: recording.Abort}})
		} else if said {
			over := s.SettingSI < 0.19*950*psiPa && w.now > 75*time.Second
			if s.Alarm != Aborted && !over && s.SettingSI > 0.21*950*psiPa {
				t.Fatalf("at %.0f psi: alarm %q", s.SettingSI/psiPa, s.Alarm)
			}
			if s.Alarm == Aborted && s.Next != "STOP - release the pressure slowly" {
				t.Fatalf("next %q", s.Next)
			}
		}
	}
	if s := w.status(); !said || s.Alarm != NoAlarm || w.end(t.Context(), nil).Alarm == "" {
		t.Errorf("at the end: alarm %q, said %v", s.Alarm, said)
	}
}

func TestDeclaredLowerTurnClosesTheCycle(t *testing.T) {
	// Down to 40 % and no further: a screw that never comes to rest.
	s := from(35).rest(10).to(415, 8).rest(5).to(35, 8).rest(8).to(860, 8).rest(5).to(360, 8).rest(10)
	entries := lines(t, t1(1), s)
	w, _ := run(t, config(t), entries)
	if w.tracker.closed != 1 {
		t.Fatalf("%d cycles closed by themselves", w.tracker.closed)
	}
	if r := press(w, recording.LowerTurn); r.Kind != TurnTaken || w.tracker.closed != 2 {
		t.Errorf("%q, %d cycles", r.Kind, w.tracker.closed)
	}
	if r := press(w, recording.LowerTurn); r.Kind != TurnRefused || w.tracker.closed != 2 {
		t.Errorf("again: %q, %d cycles", r.Kind, w.tracker.closed)
	}
	events := w.tracker.take()
	if n := kindsOf(events, recording.CycleEnd); n[recording.CycleEnd] > 1 {
		t.Errorf("events %v", events)
	}
	w, _ = run(t, config(t), lines(t, t1(1), from(35).rest(10).to(415, 8)))
	if r := press(w, recording.LowerTurn); r.Kind != TurnRefused {
		t.Errorf("at the top: %q", r.Kind)
	}
}

// Without exercise too, the first cycle goes to half of the target until its
// slope is known to fit; T-1's half is 378 psi without friction.
func TestFirstCycleStopsAtHalfUnlessItsSlopeFits(t *testing.T) {
	h := header(t)
	h.Plan.Exercise = 0
	p := play(t, h, t1(1), from(35).rest(10).to(200, 8), nil)
	near(t, "goal before the slope is known, psi", p.k.goalSI()/psiPa, 378, 1)
	p = play(t, h, t1(1), from(35).rest(10).to(360, 8), nil)
	near(t, "goal once it fits, psi", p.k.goalSI()/psiPa, 1.15*672.6, 2)
	steep := t1(1)
	steep.gain = 1.3
	p = play(t, h, steep, from(35).rest(10).to(400, 8).rest(1), nil)
	if p.k.check.advice == "" || p.k.next() != p.k.check.advice {
		t.Errorf("a slope 1.3 times the geometry's: %q", p.k.next())
	}
	h.Parsed.Tensioners[0].Cylinders = 0 // no geometry: nothing can fit
	p = play(t, h, t1(1), from(35).rest(10).to(500, 8).rest(1), nil)
	if p.k.next() != nextHold || !p.k.halfOnly() {
		t.Errorf("without geometry: %q", p.k.next())
	}
}

func TestPaceIsJudgedByWhatADelayDoes(t *testing.T) {
	site, err := newSite(header(t))
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct{ periodS, fastPsiS float64 }{
		{0.1, 0.005 * 672.6 / 0.3}, // 0.5 % of the setting for the target in 0.2 s and one period
		{0.33, 0.005 * 672.6 / 0.53},
		{3, 2 * 0.0015 * 950}, // never so slow that there is no good pace
	} {
		k := newTracker(site, recording.Plan{}, 0)
		k.periodS = c.periodS
		slow, fast := k.paceBounds()
		near(t, "slowest, psi/s", slow/psiPa, 0.0015*950, 1e-6)
		near(t, "fastest, psi/s", fast/psiPa, c.fastPsiS, 0.01)
	}
	site.full = math.NaN()
	_, fast := newTracker(site, recording.Plan{}, 0).paceBounds()
	near(t, "fastest without a target, psi/s", fast/psiPa, 0.012*950, 1e-6)
	for want, rate := range map[Pace]float64{TooSlow: 1.3, GoodPace: 6, TooFast: 20} {
		p := play(t, header(t), t1(1), from(35).rest(10).to(35+rate*25, rate), nil)
		if got, si := p.k.paceNow(); got != want || math.Abs(si/psiPa-rate) > 0.6 {
			t.Errorf("%.1f psi/s is %q (%.2f), want %q", rate, got, si/psiPa, want)
		}
	}
}
