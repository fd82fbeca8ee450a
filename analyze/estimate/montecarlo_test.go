package estimate

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

func TestPropagateGivesSupplement1(t *testing.T) {
	// JCGM 101:2008 clause 9.2: four inputs added. Half-widths by exact
	// convolution; they round to the printed 3.92, 3.88, 17.0.
	for _, c := range []struct {
		name        string
		stds        []float64
		rectangular bool
		std, half   float64
		agrees      bool // with the framework's 1.96 u, clause 8
	}{
		{"9.2.2", []float64{1, 1, 1, 1}, false, 2, 3.919927969080108, true},
		{"9.2.3", []float64{1, 1, 1, 1}, true, 2, 3.879406741347821, true}, // 0.0405 apart, two digits of 2.0 allow 0.05
		{"9.2.4", []float64{1, 1, 1, 10}, true, 10.14889156509222, 17.01581409986931, false},
	} {
		n := 1000000
		if testing.Short() {
			n = 100000
		}
		p, err := Propagate(rand.New(rand.NewPCG(1, 101)), n, 0.95, func(r *rand.Rand) float64 {
			sum := 0.0
			for _, s := range c.stds {
				if c.rectangular {
					sum += DrawRectangular(r, 0, s)
				} else {
					sum += DrawEstimate(r, Estimate{Random: s, DoF: math.Inf(1)})
				}
			}
			return sum
		})
		if err != nil {
			t.Fatal(err)
		}
		root := math.Sqrt(float64(n))
		if math.Abs(p.Std-c.std) > 4*c.std/root || math.Abs(p.Mean) > 4*c.std/root {
			t.Errorf("%s: mean %v, u %v, want 0, %v", c.name, p.Mean, p.Std, c.std)
		}
		// Three standard errors of a quantile at 2.5 %, its density about 0.06 / u.
		slack := 4 * math.Sqrt(0.025*0.975) / 0.06 * c.std / root
		if math.Abs(p.Low+c.half) > slack || math.Abs(p.High-c.half) > slack {
			t.Errorf("%s: %v to %v, want +/- %v", c.name, p.Low, p.High, c.half)
		}
		if w := p.ShortHi - p.ShortLow; w > p.High-p.Low || w < 2*c.half-3*slack {
			t.Errorf("%s: shortest interval %v wide", c.name, w)
		}
		half := 1.959963984540054 * c.std
		if n == 1000000 && p.Agrees(-half, half) != c.agrees {
			t.Errorf("%s: agreement with the framework is %v", c.name, !c.agrees)
		}
	}
}

func TestPropagateDrawsStudentsT(t *testing.T) {
	// Student's t with few degrees of freedom: the two-sided 95 % factors of the
	// table.
	n := 200000
	if testing.Short() {
		n = 50000
	}
	for dof, want := range map[float64]float64{1: 12.7062047, 2: 4.30265273, 5: 2.57058184} {
		p, err := Propagate(rand.New(rand.NewPCG(2, uint64(dof))), n, 0.95, func(r *rand.Rand) float64 {
			return DrawEstimate(r, Estimate{Value: 3, Random: 2, DoF: dof})
		})
		if err != nil {
			t.Fatal(err)
		}
		if half := (p.High - p.Low) / 4; math.Abs(half/want-1) > 10/math.Sqrt(float64(n))*2 {
			t.Errorf("dof %v: factor %v, want %v", dof, half, want)
		}
	}
}

func TestPropagateRefusesNonsense(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 3))
	if _, err := Propagate(r, 10, 0.95, func(*rand.Rand) float64 { return 0 }); !errors.Is(err, ErrTooFew) {
		t.Error(err)
	}
	if _, err := Propagate(r, 1000, 0.95, func(*rand.Rand) float64 { return math.NaN() }); !errors.Is(err, ErrBadValue) {
		t.Error(err)
	}
}

func TestToleranceIsHalfTheLastDigit(t *testing.T) {
	// JCGM 101:2008 clause 7.9.2: 0.00035 = 35e-5 has 5e-6.
	for std, want := range map[float64]float64{0.00035: 5e-6, 2: 0.05, 32: 0.5, 0.0996: 0.005, 0: 0} {
		if got := NumericalTolerance(std, 2); math.Abs(got-want) > 1e-12*want {
			t.Errorf("tolerance of %v is %v, want %v", std, got, want)
		}
	}
}
