package analyze

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"tautramp/analyze/estimate"
)

// holds fails unless the 95 % interval holds the truth.
func holds(t *testing.T, what string, e estimate.Estimate, truth float64) {
	t.Helper()
	lo, hi := e.Interval95()
	if !(lo <= truth && truth <= hi) {
		t.Errorf("%s: %.6g lies outside %.6g to %.6g (%s%s)", what, truth, lo, hi, e.Method, e.Why)
	}
}

func warned(r *Result, code string) bool {
	for _, w := range r.Warnings {
		if w.Code == code {
			return true
		}
	}
	return false
}

func TestT1ByEveryWayOfPumping(t *testing.T) {
	target := 9500 * psi
	settings := map[shape]float64{}
	for _, s := range []shape{smooth, pumped, stairs} {
		t.Run(string(s), func(t *testing.T) {
			b := newBench(11)
			r := analyzed(t, b.measure(cycles(s, 4, 20, 860)))
			settings[s] = r.AtRising.SettingSI.Value
			// The invented T-1: 724 psi rising and 621 falling for 9,500 psi.
			near(t, "rising setting, psi", r.AtRising.TrueSI.Value/psi, 724, 0.01)
			near(t, "falling setting, psi", r.AtFalling.TrueSI.Value/psi, 621, 0.01)
			holds(t, "rising setting", r.AtRising.TrueSI, b.settingAt(Rising, target))
			holds(t, "falling setting", r.AtFalling.TrueSI, b.settingAt(Falling, target))
			if share := r.AtRising.TrueSI.Random / r.AtRising.TrueSI.Value; share > 0.015/4.3 {
				t.Errorf("random part is %.2g of the setting", share)
			}
			f := r.Friction
			near(t, "F0", f.F0N.Value, b.f0N, 0.05)
			near(t, "mu", f.Mu.Value, b.mu, 0.05)
			near(t, "A* / geometry", f.AreaRatio.Value, 1, 0.01)
			holds(t, "F0", f.F0N, b.f0N)
			holds(t, "W", f.WeightN, b.weightN)
			near(t, "reset after an overshoot, psi", r.ResetSI.Value/psi, 570, 0.01)
			near(t, "after rising up to, psi", r.Running.AfterRisingPa[1].Value/psi, 1744, 0.02)
			near(t, "after falling down to, psi", r.Running.AfterFallingPa[0].Value/psi, -1594, 0.02)
			near(t, "middle of the loop, psi", r.Running.MiddlePa.Value/psi, 10333, 0.01)
			if r.Running.AfterRisingPa[0].Value != 0 || r.Running.AfterFallingPa[1].Value != 0 {
				t.Error("the running band is not one-sided")
			}
			near(t, "half-width / setting", r.WidthRatio.Value, 51.7/724.5, 0.03)
			if r.Grade != Service {
				t.Errorf("grade %q of a half-width of 7 %%", r.Grade)
			}
			for _, w := range r.Warnings {
				if w.Code != "one-face" && w.Code != "instrument-uncorrected" {
					t.Errorf("warning of a healthy visit: %+v", w)
				}
			}
		})
	}
	for s, v := range settings {
		near(t, string(s)+" against smooth", v, settings[smooth], 0.005)
	}
}

func TestBranchesAndStressAgree(t *testing.T) {
	b := newBench(2)
	r := analyzed(t, b.measure(cycles(smooth, 4, 20, 860)))
	for _, branch := range []Branch{r.Rising, r.Falling} {
		if branch.Cycles != 3 || !(branch.LowSI < 300*psi && branch.HighSI > 650*psi) {
			t.Errorf("%s: %d cycles over %.0f to %.0f psi", branch.Direction, branch.Cycles, branch.LowSI/psi, branch.HighSI/psi)
		}
		for p := branch.LowSI; p <= branch.HighSI; p += 50 * psi {
			e, err := r.StressAt(branch.Direction, p)
			if err != nil {
				t.Fatal(err)
			}
			near(t, "stress by the branch's line", branch.Stress0.Value+branch.Slope.Value*p, e.Value, 1e-9)
			back, err := r.SettingAt(branch.Direction, e.Value)
			if err != nil {
				t.Fatal(err)
			}
			near(t, "there and back", back.SettingSI.Value, p, 1e-4) // means of ratios
			if e.System <= 0 || e.Random <= 0 {
				t.Errorf("no doubt about %+v", e)
			}
		}
	}
	// Rising shows less stress than falling at one setting: T-1 at 621 psi.
	up, _ := r.StressAt(Rising, 621*psi)
	down, _ := r.StressAt(Falling, 621*psi)
	near(t, "falling less rising at 621 psi, psi", (down.Value-up.Value)/psi, 1594, 0.02)
}

func TestBudgetSumsToTheTrueStressAndNamesItsParts(t *testing.T) {
	b := newBench(3)
	r := analyzed(t, b.measure(cycles(smooth, 4, 20, 860)))
	sum, seen := 0.0, map[string]Term{}
	for _, term := range r.AtRising.Budget {
		sum += term.StdSI * term.StdSI
		seen[term.Name] = term
		if term.From == "" || term.Type != "A" && term.Type != "B" || math.IsNaN(term.StdSI) {
			t.Errorf("%+v", term)
		}
	}
	near(t, "root sum of the lines", math.Sqrt(sum), r.AtRising.TrueSI.Std(), 1e-9)
	for _, name := range []string{"fitted curve", "next ramp against the curve", "reading of the setting gauge", "modulus of the steel", "gauge length",
		"stretch indicator", "setting gauge", "zero", "time alignment"} {
		if seen[name].StdSI <= 0 {
			t.Errorf("no line for %q", name)
		}
	}
	for name := range seen {
		if strings.Contains(name, "width") {
			t.Errorf("%q has no effect on a stress from stretch", name)
		}
	}
	// 1 % of the modulus is 1 % of the stretch wanted, which takes T-1 from the
	// slack lift at 108.7 psi to 724.5 psi.
	near(t, "modulus line, psi", seen["modulus of the steel"].StdSI/psi, 6.158, 0.01)
	// A curve within 3.75 psi, seen by a straight line over most of the scale.
	near(t, "setting gauge line, psi", seen["setting gauge"].StdSI/psi, 3.75/math.Sqrt(3), 0.05)
}

