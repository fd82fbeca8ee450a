package analyze

import (
	"math"
	"slices"
)

// markPoints says of every pair what the tensioner was doing, and which line
// it helped to fit.
func (w *work) markPoints() {
	w.res.Points = make([]Point, len(w.t))
	for i := range w.res.Points {
		w.res.Points[i] = Point{
			T: w.t[i], SettingSI: w.p[i], ExtensionM: w.e[i],
			Cycle: -1, Phase: w.idle(i), Stress: math.NaN(),
		}
	}
	for n := range w.res.Cycles {
		c := &w.res.Cycles[n]
		for i := c.First; i <= c.Last; i++ {
			pt := &w.res.Points[i]
			pt.Cycle = n
			w.place(pt, i, c, &w.legs[n])
			if c.Zero.Known() {
				pt.Stress = (w.e[i] - c.Zero.Value) * w.k.paPerM()
			}
		}
		c.RateSI = w.rateOf(c.First, c.Last, Loading, Unloading)
	}
	for _, n := range w.fitted {
		w.markFitted(&w.res.Cycles[n], &w.legs[n])
	}
}

// rateOf is the mean rate of the setting over the pairs from first to last that
// are in one of the phases, SI/s; NaN where none are. Pairs that noise left out
// in between belong to the movement, rests between strokes do not.
func (w *work) rateOf(first, last int, phases ...PhaseKind) float64 {
	moved, took, was := 0.0, 0.0, -1
	gap := 3 * math.Max(w.trace.windowS, w.pairStepS)
	for i := first; i <= last; i++ {
		is := w.res.Points[i].Phase
		if !slices.Contains(phases, is) {
			continue
		}
		if was >= 0 && is == w.res.Points[was].Phase && w.t[i]-w.t[was] <= gap {
			moved += math.Abs(w.x[i] - w.x[was])
			took += w.t[i] - w.t[was]
		}
		was = i
	}
	return moved / took
}

// place is the phase of one pair of a cycle.
func (w *work) place(pt *Point, i int, c *Cycle, l *legs) {
	switch {
	case w.slack[i]:
	case i < c.Peak && l.rise[i-c.First]:
		pt.Phase = Loading
		switch {
		case !(w.x[i] >= l.seatEndSI):
			pt.Phase = Seating
		case w.x[i] > l.stopSI:
			pt.Phase = Inside
		}
	case i >= c.Peak && l.fall[i-c.Peak]:
		switch {
		case !l.ok || w.x[i] > l.kneeSI:
			pt.Phase = Inside
		case !w.unloads(l, i):
			pt.Phase = Seating
		default:
			pt.Phase = Unloading
		}
	}
}

// idle is the phase of a pair that leads neither branch.
func (w *work) idle(i int) PhaseKind {
	switch still := w.still(i); {
	case w.slack[i] && still:
		return Resting
	case w.slack[i]:
		return SlackLift
	case still:
		return Holding
	}
	return Inside
}

// still reports whether the setting rests about a pair: it moves by less than
// a tenth of what the ramps' rate would give, or than noise.
func (w *work) still(i int) bool {
	window := math.Max(w.trace.windowS, 0.5)
	moved := math.Abs(w.trace.gain(w.own(i), window))
	if math.IsNaN(moved) {
		return true
	}
	return moved < math.Max(2*math.Sqrt2*w.trace.doubt(window), 0.1*w.rate*window)
}

func (w *work) markFitted(c *Cycle, l *legs) {
	mark := func(at []int) {
		for _, i := range at {
			w.res.Points[i].Fitted = true
		}
	}
	mark(w.onRising(c, l))
	mark(w.onFalling(c, l))
}
