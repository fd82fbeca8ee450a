package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// work is one analysis under way.
type work struct {
	res       *Result
	setup     Setup
	set       *pairing.Set
	t, p, e   []float64 // of the pairs: s, setting SI, extension m
	x         []float64 // of the pairs: setting, smoothed
	trace     *trace
	pairStepS float64 // median time between pairs
	lateS     float64 // by which the extension is late on the setting
	clockS    float64 // standard uncertainty of the pairs' instants, as they state it
	noiseM    float64 // standard deviation of one extension reading, m
	rate      float64 // of the fitted rises, mean, SI/s

	legs   []legs // parallel to the cycles
	lulls  []lull // low ends: before the first top, between tops, after the last
	slack  []bool // pairs taken with a slack band
	ramps  []ramp // of the fitted cycles
	fitted []int  // their indexes
	k      constants

	sources  []source
	zeroStd  float64 // m, of the zero, what repeats
	zeroFrom string
	lifts    []lift           // parallel to the cycles
	marks    zeroMarks        // the operator's
	rates    [2]estimate.Line // of the setting along the branches, SI/s on SI: rising, falling
	early    int              // warnings raised before the figures
	wrench   *wrench          // of a tensioner set by torque; else nil
}

// Set is the pairs that the result was made from, their settings rising and
// falling with the load: see mill.Tensioner.Rising and wrench.
func (r *Result) Set() *pairing.Set { return r.work.set }

// leastPairs is fewer than any real ramp has.
const leastPairs = 20

func newWork(set *pairing.Set, s Setup) (*work, error) {
	set = s.corrected(set)
	if set == nil || len(set.Pairs) < leastPairs {
		n := 0
		if set != nil {
			n = len(set.Pairs)
		}
		return nil, fmt.Errorf("analyze: %d pairs where %d are needed: %w", n, leastPairs, ErrTooFewPairs)
	}
	var wrench *wrench
	if s.Tensioner.SetBy == mill.SetByTorque && !set.Stepped {
		wrench = newWrench(set)
		set = wrench.read(set)
	}
	if s.Tensioner.FallsWithLoad() {
		set = risen(set, s.Tensioner)
	}
	w := &work{setup: s, set: set, wrench: wrench, res: &Result{Setup: s, Simulated: set.Simulated, Ended: set.Ended}}
	w.res.work = w
	for i, q := range set.Pairs {
		if !finite(q.T) || !finite(q.Setting) || !finite(q.Extension) {
			return nil, fmt.Errorf("analyze: pair %d: %w", i, estimate.ErrBadValue)
		}
		if i > 0 && q.T < w.t[i-1] {
			return nil, fmt.Errorf("analyze: pair %d is earlier than the one before it: %w", i, estimate.ErrBadValue)
		}
		w.t, w.p, w.e = append(w.t, q.T), append(w.p, q.Setting), append(w.e, q.Extension)
	}
	steps := make([]float64, 0, len(w.t))
	for i := 1; i < len(w.t); i++ {
		steps = append(steps, w.t[i]-w.t[i-1])
	}
	w.pairStepS = estimate.Median(steps)
	w.k = constants{modulusPa: s.ModulusPa.Value, gaugeM: s.GaugeM.Value, areaM2: s.NetAreaM2}
	w.trace = newTrace(set, s.CountSI)
	if wrench != nil { // what stands for a torque that was let go has no noise of its own
		w.trace.noise = math.Max(w.trace.noise, wrench.noise)
	}
	w.slack = make([]bool, len(w.t))
	return w, nil
}

// own is the instant of the setting that a pair's extension answers to.
func (w *work) own(i int) float64 { return w.t[i] - w.lateS }

// pick is the values of v at the indexes.
func pick(v []float64, at []int) []float64 {
	out := make([]float64, len(at))
	for k, i := range at {
		out[k] = v[i]
	}
	return out
}

// risen is a set whose setting rises with the load: see mill.Tensioner.Rising.
func risen(set *pairing.Set, t mill.Tensioner) *pairing.Set {
	out := *set
	out.Setting.Readings = append([]pairing.Reading(nil), set.Setting.Readings...)
	for i := range out.Setting.Readings {
		out.Setting.Readings[i].Value = t.Rising(out.Setting.Readings[i].Value)
	}
	out.Pairs = append([]pairing.Pair(nil), set.Pairs...)
	for i := range out.Pairs {
		out.Pairs[i].Setting = t.Rising(out.Pairs[i].Setting)
	}
	return &out
}
