package estimate

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"
)

// MedianSlope is Theil's and Sen's line: the median of the slopes of all pairs
// of points. Up to 29 % of the points may be anything.
type MedianSlope struct {
	Slope, Low, High float64 // with its 95 % interval (Sen, JASA 63 (1968) 1379-1389)
	A                float64 // median of y - Slope x
	AtMedians        float64 // median of y - Slope times median of x, the other convention
}

// TheilSen is the median-slope line; pairs of equal x are left out. It looks at
// every pair, so it is for some hundred points. The interval takes Kendall's S
// as normal, its variance corrected for ties. Errors as FitLine.
func TheilSen(x, y []float64) (MedianSlope, error) {
	if err := checkPoints(x, y, nil); err != nil {
		return MedianSlope{}, err
	}
	slopes := pairSlopes(x, y)
	if len(slopes) == 0 {
		return MedianSlope{}, ErrNoSpread
	}
	m := MedianSlope{Slope: middle(slopes)}
	n := float64(len(y))
	// Ties in both take the variance below zero where hardly a pair tells.
	spread := math.Sqrt(math.Max(0, n*(n-1)*(2*n+5)-ties(x)-ties(y)) / 18)
	reach := distuv.UnitNormal.Quantile(0.975) * spread
	all := float64(len(slopes))
	m.Low = slopes[int(math.Max(math.RoundToEven((all-reach)/2)-1, 0))]
	m.High = slopes[int(math.Min(math.RoundToEven((all+reach)/2), all-1))]
	rest := make([]float64, len(x))
	for i := range x {
		rest[i] = y[i] - m.Slope*x[i]
	}
	m.A = Median(rest)
	m.AtMedians = Median(y) - m.Slope*Median(x)
	return m, nil
}

// pairSlopes is sorted.
func pairSlopes(x, y []float64) []float64 {
	slopes := make([]float64, 0, len(x)*(len(x)-1)/2)
	for i := range x {
		for j := range i {
			if x[i] != x[j] {
				slopes = append(slopes, (y[i]-y[j])/(x[i]-x[j]))
			}
		}
	}
	slices.Sort(slopes)
	return slopes
}

func middle(sorted []float64) float64 {
	n := len(sorted)
	return (sorted[n/2] + sorted[(n-1)/2]) / 2
}

// ties is the sum of k (k-1) (2k+5) over the groups of equal values.
func ties(v []float64) float64 {
	s := slices.Clone(v)
	slices.Sort(s)
	sum, k := 0.0, 1.0
	for i := 1; i <= len(s); i++ {
		if i < len(s) && s[i] == s[i-1] {
			k++
			continue
		}
		sum += k * (k - 1) * (2*k + 5)
		k = 1
	}
	return sum
}

// robustStart is a median-slope line of at most so many points, evenly taken.
func robustStart(x, y []float64) (a, b float64, err error) {
	const most = 120
	step := (len(x) + most - 1) / most
	var tx, ty []float64
	for i := 0; i < len(x); i += step {
		tx, ty = append(tx, x[i]), append(ty, y[i])
	}
	if m, err := TheilSen(tx, ty); err == nil {
		return m.A, m.Slope, nil
	}
	l, err := FitLine(x, y) // the few taken have one x between them
	return l.A, l.B, err
}
