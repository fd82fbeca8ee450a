package analyze

import (
	"math"
	"testing"

	"tautramp/acquire/pairing"
)

// withLifts is a visit in which the wheel takes a while to the taut band and back:
// the setting stands at the slack lift.
func withLifts(b *bench, low float64, n int) *path {
	h := &path{}
	h.add(low * psi)
	h.hold(4)
	for i := range n {
		h.begins = append(h.begins, len(h.p))
		h.to(b.settingAt(Rising, 0), 16*psi)
		h.hold(6)
		high := 860 * psi
		if i == 0 {
			high = 500 * psi
		}
		h.to(high, 8*psi)
		h.hold(4)
		h.to(b.settingAt(Falling, 0), 8*psi)
		h.hold(6)
		h.to(low*psi, 16*psi)
		h.hold(4)
	}
	return h
}

// The invented T-1's card, 724 psi rising and 621 psi falling for 9,500 psi, by
// every convention of the zero that the data support.
func TestCardIsTheSameByEveryZero(t *testing.T) {
	b := newBench(31)
	set := b.measure(withLifts(b, 20, 4))
	set.Marks = []pairing.Mark{{T: 2, Kind: pairing.Zero}}
	r := analyzed(t, set)
	if len(r.Zeros) != 3 {
		t.Fatalf("%d conventions: %+v", len(r.Zeros), r.Zeros)
	}
	used := 0
	for k, name := range []string{"slack band", "slack lift", "operator's mark"} {
		z := r.Zeros[k]
		if z.Used {
			used++
			near(t, "setting in use, psi", r.AtRising.SettingSI.Value/psi, z.Rising.Value/psi, 1e-9)
		}
		if z.Name != name || math.Abs(z.Rising.Value/psi-724) > 5 || math.Abs(z.Falling.Value/psi-621) > 5 {
			t.Errorf("%s: %.1f and %.1f psi", z.Name, z.Rising.Value/psi, z.Falling.Value/psi)
		}
		holds(t, z.Name+", zero", z.ZeroM, b.zeroM)
		holds(t, z.Name+", rising", z.Rising, b.settingAt(Rising, 9500*psi))
		holds(t, z.Name+", falling", z.Falling, b.settingAt(Falling, 9500*psi))
	}
	if used != 1 || warned(r, "zeros-differ") {
		t.Errorf("%d in use, %v", used, r.Warnings)
	}
}

// At 0.0005 in the count hides whether the band at 40 psi is slack; the setting
// that moved the wheel tells, and tells the zero to a small part of the count.
func TestSlackLiftGivesTheZeroThatACoarseCountHides(t *testing.T) {
	for seed := range uint64(8) {
		b := newBench(600 + seed)
		b.countM = 0.0005 * inch
		b.zeroM += b.countM * b.rng.Float64()
		r := analyzed(t, b.measure(withLifts(b, 40, 4)))
		c := r.Cycles[1]
		if c.ZeroFrom != "slack lift" || math.Abs(c.Zero.Value-b.zeroM) > 0.15*b.countM {
			t.Errorf("seed %d: zero from %q off by %.2f counts (%s)", seed, c.ZeroFrom, (c.Zero.Value-b.zeroM)/b.countM, c.Zero.Why)
		}
		holds(t, "rising setting", r.AtRising.TrueSI, b.settingAt(Rising, 9500*psi))
	}
}

// Without the lift, from 0 psi: the falling line leaves the count shown, so the
// band was slack, however coarse the count.
func TestLineTellsASlackBandFromACoarseCount(t *testing.T) {
	for seed := range uint64(8) {
		b := newBench(700 + seed)
		b.countM = 0.0005 * inch
		b.zeroM += b.countM * b.rng.Float64()
		r := analyzed(t, b.measure(cycles(smooth, 3, 0, 860)))
		if c := r.Cycles[1]; c.Zero.Known() {
			holds(t, "zero", c.Zero, b.zeroM)
		} else if seed > 0 {
			t.Logf("seed %d: unknown, %s", seed, c.Zero.Why)
		}
	}
}

// Curl of a slack band: its stretch lies, the slack lift does not.
func TestConventionsThatDifferAreToldApart(t *testing.T) {
	b := newBench(32)
	b.slackOffM = -0.0002 * inch
	r := analyzed(t, b.measure(withLifts(b, 20, 4)))
	if !warned(r, "zeros-differ") {
		t.Errorf("%+v", r.Zeros)
	}
}
