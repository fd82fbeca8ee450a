package visit

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"tautramp/acquire/recording"
	"tautramp/analyze"
)

func TestPlannedCyclesCloseOnceEach(t *testing.T) {
	shapes := map[string]*script{
		"smooth": cycles(3, 8),
		"fast":   cycles(3, 25),
		"slow":   cycles(3, 3),
		"strokes": from(35).rest(10).strokes(415, 16, 0.01, 2).rest(5).to(35, 10).rest(8).
			strokes(860, 16, 0.01, 2).rest(5).to(35, 10).rest(8).
			strokes(860, 40, 0.05, 2).rest(5).to(35, 10).rest(8).
			strokes(860, 10, 0.01, 1).rest(5).to(35, 10).rest(8),
		"stairs": from(35).rest(10).stairs(415, 4, 8, 8).stairs(35, 4, 8, 8).
			stairs(860, 8, 8, 8).stairs(35, 8, 8, 8).stairs(860, 4, 8, 20).stairs(35, 4, 8, 20).
			stairs(860, 8, 8, 8).stairs(35, 8, 8, 8),
		"no rest at the low end": from(35).rest(10).to(415, 8).rest(5).to(60, 8).
			to(860, 8).rest(2).to(60, 8).to(860, 8).to(100, 8).to(860, 8).to(35, 8).rest(8),
		"a wiggle at the top and a second thought on the way down": from(35).rest(10).to(415, 8).to(35, 8).rest(8).
			to(860, 8).to(780, 8).to(870, 8).to(600, 8).to(700, 8).to(35, 8).rest(8).
			to(860, 8).rest(30).to(35, 8).rest(8).to(860, 8).to(35, 8).rest(8),
		"a false start": from(35).rest(10).to(80, 8).to(35, 8).rest(10).to(415, 8).to(35, 8).rest(8).
			to(860, 8).to(35, 8).rest(8).to(860, 8).to(35, 8).rest(8).to(860, 8).to(35, 8).rest(8),
		"starts under pressure": from(500).rest(5).to(35, 20).rest(15).to(415, 8).to(35, 8).rest(8).
			to(860, 8).to(35, 8).rest(8).to(860, 8).to(35, 8).rest(8).to(860, 8).to(35, 8).rest(8),
	}
	for name, s := range shapes {
		t.Run(name, func(t *testing.T) {
			p := play(t, header(t), t1(1), s, nil)
			var ends []string
			for _, e := range p.events {
				if e.Kind == recording.CycleEnd {
					ends = append(ends, e.Text)
				}
			}
			if !slices.Equal(ends, []string{"1", "2", "3", "4"}) {
				t.Errorf("cycles closed: %v", ends)
			}
			if p.count(recording.PlanClosed) != 1 || p.events[len(p.events)-1].Kind != recording.PlanClosed {
				t.Errorf("events %v", p.events)
			}
			if end, _ := s.now(); p.at[len(p.at)-1] < end-8 {
				t.Errorf("closed at %.0f s, the last ramp ends at %.0f s", p.at[len(p.at)-1], end-8)
			}
			if len(p.kinds) != 0 {
				t.Errorf("alarms %v", p.kinds)
			}
		})
	}
}

func TestVisitWithoutAPlanHasNoEnd(t *testing.T) {
	h := header(t)
	h.Plan = recording.Plan{Exercise: 1}
	p := play(t, h, t1(1), cycles(3, 15), nil)
	if p.count(recording.CycleEnd) != 4 || p.count(recording.PlanClosed) != 0 || p.k.planned() != 0 {
		t.Errorf("events %v", p.events)
	}
}

func TestCycleStaysOpenHalfWayDown(t *testing.T) {
	s := from(35).rest(10).to(860, 8).to(300, 8).rest(60)
	if p := play(t, header(t), t1(1), s, nil); p.count(recording.CycleEnd) != 0 {
		t.Errorf("events %v", p.events)
	}
}

func TestFirstCyclesAreExercise(t *testing.T) {
	h := header(t)
	h.Plan = recording.Plan{Exercise: 2, Ramps: 1}
	var numbers []int
	play(t, h, t1(1), cycles(2, 15), func(k *tracker, _ *alarms, _ float64) {
		if n := k.number(); len(numbers) == 0 || numbers[len(numbers)-1] != n {
			numbers = append(numbers, n)
		}
	})
	if !slices.Equal(numbers, []int{1, 2, 3}) {
		t.Errorf("cycle numbers %v", numbers)
	}
}

func TestPhasesOfAHealthyCycle(t *testing.T) {
	var seen []analyze.PhaseKind
	play(t, header(t), t1(1), from(35).rest(10).to(860, 8).rest(6).to(35, 8).rest(8), func(k *tracker, _ *alarms, _ float64) {
		if p := k.phase; len(seen) == 0 || seen[len(seen)-1] != p {
			seen = append(seen, p)
		}
	})
	want := []analyze.PhaseKind{analyze.Resting, analyze.SlackLift, analyze.Seating, analyze.Loading, analyze.Holding, analyze.Inside, analyze.Unloading, analyze.Resting}
	if !slices.Equal(seen, want) {
		t.Errorf("phases %q, want %q", seen, want)
	}
}

