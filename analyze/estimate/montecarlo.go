package estimate

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
)

// Propagated is a quantity's distribution by Monte Carlo.
type Propagated struct {
	Mean, Std         float64
	Low, High         float64 // probabilistically symmetric: as much lies below as above
	ShortLow, ShortHi float64 // the shortest interval with the same coverage
	Level             float64
	Trials            int
}

// Propagate draws a quantity so many times and sums up (JCGM 101:2008 clause 7,
// one block of trials). draw returns the quantity for inputs of its own drawing.
// Errors: ErrTooFew below 1,000 trials, ErrBadValue when a draw is not finite.
func Propagate(r *rand.Rand, trials int, level float64, draw func(*rand.Rand) float64) (Propagated, error) {
	const fewest = 1000
	if trials < fewest || !(level > 0 && level < 1) {
		return Propagated{}, fmt.Errorf("propagate: %d trials at level %g: %w", trials, level, ErrTooFew)
	}
	v := make([]float64, trials)
	for i := range v {
		if v[i] = draw(r); !finite(v[i]) {
			return Propagated{}, fmt.Errorf("propagate: draw %d: %w", i, ErrBadValue)
		}
	}
	slices.Sort(v)
	p := Propagated{Level: level, Trials: trials}
	p.Mean, p.Std = Mean(v)
	inside := int(level*float64(trials) + 0.5)
	first := (trials - inside) / 2
	p.Low, p.High = v[first], v[first+inside]
	shortest := math.Inf(1)
	for i := range trials - inside {
		if width := v[i+inside] - v[i]; width < shortest {
			shortest, p.ShortLow, p.ShortHi = width, v[i], v[i+inside]
		}
	}
	return p, nil
}

// Agrees is whether the framework's interval is validated by the distribution:
// both ends within half a unit of the last of two significant digits of the
// standard uncertainty (JCGM 101:2008 clause 8).
func (p Propagated) Agrees(low, high float64) bool {
	tolerance := NumericalTolerance(p.Std, 2)
	return math.Abs(low-p.Low) <= tolerance && math.Abs(high-p.High) <= tolerance
}

// NumericalTolerance is half a unit of the last of so many significant digits
// (JCGM 101:2008 clause 7.9.2); 0 of 0.
func NumericalTolerance(std float64, digits int) float64 {
	if !(std > 0) {
		return 0
	}
	exponent := math.Floor(math.Log10(std)) - float64(digits-1)
	if c := math.Round(std / math.Pow(10, exponent)); c >= math.Pow(10, float64(digits)) {
		exponent++ // 99.6 has two digits as 1.0e2
	}
	return math.Pow(10, exponent) / 2
}

// DrawRectangular is a rectangular distribution by its mean and standard
// deviation: half-width sqrt(3) of that (JCGM 101:2008 clause 6.4.2).
func DrawRectangular(r *rand.Rand, mean, std float64) float64 {
	return mean + math.Sqrt(3)*std*(2*r.Float64()-1)
}

// DrawEstimate is an estimate's distribution: Student's t with its degrees of
// freedom for Random (JCGM 101:2008 clause 6.4.9), normal for System.
func DrawEstimate(r *rand.Rand, e Estimate) float64 {
	return e.Value + e.System*r.NormFloat64() + e.Random*drawStudent(r, e.DoF)
}

// drawStudent is a standard normal over the root of a mean square.
func drawStudent(r *rand.Rand, dof float64) float64 {
	z := r.NormFloat64()
	const asNormal = 1e5
	if !(dof > 0) || dof > asNormal {
		return z
	}
	return z / math.Sqrt(2*drawGamma(r, dof/2)/dof)
}

// drawGamma is a gamma variate of unit scale (Marsaglia and Tsang, ACM TOMS 26
// (2000) 363-372).
func drawGamma(r *rand.Rand, shape float64) float64 {
	if shape < 1 {
		return drawGamma(r, shape+1) * math.Pow(1-r.Float64(), 1/shape)
	}
	d := shape - 1.0/3
	c := 1 / math.Sqrt(9*d)
	for {
		z := r.NormFloat64()
		v := 1 + c*z
		if v <= 0 {
			continue
		}
		v = v * v * v
		if math.Log(1-r.Float64()) < z*z/2+d-d*v+d*math.Log(v) {
			return d * v
		}
	}
}
