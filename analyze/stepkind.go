package analyze

import (
	"math"
	"sort"

	"tautramp/analyze/estimate"
)

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
)

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
