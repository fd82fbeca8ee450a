package analyze

import (
	"fmt"
	"math"

	"tautramp/analyze/estimate"
)

// StepKind is what a sudden change of the extension is taken for.
type StepKind string

// The kinds of step.
const (
	MountStep StepKind = "mount"      // lasting: the rig slipped on the band
	StickSlip StepKind = "stick-slip" // the band caught up with the setting
	Undone    StepKind = "undone"     // it went back on the way down: a clearance, a curl that snaps
)

// Step is a sudden change of the extension that the setting does not explain.
type Step struct {
	Pair  int // the first after it
	T     float64
	Cycle int               // index into Cycles; -1 outside any
	SizeM estimate.Estimate // extension after it less before it
	Kind  StepKind
}

// A step so low on the way up, as a share of the rise, happened before it.
// Judgement.
const lowEnd = 0.05

// findSteps finds the sudden changes of the extension, and cuts the cycles where
// the mount slipped: nothing after that is to be fitted, for its zero is another.
func (w *work) findSteps() {
	w.res.Steps = nil
	defer w.cut()
	if w.set.Stepped || w.wrench != nil { // between two presses, or pulls, the setting says nothing of the band
		return
	}
	all := make([]int, len(w.t))
	for i := range all {
		all[i] = i
	}
	found, err := estimate.FindSteps(w.readings(all), estimate.StepSearch{Least: w.leastStepM()})
	if err != nil { // a setting that never moves has no cycles either
		return
	}
	for _, s := range found {
		w.res.Steps = append(w.res.Steps, Step{Pair: s.Index, T: w.t[s.Index], Cycle: w.cycleOf(s.Index), SizeM: s.Size, Kind: MountStep})
	}
	w.tellStickSlip()
	w.tellSags()
	w.tellUndone()
	w.tellReturned()
}

// cut marks in each cycle where the mount slipped.
func (w *work) cut() {
	for i := range w.res.Cycles {
		w.res.Cycles[i].CutAt = w.res.Cycles[i].Last + 1
	}
	for k := range w.res.Steps {
		s := &w.res.Steps[k]
		s.Cycle = w.cycleOf(s.Pair)
		if s.Kind == MountStep && s.Cycle >= 0 && !w.beforeRise(*s) {
			c := &w.res.Cycles[s.Cycle]
			c.CutAt = min(c.CutAt, s.Pair)
		}
	}
}

// isCut is whether the mount slipped in any cycle.
func (w *work) isCut() bool {
	for _, c := range w.res.Cycles {
		if c.CutAt <= c.Last {
			return true
		}
	}
	return false
}

// beforeRise is whether a step happened at the low end, before the setting rose.
func (w *work) beforeRise(s Step) bool {
	c := w.res.Cycles[s.Cycle]
	return s.Pair < c.Peak && w.x[s.Pair]-w.x[c.First] < lowEnd*(w.x[c.Peak]-w.x[c.First])
}

// leastStepM is the smallest step looked for: smaller ones are not told from
// what the display and the smoothed setting do at the corners of strokes.
func (w *work) leastStepM() float64 {
	const finest = 5e-6 // m
	return math.Max(finest, 2*w.setup.CountM)
}

// cycleOf is the cycle that a pair belongs to.
func (w *work) cycleOf(i int) int {
	for k, c := range w.res.Cycles {
		if i > c.First && i <= c.Last {
			return k
		}
	}
	return -1
}

// slopeM is the extension's slope on the setting, from the tops of the cycles.
func (w *work) slopeM() float64 {
	var slopes []float64
	for _, c := range w.res.Cycles {
		slopes = append(slopes, (w.e[c.Peak]-w.e[c.First])/(w.x[c.Peak]-w.x[c.First]))
	}
	return estimate.Median(slopes)
}

// slipped is whether the mount slipped between two times: a zero found at one
// says nothing of the other.
func (w *work) slipped(a, b float64) bool {
	for _, s := range w.res.Steps {
		if s.Kind == MountStep && s.T > math.Min(a, b) && s.T <= math.Max(a, b) {
			return true
		}
	}
	return false
}

// lullClear looks for the slack band at a low end between two pairs, on one
// side of a step where the mount slipped: after the last one, where it is found
// there.
func (w *work) lullClear(first, last int) lull {
	to := last
	for k := len(w.res.Steps) - 1; k >= 0; k-- {
		s := w.res.Steps[k]
		if s.Kind != MountStep || s.Pair <= first || s.Pair > to {
			continue
		}
		if l := w.lull(s.Pair, to); l.level.Known() {
			return l
		}
		to = s.Pair - 1
	}
	return w.lull(first, to)
}

// warnSteps tells of each step of the mount, and of stick-slip once.
func (w *work) warnSteps() {
	stuck := 0
	for _, s := range w.res.Steps {
		if s.Kind == StickSlip {
			stuck++
		}
		if s.Kind != MountStep {
			continue
		}
		where := "with the band slack"
		if s.Cycle >= 0 && !w.beforeRise(s) {
			where = fmt.Sprintf("in cycle %d, and nothing after that in it is fitted", s.Cycle+1)
		}
		w.warn("mount-step", fmt.Sprintf("At %.0f s the stretch jumped by %.0f counts of its indicator without the setting, %s: the rig slipped on the band. Check the clamps and ramp again.",
			s.T, math.Abs(s.SizeM.Value)/w.countOrNoise(), where))
	}
	if stuck > 0 {
		w.warn("stick-slip", fmt.Sprintf("The stretch caught up with the setting by %d jumps: the tensioner sticks and slips. Ramp more smoothly.", stuck))
	}
}

func (w *work) countOrNoise() float64 {
	if w.setup.CountM > 0 {
		return w.setup.CountM
	}
	return math.Max(w.noiseM, math.SmallestNonzeroFloat64)
}
