package estimate

import (
	"errors"
	"math"
	"testing"
)

// NIST/SEMATECH e-Handbook 2.3.6, load cells; the handbook prints -0.183980E-04,
// 0.100102, 0.703186E-05 (from memory); digits from exact rational least squares,
// standard errors and limits from R lm.
func TestPolynomialGivesNISTLoadCell(t *testing.T) {
	d := columns(t, "nist-handbook-loadcell.csv")
	p, err := FitPolynomial(d[0], d[1], 2)
	if err != nil {
		t.Fatal(err)
	}
	for k, want := range []float64{-1.8398046726798761e-5, 0.10010248539736545, 7.0318651148180331e-6} {
		near(t, "coefficient", p.Coef[k], want, 2e-9)
	}
	for k, want := range []float64{2.45072198937694e-05, 4.83869944761856e-06, 2.01361279389416e-07} {
		near(t, "standard error", math.Sqrt(p.Cov[k][k]), want, 1e-8)
	}
	near(t, "residual SD", p.ResidualSD, 3.7640294199275e-05, 1e-9)
	if p.DoF != 30 {
		t.Errorf("%v degrees of freedom", p.DoF)
	}
	// R predict, confidence limits at the first of its two loads, 9.0.
	y, std := p.At(9)
	near(t, "curve at 9", y, 0.901473551603862, 1e-10)
	near(t, "upper limit at 9", y+Student95(p.DoF)*std, 0.90149304385494, 1e-10)
}

func TestPolynomialGivesNISTCertifiedNorris(t *testing.T) {
	d := columns(t, "norris.csv") // NIST StRD
	p, err := FitPolynomial(d[0], d[1], 1)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "slope", p.Coef[1], 1.00211681802045, 1e-11)
	near(t, "intercept", p.Coef[0], -0.262323073774029, 1e-10)
	near(t, "SD of the slope", math.Sqrt(p.Cov[1][1]), 0.429796848199937e-03, 1e-10)
}

func TestPolynomialRefusesWhatItCannotTell(t *testing.T) {
	if _, err := FitPolynomial([]float64{1, 2, 3}, []float64{1, 2, 3}, 2); !errors.Is(err, ErrTooFew) {
		t.Error(err)
	}
	if _, err := FitPolynomial([]float64{1, 1, 2, 2, 2}, []float64{1, 2, 3, 4, 5}, 2); !errors.Is(err, ErrNoSpread) {
		t.Error(err)
	}
	if _, err := FitPolynomial([]float64{1, 1, 1, 1}, []float64{1, 2, 3, 4}, 1); !errors.Is(err, ErrNoSpread) {
		t.Error(err)
	}
}

func TestChanceAndExpandedUncertainty(t *testing.T) {
	e := Estimate{Value: 1.3, System: 0.2, DoF: math.Inf(1), Method: "given"}
	near(t, "U", e.Expanded(), 0.4, 1e-12)
	// Normal distribution: Phi(1.5), computed.
	near(t, "chance", e.ChanceBelow(1.6), 0.933192798731142, 1e-12)
	// Student's t: 2.776445 is the 97.5 % point at 4 degrees of freedom (JCGM 100 Table G.2).
	scatter := Estimate{Value: 0, Random: 1, DoF: 4, Method: "given"}
	near(t, "chance at 4", scatter.ChanceBelow(2.776445105), 0.975, 1e-9)
	// 2.87 is the factor for 95.45 % at 4 degrees of freedom (JCGM 100 Table G.2).
	if u := scatter.Expanded(); math.Abs(u-2.87) > 0.005 {
		t.Errorf("U at 4 degrees of freedom is %v", u)
	}
	if none := Unknown("why"); !math.IsNaN(none.Expanded()) || !math.IsNaN(none.ChanceBelow(1)) {
		t.Error("figures out of nothing")
	}
}
