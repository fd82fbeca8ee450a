package estimate

import (
	"math"
	"slices"
)

// Median is the middle value, the mean of the two middle ones when their number
// is even; NaN of nothing. v is left as it was.
func Median(v []float64) float64 { return Quantile(v, 0.5) }

// Quantile is the value below which the share q of v lies, interpolated
// between neighbours; NaN of nothing. v is left as it was.
func Quantile(v []float64, q float64) float64 {
	if len(v) == 0 {
		return math.NaN()
	}
	s := slices.Clone(v)
	slices.Sort(s)
	at := q * float64(len(s)-1)
	i := int(at)
	if i+1 >= len(s) {
		return s[len(s)-1]
	}
	return s[i] + (at-float64(i))*(s[i+1]-s[i])
}

// MAD is the median absolute deviation from the median, divided by 0.6745 so
// that it is the standard deviation of normal data; NaN of nothing.
func MAD(v []float64) float64 {
	m := Median(v)
	d := make([]float64, len(v))
	for i := range v {
		d[i] = math.Abs(v[i] - m)
	}
	return Median(d) / 0.6745
}

// Noise is the standard deviation of the noise on a slowly changing series,
// from its second differences, robust against steps and turns. 0 for fewer
// than three values.
func Noise(v []float64) float64 {
	if len(v) < 3 {
		return 0
	}
	d := make([]float64, len(v)-2)
	for i := range d {
		d[i] = v[i] - 2*v[i+1] + v[i+2]
	}
	return MAD(d) / math.Sqrt(6)
}

// Mean is the mean and the standard deviation (n - 1) in two passes; NaN of
// nothing, and a deviation of 0 for one value.
func Mean(v []float64) (mean, sd float64) {
	if len(v) == 0 {
		return math.NaN(), math.NaN()
	}
	for _, x := range v {
		mean += x
	}
	mean /= float64(len(v))
	if len(v) == 1 {
		return mean, 0
	}
	var sum, rest float64
	for _, x := range v {
		sum += (x - mean) * (x - mean)
		rest += x - mean
	}
	n := float64(len(v))
	return mean, math.Sqrt((sum - rest*rest/n) / (n - 1))
}
