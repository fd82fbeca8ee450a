package estimate

import (
	"fmt"
	"math"
)

// PoolLines is the mean line of repeated ramps with the covariance that their
// own scatter gives it: intercept and slope of every ramp about the mean, over
// n (n - 1), so that At, Inverse and Fieller carry how the two go together. DoF
// is n - 1; with it Student's t gives exact intervals for normal ramps however
// few they are, at two with one degree of freedom. ResidualSD is the square root
// of the sum over the ramps' own residual variances, weighted by their points.
//
// One ramp says nothing of its own repetition: ErrTooFew.
func PoolLines(ramps []Line) (Line, error) {
	n := float64(len(ramps))
	if n < 2 {
		return Line{}, fmt.Errorf("pool %d ramps where 2 are needed: %w", len(ramps), ErrTooFew)
	}
	out := Line{DoF: n - 1}
	var squares float64
	for _, l := range ramps {
		if !finite(l.A) || !finite(l.B) {
			return Line{}, fmt.Errorf("pool ramps: %w", ErrBadValue)
		}
		out.A += l.A / n
		out.B += l.B / n
		out.N += l.N
		squares += float64(l.N) * l.ResidualSD * l.ResidualSD
	}
	for _, l := range ramps {
		a, b := l.A-out.A, l.B-out.B
		out.VarA += a * a / (n * (n - 1))
		out.VarB += b * b / (n * (n - 1))
		out.CovAB += a * b / (n * (n - 1))
	}
	if out.N > 0 {
		out.ResidualSD = math.Sqrt(squares / float64(out.N))
	}
	return out, nil
}

// Repeated is one figure over repeated ramps.
type Repeated struct {
	Mean Estimate // of the figure
	Next Estimate // the figure on the next ramp: Mean, and scatter between ramps once more
	// Between and Within are the variances of one ramp's figure: between ramps,
	// beyond what the scatter inside them explains (0 where that explains all), and
	// inside.
	Between, Within float64
}

// Repeat is the mean of a figure over ramps and its interval by Student's t with
// n - 1 degrees of freedom, from the scatter between the ramps alone: whatever
// differs from ramp to ramp is in it, and it holds the truth as often as it says
// with two ramps too. Now and then few ramps agree by luck; OverRamps keeps a
// floor for that, at the price of intervals that hold the truth too often. vars
// is the variance that the scatter inside each ramp gives its figure.
//
// One ramp gives no Next, and its Mean rests on the scatter inside it, with dof
// degrees of freedom. NaN values are left out.
func Repeat(values, vars []float64, dof float64) Repeated {
	kept, inside := known(values, vars)
	n := float64(len(kept))
	switch {
	case n == 0:
		return Repeated{Mean: Unknown("no ramp gives it"), Next: Unknown("no ramp gives it"), Between: math.NaN(), Within: math.NaN()}
	case n == 1:
		return Repeated{
			Mean: Estimate{Value: kept[0], Random: math.Sqrt(inside), DoF: dof, Method: "one ramp, scatter inside it"},
			Next: Unknown("one ramp does not show how the next will differ"), Between: math.NaN(), Within: inside,
		}
	}
	mean, sd := Mean(kept)
	r := Repeated{Within: inside / n}
	r.Between = math.Max(0, sd*sd-r.Within)
	r.Mean = Estimate{Value: mean, Random: sd / math.Sqrt(n), DoF: n - 1, Method: "mean of the ramps, scatter between them"}
	r.Next = Estimate{Value: mean, Random: sd * math.Sqrt(1+1/n), DoF: n - 1, Method: "mean of the ramps, scatter between them once more"}
	return r
}
