package analyze

import "tautramp/analyze/estimate"

// Role says whether a cycle is fitted.
type Role string

// The roles of a cycle.
const (
	Exercise   Role = "exercise"   // first, never fitted
	Ramp       Role = "ramp"       // fitted
	Incomplete Role = "incomplete" // no closed loop
)

// Cycle is one rise and fall.
type Cycle struct {
	Role         Role
	First, Peak  int // pair indexes of the low turning point and the top
	Last         int // pair index of the next low turning point
	TopSI        float64
	Zero         estimate.Estimate // m, extension at zero tension
	ZeroFrom     string            // convention used: "slack band", "operator's mark", or ""
	Rising       Fit
	Falling      Fit
	ReturnM      estimate.Estimate // m, extension at the end of the cycle minus at its start, same setting
	ReversalSI   estimate.Estimate // fall of setting at the top before the extension follows
	RateSI       float64           // median |rate of setting| on the branches, SI/s
	SeatingEndSI float64           // setting above which the rising branch is straight
}

// Fit is one branch of one cycle: extension = Line.A + Line.B * setting, SI.
// Points is 0 where the branch could not be fitted.
type Fit struct {
	Line   estimate.Line
	LowSI  float64 // range of setting fitted
	HighSI float64
	Points int
}
