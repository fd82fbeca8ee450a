package estimate

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Above is the probability that the true value lies above a limit, every value
// being equally likely beforehand: Student's t about Value with the combined
// standard uncertainty and its effective degrees of freedom. Without doubt it
// is 0 or 1, and a half on the limit itself. NaN when the value is unknown.
func (e Estimate) Above(limit float64) float64 {
	if !e.Known() || math.IsNaN(limit) {
		return math.NaN()
	}
	std := e.Std()
	switch by := e.Value - limit; {
	case std == 0 && by == 0:
		return 0.5
	case std == 0 && by > 0:
		return 1
	case std == 0:
		return 0
	}
	dof := EffectiveDoF([]Component{{Std: e.Random, DoF: e.DoF}, {Std: e.System, DoF: math.Inf(1)}})
	x := (e.Value - limit) / std
	switch {
	case !(dof > 0): // no scatter was seen, so nothing bounds it
		return 0.5
	case dof > 1e7:
		return distuv.UnitNormal.CDF(x)
	}
	return distuv.StudentsT{Mu: 0, Sigma: 1, Nu: dof}.CDF(x)
}
