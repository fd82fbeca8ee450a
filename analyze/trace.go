package analyze

import (
	"math"
	"sort"

	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// trace is the setting over time, as finely as it was sampled, with means over
// windows of time. Windows follow the clock and not the number of readings: a
// stroke of a hand pump lasts as long however often it is sampled.
type trace struct {
	t, p    []float64 // s, SI
	sum     []float64 // of the first i values of p, less base
	when    []float64 // of the first i times, less the first one
	base    float64
	noise   float64 // standard deviation of one value
	stepS   float64 // median time between values
	perS    float64 // values a second, mean
	windowS float64 // over which the setting is smoothed
}

// newTrace takes the setting's own readings, or the pairs where there are no
// more readings than pairs.
func newTrace(set *pairing.Set, countSI float64) *trace {
	tr := &trace{}
	if len(set.Setting.Readings) > len(set.Pairs) {
		for _, r := range set.Setting.Readings {
			if r.Status.Ok() && finite(r.T) && finite(r.Value) {
				tr.t, tr.p = append(tr.t, r.T), append(tr.p, r.Value)
			}
		}
	}
	if len(tr.t) < len(set.Pairs) {
		tr.t, tr.p = nil, nil
		for _, q := range set.Pairs {
			tr.t, tr.p = append(tr.t, q.T), append(tr.p, q.Setting)
		}
	}
	tr.base = tr.p[0]
	tr.sum, tr.when = make([]float64, len(tr.p)+1), make([]float64, len(tr.p)+1)
	steps := make([]float64, 0, len(tr.t))
	for i, p := range tr.p {
		tr.sum[i+1] = tr.sum[i] + p - tr.base
		tr.when[i+1] = tr.when[i] + tr.t[i] - tr.t[0]
		if i > 0 {
			steps = append(steps, tr.t[i]-tr.t[i-1])
		}
	}
	tr.stepS = estimate.Median(steps)
	if span := tr.t[len(tr.t)-1] - tr.t[0]; span > 0 {
		tr.perS = float64(len(tr.t)-1) / span
	}
	tr.noise = math.Max(estimate.Noise(tr.p), countSI/math.Sqrt(12))
	if set.Stepped {
		tr.noise = set.StepStd
	}
	return tr
}

func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }

// smoothFor chooses the window for ramps of about the given rate, SI/s: over
// it the setting rises by about four times the noise that is left of it, so
// that rising is told from resting, and no longer than that.
func (tr *trace) smoothFor(rate float64) {
	const longest = 3.0 // s
	w := longest
	if rate > 0 {
		w = math.Pow(4*tr.noise*math.Sqrt(tr.stepS)/rate, 2.0/3)
	}
	tr.windowS = math.Min(longest, math.Max(w, 1.01*tr.stepS))
}

// at is the index of the last value at or before t; -1 before the first.
func (tr *trace) at(t float64) int {
	return tr.first(t, true) - 1
}

// first is the index of the first value at or after t, or after it where past is
// set. It is looked for about where an even rate of reading would have it.
func (tr *trace) first(t float64, past bool) int {
	const near = 8
	is := func(i int) bool { return tr.t[i] > t || !past && tr.t[i] == t }
	n := len(tr.t)
	guess := (t - tr.t[0]) * tr.perS
	if !(guess >= 0) {
		guess = 0
	}
	low := min(n, max(0, int(math.Min(guess, float64(n)))-near))
	high := min(n, low+2*near)
	if low > 0 && is(low-1) {
		low, high = 0, low
	} else if high < n && !is(high) {
		low, high = high, n
	}
	return low + sort.Search(high-low, func(i int) bool { return is(low + i) })
}

// mean is the mean over the times from a to b, both included, and the mean of
// the times that it has values for; NaN where there is none.
func (tr *trace) mean(a, b float64) (m, t float64) {
	i := tr.first(a, false)
	j := tr.at(b) + 1
	if j <= i {
		return math.NaN(), math.NaN()
	}
	n := float64(j - i)
	return tr.base + (tr.sum[j]-tr.sum[i])/n, tr.t[0] + (tr.when[j]-tr.when[i])/n
}

// about is the setting by the values of the window about t, moved along the
// present rate to where the window has no value in its middle. NaN where it has
// none at all.
func (tr *trace) about(t float64) float64 {
	m, at := tr.mean(t-tr.windowS/2, t+tr.windowS/2)
	before, tBefore := tr.mean(t-tr.windowS, t)
	after, tAfter := tr.mean(t, t+tr.windowS)
	if rate := (after - before) / (tAfter - tBefore); finite(rate) {
		return m + rate*(t-at)
	}
	return m
}

