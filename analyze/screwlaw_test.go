package analyze

import (
	"math"
	"testing"

	"tautramp/acquire/mill"
)

func within(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s = %.12g, want %.12g", what, got, want)
	}
}

// Square thread, d 32 mm, pitch 4 mm, two starts, f = f_c = 0.08, d_c 40 mm, F
// 6.4 kN: Shigley, 9th edition, example 8-1 prints 26.18, 9.77 and 0.311 (from
// memory); the digits here were computed with 40-digit arithmetic.
func TestPowerScrewWorkedExample(t *testing.T) {
	s := ScrewLaw{LeadM: 0.008, PitchDiameterM: 0.030, CollarM: 0.020, ThreadMu: 0.08, CollarMu: 0.08}
	within(t, "raise", s.Raise(6400), 26.1769547449929, 1e-13)
	within(t, "loosen", s.Loosen(6400), 9.77442842908161, 1e-13)
	within(t, "efficiency", s.Efficiency(6400), 0.311294157998409, 1e-13)
	within(t, "lead's share", s.leadShare()*6400, 8.20126315795564, 1e-13)
	within(t, "friction torque", (s.Raise(6400)+s.Loosen(6400))/2, 17.9756915870373, 1e-13)
}

// Acme thread, F 12,500 lb, pitch diameter 1.3429 in, lead 0.25 in, f 0.15, cosine
// of 14.5 degrees taken as 0.968: Mott, 4th edition, example 17-1 prints a lead
// angle of 3.39 degrees and 1809 lb in, which is 0.3 % below what its own formula
// gives (computed: 1814.609 up, 795.920 down, efficiency 0.274086).
func TestAcmeScrewWorkedExample(t *testing.T) {
	s := ScrewLaw{LeadM: 0.25 * inch, PitchDiameterM: 1.3429 * inch, FlankRad: math.Acos(0.968), ThreadMu: 0.15}
	within(t, "lead angle", math.Atan(s.slope())*180/math.Pi, 3.39126341, 1e-8)
	within(t, "raise, computed", s.Raise(12500*lbf)/(lbf*inch), 1814.60945488, 1e-11)
	within(t, "raise, printed", s.Raise(12500*lbf)/(lbf*inch), 1809, 5e-3)
	within(t, "loosen", s.Loosen(12500*lbf)/(lbf*inch), 795.919796943, 1e-11)
	within(t, "efficiency", s.Efficiency(12500*lbf), 0.274086, 1e-5)
}

// t2Screw is the invented mill's T-2, greased and dry.
func t2Screw(t testing.TB) (greased, dry ScrewLaw) {
	t.Helper()
	tensioner, err := profile(t).FindTensioner("T-2")
	if err != nil {
		t.Fatal(err)
	}
	greased = expectedLaw(*tensioner.Screw)
	dry = greased
	dry.ThreadMu, dry.CollarMu = 0.20, 0.05
	return greased, dry
}

// The invented mill's figures for QN-17 at 14,000 psi, a wheel pull of 8.41 kN:
// 18.8 N m greased with efficiency 0.36, 32.0 N m dry with 0.21, 5.3 N m to
// loosen; the greased card on the dry screw gives about 8,190 psi, 42 % too
// little.
func TestScrewOfTheInventedMill(t *testing.T) {
	greased, dry := t2Screw(t)
	band, err := profile(t).FindBand("QN-17")
	if err != nil {
		t.Fatal(err)
	}
	pull := 2 * band.Target.SI * band.NetAreaM2()
	near := func(what string, got, want, half float64) {
		if math.Abs(got-want) > half {
			t.Errorf("%s is %.4g, want %.4g", what, got, want)
		}
	}
	near("wheel pull, kN", pull/1e3, 8.41, 0.005)
	near("greased, N m", greased.Raise(pull), 18.8, 0.05)
	near("greased, efficiency", greased.Efficiency(pull), 0.36, 0.005)
	near("loosening, N m", greased.Loosen(pull), 5.3, 0.05)
	near("dry, N m", dry.Raise(pull), 32.0, 0.05)
	near("dry, efficiency", dry.Efficiency(pull), 0.21, 0.005)
	stress := dry.Load(greased.Raise(pull)) / (2 * band.NetAreaM2())
	near("dry stress by the greased card, psi", stress/psi, 8190, 10)
	near("its share of what was wanted", stress/band.Target.SI-1, -0.42, 0.005)
}

// threadMu and Load must undo perN and Raise, self-locking or not.
func TestScrewLawInverts(t *testing.T) {
	for _, mu := range []float64{0.02, 0.08, 0.2, 0.5} {
		for _, lead := range []float64{0.003, 0.008, 0.03} {
			s := ScrewLaw{LeadM: lead, PitchDiameterM: 0.0215, FlankRad: mill.Screw{}.FlankRad(), CollarM: 0.014, ThreadMu: mu, CollarMu: 0.03, RestNm: 0.3}
			within(t, "thread friction", s.threadMu((s.perN(1)+s.perN(-1))/2), mu, 1e-12)
			within(t, "load", s.Load(s.Raise(5000)), 5000, 1e-12)
		}
	}
}