func TestDoublingTheZerosDoubtChangesOnlyTheZerosLine(t *testing.T) {
	b := newBench(4)
	r := analyzed(t, b.measure(cycles(smooth, 4, 20, 860)))
	before, err := r.SettingAt(Rising, 9500*psi)
	if err != nil {
		t.Fatal(err)
	}
	r.work.zeroStd *= 2
	r.work.sources = r.work.systematics()
	after, err := r.SettingAt(Rising, 9500*psi)
	if err != nil {
		t.Fatal(err)
	}
	for i, term := range after.Budget {
		want := before.Budget[i].StdSI
		if term.Name == "zero" {
			want *= 2
		}
		if math.Abs(term.StdSI-want) > 1e-9*want {
			t.Errorf("%s: %v, was %v", term.Name, term.StdSI, before.Budget[i].StdSI)
		}
	}
	if after.SettingSI.Value != before.SettingSI.Value {
		t.Error("the setting moved")
	}
}

func TestTargetOutsideTheCapturedRange(t *testing.T) {
	b := newBench(5)
	set := b.measure(cycles(smooth, 4, 20, 860))
	in := Input{Profile: profile(t), Tensioner: "T-1", Band: "QW-6", Set: set}
	in.Target.SI, in.Target.Entered = 15000*psi, "15000 psi"
	r, err := Analyze(in)
	if err != nil {
		t.Fatal(err)
	}
	if r.AtRising.SettingSI.Known() || r.AtRising.SettingSI.Why == "" || !warned(r, "target-out-of-range") {
		t.Errorf("setting for a target beyond the ramps: %+v, %v", r.AtRising.SettingSI, r.Warnings)
	}
	if r.ResetSI.Known() || r.Running.MiddlePa.Known() {
		t.Error("figures of a target that has no setting")
	}
	err = r.TargetError()
	out, ok := err.(*OutOfRangeError)
	if !ok || out.Want != 15000*psi || !(out.Low < out.High && out.High < out.Want) {
		t.Fatalf("%v", err)
	}
	if !strings.Contains(err.Error(), "ramp") {
		t.Errorf("%q has no next step", err)
	}
	if !r.Friction.F0N.Known() || !r.Rising.Slope.Known() || r.Grade != Service {
		t.Error("what does not need the target is lost")
	}
	for _, p := range []float64{0, 50 * psi, 2000 * psi, math.NaN()} {
		if e, err := r.StressAt(Rising, p); err == nil {
			t.Errorf("stress at %v psi: %+v", p/psi, e)
		}
	}
}

func TestOneRampHasNoIntervalForTheNext(t *testing.T) {
	b := newBench(6)
	b.plan.Exercise, b.plan.Ramps = 0, 1
	r := analyzed(t, b.measure(cycles(smooth, 1, 20, 860)))
	if r.AtRising.NextSI.Known() || r.AtRising.NextSI.Why == "" || !warned(r, "one-cycle") {
		t.Errorf("%+v", r.AtRising.NextSI)
	}
	near(t, "rising setting, psi", r.AtRising.TrueSI.Value/psi, 724.5, 0.01)
	holds(t, "rising setting", r.AtRising.TrueSI, b.settingAt(Rising, 9500*psi))
}

func TestTheSameInputGivesTheSameResult(t *testing.T) {
	set := newBench(7).measure(cycles(pumped, 4, 20, 860))
	print := func() string {
		r := analyzed(t, set)
		return fmt.Sprintf("%v", []any{r.Points, r.Cycles, r.Rising, r.Falling, r.Friction, r.Widths, r.WidthRatio, r.Grade,
			r.AtRising, r.AtFalling, r.ResetSI, r.Running, r.Warnings})
	}
	if first := print(); first != print() {
		t.Error("two runs differ")
	}
}

func TestPlantedFrictionMovesTheResult(t *testing.T) {
	// T-1 after its slide was cleaned: F0 60 lbf, mu 0.02.
	b := newBench(8)
	b.f0N, b.mu = 60*lbf, 0.02
	r := analyzed(t, b.measure(cycles(smooth, 4, 20, 860)))
	near(t, "mu", r.Friction.Mu.Value, 0.02, 0.05)
	if got := r.Friction.F0N.Value / lbf; math.Abs(got-60) > 5 {
		t.Errorf("F0 %.1f lbf, want 60", got)
	}
	if r.Grade == Service {
		t.Errorf("a half-width of %.3f is called service", r.WidthRatio.Value)
	}
}

func TestWrongBoreWarnsAndLeavesStress(t *testing.T) {
	b := newBench(9)
	b.areaM2 *= 0.9
	r := analyzed(t, b.measure(cycles(smooth, 4, 20, 900)))
	if !warned(r, "area-off") {
		t.Errorf("no warning at A* / geometry %.3f", r.Friction.AreaRatio.Value)
	}
	near(t, "A* / geometry", r.Friction.AreaRatio.Value, 0.9, 0.01)
	holds(t, "rising setting", r.AtRising.TrueSI, b.settingAt(Rising, 9500*psi))
}
