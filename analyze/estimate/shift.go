package estimate

import (
	"fmt"
	"math"
)

// Shift is the best split of a series into two levels.
type Shift struct {
	Index         int // values before the shift
	Before, After float64
	RSS           float64 // sum of squares about the two means
}

// LevelShift is the split into two means that leaves the smallest sum of
// squares. It always finds one; whether it is real is for FindSteps to say.
// Needs four values. Errors: ErrTooFew, ErrBadValue.
func LevelShift(v []float64) (Shift, error) {
	if len(v) < 4 {
		return Shift{}, fmt.Errorf("find a shift: %d values where 4 are needed: %w", len(v), ErrTooFew)
	}
	mean, _ := Mean(v)
	total, all := 0.0, 0.0
	for i, x := range v {
		if !finite(x) {
			return Shift{}, fmt.Errorf("find a shift: value %d: %w", i, ErrBadValue)
		}
		all += x - mean
		total += (x - mean) * (x - mean)
	}
	best := Shift{RSS: math.Inf(1)}
	left := 0.0
	for k := 1; k < len(v); k++ {
		left += v[k-1] - mean
		n, m := float64(k), float64(len(v)-k)
		right := all - left
		if rss := total - left*left/n - right*right/m; rss < best.RSS {
			best = Shift{Index: k, Before: mean + left/n, After: mean + right/m, RSS: math.Max(0, rss)}
		}
	}
	return best, nil
}
