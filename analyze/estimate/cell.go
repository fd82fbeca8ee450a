package estimate

import "math"

// cell is the log probability that a standard normal value lies between a and
// b, and the density over the probability at either end: ha at a, hb at b. It
// keeps its digits far out in the tails, where the probability itself is below
// what a float holds.
func cell(a, b float64) (logP, ha, hb float64) {
	const certain = 8.0 // the rest has a probability of 1e-15
	if a < -certain && b > certain {
		return 0, 0, 0
	}
	if a+b > 0 {
		logP, hb, ha = cell(-b, -a)
		return logP, ha, hb
	}
	// P = phi(b) (R(-b) - d R(-a)), R being Mills' ratio and d = phi(a)/phi(b).
	d := math.Exp((b - a) * (b + a) / 2)
	rest := mills(-b)
	if d > 0 {
		rest -= d * mills(-a)
	}
	if !(rest > 0) { // narrower than rounding: the density times the width
		rest = b - a
	}
	return math.Log(rest) - b*b/2 - lnSqrt2Pi, d / rest, 1 / rest
}

const lnSqrt2Pi = 0.91893853320467274178

// mills is Mills' ratio of the standard normal, (1 - Phi(z)) / phi(z), for z
// above about -9. Far out by its continued fraction (Abramowitz and Stegun
// 26.2.14).
func mills(z float64) float64 {
	const far, terms = 5.0, 20
	if z < far {
		return math.Erfc(z/math.Sqrt2) / 2 * math.Exp(z*z/2+lnSqrt2Pi)
	}
	c := z
	for k := float64(terms); k >= 1; k-- {
		c = z + k/c
	}
	return 1 / c
}
