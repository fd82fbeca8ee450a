package estimate

import "math"

// FlatFactor95 is the factor k for which a value lies within k standard
// uncertainties with probability 0.95, where a share of the standard uncertainty
// is one rectangular distribution and the rest is normal: 1.960 at no share, and
// 1.645, which is 0.95 sqrt 3, at 1 (JCGM 100 G.1.4: convolve where a rectangular
// distribution is too large a part for the central limit theorem). The share is
// of the standard uncertainty, not of the variance.
func FlatFactor95(share float64) float64 {
	normal := Student95(math.Inf(1))
	if !(share > 0.1) { // 1e-5 narrower at most
		return normal
	}
	const asAlone = 0.9999
	half := math.Sqrt(3) * math.Min(share, 1)
	if share > asAlone {
		return 0.95 * math.Sqrt(3)
	}
	sd := math.Sqrt(1 - share*share)
	low, high := 0.95*math.Sqrt(3)-0.01, normal
	for high-low > 1e-9 {
		k := (low + high) / 2
		if flatWithin(k, half, sd) < 0.95 {
			low = k
		} else {
			high = k
		}
	}
	return high
}

// flatWithin is the probability that the sum of a rectangular variate of a
// half-width and a normal one lies within +-k.
func flatWithin(k, half, sd float64) float64 {
	// The integral of the normal distribution function.
	g := func(z float64) float64 {
		return z*math.Erfc(-z/math.Sqrt2)/2 + math.Exp(-z*z/2-lnSqrt2Pi)
	}
	return sd/half*(g((k+half)/sd)-g((k-half)/sd)) - 1
}
