package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// TargetSetting is the setting for the target stress on one branch.
type TargetSetting struct {
	SettingSI estimate.Estimate // of the fitted curve, mean over the ramps; with the indicator's own error and the zero
	NextSI    estimate.Estimate // of the next setting: adds ramp-to-ramp scatter and the gauge's reading; unknown with one ramp
	TrueSI    estimate.Estimate // so that the band's true stress is the target: adds everything that repeats
	StressPa  estimate.Estimate // the band's true stress at the setting: TrueSI as stress
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

// SettingAt is the setting for a band stress on a branch. With one ramp TrueSI
// lacks the scatter between ramps, and says so. Errors: *OutOfRangeError
// outside the captured stresses, ErrNoZero, ErrNoCycle.
func (r *Result) SettingAt(d Direction, stressPa float64) (TargetSetting, error) {
	if err := r.usable(); err != nil {
		return TargetSetting{}, err
	}
	b := r.branch(d)
	if !(stressPa >= b.LowPa && stressPa <= b.HighPa) {
		return TargetSetting{}, &OutOfRangeError{stressPa, b.LowPa, b.HighPa, "band stress, " + string(d), d, mill.RoleStress, ""}
	}
	return r.work.settingAt(d, stressPa), nil
}

func (w *work) settingAt(d Direction, stressPa float64) TargetSetting {
	f := settingFigure(d, stressPa)
	w = w.reaching(d, f)
	const why = "not a finite number"
	again := w.inverse(d, stressPa)
	t := TargetSetting{
		SettingSI: w.doubted(again.Mean, f, inCurve, why),
		NextSI:    w.doubted(w.read(again.Next), f, inCurve, "one ramp only: how well the next setting repeats is not known"),
		TrueSI:    again.Mean,
	}
	if t.NextSI.Known() {
		t.TrueSI = t.NextSI
		t.TrueSI.Method += ", and all that repeats"
	} else {
		t.TrueSI.Method += ", and all that repeats; scatter between ramps is not known"
	}
	t.TrueSI = w.doubted(t.TrueSI, f, inTruth, why)
	t.StressPa = w.trueStress(d, stressPa, t.TrueSI)
	t.Budget = w.budget(f, t)
	return t
}

// read adds to the next ramp what one reading of the setting gauge hides: its
// count, and its noise.
func (w *work) read(next estimate.Estimate) estimate.Estimate {
	if !next.Known() {
		return next
	}
	parts := []estimate.Component{{Std: next.Random, DoF: next.DoF}, {Std: w.readingStd(), DoF: math.Inf(1)}}
	next.Random, next.DoF = estimate.RootSum(parts), estimate.EffectiveDoF(parts)
	next.Method += ", and one reading of the gauge"
	return next
}

// rampSD is the standard deviation of a figure from ramp to ramp.
func (w *work) rampSD(f figure) float64 {
	return w.repeat(f).Mean.Random * math.Sqrt(float64(len(w.ramps)))
}

// readingStd is the standard uncertainty of one reading of the setting gauge;
// the trace's noise is never below what the count alone gives.
func (w *work) readingStd() float64 { return w.trace.noise }

// trueStress is the band's true stress at the setting for a stress: the stress
// itself, doubted as the setting is.
func (w *work) trueStress(d Direction, stressPa float64, setting estimate.Estimate) estimate.Estimate {
	if !setting.Known() {
		return setting
	}
	slope := w.repeat(func(r ramp, k constants) float64 { return r.line(d).B * k.paPerM() }).Mean
	e := setting.Scale(slope.Value)
	e.Value = stressPa
	return e
}

// budget has a line for everything that the true stress rests on (JCGM 100,
// clause 8).
func (w *work) budget(f figure, t TargetSetting) []Term {
	n := len(w.ramps)
	mean := t.SettingSI
	lines := []Term{{"fitted curve", mean.Random, mean.DoF, "A", mean.Method}}
	if n >= 2 {
		lines = append(lines,
			Term{"next ramp against the curve", w.rampSD(f), float64(n - 1), "A", fmt.Sprintf("scatter of %d ramps", n)},
			Term{"reading of the setting gauge", w.readingStd(), math.Inf(1), "B", "noise and least count of one reading"})
	}
	return append(lines, w.terms(f, inTruth)...)
}

// ownTerms is the budget of a figure that is not a setting: its own scatter, and
// what repeats. StdSI is in the figure's unit.
func (w *work) ownTerms(e estimate.Estimate, f figure) []Term {
	if !e.Known() {
		return nil
	}
	return append([]Term{{"scatter", e.Random, e.DoF, "A", e.Method}}, w.terms(f, inForces)...)
}

// terms has a line for every source that enters a figure up to a stage.
func (w *work) terms(f figure, upTo stage) []Term {
	var lines []Term
	for _, s := range w.sources {
		if s.enter <= upTo {
			lines = append(lines, Term{s.name, w.follow(f, s), math.Inf(1), "B", s.from})
		}
	}
	return lines
}

// aim works out the target's settings and the setting to drop to after an
// overshoot: half a reversal length below the target's falling setting, which
// frees the friction without losing the approach from below.
func (w *work) aim() {
	w.res.AtRising, w.res.AtFalling = w.targetOn(Rising), w.targetOn(Falling)
	if w.setup.Tensioner.SetBy == mill.SetByTorque {
		w.res.ResetSI = estimate.Unknown("a torque is no place to go back to")
		return
	}
	if w.turnedLoop() {
		w.res.ResetSI = estimate.Unknown("the springs rub more than the slide: let them down and come up again")
		return
	}
	if !w.res.AtFalling.SettingSI.Known() || !w.res.AtRising.SettingSI.Known() {
		w.res.ResetSI = estimate.Unknown("the target's settings on both branches are needed")
		return
	}
	rising, falling := settingFigure(Rising, w.setup.TargetPa), settingFigure(Falling, w.setup.TargetPa)
	w.res.ResetSI = w.reaching(Rising, rising).reaching(Falling, falling).combine(func(r ramp, k constants) float64 {
		return falling(r, k) - (rising(r, k)-falling(r, k))/2
	}, "not a finite number")
}

func (w *work) targetOn(d Direction) TargetSetting {
	unknown := func(why string) TargetSetting {
		e := estimate.Unknown(why)
		return TargetSetting{SettingSI: e, NextSI: e, TrueSI: e, StressPa: e}
	}
	if w.setup.TargetPa <= 0 {
		return unknown("no target is given")
	}
	t, err := w.res.SettingAt(d, w.setup.TargetPa)
	switch err.(type) {
	case nil:
		return t
	case *OutOfRangeError:
		return unknown("the target lies outside the captured range")
	}
	return unknown(noZero)
}

// TargetError says why the target has no setting on one branch or both: nil, an
// *OutOfRangeError, or ErrNoZero. It is nil too where no target is given.
func (r *Result) TargetError() error {
	if !(r.Setup.TargetPa > 0) {
		return nil
	}
	for _, d := range []Direction{Rising, Falling} {
		if _, err := r.SettingAt(d, r.Setup.TargetPa); err != nil {
			return err
		}
	}
	return nil
}
