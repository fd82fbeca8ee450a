package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Prediction says how a result comes from a force calibration that was made with
// another band. At one setting the tensioner gives one wheel pull F, whatever
// band is on the wheels; F = 2 sigma A_b, so the stress follows the ratio of the
// net sections. Modulus and gauge length of the band that was measured stand
// behind F and do not cancel, and the sections of both bands enter. That the same
// weight is moved, and that the tensioner works as it did, is for people to
// confirm: nothing here can see it.
type Prediction struct {
	Measured  mill.Band         // on the wheels during the ramps
	AreaRatio estimate.Estimate // its net section / that of the band predicted for
	Worn      bool              // both are one strip, narrower in one of the two states
}

// ofSection is the doubt of a net section.
const ofSection = "thickness and net width"

// A net width at three places with a rule, where the thickness of one strip is
// common to both states of a worn band. Common practice, no source.
const assumedWidthStd = 0.009

// ForBand is the result that the same wheel pulls would have given with another
// band, or with the measured one at another width: both curves, the settings for
// its target with their intervals, the running band, and the setting to drop to
// after an overshoot. A given target overrides the band's. The measured band
// itself gives r. Figures outside the captured range of wheel pull are unknown
// and say so. Errors: ErrNoCycle for a result that Analyze did not make,
// a *mill.ProfileError for a band without a section.
func (r *Result) ForBand(b mill.Band, target mill.Pressure) (*Result, error) {
	switch {
	case r.work == nil || len(r.work.ramps) == 0:
		return nil, ErrNoCycle
	case !(b.NetAreaM2() > 0):
		return nil, fmt.Errorf("analyze: %w", &mill.ProfileError{Key: "band.net_width", Problem: "band " + b.Name + " has no net section", Hint: "give its thickness and net_width"})
	}
	wanted := r.Setup.TargetPa
	if r.Setup.Band.Name != b.Name {
		wanted = b.Target.SI
	}
	if target.Given() {
		wanted = target.SI
	}
	if b.Name == r.Setup.Band.Name && b.NetAreaM2() == r.Setup.NetAreaM2 && wanted == r.Setup.TargetPa {
		return r, nil
	}
	return r.work.predict(b, r.measured(), wanted), nil
}

// measured is the band that was on the wheels.
func (r *Result) measured() mill.Band {
	if r.Predicted != nil {
		return r.Predicted.Measured
	}
	return r.Setup.Band
}

// predict works out the figures again for a band and a target.
func (w *work) predict(b, measured mill.Band, targetPa float64) *Result {
	o, was := *w, w.res
	o.setup.Band, o.setup.NetAreaM2, o.setup.TargetPa = b, b.NetAreaM2(), targetPa
	o.res = &Result{
		Setup: o.setup, Cycles: was.Cycles, Points: append([]Point(nil), was.Points...), Marks: was.Marks,
		Simulated: was.Simulated, Ended: was.Ended, Lag: was.Lag, work: &o, Warnings: append([]Warning(nil), was.Warnings[:w.early]...),
	}
	o.k.otherM2 = 0
	if !sameSection(b, measured) {
		o.k.otherM2 = b.NetAreaM2()
		o.res.Predicted = predictionFrom(measured, b, o.setup.SectionRelStd)
	}
	for i := range o.res.Points {
		o.res.Points[i].Stress *= o.k.paPerM() / w.k.paPerM()
	}
	o.figures()
	o.warnings()
	return o.res
}

func predictionFrom(measured, b mill.Band, sectionStd float64) *Prediction {
	std, ratio := math.Sqrt2*sectionStd, measured.NetAreaM2()/b.NetAreaM2()
	worn := measured.Name == b.Name && measured.Thickness.SI == b.Thickness.SI
	if worn {
		std = math.Sqrt2 * assumedWidthStd
	}
	return &Prediction{Measured: measured, Worn: worn, AreaRatio: estimate.Estimate{
		Value: ratio, System: ratio * std, DoF: math.Inf(1), Method: "net section of the measured band / that of this one",
	}}
}

func sameSection(a, b mill.Band) bool { return a.Name == b.Name && a.NetAreaM2() == b.NetAreaM2() }

// ofOther makes the doubts of both sections count in the stress where it is
// another band's.
func (w *work) ofOther(sources []source) []source {
	if w.k.otherM2 == 0 {
		return sources
	}
	name, from, std := ofSection, "assumed 1 %", w.setup.SectionRelStd
	p := w.res.Predicted
	if p.Worn {
		name, from, std = "net width", "assumed 0.9 %, the thickness is common", assumedWidthStd
	}
	for i := range sources {
		if s := &sources[i]; s.name == ofSection {
			s.name, s.from, s.enter = name+" of "+p.Measured.Name+", measured", from, inTruth
			s.moves = []mover{func(r ramp, k constants, by float64) (ramp, constants) {
				k.areaM2 *= 1 + by*std
				return r, k
			}}
		}
	}
	return append(sources, source{name: name + " of " + w.setup.Band.Name, from: from, enter: inTruth, moves: []mover{func(r ramp, k constants, by float64) (ramp, constants) {
		k.otherM2 *= 1 + by*std
		return r, k
	}}})
}

// warnPredicted says what a prediction rests on.
func (w *work) warnPredicted() {
	p := w.res.Predicted
	if p == nil {
		return
	}
	what := "with band " + p.Measured.Name
	if p.Worn {
		what = fmt.Sprintf("with this band at a net width of %s", p.Measured.NetWidth)
	}
	w.warn("predicted", fmt.Sprintf("Predicted, not measured: the wheel pull was measured %s and is taken to be the same at each setting. Confirm that the same weight is moved and the wheel stands where it stood.", what))
}
