package analyze

import "tautramp/analyze/estimate"

// TargetSetting is the setting for the target stress on one branch.
type TargetSetting struct {
	SettingSI estimate.Estimate // of the fitted curve
	NextSI    estimate.Estimate // of the next setting: adds ramp-to-ramp scatter; unknown with one ramp
	TrueSI    estimate.Estimate // so that the band's true stress is the target: adds everything that repeats
	Budget    []Term            // of TrueSI, in setting units
}

// Term is one line of a budget.
type Term struct {
	Name  string
	StdSI float64 // standard uncertainty in the setting, SI
	DoF   float64
	Type  string // "A" or "B"
	From  string // where the figure comes from
}

// SettingAt is the setting for a band stress on a branch. Errors:
// *OutOfRangeError outside the captured stresses, ErrNoZero.
func (r *Result) SettingAt(d Direction, stressPa float64) (TargetSetting, error) {
	if !r.work.zeroKnown() {
		return TargetSetting{}, ErrNoZero
	}
	b := r.branch(d)
	if !(stressPa >= b.LowPa && stressPa <= b.HighPa) {
		return TargetSetting{}, &OutOfRangeError{stressPa, b.LowPa, b.HighPa, "band stress, " + string(d)}
	}
	e := r.work.combine(settingFigure(d, stressPa), onCurve, "not finite")
	return TargetSetting{SettingSI: e, NextSI: estimate.Unknown("not worked out"), TrueSI: e}, nil
}
