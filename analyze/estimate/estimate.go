// Package estimate has the one type that every figure of the analysis is, and
// the estimators that make it. Start with Estimate and FitLine.
//
// Pure. Deliberately absent: units and anything about bands or tensioners.
package estimate

// Estimate is a value with its uncertainty and its origin. The zero value is
// unknown: it has no Method, and Known reports false.
type Estimate struct {
	Value  float64 // in the unit the field's name or comment states
	Random float64 // standard uncertainty from scatter (JCGM 100 type A)
	System float64 // standard uncertainty from everything that repeats (zero, instruments, constants)
	DoF    float64 // degrees of freedom of Random; +Inf when known a priori
	Method string  // how Value and Random were obtained; "" = unknown
	Why    string  // why it is unknown, when it is
}

// Line is a straight line y = A + B x with the covariance of its coefficients.
type Line struct {
	A, B              float64
	VarA, VarB, CovAB float64
	ResidualSD        float64 // sqrt(sum r^2 / DoF)
	DoF               float64
	N                 int
}
