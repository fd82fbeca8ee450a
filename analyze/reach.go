package analyze

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Within is whether a tensioner can bring a band to its target inside the limit
// on its setting. The zero value is not decided.
type Within string

// The verdicts.
const (
	WithinUndecided Within = ""
	WithinLimit     Within = "inside the limit"
	PastLimit       Within = "past the limit"
)

// Reach is one band on file on the tensioner that was calibrated.
type Reach struct {
	Band     mill.Band
	Measured bool              // it is the band that the wheel pull was measured with
	TargetPa float64           // 0 when it has none
	PullN    estimate.Estimate // wheel pull at its target, 2 sigma A_b
	Rising   TargetSetting     // unknown outside the captured range of wheel pull
	Falling  TargetSetting
	Carried  estimate.Estimate // rising setting that the verdict rests on: outside the captured range, the straight line carried on
	Captured bool              // the target's wheel pull was captured, rising
	Within   Within
	Why      string // why it is not decided, or why no setting is given; "" where all is known
}

// Reaches says of each band on file whether this tensioner can bring it to its
// target, in the order of the file. Past the captured range a straight line says
// no more than "past the limit": a spring may go solid, or the travel end,
// before.
func (r *Result) Reaches() []Reach {
	var out []Reach
	for _, b := range r.Setup.Bands {
		out = append(out, r.reachOf(b))
	}
	return out
}

func (r *Result) reachOf(b mill.Band) Reach {
	reach := Reach{Band: b, Measured: sameSection(b, r.measured()), TargetPa: b.Target.SI}
	unknown := func(why string) Reach {
		none := estimate.Unknown(why)
		reach.PullN, reach.Carried, reach.Why = none, none, why
		reach.Rising = TargetSetting{SettingSI: none, NextSI: none, TrueSI: none}
		reach.Falling = reach.Rising
		return reach
	}
	if !(b.Target.SI > 0) {
		return unknown("the band has no target")
	}
	p, err := r.ForBand(b, b.Target)
	if err != nil {
		return unknown(err.Error())
	}
	if err := p.usable(); err != nil {
		return unknown(noZero)
	}
	reach.PullN = estimate.Estimate{
		Value: 2 * b.Target.SI * b.NetAreaM2(), System: 2 * b.Target.SI * b.NetAreaM2() * r.Setup.SectionRelStd, DoF: math.Inf(1), Method: "2 x target x net section",
	}
	reach.Rising, reach.Falling = p.AtRising, p.AtFalling
	reach.Captured = p.AtRising.SettingSI.Known()
	reach.Carried = p.work.settingAt(Rising, b.Target.SI).TrueSI
	reach.judge(p.Rising, r.Setup.LimitSI)
	return reach
}

// judge compares the whole 95 % interval of the setting with the limit.
func (e *Reach) judge(b Branch, limitSI float64) {
	low, high := e.Carried.Interval95()
	below := e.TargetPa < b.LowPa
	switch {
	case !e.Carried.Known() || !(limitSI > 0):
		e.Why = "no setting or no limit is known"
	case low > limitSI:
		e.Within = PastLimit
	case below && b.LowSI <= limitSI:
		e.Within, e.Why = WithinLimit, "its wheel pull lies below what was captured: no setting is given"
	case !e.Captured:
		e.Why = "its wheel pull lies above what was captured: ramp further, never past the limit"
	case high <= limitSI:
		e.Within = WithinLimit
	default:
		e.Why = "the limit lies within the doubt of the setting"
	}
}
