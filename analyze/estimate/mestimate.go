package estimate

import (
	"fmt"
	"math"
)

// RobustLine is a line that gives far points less weight.
type RobustLine struct {
	A, B   float64
	Scale  float64   // median of the absolute residuals / 0.6745
	Weight []float64 // of each point, 1 for full
}

// Outliers is how many points have less than half their weight.
func (r RobustLine) Outliers() int {
	n := 0
	for _, w := range r.Weight {
		if w < 0.5 {
			n++
		}
	}
	return n
}

// FitHuber is Huber's M-estimate of a line with k = 1.345, the scale estimated
// anew at each step. It resists far y, not far x. Errors as FitLine, and
// ErrNoEnd.
func FitHuber(x, y []float64) (RobustLine, error) {
	return reweighted(x, y, func(u float64) float64 {
		const k = 1.345
		return math.Min(1, k/math.Abs(u))
	})
}

// FitBisquare is Tukey's bisquare M-estimate with c = 4.685, started from least
// squares: far points count for nothing at all. Errors as FitHuber.
func FitBisquare(x, y []float64) (RobustLine, error) {
	return reweighted(x, y, func(u float64) float64 {
		const c = 4.685
		left := 1 - u*u/(c*c)
		return math.Max(0, left) * math.Max(0, left)
	})
}

// reweighted repeats weighted least squares until the line stands still
// (Venables and Ripley, Modern Applied Statistics with S, chapter 6).
func reweighted(x, y []float64, weigh func(u float64) float64) (RobustLine, error) {
	const rounds, still, nothing = 1000, 1e-13, 1e-12
	l, err := FitLine(x, y)
	if err != nil {
		return RobustLine{}, err
	}
	rest := make([]float64, len(x))
	r := RobustLine{A: l.A, B: l.B, Weight: ones(len(x))}
	for range rounds {
		for i := range x {
			rest[i] = math.Abs(y[i] - r.A - r.B*x[i])
		}
		r.Scale = Median(rest) / 0.6745
		if r.Scale <= nothing*l.ResidualSD { // more than half lie on the line
			return r, nil
		}
		for i := range x {
			r.Weight[i] = weigh(rest[i] / r.Scale)
		}
		next, err := weightedLine(x, y, r.Weight)
		if err != nil {
			return RobustLine{}, err
		}
		moved := math.Abs(next.A-r.A) + math.Abs(next.B-r.B)*(math.Abs(x[0])+math.Abs(x[len(x)-1]))
		r.A, r.B = next.A, next.B
		if moved <= still*r.Scale {
			return r, nil
		}
	}
	return RobustLine{}, fmt.Errorf("fit a robust line: %d steps: %w", rounds, ErrNoEnd)
}

// weightedLine leaves points of no weight out.
func weightedLine(x, y, weight []float64) (Line, error) {
	var kx, ky, kw []float64
	for i, w := range weight {
		if w > 0 {
			kx, ky, kw = append(kx, x[i]), append(ky, y[i]), append(kw, w)
		}
	}
	return FitWeighted(kx, ky, kw)
}

func ones(n int) []float64 {
	v := make([]float64, n)
	for i := range v {
		v[i] = 1
	}
	return v
}
