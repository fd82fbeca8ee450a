// Package analyze turns pairs into branches, and branches into the
// calibration: stress against setting rising and falling, hysteresis,
// friction, and the setting for a target stress. Start with Analyze.
//
// Pure: no files, no clock. Deliberately absent: causes (findings), bench
// tests (gauge), rounding and units (report).
package analyze

import (
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// Input is what an analysis works from. Names may be empty where the profile
// has only one.
type Input struct {
	Profile   *mill.Profile
	Tensioner string
	Band      string
	Target    mill.Pressure // overrides the band's target when given
	Set       *pairing.Set
	Records   string    // file of instrument records that the profile was given in place of its own; "" for none
	Day       time.Time // of the measurement; zero where it is not known: no check is then called overdue
}

// Result is the whole analysis.
type Result struct {
	Setup      Setup
	Points     []Point
	Cycles     []Cycle
	Steps      []Step // of the extension, in time order
	Lag        Lag
	Rising     Branch
	Falling    Branch
	Friction   Friction
	Screw      Screw
	Chain      Chain
	Springs    Springs
	Widths     []WidthAt
	Working    WidthAt           // at the working setting: the target's where it is in range, else the highest on both branches
	WidthRatio estimate.Estimate // half-width at the working setting / that setting
	Grade      Grade
	AtRising   TargetSetting
	AtFalling  TargetSetting
	ResetSI    estimate.Estimate // after an overshoot: the setting to drop to before approaching again
	Running    RunningBand
	Dial       Dial // the mill's own, against the instrument that measured the setting
	Warnings   []Warning
	Marks      ZeroMarks
	Zeros      []ZeroBy    // by every convention that the data support
	Tried      []Trial     // figures by Monte Carlo; nil unless Trials was asked
	Predicted  *Prediction // how, where the figures are for another band than was measured; else nil
	Simulated  bool        // a device said that what it measures is made up: nothing may be set by these figures
	Ended      string      // how the visit ended, in words; "" where the recording does not say

	work *work
}

// Analyze computes everything from one set of pairs. The same input gives the
// same result to the last bit. Errors: mill.ErrUnknownName, ErrTooFewPairs,
// ErrNoCycle. A target outside the captured range, or a zero that is not known,
// is not an error here: the figures that need it are unknown and say why, a
// warning says it once, and SettingAt gives the error.
func Analyze(in Input) (*Result, error) {
	setup, err := resolve(in)
	if err != nil {
		return nil, err
	}
	w, err := newWork(in.Set, setup)
	if err != nil {
		return nil, err
	}
	if err := w.settle(); err != nil {
		return nil, err
	}
	w.findZeros()
	if err := w.pool(); err != nil {
		return nil, err
	}
	w.readDial()
	return w.res, nil
}
