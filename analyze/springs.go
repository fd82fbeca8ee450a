package analyze

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Springs is what the loop says of the springs of a tensioner set by their
// length. Friction and weight follow from the same balance as under oil, with
// the springs' force k x in the place of p A*. Friction within a stack of disc
// springs lies upstream of the scale and turns the loop the other way: mu is then
// what the slide has more than the stack, and may be below nothing.
type Springs struct {
	RateNM  estimate.Estimate // of one spring: its force for each metre of its length
	Ratio   estimate.Estimate // RateNM / the profile's
	BoundSI estimate.Estimate // setting at which the loop shows them going solid
	BindSI  float64           // the same by the profile; NaN where it is not given
	LeftSI  estimate.Estimate // length left at the target before they bind by the profile
}

// springs works out the springs of a tensioner set by spring length.
func (w *work) springs() {
	s, t := &w.res.Springs, w.setup.Tensioner
	no := estimate.Unknown("worked out for tensioners set by spring length only")
	*s = Springs{RateNM: no, Ratio: no, BoundSI: no, LeftSI: no, BindSI: math.NaN()}
	if t.SetBy != mill.SetBySpring || t.Spring == nil {
		return
	}
	s.RateNM = w.combine(func(r ramp, k constants) float64 { return balanceOf(anyZero(r), k).areaM2() }, "not a finite number").
		Scale(1 / (float64(max(t.Spring.Parallel, 1)) * t.Ratio()))
	s.Ratio = estimate.Unknown("the profile gives no rate of the springs")
	if rate := t.Spring.Rate.SI; rate > 0 {
		s.Ratio = s.RateNM.Scale(1 / rate)
	}
	s.BoundSI = w.bound()
	s.LeftSI = estimate.Unknown("the profile does not say where the springs bind")
	if bind := t.Spring.BindLength; bind.Given() {
		s.BindSI = t.Rising(bind.SI)
		s.LeftSI = estimate.Unknown("the target's setting is not known")
		if at := w.res.AtRising.TrueSI; at.Known() {
			s.LeftSI = at
			s.LeftSI.Value = s.BindSI - at.Value
		}
	}
}

// Springs that go solid let the stretch rise faster with their length, and with
// turns: by more than this. Judgement.
const boundRatio = 1.1

// bound is where the fitted ramps' straight part ends in a steeper one.
func (w *work) bound() estimate.Estimate {
	var at []float64
	for _, i := range w.fitted {
		if c := w.res.Cycles[i]; finite(c.StopSI) && c.StopRatio > boundRatio {
			at = append(at, c.StopSI)
		}
	}
	if 2*len(at) <= len(w.fitted) {
		return estimate.Unknown("no sign of it up to the top of the ramps")
	}
	mean, sd := estimate.Mean(at)
	return estimate.Estimate{Value: mean, Random: sd / math.Sqrt(float64(len(at))), System: w.setup.SettingStd,
		DoF: math.Max(1, float64(len(at)-1)), Method: "end of the straight part, mean of the ramps"}
}

// turnedLoop is whether the loop runs the other way: the springs rub more than
// what they push.
func (w *work) turnedLoop() bool {
	return w.setup.Tensioner.SetBy == mill.SetBySpring && w.res.WidthRatio.Value < 0
}

// unloaded is whether the springs of a tensioner set by their length were at
// their free length, to within count and noise: nothing presses on the band then.
func (w *work) unloaded(r run) bool {
	return w.setup.Tensioner.SetBy == mill.SetBySpring && r.lowSI-w.setup.Tensioner.FreeSI() <= w.setup.CountSI+3*w.trace.noise
}
