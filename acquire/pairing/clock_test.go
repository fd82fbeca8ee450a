package pairing

import (
	"math"
	"math/rand/v2"
	"testing"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// twoBoards is a ramp of 8 psi/s read by a pressure board and an indicator
// board on USB whose clocks differ by 300 ppm. The periods are theirs by their
// own clocks, in s.
func twoBoards(t testing.TB, seed uint64, seconds, pressureS, extensionS float64) ([]recording.Entry, *board, *board) {
	rng := rand.New(rand.NewPCG(seed, 1))
	p := &board{t: t, index: 0, hz: 1e6, ppm: 100, start: 4_000_000_000, delayS: usbDelay(rng)}
	e := &board{t: t, index: 1, hz: 1e6, ppm: -200, start: 17, delayS: usbDelay(rng)}
	p.hello(0, protocol.CauseAsked, 7, pressureChan('a', uint32(pressureS*1e6)))
	e.hello(0, protocol.CauseAsked, 9, extensionChan('a', uint32(extensionS*1e6)))
	for t := 0.1; t < seconds; t += pressureS / (1 + p.ppm/1e6) {
		p.val(t, 'a', int32(math.Round(80*t)))
	}
	for t := 0.103; t < seconds; t += extensionS / (1 + e.ppm/1e6) {
		e.val(t, 'a', int32(math.Round(10*t)))
	}
	return together(p.lines, e.lines), p, e
}

func trials() uint64 {
	if testing.Short() {
		return 2
	}
	return 20
}

func TestTwoClocksAreMappedWithinMillisecondsAfterAMinute(t *testing.T) {
	// The density of the smallest delays grows from zero, so that of n lines the
	// most prompt one is late by about sqrt(160/n) ms: less to go by at 10 lines
	// a second than at 91.
	within := []float64{1e-3, 2e-3}
	for seed := range trials() {
		entries, p, e := twoBoards(t, seed, 60, 0.011, 0.097)
		set := build(t, header(t, 2), entries)
		// No delay is common to all lines here, so that mapped instants must agree
		// with true time. The periods are no simple fractions of the bridge's.
		for i, b := range []*board{p, e} {
			fit := set.Clocks[i]
			if fit.Method != MethodEnvelope {
				t.Fatalf("seed %d: device %d mapped by %q", seed, i, fit.Method)
			}
			for _, at := range []float64{0.1, 30, 60} {
				ticks := float64(b.start) + b.hz*(1+b.ppm/1e6)*at
				if err := math.Abs(fit.Offset + fit.Rate*ticks - at); err > within[i] {
					t.Errorf("seed %d: device %d at %g s is %.2f ms off, said %.2f ms", seed, i, at, err*1e3, fit.OffsetStd*1e3)
				}
			}
			near(t, "rate in ppm", fit.RatePPM, b.ppm, math.Max(4*fit.RateStdPPM, 5))
			if fit.OffsetStd > 5e-3 || fit.OffsetStd < 5e-4 {
				t.Errorf("seed %d: stated uncertainty %g s", seed, fit.OffsetStd)
			}
		}
		if len(set.Pairs) < 610 {
			t.Fatalf("seed %d: %d pairs", seed, len(set.Pairs))
		}
		for _, pair := range set.Pairs {
			near(t, "setting at the extension's instant, psi", pair.Setting/psiPa, 8*pair.T, 0.06+4*pair.SettingStd/psiPa)
		}
	}
}

func TestStatedTimeUncertaintyCoversTheError(t *testing.T) {
	// Here the samples keep step with the bridge: of its 16 ms only four
	// different delays are ever seen, and the smallest may hide up to 4 ms. With a
	// normal error 95 % lie within two standard uncertainties; 90 % allows for 40
	// trials (the short run has 4).
	inside, all := 0, 0
	for seed := range trials() {
		entries, p, e := twoBoards(t, 100+seed, 45, 0.02, 0.1)
		set := build(t, header(t, 2), entries)
		for i, b := range []*board{p, e} {
			ticks := float64(b.start) + b.hz*(1+b.ppm/1e6)*40
			all++
			if math.Abs(set.Clocks[i].Offset+set.Clocks[i].Rate*ticks-40) <= 2*set.Clocks[i].OffsetStd {
				inside++
			}
		}
	}
	if inside*10 < all*9-9 {
		t.Errorf("%d of %d within two standard uncertainties", inside, all)
	}
}

func TestShortSegmentKeepsTheNominalRate(t *testing.T) {
	entries, _, e := twoBoards(t, 3, 8, 0.011, 0.097)
	set := build(t, header(t, 2), entries)
	fit := set.Clocks[1]
	if fit.Method != MethodNominal || fit.Rate != 1e-6 || fit.RatePPM != 0 {
		t.Errorf("mapped by %q at %g s per tick", fit.Method, fit.Rate)
	}
	ticks := float64(e.start) + e.hz*(1+e.ppm/1e6)*4
	near(t, "mapped instant", fit.Offset+fit.Rate*ticks, 4, 2*fit.OffsetStd)
}

func TestTicksWrap(t *testing.T) {
	b := &board{t: t, hz: 1e6, start: math.MaxUint32 - 5_000_000, delayS: noDelay}
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 100000), extensionChan('b', 100000))
	for i := range 100 {
		at := float64(i) / 10
		b.val(at, 'a', int32(i))
		b.val(at, 'b', int32(i))
	}
	set := build(t, header(t, 1), b.lines)
	if len(set.Clocks) != 1 || len(set.Pairs) != 100 {
		t.Fatalf("%d segments, %d pairs", len(set.Clocks), len(set.Pairs))
	}
	if span := set.Clocks[0].LastTick - set.Clocks[0].FirstTick; span != 9_900_000 {
		t.Errorf("unwrapped over %d ticks", span)
	}
	near(t, "last instant", set.Pairs[99].T, 9.9, 1e-6)
}

