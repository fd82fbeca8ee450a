package gauge

import (
	"math"

	"tautramp/analyze/estimate"
)

// Sample is both instruments at one instant of a slow sweep.
type Sample struct{ T, ReferenceSI, IndicatedSI float64 }

// Reversal is what happened where the reference turned: it changed by Input
// before the tested instrument followed.
type Reversal struct {
	AtSI    float64 // reference at the turn
	InputSI float64 // size of the change that gave none
	DoubtSI float64 // half of the step between two samples, and of what counts as still; whoever knows of a lag adds it
	FromUp  bool
}

// FindReversal finds the first turn of the reference that goes back by more
// than back, and how far it went before the tested instrument left the value
// that it stood at, by more than still. ok is false where there is no turn.
func FindReversal(trace []Sample, back, still float64) (r Reversal, ok bool) {
	turn, from := 0, 1.0
	high, low := 0, 0
	for i, s := range trace {
		if s.ReferenceSI > trace[high].ReferenceSI {
			high = i
		}
		if s.ReferenceSI < trace[low].ReferenceSI {
			low = i
		}
		if high > low && trace[high].ReferenceSI-s.ReferenceSI > back {
			turn, from, ok = high, 1, true
		} else if low > high && s.ReferenceSI-trace[low].ReferenceSI > back {
			turn, from, ok = low, -1, true
		}
		if ok {
			break
		}
	}
	if !ok {
		return r, false
	}
	return ReversalFrom(trace[turn], trace[turn:], from > 0, still)
}

// ReversalFrom is how far the reference went from a rest before the tested
// instrument left it by more than still. ok is false where it never did.
func ReversalFrom(rest Sample, trace []Sample, fromUp bool, still float64) (r Reversal, ok bool) {
	sign := -1.0
	if fromUp {
		sign = 1
	}
	before := 0.0
	for _, s := range trace {
		gone := sign * (rest.ReferenceSI - s.ReferenceSI)
		if sign*(rest.IndicatedSI-s.IndicatedSI) > still {
			return Reversal{AtSI: rest.ReferenceSI, FromUp: fromUp,
				InputSI: math.Max(0, (before+gone)/2-still), DoubtSI: math.Hypot(gone-before, still) / 2}, true
		}
		before = math.Max(before, gone)
	}
	return r, false
}

// deadBand takes the dead band apart from hysteresis: what falling and rising
// differ by is both together (ISA-51.1, its term from memory).
func (w *work) deadBand() {
	r := w.res
	r.DeadBand = estimate.Unknown("no turn was read on both instruments")
	r.Hysteresis = estimate.Unknown("the dead band is not known apart: see the difference of falling less rising")
	for _, v := range w.test.Reversals {
		r.DeadBand = larger(r.DeadBand, estimate.Estimate{
			Value: v.InputSI, System: math.Hypot(v.DoubtSI, w.test.Instruments.TestedCountSI) / math.Sqrt(3), DoF: math.Inf(1),
			Method: "change of the reference after a turn before the indication follows, the largest",
		})
	}
	switch {
	case !r.DeadBand.Known() || !r.UpDown.Known():
	case r.DeadBand.Expanded() > math.Abs(r.UpDown.Value):
		r.Hysteresis = estimate.Unknown("the dead band is in more doubt than falling less rising is large: turn more slowly at the top")
	default:
		r.Hysteresis = estimate.Estimate{
			Value: math.Max(0, math.Abs(r.UpDown.Value)-r.DeadBand.Value), Random: r.UpDown.Random, DoF: r.UpDown.DoF,
			System: math.Hypot(r.UpDown.System, r.DeadBand.System), Method: "falling less rising, less the dead band",
		}
	}
}
