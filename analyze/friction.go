package analyze

import (
	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Friction is the tensioner's, after p A* = S(1 +/- mu) +/- F0, S = F + W.
type Friction struct {
	F0N       estimate.Estimate // constant part, zero-immune formula
	Mu        estimate.Estimate // proportional part
	WeightN   estimate.Estimate // W, only as good as the zero
	AreaM2    estimate.Estimate // A*
	AreaRatio estimate.Estimate // A* / geometry's
	F0MuWN    estimate.Estimate // F0 + mu W, only together with its zero
	LoopJ     estimate.Estimate // energy lost in one cycle; unknown without the travel of the cylinders
}

// WidthAt is the half-width of the loop at one stress.
type WidthAt struct {
	StressPa float64           // NaN where the zero is unknown
	RisingSI float64           // setting on the rising branch at that stretch
	HalfSI   estimate.Estimate // setting units
}

// Grade is the verdict on the half-width at the working setting.
type Grade string

// The grades. The zero value is inconclusive.
const (
	Inconclusive Grade = ""
	Good         Grade = "good"
	Watch        Grade = "watch"
	Service      Grade = "service"
)

// RunningBand is the one-sided band in which the stress may wander after the
// tensioner was set to the target's setting.
type RunningBand struct {
	AfterRisingPa  [2]estimate.Estimate // lowest and highest change from target: +0 and more
	AfterFallingPa [2]estimate.Estimate // down and -0
	MiddlePa       estimate.Estimate    // where vibration brings it, pressure maintained
	Hold           mill.Hold            // as the profile states; "" = not stated, both cases apply
}
