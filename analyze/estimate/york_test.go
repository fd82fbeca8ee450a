package estimate

import (
	"errors"
	"math"
	"testing"
)

func TestBothVariablesGivePearsonYork(t *testing.T) {
	// Pearson (1901) with York's weights (1966); York et al., Am. J. Phys. 72
	// (2004) 367-375, digits by 40-digit arithmetic. Convention: adjusted points.
	d := columns(t, "pearson-york.csv")
	ux, uy := make([]float64, len(d[0])), make([]float64, len(d[0]))
	for i := range ux {
		ux[i], uy[i] = 1/math.Sqrt(d[1][i]), 1/math.Sqrt(d[3][i])
	}
	l, err := FitBoth(d[0], ux, d[2], uy)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "a", l.A, 5.4799102240328653616, 1e-9)
	near(t, "b", l.B, -0.48053340744620198662, 1e-9)
	near(t, "se a", math.Sqrt(l.VarA), 0.294970735493108564, 1e-7)
	near(t, "se b", math.Sqrt(l.VarB), 0.057985009000774436397, 1e-7)
	near(t, "cov", l.CovAB, -0.016472544658115809168, 1e-7)
	near(t, "reduced chi2", l.ResidualSD*l.ResidualSD, 1.483294149257681, 1e-9)
	// Convention: scaled by sqrt(chi2 / dof), as scipy.odr prints.
	near(t, "scaled se a", math.Sqrt(l.VarA)*l.ResidualSD, 0.359246522551, 1e-7)
	near(t, "scaled se b", math.Sqrt(l.VarB)*l.ResidualSD, 0.0706202695288, 1e-7)
}

func TestBothVariablesGiveISO28037(t *testing.T) {
	// ISO/TS 28037:2010 clause 7.4: printed 0.5788, 0.4764, 2.159, 0.1355,
	// -0.0577, chi2 2.743.
	d := columns(t, "iso28037-gdr.csv")
	l, err := FitBoth(d[0], d[1], d[2], d[3])
	if err != nil {
		t.Fatal(err)
	}
	near(t, "a", l.A, 0.57882212214949839571, 1e-9)
	near(t, "u(a)", math.Sqrt(l.VarA), 0.47642062962177554287, 1e-7)
	near(t, "b", l.B, 2.1596565673992931713, 1e-9)
	near(t, "u(b)", math.Sqrt(l.VarB), 0.13554792746750879066, 1e-7)
	near(t, "cov", l.CovAB, -0.057716939098509832691, 1e-7)
	near(t, "chi2", l.ResidualSD*l.ResidualSD*l.DoF, 2.7426767897309672433, 1e-9)
}

func TestBothVariablesWithExactXAreWeightedLeastSquares(t *testing.T) {
	// ISO/TS 28037:2010 clause 6.3.
	d := columns(t, "iso28037-wls2.csv")
	w := make([]float64, len(d[2]))
	for i, u := range d[2] {
		w[i] = 1 / (u * u)
	}
	want, err := FitWeighted(d[0], d[1], w)
	if err != nil {
		t.Fatal(err)
	}
	l, err := FitBoth(d[0], make([]float64, len(w)), d[1], d[2])
	if err != nil {
		t.Fatal(err)
	}
	near(t, "a", l.A, want.A, 1e-12)
	near(t, "b", l.B, want.B, 1e-12)
	near(t, "var a", l.VarA, want.VarA, 1e-12)
	near(t, "cov", l.CovAB, want.CovAB, 1e-12)
}

func TestBothVariablesRefuseBadDoubt(t *testing.T) {
	x, y := []float64{1, 2, 3}, []float64{1, 2, 3.1}
	ones := []float64{1, 1, 1}
	for name, c := range map[string]struct {
		ux, uy []float64
		want   error
	}{
		"none at all":  {[]float64{0, 1, 1}, []float64{0, 1, 1}, ErrBadValue},
		"negative":     {[]float64{-1, 1, 1}, ones, ErrBadValue},
		"not a number": {ones, []float64{1, math.NaN(), 1}, ErrBadValue},
		"too few":      {ones[:2], ones, ErrTooFew},
	} {
		if _, err := FitBoth(x, c.ux, y, c.uy); !errors.Is(err, c.want) {
			t.Errorf("%s: %v, want %v", name, err, c.want)
		}
	}
}
