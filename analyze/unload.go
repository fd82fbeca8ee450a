package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// LoadPastSI is the least setting to load up to before the target may be
// approached from above: the falling branch is reached only a reversal length
// and somewhat more below the highest setting (reversalShare), and never does it
// lie below the target's rising setting. Unknown where the target's settings
// are, or where it would pass the limit.
func (r *Result) LoadPastSI() estimate.Estimate {
	if !r.AtRising.SettingSI.Known() || !r.AtFalling.SettingSI.Known() {
		return estimate.Unknown("the target's settings on both branches are needed")
	}
	w, target := r.work, r.Setup.TargetPa
	rising, falling := settingFigure(Rising, target), settingFigure(Falling, target)
	past := w.reaching(Rising, rising).reaching(Falling, falling).combine(func(m ramp, k constants) float64 {
		// The loop at the top is as wide as at the setting that it is to turn at.
		p := rising(m, k)
		for range 20 {
			p = falling(m, k) + reversalShare*2*halfWidth(p)(m, k)
		}
		return max(p, rising(m, k))
	}, "not a finite number")
	if _, high := past.Interval95(); past.Known() && r.Setup.LimitSI > 0 && high > r.Setup.LimitSI {
		return estimate.Unknown("it would have to be loaded past the tensioner's limit first")
	}
	return past
}

// ScatterShare is how far one ramp strays from the mean of all at the target's
// setting: the standard deviation of its band stress over the target. NaN with
// one ramp or without a target.
func (r *Result) ScatterShare(d Direction) float64 {
	at := r.AtRising.SettingSI
	if d == Falling {
		at = r.AtFalling.SettingSI
	}
	if !at.Known() || len(r.work.ramps) < 2 {
		return math.NaN()
	}
	return r.work.rampSD(stressFigure(d, at.Value)) / r.Setup.TargetPa
}
