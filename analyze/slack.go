package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// lull is the low end between two tops, or before the first, or after the
// last: where the band may have gone slack.
type lull struct {
	first, last int               // pairs searched
	level       estimate.Estimate // m, extension of the slack band; unknown where it stayed taut
	t           float64           // s, middle of the slack
	why         notSlack          // why level is unknown
}

// notSlack is why a low end gives no slack band. The zero value is none.
type notSlack int

const (
	neverStill notSlack = iota + 1 // the extension did not stand still
	heldStill                      // no longer than friction holds a taut band still
	countHides                     // longer, perhaps, but the count hides how long
)

// stillM is how far readings of a still extension may stray: to the
// neighbouring count, and by noise.
func (w *work) stillM() float64 { return 1.01*w.setup.CountM + 3*w.noiseM }

// stillNoise is the standard deviation of one extension reading while the
// setting rests. On a ramp the counts themselves would pass for noise.
func (w *work) stillNoise() float64 {
	const enough = 20
	var steps []float64
	for i := 1; i < len(w.e); i++ {
		if w.still(i) && w.still(i-1) {
			steps = append(steps, w.e[i]-w.e[i-1])
		}
	}
	if len(steps) < enough {
		return estimate.Noise(w.e)
	}
	return estimate.MAD(steps) / math.Sqrt2
}

// findLulls looks for the slack band at every low end.
func (w *work) findLulls() {
	w.noiseM = w.stillNoise()
	from := 0
	for _, c := range w.res.Cycles {
		w.lulls = append(w.lulls, w.lullClear(from, c.Peak))
		from = c.Peak
	}
	w.lulls = append(w.lulls, w.lullClear(from, len(w.t)-1))
	w.confirmFirst()
}

// run is a stretch of pairs about the lowest extension of a lull in which the
// extension stands still.
type run struct {
	first, last int
	level       float64
	inSI        float64 // setting at which the extension came to rest; NaN at the record's start
	outSI       float64 // setting at which it left; NaN at the record's end
	lowSI       float64 // lowest setting in between
}

// lull decides whether the band went slack. A still extension alone does not
// say so: friction holds a taut band still as well while the setting turns
// round. But friction holds it no further than the reversal length, and never
// while the setting goes on falling. So the band was slack where the setting
// fell on, beyond noise and count, after the extension had come to rest; or
// where it moved further, from its lowest to where the extension left, than a
// reversal takes.
func (w *work) lull(first, last int) lull {
	l := lull{first: first, last: last, level: estimate.Unknown("the band was not slack, or not seen to be")}
	l.why = neverStill
	r, ok := w.stillRun(first, last)
	if !ok {
		return l
	}
	slope, reversal, ok := w.loopAt(r.level)
	if !ok {
		return l
	}
	if l.why = heldStill; 2*w.setup.CountM/slope > reversal/2 {
		l.why = countHides
	}
	blur := w.stillM()/slope + 3*w.trace.noise
	fellOn := r.inSI-r.lowSI > 2*blur
	beyond := r.outSI-r.lowSI > 1.25*reversal+2*blur
	clear := 2 * blur
	if w.wrench != nil { // its torque says nothing while the screw stands
		fellOn, beyond, clear = false, w.turnedOn(r), math.Inf(-1)
	} else if w.unloaded(r) {
		beyond, clear = true, math.Inf(-1)
	}
	if !fellOn && !beyond {
		return l
	}
	w.takeLevel(&l, r, clear)
	return l
}

