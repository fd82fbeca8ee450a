package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

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
	all := w.combine(f, onePoint, "not a finite number")
	t := TargetSetting{SettingSI: all, NextSI: w.next(f, all), TrueSI: all}
	t.SettingSI.System = 0
	if t.NextSI.Known() {
		t.TrueSI.Random, t.TrueSI.DoF = t.NextSI.Random, t.NextSI.DoF
		t.TrueSI.Method = t.NextSI.Method + ", and all that repeats"
	} else {
		t.TrueSI.Method += ", and all that repeats; scatter between ramps is not known"
	}
	t.Budget = w.budget(f, t)
	return t
}

// next adds to the curve how far one ramp strays from the mean of all, and the
// least count of the reading.
func (w *work) next(f figure, curve estimate.Estimate) estimate.Estimate {
	if len(w.ramps) < 2 {
		return estimate.Unknown("one ramp only: how well the next setting repeats is not known")
	}
	parts := w.nextParts(f, curve)
	return estimate.Estimate{
		Value: curve.Value, Random: estimate.RootSum(parts), DoF: estimate.EffectiveDoF(parts),
		Method: "mean of the ramps, and scatter of one",
	}
}

// nextParts is the curve, the scatter of a single ramp and the least count.
// Curve and scatter come from the same ramps: their degrees of freedom are
// shared, so they go in as one.
func (w *work) nextParts(f figure, curve estimate.Estimate) []estimate.Component {
	return []estimate.Component{
		{Std: math.Hypot(curve.Random, w.rampSD(f)), DoF: math.Min(curve.DoF, float64(len(w.ramps)-1))},
		{Std: w.setup.CountSI / math.Sqrt(12), DoF: math.Inf(1)},
	}
}

func (w *work) rampSD(f figure) float64 {
	values := make([]float64, len(w.ramps))
	for i, r := range w.ramps {
		values[i] = f(r, w.k)
	}
	_, sd := estimate.Mean(values)
	return sd
}

// budget has a line for everything that the true stress rests on (JCGM 100,
// clause 8).
func (w *work) budget(f figure, t TargetSetting) []Term {
	n := len(w.ramps)
	lines := []Term{{"fitted curve", t.SettingSI.Random, t.SettingSI.DoF, "A", t.SettingSI.Method}}
	if n >= 2 {
		lines = append(lines, Term{"next ramp against the curve", w.rampSD(f), float64(n - 1), "A", fmt.Sprintf("scatter of %d ramps", n)})
	}
	if w.setup.CountSI > 0 {
		lines = append(lines, Term{"least count of the setting gauge", w.setup.CountSI / math.Sqrt(12), math.Inf(1), "B", "least count / sqrt 12"})
	}
	for _, s := range w.sources {
		if !s.wholeOnly && !s.forces {
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
	}, wholeLoop, "not a finite number")
}

func (w *work) targetOn(d Direction) TargetSetting {
	unknown := func(why string) TargetSetting {
		e := estimate.Unknown(why)
		return TargetSetting{SettingSI: e, NextSI: e, TrueSI: e}
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
