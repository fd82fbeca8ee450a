package analyze

import (
	"errors"
	"math"
	"testing"

	"tautramp/acquire/pairing"
)

// approachOf is a fresh visit of the bench that comes up to a setting and stays.
func approachOf(b *bench, psiTop float64) *pairing.Set {
	h := &path{}
	h.add(20 * psi)
	h.hold(6)
	h.to(psiTop*psi, 6*psi)
	h.hold(12)
	return b.measure(h)
}

func TestApproachAgreesWithTheCurveUntilSomethingChanges(t *testing.T) {
	b := newBench(70)
	r := analyzed(t, b.measure(cycles(smooth, 4, 20, 860)))
	for _, c := range []struct {
		name   string
		change func(b *bench)
		want   Agreement
	}{
		{"nothing changed", func(*bench) {}, Agrees},
		{"the zero was set anew", func(b *bench) { b.zeroM += 2e-4 }, Agrees},
		{"a third more drag", func(b *bench) { b.f0N *= 1.33 }, Differs},
		{"one cylinder of a smaller bore", func(b *bench) { b.areaM2 *= 0.97 }, Differs},
	} {
		fresh := newBench(71)
		c.change(fresh)
		a, err := r.CheckApproach(approachOf(fresh, 724))
		if err != nil {
			t.Fatal(err)
		}
		if a.Agreement != c.want {
			t.Errorf("%s: %q, read %.0f psi +-%.0f, expected %.0f +-%.0f (%s)", c.name, a.Agreement,
				a.ReadPa.Value/psi, 2*a.ReadPa.Random/psi, a.ExpectedPa.Value/psi, 2*a.ExpectedPa.Random/psi, a.Why)
		}
	}
}

func TestApproachWithoutAZeroOrBeyondTheRampsIsNotJudged(t *testing.T) {
	r := analyzed(t, newBench(72).measure(cycles(smooth, 4, 20, 860)))
	h := &path{}
	h.add(300 * psi)
	h.to(724*psi, 6*psi)
	h.hold(12)
	a, err := r.CheckApproach(newBench(73).measure(h))
	if err != nil || a.Agreement != Undecided || a.Why == "" {
		t.Errorf("an approach from a taut band: %+v, %v", a, err)
	}
	_, err = r.CheckApproach(approachOf(newBench(74), 930))
	if _, outside := errors.AsType[*OutOfRangeError](err); !outside {
		t.Errorf("an approach past the ramps: %v", err)
	}
	one := newBench(75)
	one.plan = pairing.Plan{Exercise: 1, Ramps: 1}
	r = analyzed(t, one.measure(cycles(smooth, 2, 20, 860)))
	if a, err = r.CheckApproach(approachOf(newBench(76), 724)); err != nil || a.Agreement != Undecided {
		t.Errorf("an approach against one ramp: %+v, %v", a, err)
	}
}

// The falling branch of T-1's target, 621 psi, is reached from a top at which
// the loop is 2 h wide: 621 + 1.15 * 2 h with h = F0/A* + mu p(1 - ...) by the
// force balance (derived).
func TestFallingCardSaysHowFarToLoadFirst(t *testing.T) {
	b := newBench(77)
	r := analyzed(t, b.measure(cycles(smooth, 4, 20, 860)))
	want := r.AtFalling.SettingSI.Value
	for range 50 {
		p := want
		want = r.AtFalling.SettingSI.Value + 1.15*2*b.halfAt(p)
	}
	if past := r.LoadPastSI(); math.Abs(past.Value-want) > 2*psi || past.Value < r.AtRising.SettingSI.Value {
		t.Errorf("load past %.1f psi, want %.1f", past.Value/psi, want/psi)
	}
	r.Setup.LimitSI = 730 * psi
	if past := r.LoadPastSI(); past.Known() {
		t.Errorf("above the limit all the same: %.0f psi", past.Value/psi)
	}
}

// With 0.6 L of oil locked in, T-1's band gains about 90 psi and its gauge falls
// by about 46 (derived from the balance with oil of 1.8 GPa; here the oil may be
// softer).
func TestLockedOilHoldsTheBand(t *testing.T) {
	r := analyzed(t, newBench(78).measure(cycles(smooth, 4, 20, 860)))
	l := r.Running.Locked
	gain, drop := l.GainPa, l.DropSI
	if lo, hi := gain.Interval95(); !(lo < 90*psi && 90*psi < hi) || gain.Value > 150*psi {
		t.Errorf("the band gains %.0f psi, %.0f to %.0f", gain.Value/psi, lo/psi, hi/psi)
	}
	if lo, hi := drop.Interval95(); !(lo < 46*psi && 46*psi < hi) {
		t.Errorf("the gauge falls by %.1f psi, %.1f to %.1f", drop.Value/psi, lo/psi, hi/psi)
	}
	p := profile(t)
	p.Tensioners[0].OilVolume.SI = 0
	r, err := Analyze(Input{Profile: p, Tensioner: "T-1", Band: "QW-6", Set: newBench(78).measure(cycles(smooth, 4, 20, 860))})
	if err != nil || r.Running.Locked.GainPa.Known() {
		t.Errorf("a gain without an oil volume: %+v, %v", r.Running.Locked, err)
	}
}
