package analyze

import (
	"math"
	"strings"
	"testing"

	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// The interval of the setting is Fieller's of the mean line, whose covariance is
// worked out here from the ramps by hand.
func TestSettingIsInvertedByFieller(t *testing.T) {
	b := newBench(71)
	b.wander, b.wanderArea = 0.02, 0.002
	r := analyzed(t, b.measure(cycles(smooth, 4, 0, 880)))
	const stress = 9500 * psi
	for _, d := range []Direction{Rising, Falling} {
		got, err := r.SettingAt(d, stress)
		if err != nil {
			t.Fatal(err)
		}
		y, n := stress/r.work.k.paPerM(), float64(len(r.work.ramps))
		var a, slope, aa, ab, bb float64
		for _, m := range r.work.ramps {
			a += (m.line(d).A - m.zeroM) / n
			slope += m.line(d).B / n
		}
		for _, m := range r.work.ramps {
			da, db := m.line(d).A-m.zeroM-a, m.line(d).B-slope
			aa, ab, bb = aa+da*da/n/(n-1), ab+da*db/n/(n-1), bb+db*db/n/(n-1)
		}
		k := estimate.Student95(n - 1)
		// Every x whose line lies within k standard deviations of y.
		inside := func(x float64) bool {
			return math.Abs(y-a-slope*x) <= k*math.Sqrt(aa+2*x*ab+x*x*bb)
		}
		middle := (y - a) / slope
		near(t, "setting", got.SettingSI.Value, middle, 1e-12)
		half := k * got.SettingSI.Random
		if !inside(middle+0.99*half) || !inside(middle-0.99*half) || inside(middle+1.01*half) || inside(middle-1.01*half) {
			t.Errorf("%s: %v +/- %v is not the interval", d, middle, half)
		}
		near(t, "next", got.NextSI.Random, math.Hypot(got.SettingSI.Random*math.Sqrt(n+1), r.work.readingStd()), 0.02)
	}
}

// One ramp is inverted by the likelihood of its own readings.
func TestOneRampIsInvertedByItsReadings(t *testing.T) {
	b := newBench(72)
	b.plan = pairing.Plan{Ramps: 1}
	b.countM = 0.0005 * inch
	r := analyzed(t, b.measure(cycles(smooth, 1, 0, 880)))
	got, err := r.SettingAt(Rising, 9500*psi)
	if err != nil {
		t.Fatal(err)
	}
	if !strings.HasPrefix(got.SettingSI.Method, "one ramp, ") || strings.Contains(got.SettingSI.Method, "scatter inside") || got.NextSI.Known() {
		t.Errorf("%+v", got.SettingSI)
	}
	_, delta := r.Cycles[0].Rising.Line.InverseAt(r.Cycles[0].Zero.Value + 9500*psi/r.work.k.paPerM())
	if ratio := got.SettingSI.Random / delta; !(ratio > 0.5 && ratio < 2) {
		t.Errorf("%v against %v by the line alone", got.SettingSI.Random, delta)
	}
}