// stillRun finds the run about the lowest extension; about the one at the lowest
// setting where that is clearly another: a curled band reads less where it begins to
// be taut than slack.
func (w *work) stillRun(first, last int) (run, bool) {
	smooth := make([]float64, last-first+1)
	lowest, lowSI := 0, math.Inf(1)
	for k := range smooth {
		i := first + k
		smooth[k] = estimate.Median(w.e[max(first, i-2) : min(last, i+2)+1])
		if smooth[k] < smooth[lowest] {
			lowest = k
		}
		lowSI = math.Min(lowSI, w.x[i])
	}
	if at, ok := w.resting(first, last, lowSI); ok && w.wrench == nil && smooth[at-first]-smooth[lowest] > w.stillM() {
		lowest = at - first
	}
	still := func(k int) bool {
		return k >= 0 && k < len(smooth) && math.Abs(smooth[k]-smooth[lowest]) <= w.stillM()
	}
	a, b := lowest, lowest
	for still(a - 1) {
		a--
	}
	for still(b + 1) {
		b++
	}
	if b-a+1 < leastPoints {
		return run{}, false
	}
	r := run{first: first + a, last: first + b, level: smooth[lowest], inSI: math.NaN(), outSI: math.NaN()}
	r.lowSI = math.Inf(1)
	for i := r.first; i <= r.last; i++ {
		r.lowSI = math.Min(r.lowSI, w.x[i])
	}
	if r.first > first {
		r.inSI = w.x[r.first]
	}
	if r.last < last {
		r.outSI = w.x[r.last]
	}
	return r, true
}

// resting is the middle one of the pairs that have the lowest setting, noise allowed
// for; ok is false where the setting is so wild that no number bounds it.
func (w *work) resting(first, last int, lowSI float64) (at int, ok bool) {
	var low []int
	for i := first; i <= last; i++ {
		if w.x[i] <= lowSI+3*w.trace.doubt(w.trace.windowS) {
			low = append(low, i)
		}
	}
	if len(low) == 0 {
		return 0, false
	}
	return low[len(low)/2], true
}

// loopAt is the falling branch's slope (m per SI of setting) and the reversal
// length at an extension, medians of the cycles that have lines.
func (w *work) loopAt(eM float64) (slope, reversal float64, ok bool) {
	var slopes, reversals []float64
	for i, c := range w.res.Cycles {
		if !w.legs[i].ok {
			continue
		}
		up, _ := c.Rising.Line.InverseAt(eM)
		down, _ := c.Falling.Line.InverseAt(eM)
		slopes = append(slopes, c.Falling.Line.B)
		reversals = append(reversals, math.Max(0, up-down))
	}
	return estimate.Median(slopes), estimate.Median(reversals), len(slopes) > 0
}

// takeLevel is the slack extension: the mean of the middle half of the readings
// taken clear of both ends of the run. What the count leaves open repeats, so
// it is not in it.
func (w *work) takeLevel(l *lull, r run, clearSI float64) {
	var e []float64
	for i := r.first; i <= r.last; i++ {
		p := w.x[i]
		if p > r.inSI-clearSI && i < (r.first+r.last)/2 || p > r.outSI-clearSI && i >= (r.first+r.last)/2 {
			continue
		}
		w.slack[i] = true
		e = append(e, w.e[i])
	}
	if len(e) < 3 {
		return
	}
	low, high := estimate.Quantile(e, 0.25), estimate.Quantile(e, 0.75)
	var middle []float64
	for _, v := range e {
		if v >= low && v <= high {
			middle = append(middle, v)
		}
	}
	mean, _ := estimate.Mean(middle)
	_, sd := estimate.Mean(e)
	n := math.Max(1, float64(len(e))/estimate.Dependence(e))
	l.level = estimate.Estimate{Value: mean, Random: sd / math.Sqrt(n), DoF: math.Max(1, n-1), Method: "still extension of the slack band"}
	l.t = (w.t[r.first] + w.t[r.last]) / 2
}

// confirmFirst takes the start of the record for slack where its still
// extension agrees with that of a later slack band: nothing before it says
// whether the setting had come down to it.
func (w *work) confirmFirst() {
	first := &w.lulls[0]
	if first.level.Known() {
		return
	}
	r, ok := w.stillRun(first.first, first.last)
	if !ok || r.first > first.first {
		return
	}
	for _, l := range w.lulls[1:] {
		if l.level.Known() && math.Abs(l.level.Value-r.level) <= w.stillM() {
			slope, _, _ := w.loopAt(r.level)
			w.takeLevel(first, r, 2*(w.stillM()/slope+3*w.trace.noise))
			return
		}
	}
}
