package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// The conventions of the zero.
const (
	slackBand     = "slack band"      // the straight part is carried down to the slack band's stretch
	slackLift     = "slack lift"      // or to the setting that moves the wheel with the band slack
	operatorsMark = "operator's mark" // or to the stretch that the operator marked as slack
)

// zeroStdM is what a zero has in common with every other zero of the record:
// one count hides it (rectangular, JCGM 100 F.2.2.1), and half a count more
// where the display's rounding is not known. A display that cuts its digits off
// shows 0 over two counts, from below zero to above (protocol SPEC 6.4).
func (w *work) zeroStdM() float64 {
	return math.Hypot(w.zeroCountStdM(), stepScatter*w.setup.CountM)
}

// A step of a display lies off its place by this share of a count, standard.
// Judgement: no display says so of itself.
const stepScatter = 0.1

// zeroCountStdM is what of it is rectangular.
func (w *work) zeroCountStdM() float64 {
	std := w.setup.CountM / math.Sqrt(12)
	switch {
	case !w.set.Extension.CutKnown():
		return math.Hypot(std, w.setup.CountM/2/math.Sqrt(3))
	case w.set.Extension.CutsOff() && w.zeroOnNought():
		return 2 * std
	}
	return std
}

// zeroOnNought is whether a cycle's zero is the display's own 0.
func (w *work) zeroOnNought() bool {
	for _, c := range w.res.Cycles {
		if c.Zero.Known() && math.Abs(c.Zero.Value) <= w.setup.CountM/2 {
			return true
		}
	}
	return false
}

// findZeros gives each cycle its extension at zero tension: one value, shared
// by both branches, from the slack band before and after it; else from the
// nearest slack band or the operator's mark, which several cycles may share;
// never from the setting's zero, where weight and friction hold the wheel with
// the band slack or not.
func (w *work) findZeros() {
	w.findLulls()
	w.judgeMarks()
	shared := 0.0
	for i := range w.res.Cycles {
		c := &w.res.Cycles[i]
		c.ReturnM = w.returned(w.lulls[i].level, w.lulls[i+1].level)
		c.Zero, c.ZeroFrom = w.slackZero(i), slackBand
		if c.Zero.Known() {
			continue
		}
		c.Zero, c.ZeroFrom = w.borrowedZero(w.begins(c, &w.legs[i]))
		shared = math.Max(shared, c.Zero.Random)
		c.Zero.Random, c.Zero.DoF = 0, math.Inf(1)
	}
	w.zeroStd = math.Hypot(w.zeroStdM(), shared)
	for i := range w.res.Cycles {
		if z := &w.res.Cycles[i].Zero; z.Known() {
			z.System, z.Flat = w.zeroStd, w.zeroCountStdM()
		}
	}
	w.liftZeros()
}

// begins is the time of the first pair of a cycle that is fitted.
func (w *work) begins(c *Cycle, l *legs) float64 {
	if at := w.onRising(c, l); len(at) > 0 {
		return w.t[at[0]]
	}
	return w.t[c.First]
}

// slackZero is a cycle's own zero, by the slack band before and after it on the
// same mounting.
func (w *work) slackZero(cycle int) estimate.Estimate {
	before, after := w.lulls[cycle], w.lulls[cycle+1]
	begins := w.begins(&w.res.Cycles[cycle], &w.legs[cycle])
	if w.slipped(before.t, begins) {
		before.level = estimate.Unknown("the mount slipped")
	}
	if w.slipped(begins, after.t) {
		after.level = estimate.Unknown("the mount slipped")
	}
	return betweenZeros(before.level, after.level)
}

// borrowedZero is the zero for a cycle about the time t that has no slack band
// of its own.
func (w *work) borrowedZero(t float64) (zero estimate.Estimate, from string) {
	if z := w.nearestSlack(t, true); z.Known() {
		return z, slackBand
	}
	if z := w.markedZero(t); z.Known() {
		return z, operatorsMark
	}
	return estimate.Unknown("the band was never seen slack, and " + w.marks.why()), ""
}

// betweenZeros is the zero of a cycle between two slack bands. What it drifted
// meanwhile may lie anywhere between them.
func betweenZeros(a, b estimate.Estimate) estimate.Estimate {
	switch {
	case !a.Known():
		return b
	case !b.Known():
		return a
	}
	drift := (b.Value - a.Value) / math.Sqrt(12)
	z := estimate.Estimate{Value: (a.Value + b.Value) / 2, Method: "mean of the slack band before and after"}
	z.Random = math.Sqrt((a.Random*a.Random+b.Random*b.Random)/4 + drift*drift)
	z.DoF = math.Min(a.DoF, b.DoF)
	return z
}

// returned is how far the extension is from where it began.
func (w *work) returned(before, after estimate.Estimate) estimate.Estimate {
	if !before.Known() || !after.Known() {
		return estimate.Unknown("the band was not slack both before and after the cycle")
	}
	return estimate.Estimate{
		Value:  unlessRounding(after.Value-before.Value, math.Abs(after.Value)+math.Abs(before.Value)),
		Random: math.Hypot(before.Random, after.Random),
		System: w.setup.CountM / math.Sqrt(6), DoF: math.Min(before.DoF, after.DoF), Method: "slack band after the cycle less before it",
	}
}

// nearestSlack borrows the zero of the slack band nearest in time, of the same
// mounting only where that is asked for.
func (w *work) nearestSlack(t float64, sameMount bool) estimate.Estimate {
	var best estimate.Estimate
	gap := math.Inf(1)
	for _, l := range w.lulls {
		if l.level.Known() && math.Abs(l.t-t) < gap && !(sameMount && w.slipped(l.t, t)) {
			best, gap = l.level, math.Abs(l.t-t)
		}
	}
	if best.Known() {
		best.Method = "slack band of another cycle"
	}
	return best
}
