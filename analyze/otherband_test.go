package analyze

import (
	"math"
	"strings"
	"testing"

	"tautramp/acquire/mill"
)

func onFile(t testing.TB, name string) mill.Band {
	t.Helper()
	b, err := profile(t).FindBand(name)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func predicted(t testing.TB, r *Result, b mill.Band) *Result {
	t.Helper()
	p, err := r.ForBand(b, mill.Pressure{})
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// narrowed is a band at another net width.
func narrowed(b mill.Band, factor float64) mill.Band {
	b.NetWidth.SI *= factor
	return b
}

// One tenth less width, one ninth more stress at the same wheel pull
// (F = 2 sigma A_b).
func TestWornWidthRaisesTheStressAtTheSameSetting(t *testing.T) {
	r := analyzed(t, newBench(31).measure(cycles(smooth, 4, 20, 860)))
	p := predicted(t, r, narrowed(onFile(t, "QW-6"), 0.9))
	for _, d := range []Direction{Rising, Falling} {
		was, err := r.StressAt(d, 600*psi)
		if err != nil {
			t.Fatal(err)
		}
		now, err := p.StressAt(d, 600*psi)
		if err != nil {
			t.Fatal(err)
		}
		if gain := now.Value/was.Value - 1; math.Abs(gain-1.0/9) > 1e-9 {
			t.Errorf("%s: stress %+.4f %%, want +11.1111 %%", d, 100*gain)
		}
	}
	if !p.Predicted.Worn || math.Abs(p.Predicted.AreaRatio.Value-1/0.9) > 1e-12 {
		t.Errorf("prediction %+v", p.Predicted)
	}
	if !(p.AtRising.SettingSI.Value < r.AtRising.SettingSI.Value) {
		t.Error("a narrower band does not reach its target at a lower setting")
	}
}

// A force calibration with QW-6 must give what a ramp with QM-2 itself gives:
// the truth of the same tensioner, and both curves in the ratio of the sections.
func TestOtherBandFromOneForceCalibration(t *testing.T) {
	b := newBench(32)
	r := analyzed(t, b.measure(cycles(smooth, 4, 20, 860)))
	qm2 := onFile(t, "QM-2")
	p := predicted(t, r, qm2)
	if p.Predicted == nil || p.Predicted.Measured.Name != "QW-6" || p.Predicted.Worn {
		t.Fatalf("prediction %+v", p.Predicted)
	}
	other := *b
	other.netM2 = qm2.NetAreaM2()
	for d, at := range map[Direction]TargetSetting{Rising: p.AtRising, Falling: p.AtFalling} {
		truth := other.settingAt(d, qm2.Target.SI)
		if lo, hi := at.TrueSI.Interval95(); !(lo <= truth && truth <= hi) {
			t.Errorf("%s: %.1f psi lies outside %.1f to %.1f", d, truth/psi, lo/psi, hi/psi)
		}
		if off := at.SettingSI.Value/truth - 1; math.Abs(off) > 0.03 {
			t.Errorf("%s: setting off by %.2f %%", d, 100*off)
		}
	}
	was, now := r.Rising, p.Rising
	if ratio := now.Slope.Value / was.Slope.Value * qm2.NetAreaM2() / r.Setup.NetAreaM2; math.Abs(ratio-1) > 1e-12 {
		t.Errorf("slopes do not scale with the sections: %g", ratio)
	}
	if now.LowSI != was.LowSI || now.HighSI != was.HighSI {
		t.Error("the captured range of the setting has changed")
	}
	if p.Friction.F0N != r.Friction.F0N || p.Friction.AreaM2 != r.Friction.AreaM2 {
		t.Errorf("friction and area of the tensioner have changed with the band: %+v, %+v", p.Friction, r.Friction)
	}
	if !(p.Running.AfterRisingPa[1].Value > 0) || !p.ResetSI.Known() || !(p.ResetSI.Value < p.AtFalling.SettingSI.Value) {
		t.Errorf("running band %+v, drop to %+v", p.Running, p.ResetSI)
	}
}

// Modulus and gauge length of the measured band do not cancel, and both sections
// come on top.
func TestPredictionCarriesTheDoubtsOfBothBands(t *testing.T) {
	r := analyzed(t, newBench(33).measure(cycles(smooth, 4, 20, 860)))
	p := predicted(t, r, onFile(t, "QM-2"))
	share := func(t TargetSetting, name string) float64 {
		for _, l := range t.Budget {
			if l.Name == name {
				return l.StdSI / t.TrueSI.Value
			}
		}
		return math.NaN()
	}
	for _, name := range []string{"modulus of the steel", "gauge length", "thickness and net width of QW-6, measured", "thickness and net width of QM-2"} {
		if s := share(p.AtRising, name); !(s > 1e-4) {
			t.Errorf("%s is %g of the setting", name, s)
		}
	}
	one, two := share(p.AtRising, "thickness and net width of QW-6, measured"), share(p.AtRising, "thickness and net width of QM-2")
	if math.Abs(one/two-1) > 1e-3 {
		t.Errorf("1 %% of one section counts %g, of the other %g", one, two)
	}
	worn := predicted(t, r, narrowed(onFile(t, "QW-6"), 0.9))
	if s := share(worn.AtRising, "net width of QW-6"); !(s > 1e-4) {
		t.Errorf("the worn width is %g of the setting", s)
	}
	if a, b := worn.Predicted.AreaRatio.Std()/worn.Predicted.AreaRatio.Value, p.Predicted.AreaRatio.Std()/p.Predicted.AreaRatio.Value; !(a < b) {
		t.Errorf("one strip at two widths is doubted by %g, two strips by %g", a, b)
	}
	if warned := codes(p); !strings.Contains(warned, "predicted") || strings.Contains(codes(r), "predicted") {
		t.Errorf("warnings %s; measured: %s", warned, codes(r))
	}
}

func codes(r *Result) string {
	var all []string
	for _, w := range r.Warnings {
		all = append(all, w.Code)
	}
	return strings.Join(all, " ")
}

func TestMeasuredBandIsNoPrediction(t *testing.T) {
	r := analyzed(t, newBench(34).measure(cycles(smooth, 4, 20, 860)))
	if same := predicted(t, r, onFile(t, "QW-6")); same != r {
		t.Error("the measured band is worked out again")
	}
	target := mill.Pressure{Quantity: mill.Quantity{SI: 8000 * psi, Entered: "8000 psi"}}
	other, err := r.ForBand(onFile(t, "QW-6"), target)
	if err != nil || other.Predicted != nil {
		t.Fatalf("another target makes a prediction of it: %+v, %v", other, err)
	}
	if want, _ := r.SettingAt(Rising, 8000*psi); other.AtRising.TrueSI != want.TrueSI {
		t.Errorf("got %+v, want %+v", other.AtRising.TrueSI, want.TrueSI)
	}
	back := predicted(t, predicted(t, r, onFile(t, "QM-2")), onFile(t, "QW-6"))
	if back.Predicted != nil || back.AtRising.TrueSI != r.AtRising.TrueSI || back.Points[len(back.Points)/3].Stress != r.Points[len(r.Points)/3].Stress {
		t.Errorf("back from a prediction: %+v", back.AtRising)
	}
	if _, err := (&Result{}).ForBand(onFile(t, "QM-2"), mill.Pressure{}); err == nil {
		t.Error("a result that Analyze did not make predicts")
	}
	if _, err := r.ForBand(mill.Band{Name: "of paper"}, mill.Pressure{}); err == nil {
		t.Error("a band without a section is predicted for")
	}
}

func TestWhichBandsCanBeBroughtToTheirTarget(t *testing.T) {
	set := newBench(35).measure(cycles(smooth, 4, 20, 860))
	p := profile(t)
	strong := onFile(t, "QW-6")
	strong.Name, strong.Target.SI = "QW-strong", 15000*psi // 1,126 psi on the gauge: past the limit of 950
	middling := strong
	middling.Name, middling.Target.SI = "QW-middling", 11900*psi // 894 psi: above what was captured
	weak := onFile(t, "QN-17")
	weak.Name, weak.Target.SI = "QN-weak", 400*psi
	bare := onFile(t, "QM-2")
	bare.Name, bare.Target = "QM-bare", mill.Pressure{}
	p.Bands = append(p.Bands, strong, middling, weak, bare)
	r, err := Analyze(Input{Profile: p, Tensioner: "T-1", Band: "QW-6", Set: set})
	if err != nil {
		t.Fatal(err)
	}
	want := map[string]struct {
		within   Within
		captured bool
		why      string
	}{
		"QW-6": {WithinLimit, true, ""}, "QM-2": {WithinLimit, true, ""}, "QN-17": {WithinLimit, true, ""},
		"QW-strong":   {PastLimit, false, ""},
		"QW-middling": {WithinUndecided, false, "above what was captured"},
		"QN-weak":     {WithinLimit, false, "below what was captured"},
		"QM-bare":     {WithinUndecided, false, "no target"},
	}
	for _, reach := range r.Reaches() {
		w := want[reach.Band.Name]
		if reach.Within != w.within || reach.Captured != w.captured || !strings.Contains(reach.Why, w.why) || (w.why == "") != (reach.Why == "") {
			t.Errorf("%s: %q, captured %v, %q; want %+v", reach.Band.Name, reach.Within, reach.Captured, reach.Why, w)
		}
		if reach.Captured != reach.Rising.SettingSI.Known() {
			t.Errorf("%s: a setting outside the captured range, or none inside", reach.Band.Name)
		}
		if reach.Measured != (reach.Band.Name == "QW-6") {
			t.Errorf("%s: measured %v", reach.Band.Name, reach.Measured)
		}
	}
	// The invented mill's table: 2,893 lbf a span for QW-6 at its target.
	if got := r.Reaches()[0].PullN.Value / lbf / 2; math.Abs(got-2893) > 0.5 {
		t.Errorf("pull of a span %.1f lbf, want 2,893", got)
	}
	tight := *r
	tight.Setup.LimitSI = r.AtRising.TrueSI.Value
	if e := tight.Reaches()[0]; e.Within != WithinUndecided || !strings.Contains(e.Why, "doubt") {
		t.Errorf("a limit at the setting itself: %q, %q", e.Within, e.Why)
	}
}
