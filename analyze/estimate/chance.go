package estimate

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// EffectiveDoF is the number of degrees of freedom of Random and System
// together (JCGM 100 G.2b).
func (e Estimate) EffectiveDoF() float64 {
	return EffectiveDoF([]Component{{Std: e.Random, DoF: e.DoF}, {Std: e.System, DoF: math.Inf(1)}})
}

// Expanded is the expanded uncertainty U = k u, k being Student's factor for
// 95.45 % at the effective degrees of freedom: 2 where all is well known (JCGM
// 100 G.6.4). It is never less than scatter alone gives. NaN when the value is
// unknown.
func (e Estimate) Expanded() float64 {
	if !e.Known() {
		return math.NaN()
	}
	factor := func(dof, std float64) float64 {
		if std == 0 {
			return 0
		}
		return Student(math.Erf(math.Sqrt2), dof) * std
	}
	return math.Max(factor(e.EffectiveDoF(), e.Std()), factor(e.DoF, e.Random))
}

// ChanceBelow is the probability that the true value lies below a limit, by
// Student's t at the effective degrees of freedom. NaN when the value is
// unknown.
func (e Estimate) ChanceBelow(limit float64) float64 {
	std := e.Std()
	switch {
	case math.IsNaN(std):
		return math.NaN()
	case std == 0 && e.Value <= limit:
		return 1
	case std == 0:
		return 0
	}
	const asNormal = 1e7
	z, dof := (limit-e.Value)/std, e.EffectiveDoF()
	switch {
	case !(dof > 0):
		return math.NaN()
	case dof > asNormal:
		return distuv.UnitNormal.CDF(z)
	}
	return distuv.StudentsT{Mu: 0, Sigma: 1, Nu: dof}.CDF(z)
}
