package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// inverse is the setting for a band stress on a branch over the ramps: of their mean
// line, by Fieller with the covariance that intercept and slope have from ramp to
// ramp. Each ramp's extension counts from its own zero. Next adds the scatter of
// the ramps once more. One ramp is inverted by its own readings.
func (w *work) inverse(d Direction, stressPa float64) estimate.Repeated {
	f := settingFigure(d, stressPa)
	again := w.repeat(f)
	stretchM := stressPa / w.k.paPerM()
	if w.set.Stepped || len(w.ramps) == 0 {
		return again
	}
	if len(w.ramps) == 1 {
		again.Mean = w.inverseOfOne(d, stretchM, again.Mean)
		return again
	}
	var lines []estimate.Line
	for _, r := range w.ramps {
		l := r.line(d)
		if l.A -= r.zeroM; finite(l.A) {
			lines = append(lines, l)
		}
	}
	pooled, err := estimate.PoolLines(lines)
	if err != nil {
		return again
	}
	t := estimate.Student95(pooled.DoF)
	lo, hi, ok := pooled.Fieller(stretchM, 0, t)
	if !ok { // ramps that differ so much have no interval by their mean line
		return again
	}
	n := float64(len(lines))
	mean := estimate.Estimate{
		Value: (stretchM - pooled.A) / pooled.B, Random: (hi - lo) / 2 / t, DoF: pooled.DoF,
		Method: "mean line of the ramps, Fieller's interval from their scatter",
	}
	next := mean
	next.Random *= math.Sqrt(n + 1)
	next.Method += ", scatter between them once more"
	again.Mean, again.Next = mean, next
	return again
}

// inverseOfOne is the setting by the readings of the only ramp; where they do not
// give it, as it was.
func (w *work) inverseOfOne(d Direction, stretchM float64, was estimate.Estimate) estimate.Estimate {
	r := w.ramps[0]
	c, l := &w.res.Cycles[r.cycle], &w.legs[r.cycle]
	at := w.onRising(c, l)
	if d == Falling {
		at = w.onFalling(c, l)
	}
	e, err := estimate.InverseOf(w.readings(at), r.zeroM+stretchM)
	if err != nil || !was.Known() {
		return was
	}
	e.Random = math.Hypot(e.Random, math.Sqrt(r.zeroVar)/r.line(d).B)
	return e
}