func TestSilenceOfMoreThanAWrapIsMeasuredByReceiveTimes(t *testing.T) {
	b := &board{t: t, hz: 1e6, start: 5, delayS: noDelay}
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 100000), extensionChan('b', 100000))
	for _, at := range []float64{1, 2, 3, 6000, 6001, 20000} { // a wrap is 4295 s
		b.val(at, 'a', 100)
		b.val(at, 'b', 100)
	}
	set := build(t, header(t, 1), b.lines)
	if len(set.Clocks) != 1 {
		t.Fatalf("%d segments", len(set.Clocks))
	}
	near(t, "last tick", float64(set.Clocks[0].LastTick), 20000e6+5, 1)
	near(t, "last instant", set.Pairs[len(set.Pairs)-1].T, 20000, 1e-3)
}

func TestWhatEndsASegment(t *testing.T) {
	type script struct {
		name            string
		middle          func(b *board, sleepS *float64) // between 10 s and 20 s of true time
		parts, restarts int
		pairs           int
	}
	scripts := []script{
		{"nothing", func(*board, *float64) {}, 1, 0, 200},
		{"an identity that was asked for", func(b *board, _ *float64) {
			b.hello(10, protocol.CauseAsked, 1, pressureChan('a', 100000), extensionChan('b', 100000))
		}, 1, 0, 200},
		{"another boot id", func(b *board, _ *float64) {
			b.start, b.seq = b.start-b.tick(10), 0
			b.hello(10, protocol.CauseAsked, 2, pressureChan('a', 100000), extensionChan('b', 100000))
		}, 2, 1, 200},
		{"an identity that nobody asked for, told by the host too", func(b *board, _ *float64) {
			b.start, b.seq = b.start-b.tick(10), 0
			b.hello(10, protocol.CauseWatchdog, 2, pressureChan('a', 100000), extensionChan('b', 100000))
			b.lines = append(b.lines, event(0, 10*time.Second, recording.Restarted, ""))
		}, 2, 1, 200},
		{"ticks that went back without a word", func(b *board, _ *float64) {
			b.start, b.seq = b.start-b.tick(10), 0
		}, 2, 1, 200},
		{"a pause that the host noticed", func(b *board, sleepS *float64) {
			*sleepS = 3600
			b.lines = append(b.lines, event(-1, 10*time.Second, recording.Paused, "3600"))
		}, 2, 0, 200},
		{"a pause that shows in the ticks alone", func(b *board, sleepS *float64) { *sleepS = 3600 }, 2, 0, 200},
		{"a short pause", func(b *board, _ *float64) {
			b.lines = append(b.lines, event(-1, 10*time.Second, recording.Paused, "1.5"))
		}, 1, 0, 200},
	}
	for _, s := range scripts {
		t.Run(s.name, func(t *testing.T) {
			sleepS := 0.0
			b := &board{t: t, hz: 1e6, start: 50_000_000}
			b.delayS = func(float64) float64 { return -sleepS } // the host's clock stands still
			b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 100000), extensionChan('b', 100000))
			for i := range 200 {
				if i == 100 {
					s.middle(b, &sleepS)
				}
				at := float64(i)/10 + sleepS
				b.val(at, 'a', int32(i))
				b.val(at, 'b', int32(i))
			}
			set := build(t, header(t, 1), b.lines)
			c := set.Counters[0]
			if len(set.Clocks) != s.parts || c.Restarts != s.restarts || len(set.Pairs) != s.pairs {
				t.Fatalf("%d segments, %d restarts, %d pairs; want %d, %d, %d", len(set.Clocks), c.Restarts, len(set.Pairs), s.parts, s.restarts, s.pairs)
			}
			if c.Lost != 0 || c.Backward != 0 {
				t.Errorf("lost %d, backward %d", c.Lost, c.Backward)
			}
			if last := set.Pairs[len(set.Pairs)-1]; last.Part != s.parts-1 {
				t.Errorf("last pair in part %d", last.Part)
			}
			for i, p := range set.Pairs {
				near(t, "host time of a pair", p.T, float64(i)/10, 2e-3)
			}
		})
	}
}

