package simrig

import (
	"math"
	"math/rand/v2"
	"testing"
)

func TestBudgetDrawsEachErrorByItsUncertainty(t *testing.T) {
	b := Budget{GaugeZero: 1e4, GaugeSpan: 0.002, Indicator: 1e-6, Length: 0.0025, Modulus: 0.01,
		Section: 0.01, Area: 0.005, TiltRad: 0.02, CurlM: 1e-5, BandKS: 1e-4}
	read := func(c Config) map[string]float64 {
		return map[string]float64{
			"zero": c.Pressure.OffsetSI / 1e4, "span": (c.Pressure.Span - 1) / 0.002, "length": (c.Stretch.LengthFactor - 1) / 0.0025,
			"modulus": (c.ModulusFactor - 1) / 0.01, "section": (c.SectionFactor - 1) / 0.01, "area": (c.AreaFactor - 1) / 0.005,
			"tilt": c.Stretch.TiltRad / 0.02, "curl": c.Stretch.CurlM / 1e-5, "band": c.Heat.BandKS / 1e-4,
			"indicator": c.Indicator.RippleSI / math.Sqrt2 / 1e-6,
		}
	}
	rng := rand.New(rand.NewPCG(5, 6))
	sum, squares := map[string]float64{}, map[string]float64{}
	const n = 600
	base := t1(t)
	for range n {
		c := base
		if err := b.Draw(&c, rng); err != nil {
			t.Fatal(err)
		}
		for name, z := range read(c) {
			sum[name] += z
			squares[name] += z * z
		}
	}
	for name := range sum {
		near(t, name+": mean", sum[name]/n, 0, 4.5/math.Sqrt(n))
		near(t, name+": spread", math.Sqrt(squares[name]/n), 1, 4.5/math.Sqrt(2*n))
	}
}

// The errors reach the truth and the readings: the stretch at a stress by the
// true length, modulus and tilt, the setting by the true area and section.
func TestDrawnErrorsAreInTruthAndReadings(t *testing.T) {
	c := planted(t, nil)
	c.ModulusFactor, c.SectionFactor, c.AreaFactor = 0.97, 1.02, 0.99
	c.Stretch.LengthFactor, c.Stretch.TiltRad = 1.004, 0.05
	c.Pressure.OffsetSI, c.Pressure.Span = 2e4, 1.01
	r, trace := mustTrace(t, c)
	truth := r.Truth()
	near(t, "modulus", truth.ModulusPa, 0.97*29e6*psiPa, 1)
	near(t, "gauge length", truth.GaugeM, 1.004*0.508, 1e-12)
	near(t, "net section", truth.NetAreaM2, 1.02*0.3045*inchM*inchM, 1e-12)
	const stress = 65.5e6
	up := crossings(trace, truth.PullN(stress), true)[0]
	near(t, "true setting", up, truth.RisingPa(stress), 3e-4*up)
	near(t, "setting as shown", truth.Shown(up), up*1.01+2e4, 1e-6)
	for _, m := range trace {
		if m.PullN > truth.PullN(stress) {
			near(t, "stretch, um", m.ExtensionM*1e6, truth.ExtensionM(truth.stressPa(m.PullN))*(1-(1+poisson)*0.05*0.05)*1e6, 0.01)
			break
		}
	}
}
