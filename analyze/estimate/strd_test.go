package estimate

import (
	"math"
	"testing"
)

// NIST StRD linear least squares: certified coefficients and standard errors.
// Tolerances are a hundred times what a QR decomposition in double precision
// reaches on each set, Filip's a little more.
func TestPolynomialGivesNISTCertified(t *testing.T) {
	ones := []float64{1, 1, 1, 1, 1, 1}
	for _, c := range []struct {
		file       string
		coef, sd   []float64
		residualSD float64
		tolerance  float64
	}{
		{"strd-pontius.csv", []float64{0.673565789473684e-03, 0.732059160401003e-06, -0.316081871345029e-14},
			[]float64{0.107938612033077e-03, 0.157817399981659e-09, 0.486652849992036e-16}, 0.205177424076185e-03, 1e-10},
		{"strd-wampler1.csv", ones, nil, 0, 5e-8},
		{"strd-wampler3.csv", ones, []float64{2152.32624678170, 2363.55173469681, 779.343524331583, 101.475507550350, 5.64566512170752, 0.112324854679312},
			2360.14502379268, 1e-7},
		{"strd-wampler5.csv", ones, []float64{21523262.4678170, 23635517.3469681, 7793435.24331583, 1014755.07550350, 56456.6512170752, 1123.24854679312},
			23601450.2379268, 1e-4},
		{"strd-filip.csv", []float64{-1467.48961422980, -2772.17959193342, -2316.37108160893, -1127.97394098372, -354.478233703349,
			-75.1242017393757, -10.8753180355343, -1.06221498588947, -0.670191154593408e-01, -0.246781078275479e-02, -0.402962525080404e-04},
			[]float64{298.084530995537, 559.779865474950, 466.477572127796, 227.204274477751, 71.6478660875927, 15.2897178747400,
				2.23691159816033, 0.221624321934227, 0.142363763154724e-01, 0.535617408889821e-03, 0.896632837373868e-05}, 0.334801051324544e-02, 1e-5},
	} {
		d := columns(t, c.file)
		p, err := FitPolynomial(d[0], d[1], len(c.coef)-1)
		if err != nil {
			t.Errorf("%s: %v", c.file, err)
			continue
		}
		for k, want := range c.coef {
			near(t, c.file+": coefficient", p.Coef[k], want, c.tolerance)
		}
		for k, want := range c.sd {
			near(t, c.file+": standard error", math.Sqrt(p.Cov[k][k]), want, math.Min(c.tolerance, 1e-6)*10)
		}
		if math.Abs(p.ResidualSD-c.residualSD) > math.Max(1e-7*c.residualSD, 1e-5) {
			t.Errorf("%s: residual SD %v, want %v", c.file, p.ResidualSD, c.residualSD)
		}
	}
}

func TestProjectionGivesNISTCertifiedNoInt1(t *testing.T) {
	// The projection that the delay rests on, of one column and no constant.
	d := columns(t, "strd-noint1.csv")
	rest, ok := project([][]float64{d[0]}, d[1])
	if !ok {
		t.Fatal("no projection")
	}
	near(t, "residual SD", math.Sqrt(sumSquares(rest)/10), 3.56753034006338, 1e-12)
	near(t, "slope", (d[1][0]-rest[0])/d[0][0], 2.07438016528926, 1e-13)
}
