package estimate

import (
	"errors"
	"fmt"
	"math"
)

// Why a fit was refused.
var (
	ErrTooFew   = errors.New("too few values")
	ErrNoSpread = errors.New("the values do not differ")
	ErrBadValue = errors.New("not a finite number")
)

// Line is a straight line y = A + B x with the covariance of its coefficients.
type Line struct {
	A, B              float64
	VarA, VarB, CovAB float64
	ResidualSD        float64 // sqrt(sum r^2 / DoF); with weights, sqrt(sum w r^2 / DoF)
	DoF               float64
	N                 int
}

// FitLine is the least-squares line of y on x, all y equally doubtful, the
// doubt estimated from the residuals (JCGM 100 H.3). Needs three points and two
// different x. Errors: ErrTooFew, ErrNoSpread, ErrBadValue.
func FitLine(x, y []float64) (Line, error) {
	l, err := fitCentred(x, y, nil)
	if err != nil {
		return Line{}, err
	}
	return l.scaled(l.ResidualSD * l.ResidualSD), nil
}

// FitWeighted is the line with weights w = 1/u(y)^2, u(y) being known standard
// uncertainties: the covariance follows from the weights alone (ISO/TS 28037
// clause 6.2). Two points are enough then, with DoF 0. Errors as FitLine.
func FitWeighted(x, y, w []float64) (Line, error) { return fitCentred(x, y, w) }

// fitCentred works about the weighted means, in two passes, so that a large
// offset costs no digits. nil weights are ones.
func fitCentred(x, y, w []float64) (Line, error) {
	if err := checkPoints(x, y, w); err != nil {
		return Line{}, err
	}
	weight := func(i int) float64 {
		if w == nil {
			return 1
		}
		return w[i]
	}
	var sw, sx, sy float64
	for i := range x {
		sw += weight(i)
		sx += weight(i) * x[i]
		sy += weight(i) * y[i]
	}
	mx, my := sx/sw, sy/sw
	var sxx, sxy float64
	for i := range x {
		dx := x[i] - mx
		sxx += weight(i) * dx * dx
		sxy += weight(i) * dx * (y[i] - my)
	}
	if !(sxx > 0) {
		return Line{}, fmt.Errorf("fit a line: x: %w", ErrNoSpread)
	}
	l := Line{B: sxy / sxx, N: len(x), DoF: float64(len(x) - 2)}
	l.A = my - l.B*mx
	var rss float64
	for i := range x {
		r := (y[i] - my) - l.B*(x[i]-mx)
		rss += weight(i) * r * r
	}
	if l.DoF > 0 {
		l.ResidualSD = math.Sqrt(rss / l.DoF)
	}
	l.VarB = 1 / sxx
	l.VarA = 1/sw + mx*mx/sxx
	l.CovAB = -mx / sxx
	return l, nil
}

func checkPoints(x, y, w []float64) error {
	least := 3
	if w != nil {
		least = 2
	}
	if len(x) != len(y) || w != nil && len(w) != len(x) {
		return fmt.Errorf("fit a line: %d x for %d y: %w", len(x), len(y), ErrTooFew)
	}
	if len(x) < least {
		return fmt.Errorf("fit a line: %d points where %d are needed: %w", len(x), least, ErrTooFew)
	}
	for i := range x {
		if !finite(x[i]) || !finite(y[i]) {
			return fmt.Errorf("fit a line: point %d: %w", i, ErrBadValue)
		}
		if w != nil && !(w[i] > 0 && finite(w[i])) {
			return fmt.Errorf("fit a line: weight %d is not positive: %w", i, ErrBadValue)
		}
	}
	return nil
}

func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }

func (l Line) scaled(by float64) Line {
	l.VarA *= by
	l.VarB *= by
	l.CovAB *= by
	return l
}

// At is the line at x with the standard uncertainty of the line there.
func (l Line) At(x float64) (y, std float64) {
	return l.A + l.B*x, math.Sqrt(math.Max(0, l.VarA+2*x*l.CovAB+x*x*l.VarB))
}

// InverseAt is the x at which the line has the value y, with the standard
// uncertainty that the line gives it (delta method).
func (l Line) InverseAt(y float64) (x, std float64) { return l.Inverse(y, 0) }

// Inverse is InverseAt for a y that is itself in doubt by stdY, independent of
// the line (ISO/TS 28037 clause 11.3).
func (l Line) Inverse(y, stdY float64) (x, std float64) {
	x = (y - l.A) / l.B
	_, own := l.At(x)
	return x, math.Hypot(own, stdY) / math.Abs(l.B)
}

// Fieller is the exact interval of the x at which the line has the value y:
// every x that the factor t (Student's, at the level wanted) does not refute.
// stdY is the standard uncertainty of y, independent of the line. ok is false
// when the slope is not told from zero, and the interval has no ends.
func (l Line) Fieller(y, stdY, t float64) (lo, hi float64, ok bool) {
	d := y - l.A
	// (d - B x)^2 <= t^2 (stdY^2 + VarA + 2 x CovAB + x^2 VarB)
	a := l.B*l.B - t*t*l.VarB
	b := -l.B*d - t*t*l.CovAB
	c := d*d - t*t*(stdY*stdY+l.VarA)
	disc := b*b - a*c
	if !(a > 0) || !(disc >= 0) {
		return math.NaN(), math.NaN(), false
	}
	root := math.Sqrt(disc)
	return (-b - root) / a, (-b + root) / a, true
}
