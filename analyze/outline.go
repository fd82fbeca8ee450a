package analyze

import (
	"cmp"
	"math"
	"slices"

	"tautramp/analyze/estimate"
)

const (
	// Points on which the straight part is looked for; more readings are averaged.
	mostPoints = 300
	// A count is coarse where a branch has so many readings to each of its steps,
	// and steps enough to see a shape by. Judgement.
	readingsPerStep = 3
	leastSteps      = 8
	// A bend so close to the upper end of a branch, as a share of it, is none.
	// Judgement.
	stopShare  = 0.02
	mostlySeen = 0.8 // of the steps lie between neighbouring codes that were both shown
)

// outline is the shape of a branch in few points. Where the count is coarse
// those are the settings at which the display steps from one code to the next,
// known far better than a count (code transition levels, as in the testing of
// converters, IEEE 1057); else the means of neighbouring readings.
func (w *work) outline(at []int) (x, y []float64) {
	if w.set.Stepped {
		return w.plateaus(at)
	}
	e := pick(w.e, at)
	steps := (estimate.Quantile(e, 1) - estimate.Quantile(e, 0)) / w.setup.CountM // +Inf where there is no count
	if steps >= leastSteps && readingsPerStep*steps <= float64(len(at)) {
		if x, y = w.transitions(at); float64(len(x)) >= mostlySeen*steps {
			return x, y
		}
	}
	return grouped(pick(w.x, at), mostPoints), grouped(e, mostPoints)
}

// plateaus is one point for each press of a setting that is known at presses
// alone.
func (w *work) plateaus(at []int) (x, y []float64) {
	for first := 0; first < len(at); {
		next := first
		for next < len(at) && w.x[at[next]] == w.x[at[first]] {
			next++
		}
		m, _ := estimate.Mean(pick(w.e, at[first:next]))
		x, y = append(x, w.x[at[first]]), append(y, m)
		first = next
	}
	return x, y
}

// transitions is, for every two neighbouring codes that readings show, the
// setting between them: below it the share of the way on which the lower code or
// less is shown. Noise that shows either code by turns does not move it.
func (w *work) transitions(at []int) (x, y []float64) {
	order := slices.Clone(at)
	slices.SortFunc(order, func(a, b int) int { return cmp.Compare(w.x[a], w.x[b]) })
	way := map[float64]float64{} // over which each code is shown
	var codes []float64
	for k, i := range order {
		if _, seen := way[w.e[i]]; !seen {
			codes = append(codes, w.e[i])
		}
		way[w.e[i]] += (w.x[order[min(k+1, len(order)-1)]] - w.x[order[max(k-1, 0)]]) / 2
	}
	slices.Sort(codes)
	below := 0.0
	for k := 1; k < len(codes); k++ {
		below += way[codes[k-1]]
		if apart := codes[k] - codes[k-1]; math.Abs(apart-w.setup.CountM) < 0.01*w.setup.CountM {
			x, y = append(x, w.x[order[0]]+below), append(y, codes[k]-apart/2)
		}
	}
	return x, y
}

// stood adds to the outline of a rising branch what the display's highest code
// says where it is shown over more than twice the way of the others: the stretch
// no longer follows there, and the code stands in for the steps that do not come.
func (w *work) stood(at []int, x, y []float64) (sx, sy []float64) {
	n := len(x) - 1
	if n < 1 {
		return x, y
	}
	each, top := (x[n]-x[0])/float64(n), estimate.Quantile(pick(w.e, at), 1)
	high := estimate.Quantile(pick(w.x, at), 1)
	// Steps at one and the same setting, or closer than the pairs: not a display's.
	if !(each*float64(len(at)) > high-x[n]) {
		return x, y
	}
	for next := x[n] + each; next < high-each; next += each {
		x, y = append(x, next), append(y, top)
	}
	return x, y
}

// stretch is the settings between which a branch is straight, toSI +Inf where it
// is so to its top, and above it the slope there as a share of its own.
type stretch struct{ fromSI, toSI, beyond float64 }

// straight finds the stretch on which a branch is straight. A coarse count's
// first code may hide a slack band, so what lies below its first step is left
// out.
//
// What bends less than the indicator's own curve may is not cut.
func (w *work) straight(at []int, d Direction) (stretch, error) {
	x, y := w.outline(at)
	if d == Rising {
		x, y = w.stood(at, x, y)
	}
	r, err := estimate.StraightWithin(x, y, w.scaleBendM())
	if err != nil {
		return stretch{}, err
	}
	high := estimate.Quantile(x, 1)
	if r.To >= high-stopShare*(high-r.From) {
		return stretch{r.From, math.Inf(1), math.NaN()}, nil
	}
	lines := r.Found.Lines
	main := r.Found.Main(estimate.Quantile(x, 0), high)
	return stretch{r.From, r.To, lines[len(lines)-1][1] / lines[main][1]}, nil
}

// scaleBendM is how far the indicator's own error curve may leave a straight line:
// 0.3 of its limit in the middle, and at the ends of the branch nearly as much.
func (w *work) scaleBendM() float64 { return 0.3 * math.Sqrt(3) * w.setup.ExtensionSd }

// grouped averages neighbours so that at most so many points are left.
func grouped(v []float64, most int) []float64 {
	size := (len(v) + most - 1) / most
	if size <= 1 {
		return v
	}
	var out []float64
	for len(v) > 0 {
		n := min(size, len(v))
		mean, _ := estimate.Mean(v[:n])
		out, v = append(out, mean), v[n:]
	}
	return out
}