// smooth is the setting about t; in a hole wider than the window it lies on
// the line between the values on both sides.
func (tr *trace) smooth(t float64) float64 {
	if m := tr.about(t); finite(m) {
		return m
	}
	return tr.value(t)
}

// value is the setting at t on the line between the values on both sides.
func (tr *trace) value(t float64) float64 {
	i := tr.at(t)
	switch last := len(tr.t) - 1; {
	case i < 0:
		return tr.p[0]
	case i >= last:
		return tr.p[last]
	}
	return tr.p[i] + (tr.p[i+1]-tr.p[i])*(t-tr.t[i])/(tr.t[i+1]-tr.t[i])
}

// smoothed is the whole setting, each value the mean over a window about it; a
// longer one where it rests, so that the highest value of a rest is not its
// noise's.
func (tr *trace) smoothed(windowS float64) estimate.Trace {
	const longest = 4.0 // s
	out := estimate.Trace{T: tr.t, V: make([]float64, len(tr.t))}
	last := tr.t[len(tr.t)-1]
	for i, t := range tr.t {
		room := 2 * math.Min(t-tr.t[0], last-t) // evenly to both sides
		w := math.Min(windowS, room)
		for ; 2*w <= math.Min(longest, room) && tr.rests(t, w); w *= 2 {
		}
		out.V[i], _ = tr.mean(t-w/2, t+w/2)
	}
	return out
}

// rests is whether the means over a window before t and after it are alike.
func (tr *trace) rests(t, windowS float64) bool {
	const alike = 2.0
	return math.Abs(tr.gain(t, windowS)) < alike*math.Sqrt2*tr.doubt(windowS)
}

// flank is the mean over a window, and the mean of the times that it has values for.
type flank struct{ p, t float64 }

// sides is the windows before t and after it. NaN at the ends.
func (tr *trace) sides(t, window float64) (before, after flank) {
	const apart = 1e-9 // s; t itself belongs to neither side
	before.p, before.t = tr.mean(t-window, t-apart)
	after.p, after.t = tr.mean(t+apart, t+window)
	return before, after
}

// gain is how much the setting changes about t: from the window before it to
// the window after it, wherever in them the values lie. NaN at the ends.
func (tr *trace) gain(t, window float64) float64 {
	before, after := tr.sides(t, window)
	return (after.p - before.p) / (after.t - before.t) * window
}

// turns is whether the setting changes its rate within a window of t by more
// than noise: a stroke begins or ends there, and the smoothed setting lies off
// the true one.
func (tr *trace) turns(t float64) bool {
	const beyond = 2.0
	before, after := tr.sides(t, tr.windowS)
	straight := before.p + (after.p-before.p)*(t-before.t)/(after.t-before.t)
	// Three means, the middle one made of halves of the others but for t itself.
	own := math.Min(1, tr.stepS/tr.windowS)
	return 2*math.Abs(straight-tr.about(t)) > beyond*math.Sqrt(2+4*own)*tr.doubt(tr.windowS)
}

// doubt is the standard deviation of a mean over a window.
func (tr *trace) doubt(window float64) float64 {
	return tr.noise * math.Sqrt(math.Min(1, tr.stepS/window))
}

// leading says, for each of the given times in order, whether the smoothed
// setting leads: for sign +1 it rises and is above all that it was since the
// time from, up to one window ago; for -1 it falls and is below. Anything else
// lies inside the loop, and so does where it turns: after a stroke the pressure sags while friction holds
// the band, and the next stroke has to win that back first. The last window is
// left out so that a steady ramp is not asked to beat its own noise.
func (tr *trace) leading(from float64, times []float64, sign float64) []bool {
	still := 2 * math.Sqrt2 * tr.doubt(tr.windowS)
	out := make([]bool, len(times))
	best := math.Inf(-1)
	next := max(0, tr.at(from))
	for k, t := range times {
		for ; next < len(tr.t) && tr.t[next] <= t-tr.windowS; next++ {
			best = math.Max(best, sign*tr.smooth(tr.t[next]))
		}
		out[k] = sign*tr.smooth(t) >= best && sign*tr.gain(t, tr.windowS) > still && !tr.turns(t)
	}
	return out
}

// leadingSteps is leading where the setting is known at presses alone: a step
// leads that was come to in the branch's direction and is farther than all
// before it; the first one was not.
func leadingSteps(p []float64, sign float64) []bool {
	out := make([]bool, len(p))
	best, leads := sign*p[0], math.Inf(-1)
	for k := range p {
		if sign*p[k] > best {
			best, leads = sign*p[k], sign*p[k]
		}
		out[k] = sign*p[k] == leads
	}
	return out
}
