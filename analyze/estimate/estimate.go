// Package estimate has the one type that every figure of the analysis is, and
// the estimators that make it. Start with Estimate and FitLine.
//
// Pure. Deliberately absent: units and anything about bands or tensioners.
package estimate

import "math"

// Estimate is a value with its uncertainty and its origin. The zero value is
// unknown: it has no Method, and Known reports false.
type Estimate struct {
	Value  float64 // in the unit the field's name or comment states
	Random float64 // standard uncertainty from scatter (JCGM 100 type A)
	System float64 // standard uncertainty from everything that repeats (zero, instruments, constants)
	Flat   float64 // the largest part of System that is a rectangular distribution; 0: none, or none that matters
	DoF    float64 // degrees of freedom of Random; +Inf when known a priori
	Method string  // how Value and Random were obtained; "" = unknown
	Why    string  // why it is unknown, when it is
}

// Unknown is an estimate that could not be made. why says in plain words what
// is missing.
func Unknown(why string) Estimate { return Estimate{Value: math.NaN(), Why: why} }

// Exact is a value without uncertainty, such as a definition.
func Exact(value float64, method string) Estimate {
	return Estimate{Value: value, DoF: math.Inf(1), Method: method}
}

// Known reports whether there is a value.
func (e Estimate) Known() bool { return e.Method != "" }

// Std is the combined standard uncertainty, the root sum of squares of Random
// and System; NaN when the value is unknown.
func (e Estimate) Std() float64 {
	if !e.Known() {
		return math.NaN()
	}
	return math.Hypot(e.Random, e.System)
}

// Interval95 holds the true value with 95 % confidence: Student's t at the
// effective degrees of freedom of Random and System together (JCGM 100 G.4,
// System taken as known well), narrower where a rectangular part stands out
// (FlatFactor95). With one or two degrees of freedom that approximation may fall
// short of what scatter alone asks for; the interval is never narrower than
// RandomInterval95. NaN when the value is unknown.
func (e Estimate) Interval95() (lo, hi float64) {
	dof := EffectiveDoF([]Component{{Std: e.Random, DoF: e.DoF}, {Std: e.System, DoF: math.Inf(1)}})
	std := e.Std()
	if std > 0 {
		std *= FlatFactor95(e.Flat/std) / FlatFactor95(0)
	}
	lo, hi = e.interval(std, dof)
	if rlo, rhi := e.RandomInterval95(); rhi-rlo > hi-lo {
		return rlo, rhi
	}
	return lo, hi
}

// RandomInterval95 is the interval from scatter alone. NaN when the value is
// unknown.
func (e Estimate) RandomInterval95() (lo, hi float64) { return e.interval(e.Random, e.DoF) }

func (e Estimate) interval(std, dof float64) (lo, hi float64) {
	if !e.Known() {
		return math.NaN(), math.NaN()
	}
	if std == 0 {
		return e.Value, e.Value
	}
	half := Student95(dof) * std
	return e.Value - half, e.Value + half
}

// Scale is the estimate times an exact factor, its uncertainties with it.
func (e Estimate) Scale(by float64) Estimate {
	e.Value *= by
	e.Random *= math.Abs(by)
	e.System *= math.Abs(by)
	e.Flat *= math.Abs(by)
	return e
}
