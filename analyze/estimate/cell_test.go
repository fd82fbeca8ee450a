package estimate

import (
	"math"
	"testing"
)

func TestCellKeepsItsDigits(t *testing.T) {
	// Against the same probability from the error function, where that has digits.
	for _, c := range [][2]float64{{-1, 1}, {-0.3, 2}, {2, 2.5}, {-2.5, -2}, {-9, 0}, {0, 9}, {4, 30}, {-20, -6}, {5.2, 5.3}, {-30, 0.1}} {
		a, b := c[0], c[1]
		p := (math.Erfc(a/math.Sqrt2) - math.Erfc(b/math.Sqrt2)) / 2
		if a < 0 && b > 0 {
			p = (math.Erf(b/math.Sqrt2) - math.Erf(a/math.Sqrt2)) / 2
		} else if b <= 0 {
			p = (math.Erfc(-b/math.Sqrt2) - math.Erfc(-a/math.Sqrt2)) / 2
		}
		l, ha, hb := cell(a, b)
		if math.Abs(l-math.Log(p)) > 1e-10 {
			t.Errorf("log P(%v, %v) = %.14g, want %.14g", a, b, l, math.Log(p))
		}
		density := func(z float64) float64 { return math.Exp(-z*z/2) / math.Sqrt(2*math.Pi) }
		if math.Abs(ha-density(a)/p) > 1e-9*(1+ha) || math.Abs(hb-density(b)/p) > 1e-9*(1+hb) {
			t.Errorf("ends of %v, %v: %v, %v, want %v, %v", a, b, ha, hb, density(a)/p, density(b)/p)
		}
	}
}

func TestCellFarOut(t *testing.T) {
	// ln(1 - Phi(z)) by the asymptotic series (Abramowitz and Stegun 26.2.12).
	for _, z := range []float64{20, 40, 300} {
		s := 1.0
		for k, term := 1.0, 1.0; k < 8; k++ {
			term *= -(2*k - 1) / (z * z)
			s += term
		}
		want := -z*z/2 - math.Log(z*math.Sqrt(2*math.Pi)) + math.Log(s)
		for _, ends := range [][2]float64{{z, 1e6}, {-1e6, -z}} {
			if l, _, _ := cell(ends[0], ends[1]); math.Abs(l/want-1) > 1e-13 {
				t.Errorf("cell%v = %.15g, want %.15g", ends, l, want)
			}
		}
		l, ha, hb := cell(z, z+1e-9)
		if math.IsInf(l, 0) || math.IsNaN(l+ha+hb) {
			t.Errorf("a narrow cell at %v: %v %v %v", z, l, ha, hb)
		}
	}
}
