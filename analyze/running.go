package analyze

import (
	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// RunningBand is the one-sided band in which the stress may wander after the
// tensioner was set to the target's setting, the pressure being maintained.
type RunningBand struct {
	AfterRisingPa  [2]estimate.Estimate // lowest and highest change from target: +0 and more
	AfterFallingPa [2]estimate.Estimate // down and -0
	MiddlePa       estimate.Estimate    // where vibration brings it, pressure maintained
	Hold           mill.Hold            // as the profile states; "" = not stated, both cases apply
	Locked         LockedBand           // after it was set rising and the oil shut in
}

// running works out the band. At the setting reached by rising, friction holds
// any stress between the rising branch, which is the target, and the falling
// one above it; at the setting reached by falling, any between the falling
// branch and the rising one below it. Vibration works toward the middle of the
// loop.
func (w *work) running() {
	b := &w.res.Running
	b.Hold = w.setup.Tensioner.Hold
	none := estimate.Exact(0, "friction works one way")
	set := func(all estimate.Estimate) {
		b.AfterRisingPa, b.AfterFallingPa, b.MiddlePa = [2]estimate.Estimate{none, all}, [2]estimate.Estimate{all, none}, all
	}
	if by := w.setup.Tensioner.SetBy; by == mill.SetByTorque || by == mill.SetByTurns {
		set(estimate.Unknown("the screw holds the wheel, and what friction leaves open behind it is not seen"))
		return
	}
	if w.turnedLoop() {
		set(estimate.Unknown("the springs rub more than the slide, and what the slide leaves open is not seen"))
		return
	}
	if !w.res.AtRising.SettingSI.Known() || !w.res.AtFalling.SettingSI.Known() {
		set(estimate.Unknown("the target's settings on both branches are needed"))
		b.Locked = LockedBand{b.MiddlePa, b.MiddlePa}
		return
	}
	target := w.setup.TargetPa
	other := func(from, to Direction) estimate.Estimate {
		setting := settingFigure(from, target)
		return w.reaching(from, setting).combine(func(r ramp, k constants) float64 {
			return stressFigure(to, setting(r, k))(r, k) - target
		}, "not a finite number")
	}
	rise, fall := other(Rising, Falling), other(Falling, Rising)
	rise, fall = w.within(rise, target+rise.Value), w.within(fall, target+fall.Value)
	b.AfterRisingPa = [2]estimate.Estimate{none, rise}
	b.AfterFallingPa = [2]estimate.Estimate{fall, none}
	middle := w.reaching(Rising, settingFigure(Rising, target)).combine(func(r ramp, k constants) float64 {
		return middleStress(r, k, settingFigure(Rising, target)(r, k))
	}, "not a finite number")
	b.MiddlePa = w.within(middle, middle.Value)
	b.Locked = w.locked(w.res.AtRising.SettingSI.Value)
}

// within refuses a figure that leads to a stress that the ramps did not go
// through. The falling line is followed through the reversal at the top, which
// is left out of its fit but not of the ramps.
func (w *work) within(figure estimate.Estimate, stressPa float64) estimate.Estimate {
	if stressPa > w.res.Rising.HighPa || stressPa < w.res.Rising.LowPa {
		return estimate.Unknown("it lies outside what the ramps went through")
	}
	return figure
}

// middleStress is the stress whose two settings, rising and falling, have the
// given one for their mean: the friction-free line.
func middleStress(r ramp, k constants, settingSI float64) float64 {
	up, down := r.rising, r.falling
	// setting = ((e - A_up)/B_up + (e - A_dn)/B_dn) / 2
	e := (2*settingSI + up.A/up.B + down.A/down.B) / (1/up.B + 1/down.B)
	return (e - r.zeroM) * k.paPerM()
}
