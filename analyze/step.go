package analyze

import (
	"fmt"
	"math"
	"sort"

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

const (
	// So many jumps with the motion in one branch are stick-slip. Judgement.
	sticksOften = 3
	// Before a jump that catches up, the extension moved by less than this share of
	// what the setting asked for. Judgement.
	stuckShare = 0.5
	// Pairs before a step by which it is judged.
	stepReach = 30
	// A step that another one takes back does so to within this share. Judgement.
	undoneShare = 0.4
	// Low ends before and after a step differ by less than this share of one that did
	// not last.
	returnedShare = 0.3
	// A step so low on the way up, as a share of the rise, happened before it.
	// Judgement.
	lowEnd = 0.05
)

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

// tellReturned marks the steps after which the low end is where it was: a mount
// that slipped would have moved it too.
func (w *work) tellReturned() {
	var peaks []int
	for _, c := range w.res.Cycles {
		peaks = append(peaks, c.Peak)
	}
	for k := range w.res.Steps {
		s := &w.res.Steps[k]
		n := sort.SearchInts(peaks, s.Pair)
		from, to := 0, len(w.t)-1
		if n >= 2 {
			from = peaks[n-2]
		}
		if n+1 < len(peaks) {
			to = peaks[n+1]
		}
		if moved := w.lowestM(s.Pair, to) - w.lowestM(from, s.Pair-1); s.Kind == MountStep && math.Abs(moved) < returnedShare*math.Abs(s.SizeM.Value) {
			s.Kind = Undone
		}
	}
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

// tellSags marks the steps against the motion of a cycle whose low ends stay where
// they were: the band goes with the sag after a stroke.
func (w *work) tellSags() {
	sum := map[int]float64{}
	sags := func(s Step) bool { return s.Kind == MountStep && s.Cycle >= 0 && !w.withMotion(s) }
	for _, s := range w.res.Steps {
		if sags(s) {
			sum[s.Cycle] += s.SizeM.Value
		}
	}
	for k := range w.res.Steps {
		s := &w.res.Steps[k]
		if n := s.Cycle; sags(*s) && math.Abs(w.lowMoved(n)) < undoneShare*math.Abs(sum[n]) {
			s.Kind = Undone
		}
	}
}

// tellUndone marks the steps on the way up that one on the way down takes back,
// and those of a cycle that has several to and fro.
func (w *work) tellUndone() {
	up, down := map[int]int{}, map[int]int{}
	for _, s := range w.res.Steps {
		if s.SizeM.Value > 0 {
			up[s.Cycle]++
		} else {
			down[s.Cycle]++
		}
	}
	for k := range w.res.Steps {
		s := &w.res.Steps[k]
		if n := s.Cycle; s.Kind == MountStep && up[n] > 0 && down[n] > 0 && up[n]+down[n] >= sticksOften {
			s.Kind = Undone
		}
	}
	for i := range w.res.Steps {
		up := &w.res.Steps[i]
		for k := i + 1; k < len(w.res.Steps); k++ {
			down := &w.res.Steps[k]
			if up.Kind != MountStep || down.Kind != MountStep || up.Cycle < 0 || up.Cycle != down.Cycle || (up.Pair <= w.res.Cycles[up.Cycle].Peak) == (down.Pair <= w.res.Cycles[up.Cycle].Peak) {
				continue
			}
			if left := up.SizeM.Value + down.SizeM.Value; math.Abs(left) < undoneShare*math.Abs(up.SizeM.Value) {
				up.Kind, down.Kind = Undone, Undone
			}
		}
	}
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

// tellStickSlip marks the steps that are the band's own. Those go with the
// motion, after the extension stood while the setting moved on or while the
// pressure gave way; or they come several to a branch.
func (w *work) tellStickSlip() {
	often := map[[2]int]int{}
	branch := func(s Step) [2]int {
		if s.Cycle >= 0 && s.Pair > w.res.Cycles[s.Cycle].Peak {
			return [2]int{s.Cycle, -1}
		}
		return [2]int{s.Cycle, +1}
	}
	for _, s := range w.res.Steps {
		if w.withMotion(s) {
			often[branch(s)]++
		}
	}
	for k := range w.res.Steps {
		s := &w.res.Steps[k]
		if s.Kind == MountStep && w.withMotion(*s) && (often[branch(*s)] >= sticksOften || w.catchesUp(*s) && !w.lasts(*s)) {
			s.Kind = StickSlip
		}
	}
}

// withMotion is whether a step goes the way the setting last went.
func (w *work) withMotion(s Step) bool {
	if s.Cycle < 0 {
		return false
	}
	return (s.Pair > w.res.Cycles[s.Cycle].Peak) == (s.SizeM.Value < 0)
}

// catchesUp is whether the extension stood before a step while the setting
// asked for as much as the step gave, or the setting gave way at the step.
func (w *work) catchesUp(s Step) bool {
	slope := w.slopeM()
	from := max(0, s.Pair-stepReach)
	at := make([]int, 0, stepReach)
	for i := from; i < s.Pair; i++ {
		at = append(at, i)
	}
	x, e := pick(w.x, at), pick(w.e, at)
	asked := math.Abs(slope * (x[len(x)-1] - x[0]))
	moved := math.Abs(estimate.Median(e[len(e)-min(3, len(e)):]) - estimate.Median(e[:min(3, len(e))]))
	if asked > math.Max(math.Abs(s.SizeM.Value)/2, 2*w.setup.CountM) && moved < stuckShare*asked {
		return true
	}
	sign := math.Copysign(1, s.SizeM.Value)
	gave := sign * w.trace.gain(w.own(s.Pair), math.Max(w.trace.windowS, 2*w.pairStepS))
	return -gave*slope > math.Abs(s.SizeM.Value)/4
}

// lasts is whether the extension at the low end after the cycle differs from
// that before it by as much as a step gave.
func (w *work) lasts(s Step) bool {
	return math.Abs(w.lowMoved(s.Cycle)-s.SizeM.Value) < undoneShare*math.Abs(s.SizeM.Value)
}

// lowMoved is the extension at the low end after a cycle less that before it.
func (w *work) lowMoved(cycle int) float64 {
	from, to := 0, len(w.t)-1
	if cycle > 0 {
		from = w.res.Cycles[cycle-1].Peak
	}
	if cycle+1 < len(w.res.Cycles) {
		to = w.res.Cycles[cycle+1].Peak
	}
	peak := w.res.Cycles[cycle].Peak
	return w.lowestM(peak, to) - w.lowestM(from, peak)
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
