package estimate

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Student95 is the factor k for which |t| <= k has probability 0.95 at dof
// degrees of freedom: 12.706 at 1, 1.960 at +Inf. It is +Inf where dof is zero,
// negative or not a number: no scatter was seen, so nothing bounds it.
func Student95(dof float64) float64 { return Student(0.95, dof) }

// Student is the two-sided factor at any level between 0 and 1.
func Student(level, dof float64) float64 {
	const asNormal = 1e7 // above it the two differ by less than 1e-7
	switch {
	case !(dof > 0):
		return math.Inf(1)
	case dof > asNormal:
		return distuv.UnitNormal.Quantile(0.5 + level/2)
	}
	return distuv.StudentsT{Mu: 0, Sigma: 1, Nu: dof}.Quantile(0.5 + level/2)
}

// Component is one part of a combined standard uncertainty.
type Component struct {
	Std float64 // standard uncertainty times its sensitivity, in the result's unit
	DoF float64 // +Inf when known a priori
}

// RootSum is the combined standard uncertainty of independent components.
func RootSum(parts []Component) float64 {
	sum := 0.0
	for _, p := range parts {
		sum += p.Std * p.Std
	}
	return math.Sqrt(sum)
}

// EffectiveDoF is Welch-Satterthwaite's number of degrees of freedom of the
// combined uncertainty (JCGM 100 G.2b); +Inf when no component has a finite
// number. Its known weakness: with one or two degrees of freedom in a leading
// component the interval it gives is an approximation.
func EffectiveDoF(parts []Component) float64 {
	total := RootSum(parts)
	if total == 0 {
		return math.Inf(1)
	}
	sum := 0.0
	for _, p := range parts {
		if p.Std == 0 || math.IsInf(p.DoF, 1) {
			continue
		}
		share := p.Std / total
		sum += share * share * share * share / p.DoF
	}
	return 1 / sum
}
