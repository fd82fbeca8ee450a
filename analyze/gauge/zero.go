package gauge

import (
	"math"

	"tautramp/analyze/estimate"
)

// zeroShift is the largest change of the zero's error over a series.
func (w *work) zeroShift() { w.res.ZeroShift = w.largestZeroShift() }

func (w *work) largestZeroShift() estimate.Estimate {
	most := estimate.Unknown("the zero was not read both before and after")
	for _, before := range w.test.ZeroBefore {
		after, ok := findZero(w.test.ZeroAfter, before.Series, before.Run, before.Repeat)
		if !ok {
			continue
		}
		e := estimate.Estimate{
			Value: after.errSI() - before.errSI(), DoF: math.Inf(1), Method: "zero after less before, the largest",
			System: math.Hypot(w.test.Instruments.TestedCountSI, w.test.Instruments.ReferenceCountSI) / math.Sqrt(6),
		}
		for _, l := range []Level{before.Indicated, before.Reference, after.Indicated, after.Reference} {
			e.Random = math.Hypot(e.Random, l.doubt())
		}
		most = larger(most, e)
	}
	return most
}

// doubt is the standard uncertainty of a mean from the spread in its window.
func (l Level) doubt() float64 {
	if l.N < 2 {
		return 0
	}
	return l.Spread / math.Sqrt(float64(l.N))
}

// extremes are the largest figures over all points.
func (w *work) extremes() {
	r := w.res
	r.UpDown = estimate.Unknown("not read both up and down")
	r.MeanUpDown = estimate.Unknown("not read both up and down")
	r.TapShift = estimate.Unknown("no tapped and untapped series")
	r.Largest = estimate.Unknown("no point")
	var all []estimate.Estimate
	for i, c := range r.Curves {
		for _, a := range c.At {
			r.Largest = larger(r.Largest, larger(a.Up, a.Down))
			r.TapShift = larger(r.TapShift, a.TapShift)
			if i == 0 { // untapped, where there is such a series
				r.UpDown = larger(r.UpDown, a.UpDown)
				if a.UpDown.Known() {
					all = append(all, a.UpDown)
				}
			}
		}
	}
	if n := float64(len(all)); n > 0 {
		mean := estimate.Estimate{DoF: all[0].DoF, Method: "mean over the points of falling less rising"}
		for _, e := range all {
			mean.Value += e.Value / n
			mean.Random = math.Hypot(mean.Random, e.Random/n)
			mean.System += e.System / n
		}
		r.MeanUpDown = mean
	}
}
