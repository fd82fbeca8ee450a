package simrig

import "testing"

// Hooke: 10,000 psi at E = 30e6 psi over 20 in is 0.00666666666667 in, and
// 62.1 MPa at 207 GPa over 500 mm is 0.15 mm (computed from the definition).
func TestExtensionIsHookes(t *testing.T) {
	none := Stretch{SeatingStrain: -1}
	us := newGauge(none, 20*inchM, 30e6*psiPa, 1e-4)
	near(t, "inch", us.extensionM(1e-4*10000*psiPa, 0)/inchM, 0.00666666666667, 1e-13)
	si := newGauge(none, 0.5, 207e9, 2e-4)
	near(t, "mm", si.extensionM(2e-4*62.1e6, 0)*1e3, 0.15, 1e-12)
}

func TestExtensionGrowsWithEveryPull(t *testing.T) {
	g := newGauge(Stretch{}, 0.508, 200e9, 1.96e-4)
	last := 0.0
	for stress := 0.05e6; stress < 90e6; stress += 0.05e6 {
		e := g.extensionM(g.netM2*stress, 0)
		if e <= last {
			t.Fatalf("%g m at %g Pa, %g m just before", e, stress, last)
		}
		last = e
	}
}

func TestMountFaultsAdd(t *testing.T) {
	clean := newGauge(Stretch{}, 0.508, 200e9, 1.96e-4)
	g := newGauge(Stretch{CurlM: -2e-5, DriftMS: 1e-8, SlipM: 2e-5, SlipAtS: 50}, 0.508, 200e9, 1.96e-4)
	pull := g.netM2 * 60e6
	near(t, "slack, at the start", g.extensionM(0, 0), 0, 0)
	near(t, "pulled straight, later", g.extensionM(pull, 20)-clean.extensionM(pull, 20), -2e-5+20e-8, 1e-11)
	near(t, "after the slip", g.extensionM(pull, 50)-clean.extensionM(pull, 50), 50e-8, 1e-11)
}
