package estimate

import (
	"errors"
	"fmt"
	"math"
)

// Shape is what a region is taken for.
type Shape string

// The shapes. A region is curved when its bend is told from none at 1 % and is
// worth telling, straight when its bend's 95 % interval stays within what is not
// worth telling, and else unsettled.
const (
	Unsettled Shape = "unsettled"
	Straight  Shape = "straight"
	Curved    Shape = "curved"
)

// Region is the part of a series that one line describes.
type Region struct {
	From, To float64 // of x; a change of slope lies below From or above To, or the data end there
	Found    Segments
	Shape    Shape
	// Bend is how far a parabola through the region leaves its own chord in the
	// middle, as a share of the range of y there: positive when it sags below.
	Bend Estimate
}

const (
	mostCut    = 2.0 / 3 // of the range at either end
	mostSpared = 0.2     // of it at the low end, for bends that are not worth more
	// A region that is less than this share of all x, a large toe being cut off, has
	// nothing to spare.
	leastToSpare = 0.5
	sparing      = 1.0 // penalty of a break there: to spare it without cause costs little
)

// worthTelling is the bend that matters, as a share of the range of y.
const worthTelling = 0.005

// StraightWithin is the straight part of a series with a toe below or an end
// stop or knee above it, or both: the widest of up to three lines (FitSegments),
// its low end moved up and its high end moved down past what is rounded there
// (StraightAbove). x and y are in the order in which they were read. Errors as
// FitStick.
//
// worth is how far the instrument's own scale may leave a line, in y's unit:
// nothing is cut for less, but in the lowest fifth of the region, which is soon
// spared and where a toe is most likely; and no region is called curved for less.
// 0: no such error is allowed for.
func StraightWithin(x, y []float64, worth float64) (Region, error) {
	found, err := fitSegments(x, y, worth)
	if err != nil {
		return Region{}, err
	}
	r := Region{Found: found, From: Quantile(x, 0), To: Quantile(x, 1), Shape: Unsettled}
	i := found.Main(r.From, r.To)
	_, r.To = found.ends(i, r.From, r.To)
	if i > 0 {
		bx, by := between(x, y, r.From, r.To)
		if r.From, _, err = straightAbove(bx, by, cutting{worth, breakPenalty, mostCut}); err != nil {
			return Region{}, err
		}
	}
	if i+1 < len(found.Lines) {
		bx, by := between(x, y, r.From, r.To)
		for k := range bx {
			bx[k] = -bx[k]
		}
		low, _, err := straightAbove(bx, by, cutting{worth, breakPenalty, mostCut})
		if err != nil {
			return Region{}, err
		}
		r.To = -low
	}
	bx, by := between(x, y, r.From, r.To)
	if all := Quantile(x, 1) - Quantile(x, 0); worth > 0 && r.To-r.From >= leastToSpare*all {
		low, _, err := straightAbove(bx, by, cutting{penalty: sparing, share: mostSpared})
		if err != nil && !errors.Is(err, ErrTooFew) && !errors.Is(err, ErrNoSpread) {
			return Region{}, err
		}
		if err == nil {
			r.From = low
			bx, by = between(x, y, r.From, r.To)
		}
	}
	r.Shape, r.Bend, err = ShapeOf(bx, by, worth)
	return r, err
}

// ShapeOf is what a series is taken for, and its bend (FitBend). Errors as
// FitBend; worth as in StraightWithin.
func ShapeOf(x, y []float64, worth float64) (Shape, Estimate, error) {
	bend, err := FitBend(x, y)
	if err != nil {
		return Unsettled, Estimate{}, err
	}
	span := math.Max(Quantile(y, 1)-Quantile(y, 0), math.SmallestNonzeroFloat64)
	return shapeOf(bend, math.Max(worthTelling, worth/span)), bend, nil
}

func between(x, y []float64, from, to float64) (bx, by []float64) {
	for i := range x {
		if x[i] >= from && x[i] <= to {
			bx, by = append(bx, x[i]), append(by, y[i])
		}
	}
	return bx, by
}

func shapeOf(bend Estimate, worth float64) Shape {
	lo, hi := bend.RandomInterval95()
	told := math.Abs(bend.Value) > Student(0.99, bend.DoF)*bend.Random
	switch {
	case told && math.Abs(bend.Value) > worth:
		return Curved
	case lo > -worth && hi < worth:
		return Straight
	}
	return Unsettled
}

// FitBend is how far a least-squares parabola leaves its chord at the middle of
// x, as a share of the range of y, serial dependence allowed for. The ratio of
// its value to Random is the t, and its square the F, of the parabola against
// the line. Needs five points. Errors as FitLine.
func FitBend(x, y []float64) (Estimate, error) {
	l, err := FitLine(x, y)
	if err != nil {
		return Estimate{}, err
	}
	if len(x) < 5 {
		return Estimate{}, fmt.Errorf("fit a bend: %d points where 5 are needed: %w", len(x), ErrTooFew)
	}
	low, high := Quantile(x, 0), Quantile(x, 1)
	square := make([]float64, len(x)) // 1 at the ends, 0 in the middle, less its own line
	for i := range x {
		u := (2*x[i] - low - high) / (high - low)
		square[i] = u * u
	}
	own, err := FitLine(x, square)
	if err != nil {
		return Estimate{}, err
	}
	square, rest := residuals(x, square, own.A, own.B), residuals(x, y, l.A, l.B)
	var qq, qr float64
	for i, q := range square {
		qq += q * q
		qr += q * rest[i]
	}
	if !(qq > 0) {
		return Estimate{}, fmt.Errorf("fit a bend: %w", ErrNoSpread)
	}
	c, rss := qr/qq, 0.0
	for i := range rest {
		rest[i] -= c * square[i]
		rss += rest[i] * rest[i]
	}
	tau := Dependence(rest)
	span := math.Max(Quantile(y, 1)-Quantile(y, 0), math.SmallestNonzeroFloat64)
	return Estimate{
		Value: c / span, Random: math.Sqrt(rss/float64(len(x)-3)*tau/qq) / span,
		DoF: math.Max(1, float64(len(x))/tau-3), Method: "parabola against the line",
	}, nil
}