func TestStalledHostDoesNotEndASegment(t *testing.T) {
	// For 8 s nothing is read; then all that waited comes at once.
	b := &board{t: t, hz: 1e6, start: 5, delayS: func(at float64) float64 {
		if at > 10 && at < 18 {
			return 18 - at
		}
		return 0
	}}
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 100000), extensionChan('b', 100000))
	for i := range 400 {
		if i > 120 && i < 170 {
			continue // the buffer was full
		}
		b.val(float64(i)/10, 'a', int32(i))
		b.val(float64(i)/10, 'b', int32(i))
	}
	set := build(t, header(t, 1), b.lines)
	if len(set.Clocks) != 1 {
		t.Fatalf("%d segments", len(set.Clocks))
	}
	near(t, "rate in ppm", set.Clocks[0].RatePPM, 0, 1)
}

func TestWrongTickRateIsAWarning(t *testing.T) {
	for ppm, warned := range map[float64]bool{300: false, 19_000: false, 25_000: true, -400_000: true, 900_000: true} {
		b := &board{t: t, hz: 1e6, ppm: ppm, delayS: noDelay}
		b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 100000), extensionChan('b', 100000))
		for i := range 900 {
			b.val(float64(i)/10, 'a', 100)
			b.val(float64(i)/10, 'b', 100)
		}
		set := build(t, header(t, 1), b.lines)
		if got := len(set.Warnings) > 0; got != warned || len(set.Clocks) != 1 {
			t.Errorf("%g ppm: %d segments, warnings %q", ppm, len(set.Clocks), set.Warnings)
		}
		near(t, "rate in ppm", set.Clocks[0].RatePPM, ppm, 1)
	}
}

func TestHullIsBoundedAndStaysBelow(t *testing.T) {
	var h hull
	var all []point
	for i := range 100_000 { // a clock that speeds up: every point is on the hull
		p := point{float64(i), 1e-9 * float64(i) * float64(i)}
		all = append(all, p)
		h.add(p)
	}
	if len(h) > hullMax {
		t.Fatalf("%d points", len(h))
	}
	a, b := h.under(50_000)
	for _, p := range all {
		if p.y-a-b*p.x < -3e-4 { // of 10 s; points 1000 apart bow by 2.5e-4
			t.Fatalf("point %v lies %g under the line", p, a+b*p.x-p.y)
		}
	}
}

func TestEnvelopeLineIsTheBestOne(t *testing.T) {
	// Against the definition: of all lines through two points with none below,
	// the one with the least sum of delays.
	rng := rand.New(rand.NewPCG(5, 5))
	for range 50 {
		var e envelope
		var pts []point
		for i := range 60 {
			p := point{float64(i) * 1e6, float64(i)*1.0001 + rng.ExpFloat64()*0.01}
			pts = append(pts, p)
			e.add(p, 1e6)
		}
		l := e.line(1e6)
		best := math.Inf(1)
		for i, p := range pts {
			for _, q := range pts[i+1:] {
				b := (q.y - p.y) / (q.x - p.x)
				sum, ok := delays(pts, p.y-b*p.x, b)
				if ok {
					best = math.Min(best, sum)
				}
			}
		}
		got, ok := delays(pts, l.a, l.b)
		if !ok || math.Abs(got-best) > 1e-9 {
			t.Fatalf("sum of delays %g (all points above: %t), the least is %g", got, ok, best)
		}
	}
}

func delays(pts []point, a, b float64) (sum float64, ok bool) {
	for _, p := range pts {
		d := p.y - a - b*p.x
		if d < -1e-9 {
			return 0, false
		}
		sum += d
	}
	return sum, true
}
