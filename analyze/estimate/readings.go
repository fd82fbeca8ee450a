package estimate

import "math"

// Readings is one branch as read: a display's readings y at settings x, each y
// known only to lie in the interval of one count that its digits stand for.
// They are in the order in which they were read.
type Readings struct {
	X      []float64 // setting at the reading's own instant
	Lo, Hi []float64 // lowest and highest true value that the display shows so
	// XStd is the standard deviation of the noise of one X, with what the time
	// between the channels leaves open; 0: not known. YStd is that of the noise
	// of y before it was rounded; 0: none. Together they are the floor below
	// which the fit does not believe its own noise.
	XStd, YStd float64
	// Memory is over how many readings the correlation of the noise reaches, until
	// it has fallen to a twentieth; 0: as the residuals show, which a coarse count
	// hides in part.
	Memory int
}

// Rounded is the intervals of readings that a display rounds to the nearest
// count; one that cuts off instead shows values from y to y + count, and shift
// is then half a count.
func Rounded(y []float64, count, shift float64) (lo, hi []float64) {
	lo, hi = make([]float64, len(y)), make([]float64, len(y))
	for i, v := range y {
		lo[i], hi[i] = v+shift-count/2, v+shift+count/2
	}
	return lo, hi
}

// Method says how a branch was fitted.
type Method string

// The methods of FitBranch.
const (
	ByBoth       Method = "both-variable fit"
	ByLikelihood Method = "interval-censored maximum likelihood"
	ByFeasible   Method = "lines that pass through every reading"
)

// Branch is a fitted branch. ResidualSD of the line is the standard deviation
// of the noise of one reading before rounding, x's own included.
type Branch struct {
	Line
	Method     Method
	Outliers   int     // readings that the line does not explain; they have no weight in it
	Dependence float64 // factor on the covariance from neighbouring readings' common errors; 1: none
	Blocks     int     // from which Dependence was found; 0: it was not looked for
	Feasible   *Feasible
}

// A reading is taken for an outlier by a chance of this much against the noise
// of the rest, spread over all that the display showed.
const outlierShare = 1e-3

// honest is the probability that a reading with the log likelihood logP belongs
// to the noise and not to the outliers, which show any of so many counts.
func honest(logP, counts float64) float64 {
	p := (1 - outlierShare) * math.Exp(logP)
	return p / (p + outlierShare/counts)
}
