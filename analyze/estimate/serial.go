package estimate

import "math"

// autocorrelation gives the correlation at a lag; ok is false where the series
// does not vary.
func autocorrelation(v []float64) (at func(lag int) float64, ok bool) {
	const rounding = 1e-14 // relative: equal values have a spread by it
	mean, _ := Mean(v)
	all := 0.0
	for _, x := range v {
		all += (x - mean) * (x - mean)
	}
	return func(lag int) float64 {
		sum := 0.0
		for i := lag; i < len(v); i++ {
			sum += (v[i] - mean) * (v[i-lag] - mean)
		}
		return sum / all
	}, all > rounding*rounding*mean*mean*float64(len(v))
}

// Dependence is how many neighbouring values of a series tell as much as one
// independent value: 1 plus twice the autocorrelations up to the first that is
// not positive. A count's saw-tooth on a slow ramp gives about a fifth of its
// period. At least 1.
func Dependence(v []float64) float64 {
	r, ok := autocorrelation(v)
	if !ok {
		return 1
	}
	tau := 1.0
	for lag := 1; lag < len(v)/4; lag++ {
		c := r(lag)
		if c <= 0 {
			break
		}
		tau += 2 * c
	}
	return tau
}

// fitSerial is FitLine for points in the order in which they were read, whose
// errors depend on their neighbours' (a display's counts, slow noise): the
// covariance is raised by the residuals' Dependence, and the degrees of freedom
// lowered by it. Errors as FitLine.
func fitSerial(x, y []float64) (Line, error) {
	l, err := FitLine(x, y)
	if err != nil {
		return Line{}, err
	}
	rest := make([]float64, len(x))
	for i := range x {
		rest[i] = y[i] - l.A - l.B*x[i]
	}
	tau := Dependence(rest)
	l = l.scaled(tau)
	l.DoF = math.Max(1, float64(l.N)/tau-2)
	return l, nil
}
