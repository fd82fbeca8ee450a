package analyze

import (
	"math"
	"strings"
	"testing"

	"tautramp/analyze/estimate"
)

// cleanedLate is T-1 after its slide was cleaned, F0 60 lbf and mu 0.02, its
// stretch shown late.
func cleanedLate(seed uint64, lateS float64) *bench {
	b := newBench(seed)
	b.f0N, b.mu, b.lateS = 60*lbf, 0.02, lateS
	return b
}

// halvesAt is the mean half-width of the ramps of the slower and the faster
// half of the rates, at the working setting.
func halvesAt(w *work) (slow, fast float64) {
	middle := 12 * psi
	var s, f []float64
	for k, i := range w.fitted {
		half := halfWidth(700*psi)(w.ramps[k], w.k)
		if w.meanRate(w.res.Cycles[i]) < middle {
			s = append(s, half)
		} else {
			f = append(f, half)
		}
	}
	slow, _ = estimate.Mean(s)
	fast, _ = estimate.Mean(f)
	return slow, fast
}

func TestLagIsTakenOutWithTwoRates(t *testing.T) {
	// 0.3 s of lag at 8 and 16 psi/s adds 2.4 and 4.8 psi to a half-width of 19.6:
	// 10.9 % more at the faster rate.
	for seed := range uint64(trials(6)) {
		b := cleanedLate(seed+9100, 0.3)
		b.plan.Ramps = 4
		set := b.measure(rated(20, 860, 5, 8, 8, 16, 8, 16))
		r := analyzed(t, set)
		if late := r.Lag.LateS; !late.Known() || !r.Lag.Corrected || math.Abs(late.Value-0.3) > 0.05 {
			t.Fatalf("seed %d: late by %v +/- %v (%s%s), want 0.3", seed, late.Value, late.Std(), late.Method, late.Why)
		}
		holds(t, "delay", r.Lag.LateS, 0.3)
		slow, fast := halvesAt(r.work)
		if change := fast/slow - 1; math.Abs(change) > 0.03 {
			t.Errorf("seed %d: the half-width changes by %.1f %% with the rate", seed, 100*change)
		}
		near(t, "half-width", r.Working.HalfSI.Value, b.halfAt(r.Working.RisingSI), 0.03)
		holds(t, "half-width that does not depend on the rate", r.Lag.StaticSI, b.halfAt(r.Working.RisingSI))
		holds(t, "growth with the rate", r.Lag.PerRateS, 0.3)
		if wide := r.Lag.CouldBeSI; !wide.Known() || math.Abs(wide.Value) > 1e-9 || !(wide.Std() > 0.02*psi && wide.Std() < 1*psi) {
			t.Errorf("what the lag could still make: %+v", wide)
		}
		// With the correction off the loop opens with the rate.
		w, err := newWork(set, r.Setup)
		if err != nil {
			t.Fatal(err)
		}
		if err := w.lay(0); err != nil {
			t.Fatal(err)
		}
		w.findZeros()
		if err := w.pool(); err != nil {
			t.Fatal(err)
		}
		slow, fast = halvesAt(w)
		if change := fast/slow - 1; math.Abs(change-0.109) > 0.02 {
			t.Errorf("seed %d: uncorrected, the half-width changes by %.1f %% with the rate, want 10.9 %%", seed, 100*change)
		}
	}
}

func TestLagIsFoundInStrokesAndStairs(t *testing.T) {
	for _, s := range []shape{pumped, stairs} {
		for seed := range uint64(trials(6)) {
			late := []float64{0.3, 0}[seed%2]
			b := cleanedLate(seed+9200, late)
			r := analyzed(t, b.measure(cycles(s, 4, 20, 860)))
			if e := r.Lag.LateS; !e.Known() || math.Abs(e.Value-late) > 0.05 || r.Lag.Corrected != (late > 0) {
				t.Errorf("%s, seed %d: late by %v +/- %v (%s%s), corrected %v; want %v", s, seed, e.Value, e.Std(), e.Method, e.Why, r.Lag.Corrected, late)
			}
			holds(t, string(s)+": delay", r.Lag.LateS, late)
			near(t, string(s)+": half-width", r.Working.HalfSI.Value, b.halfAt(r.Working.RisingSI), 0.05)
		}
	}
}

func TestLagThatTheDataDoNotTellIsNotIdentifiable(t *testing.T) {
	for _, c := range []struct {
		name  string
		count float64
		path  *path
	}{
		{"one rate, no rest", 0.00005 * inch, rated(20, 860, 0, 8, 8, 8, 8)},
		{"one rate, a rest at the top, coarse count", 0.0005 * inch, rated(20, 860, 5, 8, 8, 8, 8)},
	} {
		for seed := range uint64(trials(6)) {
			b := cleanedLate(seed+9300, 0.3)
			b.countM = c.count
			r := analyzed(t, b.measure(c.path))
			if e := r.Lag.LateS; e.Known() || r.Lag.Corrected || !strings.HasPrefix(e.Why, "not identifiable") {
				t.Errorf("%s, seed %d: late by %v +/- %v, %q", c.name, seed, e.Value, e.Std(), e.Why)
			}
			if r.Lag.CouldBeSI.Known() || r.Lag.StaticSI.Known() || r.Lag.PerRateS.Known() {
				t.Errorf("%s: %+v", c.name, r.Lag)
			}
			near(t, c.name+": rate, psi/s", r.Lag.RateSI/psi, 8, 0.05)
		}
	}
}

// One rate and one hold a ramp, a fine display and a setting that is late by chance:
// what is not told from none is not taken out, and is in no interval.
func TestLagByChanceIsLeftAlone(t *testing.T) {
	wrong, n := 0, trials(24)
	for seed := range uint64(n) {
		r := analyzed(t, coverCases()[0].scene(seed+9500).set)
		if r.Lag.Corrected {
			wrong++
		}
		half := 0.0
		for _, l := range r.Working.Budget {
			if l.Name == "time alignment" {
				half = l.StdSI
			}
		}
		if !r.Lag.Corrected {
			near(t, "time alignment, psi", half/psi, 16*0.02, 0.25)
		}
	}
	if wrong > 1+n/20 {
		t.Errorf("%d of %d delays taken out that are not there", wrong, n)
	}
}

func TestLagAndASlipAreToldApart(t *testing.T) {
	b := cleanedLate(9401, 0.3)
	h := cycles(pumped, 4, 20, 860)
	b.slipM, b.slipS = 0.01e-3, h.t[h.begins[2]]+60
	r := analyzed(t, b.measure(h))
	if math.Abs(r.Lag.LateS.Value-0.3) > 0.05 || len(r.Steps) != 1 || r.Steps[0].Kind != MountStep || math.Abs(r.Steps[0].T-b.slipS) > 1.3 {
		t.Errorf("late by %v s (%s), steps %s; a slip at %.1f s", r.Lag.LateS.Value, r.Lag.LateS.Why, stepsText(r.Steps), b.slipS)
	}
	near(t, "half-width", r.Working.HalfSI.Value, b.halfAt(r.Working.RisingSI), 0.06)
}
