package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// ZeroBy is one convention of the zero that the data support, and the target's
// settings by it.
type ZeroBy struct {
	Name    string            // "slack band", "slack lift" or "operator's mark"
	Used    bool              // for all other figures
	ZeroM   estimate.Estimate // mean over the fitted ramps
	Rising  estimate.Estimate // setting for the target, as TargetSetting.SettingSI; unknown where it is out of range
	Falling estimate.Estimate
}

// A zero by the slack lift takes the place of the slack band's own where its doubt
// is less than this share of that. Judgement.
const liftBetter = 0.5

// liftZeros puts the slack lift in the place of a slack band that was not seen,
// or that the count hides far more of.
func (w *work) liftZeros() {
	w.findLifts()
	known := false
	for _, c := range w.res.Cycles {
		known = known || c.Role == Ramp && c.Zero.Known()
	}
	l := w.commonLift()
	if !l.known() || known && w.liftStdM() > liftBetter*w.zeroStd {
		return
	}
	w.zeroStd = w.liftStdM()
	for i := range w.res.Cycles {
		c := &w.res.Cycles[i]
		if c.Role != Ramp || !w.legs[i].ok {
			continue
		}
		if !w.lifts[i].known() {
			w.lifts[i] = l
		}
		c.Zero, c.ZeroFrom = w.liftZero(ramp{rising: c.Rising.Line, falling: c.Falling.Line, lift: w.lifts[i]}), slackLift
	}
}

// liftStdM is what a zero by the slack lift has in common with every other: how
// far the line may leave the true curve on the way down to it, a bend of the
// indicator's scale (rectangular) or, without one, half a count in a hundred.
func (w *work) liftStdM() float64 {
	return math.Hypot(w.scaleBendM()/math.Sqrt(3), 0.005*w.setup.CountM)
}

func (w *work) liftZero(r ramp) estimate.Estimate {
	return estimate.Estimate{
		Value: r.lift.zero(r), Random: math.Sqrt(r.lift.zeroVar(r)), System: w.liftStdM(), Flat: w.liftStdM(),
		DoF: math.Inf(1), Method: "straight line at the slack lift",
	}
}

// commonLift is the median of the ramps' lifts, for a ramp that showed none.
func (w *work) commonLift() (l lift) {
	for way := range l.settingSI {
		var p, std []float64
		for _, of := range w.lifts {
			if of.settingSI[way] > 0 {
				p, std = append(p, of.settingSI[way]), append(std, of.stdSI[way])
			}
		}
		if len(p) > 0 {
			l.settingSI[way], l.stdSI[way] = estimate.Median(p), estimate.Median(std)
		}
	}
	return l
}

// zeros works out the target's settings by every convention that the data
// support.
func (w *work) zeros() {
	w.res.Zeros = nil
	for _, name := range []string{slackBand, slackLift, operatorsMark} {
		some := *w
		some.ramps = nil
		for k, r := range w.ramps {
			if z, l := w.zeroBy(name, w.fitted[k], r); z.Known() {
				r.zeroM, r.zeroVar, r.lift, some.zeroStd = z.Value, z.Random*z.Random, l, z.System
				some.ramps = append(some.ramps, r)
			}
		}
		if len(some.ramps) < len(w.ramps) {
			continue
		}
		some.zeroFrom = name
		some.sources = some.benchFrom(some.systematics())
		by := ZeroBy{Name: name, Used: name == w.zeroFrom}
		by.ZeroM = some.repeat(func(r ramp, _ constants) float64 { return r.zeroM }).Mean
		by.ZeroM.System, by.ZeroM.Flat = some.zeroStd, math.Min(some.zeroStd, w.zeroCountStdM())
		by.Rising, by.Falling = some.targetBy(Rising), some.targetBy(Falling)
		w.res.Zeros = append(w.res.Zeros, by)
	}
}

// zeroBy is a cycle's zero by a convention; unknown where it has none.
func (w *work) zeroBy(name string, cycle int, r ramp) (estimate.Estimate, lift) {
	begins := w.begins(&w.res.Cycles[cycle], &w.legs[cycle])
	var z estimate.Estimate
	switch name {
	case slackLift:
		if r.lift = w.lifts[cycle]; !r.lift.known() {
			r.lift = w.commonLift()
		}
		if r.lift.known() {
			return w.liftZero(r), r.lift
		}
		return z, lift{}
	case slackBand:
		if z = w.slackZero(cycle); !z.Known() {
			z = w.nearestSlack(begins, true)
		}
	default:
		z = w.markedBy(begins)
	}
	if z.Known() {
		z.System = w.zeroStdM()
	}
	return z, lift{}
}

func (w *work) targetBy(d Direction) estimate.Estimate {
	if w.setup.TargetPa <= 0 || w.k.otherM2 != 0 {
		return estimate.Unknown("no target of the measured band")
	}
	f := settingFigure(d, w.setup.TargetPa)
	return w.doubted(w.inverse(d, w.setup.TargetPa).Mean, f, inCurve, "not a finite number")
}

// warnZeros says where two conventions differ by more than their doubt.
func (w *work) warnZeros() {
	for i, a := range w.res.Zeros {
		for _, b := range w.res.Zeros[:i] {
			apart := estimate.Estimate{
				Value: a.ZeroM.Value - b.ZeroM.Value, Random: math.Hypot(a.ZeroM.Random, b.ZeroM.Random), DoF: math.Min(a.ZeroM.DoF, b.ZeroM.DoF),
				System: math.Hypot(a.ZeroM.System, b.ZeroM.System), Method: "difference",
			}
			if lo, hi := apart.Interval95(); lo > 0 || hi < 0 {
				w.warn("zeros-differ", "The stretch at no wheel pull is another by the "+a.Name+" than by the "+b.Name+": curl of the band, or a slip of the rig. The settings by each are listed.")
			}
		}
	}
}
