package analyze

import (
	"math"
	"testing"
)

func budgetLine(r *Result, name string) (Term, bool) {
	for _, b := range r.AtRising.Budget {
		if b.Name == name {
			return b, true
		}
	}
	return Term{}, false
}

func TestBothFacesTakeCurlOutOfTheBudget(t *testing.T) {
	set := newBench(51).measure(cycles(smooth, 3, 20, 880))
	one := analyzed(t, set)
	curl, ok := budgetLine(one, "curl, one face measured")
	if !ok || !warned(one, "one-face") {
		t.Fatal("one face has no line for curl, or no warning")
	}
	for _, b := range one.AtRising.Budget {
		if b.StdSI > curl.StdSI {
			t.Errorf("%s is larger than curl", b.Name)
		}
	}
	set.BothFaces = true
	both := analyzed(t, set)
	if _, ok := budgetLine(both, "curl, one face measured"); ok || warned(both, "one-face") {
		t.Error("curl counts although both faces were measured")
	}
	wide, narrow := one.AtRising.TrueSI, both.AtRising.TrueSI
	if !(narrow.Std() < 0.8*wide.Std()) {
		t.Errorf("%.1f against %.1f psi", narrow.Std()/psi, wide.Std()/psi)
	}
}

// A steel band and bar that differ by one degree Fahrenheit: 185 psi (29e6 psi x
// 11.5e-6 / K x 5/9 K); a bar 3 degrees off the band reads 0.36 % short.
func TestWarmthAndTiltAreWorthWhatTheirPhysicsSays(t *testing.T) {
	r := analyzed(t, newBench(52).measure(cycles(smooth, 3, 20, 880)))
	warm, _ := budgetLine(r, "temperature of band and rig")
	slope := r.Rising.Slope.Value
	near(t, "1 degF, psi of band stress", warm.StdSI*slope*math.Sqrt(3)/psi, 185, 0.02)
	s := r.Setup
	s.Rig.Misalignment.SI, s.Rig.Misalignment.Entered = 3*math.Pi/180, "3 deg"
	s.mounting()
	near(t, "3 degrees", s.CosineStd*math.Sqrt(3), 0.0036, 0.02)
}
