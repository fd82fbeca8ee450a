package analyze

import (
	"math"

	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
	"tautramp/protocol"
)

// The conventions of the zero.
const (
	slackBand     = "slack band"
	operatorsMark = "operator's mark"
)

// zeroStdM is what a zero has in common with every other zero of the record:
// one count hides it (rectangular, JCGM 100 F.2.2.1), and half a count more
// where the display's rounding is not known.
func (w *work) zeroStdM() float64 {
	std := w.setup.CountM / math.Sqrt(12)
	if s := w.set.Extension.Spec.Shows; s != protocol.ShowsRounded && s != protocol.ShowsTruncated {
		std = math.Hypot(std, w.setup.CountM/2/math.Sqrt(3))
	}
	return std
}

// findZeros gives each cycle its extension at zero tension: one value, shared
// by both branches, from the slack band before and after it; else from the
// operator's mark; never from the setting's zero, where weight and friction
// hold the wheel with the band slack or not.
func (w *work) findZeros() {
	w.findLulls()
	w.zeroStd = w.zeroStdM()
	for i := range w.res.Cycles {
		c := &w.res.Cycles[i]
		before, after := w.lulls[i].level, w.lulls[i+1].level
		c.Zero, c.ZeroFrom = betweenZeros(before, after), slackBand
		c.ReturnM = w.returned(before, after)
		if !c.Zero.Known() {
			c.Zero = w.nearestSlack((w.t[c.First] + w.t[c.Last]) / 2)
		}
		if !c.Zero.Known() {
			c.Zero, c.ZeroFrom = w.markedZero(), operatorsMark
		}
		if !c.Zero.Known() {
			c.ZeroFrom = ""
			continue
		}
		c.Zero.System = w.zeroStd
	}
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
		Value: after.Value - before.Value, Random: math.Hypot(before.Random, after.Random),
		System: w.setup.CountM / math.Sqrt(6), DoF: math.Min(before.DoF, after.DoF), Method: "slack band after the cycle less before it",
	}
}

// nearestSlack borrows the zero of the slack band nearest in time.
func (w *work) nearestSlack(t float64) estimate.Estimate {
	best := estimate.Unknown("the band was never seen slack, and nobody marked the zero")
	gap := math.Inf(1)
	for _, l := range w.lulls {
		if l.level.Known() && math.Abs(l.t-t) < gap {
			best, gap = l.level, math.Abs(l.t-t)
		}
	}
	if best.Known() {
		best.Method = "slack band of another cycle"
	}
	return best
}

// markedZero is the extension about the operator's first zero mark that was
// made with the extension low: a mark on a loaded band is none.
func (w *work) markedZero() estimate.Estimate {
	const about = 1.0 // s
	for _, m := range w.set.Marks {
		if m.Kind != pairing.Zero {
			continue
		}
		var e []float64
		for i, t := range w.t {
			if math.Abs(t-m.T) <= about {
				e = append(e, w.e[i])
			}
		}
		if len(e) < 3 || estimate.Median(e) > w.lowestSeated() {
			continue
		}
		_, sd := estimate.Mean(e)
		return estimate.Estimate{Value: estimate.Median(e), Random: sd / math.Sqrt(float64(len(e))), DoF: float64(len(e) - 1), Method: "extension at the operator's zero mark"}
	}
	return estimate.Unknown("the band was never seen slack, and nobody marked the zero")
}

// lowestSeated is the lowest extension at which a band was seated, m.
func (w *work) lowestSeated() float64 {
	low := math.Inf(1)
	for i := range w.legs {
		if w.legs[i].ok {
			low = math.Min(low, w.legs[i].seatEndM)
		}
	}
	return low
}
