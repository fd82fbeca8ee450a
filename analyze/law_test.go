package analyze

import (
	"math"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s = %.12g, want %.12g within %.1g", what, got, want, tolerance)
	}
}

func TestHookeAndBandForce(t *testing.T) {
	// Worked by hand from Hooke's law and exact unit definitions.
	k := constants{modulusPa: 30e6 * psi, gaugeM: 20 * inch, areaM2: 6 * 0.049 * inch * inch}
	near(t, "stretch of 10,000 psi over 20 in, in", 10000*psi/k.paPerM()/inch, 0.00666666666667, 1e-11)
	near(t, "the same, mm", 10000*psi/k.paPerM()*1e3, 0.169333333333, 1e-11)
	metric := constants{modulusPa: 207e9, gaugeM: 0.5}
	near(t, "0.15 mm on 500 mm, Pa", 0.15e-3*metric.paPerM(), 62.1e6, 1e-12)
	near(t, "the same, psi", 0.15e-3*metric.paPerM()/psi, 9006.84351304599, 1e-12)
	near(t, "wheel pull of 10,000 psi in two spans of 6 x 0.049 in, N", 10000*psi/k.paPerM()*k.pullPerM(), 26155.5430977317, 1e-12)
	near(t, "the same, lbf", 10000*psi/k.paPerM()*k.pullPerM()/lbf, 5880, 1e-12)
}

func TestCylinderAreaEntersAsGeometry(t *testing.T) {
	// 1,000 psi on a bore of 4 in: 12,566.3706143592 lbf on the cap side.
	p := profile(t)
	p.Tensioners[0].Cylinders = 1
	p.Tensioners[0].Bore = mill.Length{Quantity: mill.Quantity{SI: 4 * inch, Entered: "4 in"}}
	s, err := resolve(Input{Profile: p, Tensioner: "T-1", Band: "QW-6"})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "force, lbf", 1000*psi*s.GeometryM2/lbf, 12566.3706143592, 1e-12)
}

// exactRamp is the force balance itself, extension on setting, both ways.
func exactRamp(b *bench) ramp {
	line := func(sign float64) estimate.Line {
		n := 2 * b.netM2 * b.modulusPa / b.gaugeM // pull of one metre of stretch
		slope := b.areaM2 / (1 + sign*b.mu) / n
		at0 := (-sign*b.f0N/(1+sign*b.mu) - b.weightN) / n
		return estimate.Line{A: b.zeroM + at0, B: slope}
	}
	return ramp{rising: line(+1), falling: line(-1), zeroM: b.zeroM}
}

func TestForceBalanceIsInverted(t *testing.T) {
	b := newBench(1)
	k := constants{modulusPa: b.modulusPa, gaugeM: b.gaugeM, areaM2: b.netM2}
	r := exactRamp(b)
	got := balanceOf(r, k)
	near(t, "mu", got.mu(), b.mu, 1e-12)
	near(t, "A*", got.areaM2(), b.areaM2, 1e-12)
	near(t, "W", got.weightN(), b.weightN, 1e-11)
	near(t, "F0", got.f0N(), b.f0N, 1e-10)
	near(t, "F0 + mu W", got.f0MuWN(), b.f0N+b.mu*b.weightN, 1e-10)
	// Half-width h(F) = [F0 + mu (F + W)] / A* at the target.
	rising := settingFigure(Rising, 9500*psi)(r, k)
	pull := 2 * b.netM2 * 9500 * psi
	near(t, "half-width", halfWidth(rising)(r, k), (b.f0N+b.mu*(pull+b.weightN))/b.areaM2, 1e-11)
	// The frictionless line: p A* = F + W.
	near(t, "middle", middleStress(r, k, rising), (rising*b.areaM2-b.weightN)/(2*b.netM2), 1e-11)
}

func TestFrictionAloneConstantAndAloneProportional(t *testing.T) {
	// Constant friction: k x +/- Fc, half the difference is Fc whatever the load.
	// Proportional: half the difference over the mean is mu.
	for _, c := range []struct{ f0N, mu float64 }{{20, 0}, {0, 0.05}} {
		b := newBench(1)
		b.f0N, b.mu = c.f0N, c.mu
		got := balanceOf(exactRamp(b), constants{modulusPa: b.modulusPa, gaugeM: b.gaugeM, areaM2: b.netM2})
		if math.Abs(got.f0N()-c.f0N) > 1e-8 || math.Abs(got.mu()-c.mu) > 1e-12 {
			t.Errorf("F0 %v and mu %v, want %v and %v", got.f0N(), got.mu(), c.f0N, c.mu)
		}
	}
}

func TestZeroErrorMovesWeightAndNothingElse(t *testing.T) {
	b := newBench(1)
	k := constants{modulusPa: b.modulusPa, gaugeM: b.gaugeM, areaM2: b.netM2}
	r := exactRamp(b)
	for _, offIn := range []float64{-0.0004, 0.0002, 0.001} {
		shifted := r
		shifted.zeroM += offIn * inch
		got := balanceOf(shifted, k)
		near(t, "F0", got.f0N(), b.f0N, 1e-9)
		near(t, "mu", got.mu(), b.mu, 1e-12)
		near(t, "A*", got.areaM2(), b.areaM2, 1e-12)
		near(t, "W", got.weightN(), b.weightN+2*b.netM2*b.modulusPa*offIn*inch/b.gaugeM, 1e-9)
	}
}

func TestT1AtRoundStresses(t *testing.T) {
	// The invented T-1 with QW-6, gauge psi rising and falling.
	b := newBench(1)
	k := constants{modulusPa: b.modulusPa, gaugeM: b.gaugeM, areaM2: b.netM2}
	r := exactRamp(b)
	for _, c := range []struct{ stress, up, down float64 }{
		{2000, 238, 177}, {6000, 498, 414}, {9500, 724, 621}, {11000, 822, 710},
	} {
		for d, want := range map[Direction]float64{Rising: c.up, Falling: c.down} {
			if got := settingFigure(d, c.stress*psi)(r, k) / psi; math.Abs(got-want) > 1 {
				t.Errorf("%v psi %s: %.2f, want %v", c.stress, d, got, want)
			}
		}
	}
}
