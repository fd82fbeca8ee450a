package estimate

import "math"

// OverRamps is the mean of one figure over repeated ramps. values are the
// ramps' own figures, vars what the scatter inside each ramp leaves open
// (variance of the figure), dof the degrees of freedom of vars together.
//
// Random comes from the scatter between the ramps, with n - 1 degrees of
// freedom: it contains whatever differs from ramp to ramp. Few ramps may agree
// by luck, so the 95 % interval is never narrower than the one the scatter
// inside the ramps gives; Method says which was used. With one ramp only the
// latter exists. NaN values are left out.
func OverRamps(values, vars []float64, dof float64) Estimate {
	kept, inside := known(values, vars)
	n := float64(len(kept))
	if n == 0 {
		return Unknown("no ramp gives it")
	}
	mean, sd := Mean(kept)
	within := Estimate{Value: mean, Random: math.Sqrt(inside) / n, DoF: dof, Method: "scatter inside the ramps"}
	if n == 1 {
		within.Method = "one ramp, scatter inside it"
		return within
	}
	between := Estimate{Value: mean, Random: sd / math.Sqrt(n), DoF: n - 1, Method: "mean of the ramps, scatter between them"}
	if Student95(between.DoF)*between.Random < Student95(within.DoF)*within.Random {
		return within
	}
	return between
}

// known is the values that are numbers, with variances that are, and the sum of
// those variances.
func known(values, vars []float64) (kept []float64, sum float64) {
	for i, v := range values {
		if finite(v) && finite(vars[i]) {
			kept = append(kept, v)
			sum += vars[i]
		}
	}
	return kept, sum
}