func TestStrokesOfAPumpAreNoHolds(t *testing.T) {
	changes, last := 0, analyze.PhaseKind("")
	play(t, header(t), t1(1), from(35).rest(10).strokes(860, 16, 0.01, 2), func(k *tracker, _ *alarms, _ float64) {
		if p := k.phase; p != last && k.cycle.top < 840*psiPa { // the last strokes gain nothing more
			changes, last = changes+1, p
		}
	})
	if changes > 6 || last != analyze.Loading {
		t.Errorf("%d changes of phase in some 50 strokes, at last %q", changes, last)
	}
}

func TestStressIsProvisionalAndFromTheSlackBand(t *testing.T) {
	// domain figure for T-1: 9,500 psi of band stress at 724 psi rising.
	before, atTarget := 0.0, 0.0
	play(t, header(t), t1(1), from(35).rest(10).to(724, 8).rest(3), func(k *tracker, _ *alarms, now float64) {
		if now < 1 {
			before = k.stressPa()
		}
		atTarget = k.stressPa()
	})
	if !math.IsNaN(before) {
		t.Errorf("stress %g before there is a zero", before)
	}
	near(t, "stress in psi", atTarget/psiPa, 9500, 120)
}

func TestTautBandGivesNoZero(t *testing.T) {
	p := play(t, header(t), t1(1), from(200).rest(10).to(724, 8), nil)
	if !math.IsNaN(p.k.stressPa()) {
		t.Errorf("stress %g psi with a zero that was never seen", p.k.stressPa()/psiPa)
	}
}

// healthy is a tensioner of the seed: friction up to three times T-1's, a toe,
// an indicator of either grade, and any way of pumping.
func healthy(seed uint64) (*pretend, *script) {
	rng := rand.New(rand.NewPCG(seed, 4))
	r := t1(seed)
	r.f0N *= 0.3 + 2.7*rng.Float64()
	r.mu *= 0.3 + 2.7*rng.Float64()
	r.toeM = rng.Float64() * 0.0003 * inM
	r.noisePa = psiPa * (0.2 + 1.3*rng.Float64())
	if seed%5 == 4 {
		r.countM = 0.0005 * inM
	}
	low := 5 + 30*rng.Float64()
	if seed%7 == 6 {
		low = 150 // the band never goes slack
	}
	rate := 3 + 17*rng.Float64()
	s := from(low).rest(8)
	for i := range 3 {
		top := 860.0
		if i == 0 {
			top = 430
		}
		switch seed % 4 {
		case 0:
			s.to(top, rate)
		case 1:
			s.strokes(top, 10+40*rng.Float64(), 0.005+0.03*rng.Float64(), 1+2*rng.Float64())
		case 2:
			s.stairs(top, 4+4*float64(i), rate, 6)
		case 3:
			s.to(top*0.8, rate).to(top*(0.8-0.4*rng.Float64()), rate).to(top, rate) // a second thought
		}
		s.rest(3).to(low, rate).rest(6)
	}
	return r, s
}

func TestHealthyTensionersRaiseNoAlarm(t *testing.T) {
	variants := uint64(56)
	if testing.Short() {
		variants = 6
	}
	for seed := range variants {
		r, s := healthy(seed)
		h := header(t)
		h.Plan.Ramps = 2
		p := play(t, h, r, s, nil)
		for i, e := range p.events {
			if e.Kind == recording.Alarm {
				t.Errorf("seed %d: %s at %.1f s and %.0f psi (F0 %.0f lbf, mu %.3f, toe %.5f in, count %.5f in)", seed, e.Text,
					p.at[i], p.psi[i], r.f0N/lbfN, r.mu, r.toeM/inM, r.countM/inM)
			}
		}
		if n := p.count(recording.CycleEnd); n != 3 {
			t.Errorf("seed %d: %d cycles closed", seed, n)
		}
		if p.k.check.advice != "" {
			t.Errorf("seed %d: %s", seed, p.k.check.advice)
		}
	}
}

func TestHeavyFrictionRaisesNoAlarmBeforeTheBandMoves(t *testing.T) {
	for _, c := range []struct {
		name      string
		weightLbf float64
		low       float64 // psi
		movesPsi  float64 // by p A* = S(1+mu) + F0, from S that the low end holds
	}{
		{"slack band under a heavy wheel", 3000, 5, (3000*1.135 + 630) / 9.8175},
		{"band that never went slack", 820, 120, ((120*9.8175+630)/0.865*1.135 + 630) / 9.8175},
	} {
		h := header(t)
		h.Parsed.Tensioners[0].LiftedWeight.SI = c.weightLbf * lbfN
		r := t1(1)
		r.f0N, r.mu, r.weightN = 630*lbfN, 0.135, c.weightLbf*lbfN
		r.loadN = (c.low*psiPa*areaM2 + r.f0N) / (1 - r.mu)
		still := 0.0
		p := play(t, h, r, from(c.low).rest(10).to(860, 8), func(k *tracker, _ *alarms, now float64) {
			if !k.cycle.moved {
				still = k.setting / psiPa
			}
		})
		if len(p.kinds) != 0 {
			t.Errorf("%s: %s at %.0f psi", c.name, p.events[0].Text, p.psi[0])
		}
		near(t, c.name+": setting at which the band moves, psi", still, c.movesPsi, 30)
	}
}

