package estimate

import (
	"errors"
	"fmt"
	"math"
)

// ErrNoEnd is a search that did not come to rest.
var ErrNoEnd = errors.New("the search does not come to rest")

// FitBoth is the line through points whose x and y are both in doubt, ux and uy
// being their standard uncertainties, independent of each other: the unified
// equations of York, Evensen, Martinez and De Basabe Delgado, Am. J. Phys. 72
// (2004) 367-375, which are also the generalised distance regression of ISO/TS
// 28037 clause 7.
//
// The covariance follows from ux and uy alone, by York's formula at the
// adjusted points; ResidualSD is sqrt(chi2 / DoF), and multiplying the standard
// errors by it gives the convention "scaled". ux or uy of a point may be 0, not
// both. Errors as FitLine, and ErrNoEnd.
func FitBoth(x, ux, y, uy []float64) (Line, error) {
	if err := checkBoth(x, ux, y, uy); err != nil {
		return Line{}, err
	}
	const rounds, still = 200, 1e-15
	b, err := slopeStart(x, y)
	if err != nil {
		return Line{}, err
	}
	var s bothSums
	for range rounds {
		s = bothAt(x, ux, y, uy, b)
		next := s.slope()
		if !finite(next) {
			return Line{}, fmt.Errorf("fit a line with doubt in both variables: %w", ErrNoSpread)
		}
		moved := math.Abs(next - b)
		b = next
		if moved <= still*math.Abs(b) {
			return s.line(x, ux, y, uy, b), nil
		}
	}
	if moved := math.Abs(s.slope() - b); moved <= 1e-9*math.Abs(b) {
		return s.line(x, ux, y, uy, b), nil
	}
	return Line{}, fmt.Errorf("fit a line with doubt in both variables: %w", ErrNoEnd)
}

func slopeStart(x, y []float64) (float64, error) {
	l, err := fitCentred(x, y, nil)
	return l.B, err
}

func checkBoth(x, ux, y, uy []float64) error {
	if err := checkPoints(x, y, nil); err != nil {
		return err
	}
	if len(ux) != len(x) || len(uy) != len(x) {
		return fmt.Errorf("fit a line: %d and %d uncertainties for %d points: %w", len(ux), len(uy), len(x), ErrTooFew)
	}
	for i := range x {
		if !(ux[i] >= 0 && uy[i] >= 0 && ux[i]+uy[i] > 0 && finite(ux[i]+uy[i])) {
			return fmt.Errorf("fit a line: uncertainty of point %d: %w", i, ErrBadValue)
		}
	}
	return nil
}

// bothSums is one round of York's iteration at a slope.
type bothSums struct {
	meanX, meanY float64
	weight, beta []float64 // W, and beta, the adjusted x about the mean
	up, down     float64   // the next slope is up / down
}

func bothAt(x, ux, y, uy []float64, b float64) bothSums {
	s := bothSums{weight: make([]float64, len(x)), beta: make([]float64, len(x))}
	total := 0.0
	for i := range x {
		s.weight[i] = 1 / (uy[i]*uy[i] + b*b*ux[i]*ux[i])
		total += s.weight[i]
		s.meanX += s.weight[i] * x[i]
		s.meanY += s.weight[i] * y[i]
	}
	s.meanX /= total
	s.meanY /= total
	for i := range x {
		u, v := x[i]-s.meanX, y[i]-s.meanY
		s.beta[i] = s.weight[i] * (u*uy[i]*uy[i] + b*v*ux[i]*ux[i])
		s.up += s.weight[i] * s.beta[i] * v
		s.down += s.weight[i] * s.beta[i] * u
	}
	return s
}

func (s bothSums) slope() float64 { return s.up / s.down }

func (s bothSums) line(x, ux, y, uy []float64, b float64) Line {
	l := Line{A: s.meanY - b*s.meanX, B: b, N: len(x), DoF: float64(len(x) - 2)}
	var total, adjusted float64
	for i, w := range s.weight {
		total += w
		adjusted += w * s.beta[i]
	}
	adjusted /= total // mean adjusted x, about meanX
	var spread, chi2 float64
	for i, w := range s.weight {
		spread += w * (s.beta[i] - adjusted) * (s.beta[i] - adjusted)
		r := y[i] - l.A - b*x[i]
		chi2 += w * r * r
	}
	at := s.meanX + adjusted
	l.VarB = 1 / spread
	l.VarA = 1/total + at*at*l.VarB
	l.CovAB = -at * l.VarB
	if l.DoF > 0 {
		l.ResidualSD = math.Sqrt(chi2 / l.DoF)
	}
	return l
}