func TestFrozenExtensionRaisesTheAlarmInTime(t *testing.T) {
	const allowed = 0.15 * 950 // psi, of the limit
	for _, c := range []struct {
		name   string
		freeze float64 // psi
		ramp   *script
	}{
		{"in the first cycle", 300, from(35).rest(10).to(415, 8).rest(5)},
		{"above half of the target", 500, cycles(0, 8).to(860, 8).rest(5)},
		{"near the target", 700, cycles(0, 8).to(900, 8).rest(5)},
		{"with a hand pump", 500, cycles(0, 8).strokes(860, 16, 0.01, 2).rest(5)},
		{"on a staircase", 450, cycles(0, 8).stairs(860, 8, 8, 6)},
		{"fast", 500, cycles(0, 25).to(860, 25).rest(5)},
		{"slowly", 500, cycles(0, 8).to(860, 2).rest(5)},
	} {
		t.Run(c.name, func(t *testing.T) {
			seeds := uint64(5)
			if testing.Short() {
				seeds = 1
			}
			for seed := range seeds {
				r := t1(seed)
				r.frozenAbovePa = c.freeze * psiPa
				p := play(t, header(t), r, c.ramp, nil)
				i := slices.IndexFunc(p.events, func(e recording.Event) bool { return e.Kind == recording.Alarm })
				if i < 0 || p.events[i].Text != string(UnderReading) {
					t.Fatalf("seed %d: events %v", seed, p.events)
				}
				if rise := p.psi[i] - c.freeze; rise <= 0 || rise > allowed {
					t.Errorf("seed %d: alarm %.0f psi after the freeze, allowed %.0f", seed, rise, allowed)
				}
			}
		})
	}
}

func TestExtensionThatNeverMovesRaisesTheAlarm(t *testing.T) {
	for _, weight := range []bool{true, false} {
		h := header(t)
		if !weight {
			h.Parsed.Tensioners[0].LiftedWeight = h.Parsed.Tensioners[1].LiftedWeight
		}
		r := t1(1)
		r.frozenAbovePa = 1
		p := play(t, h, r, from(35).rest(10).to(500, 8), nil)
		if !p.kinds[UnderReading] || p.psi[0] > 260 {
			t.Errorf("weight known %t: events %v at %.0f psi", weight, p.events, p.psi)
		}
	}
}

func TestWrongGaugeLengthRaisesAnAlarmOrAWarning(t *testing.T) {
	for _, c := range []struct {
		gain   float64
		alarm  bool
		advice string
	}{{0.3, true, ""}, {0.6, false, "0.5"}, {1, false, ""}, {1.3, false, "1.2"}} {
		r := t1(1)
		r.gain = c.gain
		p := play(t, header(t), r, from(35).rest(10).to(430, 8).rest(3).to(35, 8).rest(8), nil)
		if p.kinds[UnderReading] != c.alarm {
			t.Errorf("stretch %g times as fast: alarms %v", c.gain, p.kinds)
		}
		if got := p.k.check.advice; !c.alarm && (got == "") != (c.advice == "") || !strings.Contains(got, c.advice) {
			t.Errorf("stretch %g times as fast: advice %q", c.gain, got)
		}
	}
}

func TestUnderReadingEndsWhenTheSettingComesDown(t *testing.T) {
	r := t1(1)
	r.frozenAbovePa = 500 * psiPa
	alarmed := map[string]bool{}
	p := play(t, header(t), r, cycles(0, 8).to(650, 8).to(560, 8).rest(4).to(500, 8).rest(4), func(k *tracker, a *alarms, now float64) {
		kind, _ := a.gravest()
		alarmed[fmt.Sprintf("%s at %.0f", kind, math.Round(k.setting/psiPa/100)*100)] = true
	})
	if kind, _ := p.a.gravest(); kind != NoAlarm || !alarmed["under-reading at 600"] {
		t.Errorf("alarm %q at the end; on the way %v", kind, alarmed)
	}
	if p.a.worst() == "" {
		t.Error("the alarm is forgotten")
	}
}

func TestGuardWithoutGeometryLearnsFromTheRamp(t *testing.T) {
	h := header(t)
	h.Parsed.Tensioners[0].Cylinders = 0
	if s, err := newSite(h); err != nil || !math.IsNaN(s.slope) {
		t.Fatalf("slope %g, %v", s.slope, err)
	}
	r := t1(1)
	if p := play(t, h, r, cycles(3, 8), nil); len(p.kinds) != 0 || p.count(recording.CycleEnd) != 4 {
		t.Errorf("healthy: events %v", p.events)
	}
	r = t1(1)
	r.frozenAbovePa = 600 * psiPa
	if p := play(t, h, r, from(35).rest(10).to(860, 8), nil); !p.kinds[UnderReading] {
		t.Error("frozen: no alarm")
	}
}
