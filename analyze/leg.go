package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// legs is the two branches of one cycle: the pairs that may lie on them, and
// where they are straight.
type legs struct {
	rise, fall  []bool  // pairs First..Peak and Peak..Last that lead the setting
	seatEndSI   float64 // rising branch is straight above
	stopSI      float64 // and below; +Inf where it is so to its top
	seatEndM    float64 // extension there; the falling branch is straight above it too
	foundSeatSI float64 // falling branch is straight above, as found in the data
	fallSeatSI  float64 // and as fitted: no lower than the rising branch's extension there
	foundKneeSI float64 // and below, as found in the data
	kneeSI      float64 // and below, as fitted
	ok          bool    // both branches have a line
}

const (
	// The fall of the setting at the top that is left out, in reversal lengths:
	// presliding rounds the knee. Judgement.
	reversalShare = 1.15
)

// fitCycles finds the branches of every closed cycle and fits their lines. An
// exercise cycle's lines only tell its phases: they enter no figure. Seating
// belongs to band and rig, so all cycles share where it ends: each is searched
// alone, and then all are fitted above the same setting.
func (w *work) fitCycles() {
	w.legs = make([]legs, len(w.res.Cycles))
	for i := range w.res.Cycles {
		c, l := &w.res.Cycles[i], &w.legs[i]
		c.StopSI, c.StopRatio = math.Inf(1), math.NaN()
		c.SeatingEndSI, c.ReversalSI = math.NaN(), estimate.Unknown("the cycle has no straight stretch on both branches")
		l.rise = w.leading(c, c.First, c.Peak, +1)
		l.fall = w.leading(c, c.Peak, c.Last, -1)
		l.ok = w.searchRising(c, l) && c.Role != Incomplete && w.searchFalling(c, l)
	}
	seat, ok := w.commonSeat()
	for i := range w.res.Cycles {
		c, l := &w.res.Cycles[i], &w.legs[i]
		if ok {
			w.seatAbove(c, l, seat)
		}
		if c.Role == Ramp && l.ok {
			w.refine(c, l)
		}
	}
}

// leading is which of the pairs of one leg lead the setting, none of them after
// a step of the mount.
func (w *work) leading(c *Cycle, first, last int, sign float64) []bool {
	times := make([]float64, last-first+1)
	for k := range times {
		times[k] = w.own(first + k)
	}
	leads := w.trace.leading(times[0], times, sign)
	if w.set.Stepped {
		leads = leadingSteps(w.p[first:last+1], sign)
	}
	for k := max(0, c.CutAt-first); k < len(leads); k++ {
		leads[k] = false
	}
	return leads
}

// refine puts the branches' own estimator in the place of the quick lines by
// which they were found.
func (w *work) refine(c *Cycle, l *legs) {
	rise, okRise := w.fitBranch(w.onRising(c, l))
	fall, okFall := w.fitBranch(w.onFalling(c, l))
	if l.ok = okRise && okFall; !l.ok {
		return
	}
	c.Rising, c.Falling = rise, fall
	l.seatEndM, _ = rise.Line.At(l.seatEndSI)
	c.ReversalSI = w.reversal(c, l.stopSI)
}

// onRising is the pairs of the rising branch's straight part.
func (w *work) onRising(c *Cycle, l *legs) []int {
	return leaders(c.First, l.rise, func(i int) bool { return w.x[i] >= l.seatEndSI && w.x[i] <= l.stopSI })
}

// onFalling is the pairs of the falling branch's straight part.
func (w *work) onFalling(c *Cycle, l *legs) []int {
	return leaders(c.Peak, l.fall, func(i int) bool { return w.unloads(l, i) })
}

// commonSeat is the rising setting above which the band is seated: the upper
// quartile of what both branches of the fitted cycles say.
func (w *work) commonSeat() (seatSI float64, ok bool) {
	var seats []float64
	for _, i := range w.fitted {
		if c, l := w.res.Cycles[i], w.legs[i]; l.ok {
			e, _ := c.Falling.Line.At(l.fallSeatSI)
			across, _ := c.Rising.Line.InverseAt(e)
			seats = append(seats, l.seatEndSI, across)
		}
	}
	return estimate.Quantile(seats, 0.75), len(seats) > 0
}

// seatAbove fits a cycle again above a rising setting, where enough is left of
// it.
func (w *work) seatAbove(c *Cycle, l *legs, seatSI float64) {
	was, wasL := *c, *l
	if !w.fitRising(c, l, seatSI) || l.ok && !w.fitFalling(c, l) {
		*c, *l = was, wasL
	}
}

// leaders is the pair indexes of a leg that pass.
func leaders(first int, leads []bool, pass func(i int) bool) []int {
	var at []int
	for k, yes := range leads {
		if yes && pass(first+k) {
			at = append(at, first+k)
		}
	}
	return at
}

// searchRising finds where the rising branch is straight, the band seated and
// nothing at its end, and fits it there.
func (w *work) searchRising(c *Cycle, l *legs) bool {
	l.seatEndSI, l.stopSI, l.kneeSI = math.Inf(1), math.Inf(1), math.Inf(-1)
	s, err := w.straight(leaders(c.First, l.rise, func(int) bool { return true }), Rising)
	if err != nil {
		return false
	}
	l.stopSI, c.StopSI, c.StopRatio = s.toSI, s.toSI, s.beyond
	return w.fitRising(c, l, s.fromSI)
}

func (w *work) fitRising(c *Cycle, l *legs, fromSI float64) bool {
	l.seatEndSI = fromSI
	fit, ok := w.quickFit(c, w.onRising(c, l))
	if !ok {
		return false
	}
	c.Rising, c.SeatingEndSI = fit, fromSI
	l.seatEndM, _ = fit.Line.At(fromSI)
	return true
}

// searchFalling finds the knee of the reversal at the top, and where the
// branch leaves its straight part at the bottom.
func (w *work) searchFalling(c *Cycle, l *legs) bool {
	s, err := w.straight(leaders(c.Peak, l.fall, func(i int) bool { return w.e[i] >= l.seatEndM }), Falling)
	if err != nil {
		return false
	}
	l.foundKneeSI, l.foundSeatSI, l.fallSeatSI = s.toSI, s.fromSI, s.fromSI
	return w.fitFalling(c, l)
}

// fitFalling leaves out the reversal at the top and the seating at the bottom:
// the knee that was found, and then the one that the reversal length of the
// line gives.
func (w *work) fitFalling(c *Cycle, l *legs) bool {
	l.kneeSI = l.foundKneeSI
	for pass := 0; ; pass++ {
		fit, ok := w.quickFit(c, w.onFalling(c, l))
		if !ok {
			return false
		}
		c.Falling = fit
		seat, _ := fit.Line.InverseAt(l.seatEndM)
		l.fallSeatSI = math.Max(l.foundSeatSI, seat)
		c.ReversalSI = w.reversal(c, l.stopSI)
		if pass == 2 {
			return true
		}
		knee := w.topSI(c) - c.ReversalSI.Value
		rounded := math.Min(w.topSI(c), l.stopSI) - knee
		if w.wrench != nil { // that is the wrench turned round, the screw standing: nothing slides
			rounded = 0
		}
		if nominal := w.topSI(c) - reversalShare*c.ReversalSI.Value; l.foundKneeSI < nominal && w.carriesOn(c, l, nominal) {
			l.foundKneeSI = nominal
		}
		l.kneeSI = math.Min(l.foundKneeSI, knee-(reversalShare-1)*rounded)
	}
}

// carriesOn is whether the readings above the knee that was found lie on the line
// below it up to a setting, within what the indicator's own scale may bend: a
// bend that small was taken for the knee.
func (w *work) carriesOn(c *Cycle, l *legs, toSI float64) bool {
	at := leaders(c.Peak, l.fall, func(i int) bool { return w.x[i] > l.foundKneeSI && w.x[i] <= toSI })
	rest := make([]float64, len(at))
	for k, i := range at {
		rest[k] = w.e[i] - c.Falling.Line.A - c.Falling.Line.B*w.x[i]
	}
	for _, off := range grouped(rest, 8) {
		if math.Abs(off) > 2*w.scaleBendM() {
			return false
		}
	}
	return len(rest) > 0
}

// unloads is whether a pair lies within the straight part of the falling
// branch.
func (w *work) unloads(l *legs, i int) bool {
	return w.x[i] >= l.fallSeatSI && w.x[i] <= l.kneeSI
}

// topSI is the highest setting of a cycle, its noise smoothed.
func (w *work) topSI(c *Cycle) float64 {
	if w.wrench != nil { // just behind it stands the loosening torque
		if before, _ := w.trace.sides(w.own(c.Peak), w.trace.windowS); finite(before.p) {
			return before.p
		}
	}
	return w.x[c.Peak]
}

// reversal is the fall of the setting at the top before the extension follows:
// from the top to where the falling line has the top's extension.
func (w *work) reversal(c *Cycle, stopSI float64) estimate.Estimate {
	top := w.topSI(c)
	eTop, stdTop := c.Rising.Line.At(math.Min(top, stopSI))
	knee, std := c.Falling.Line.Inverse(eTop, stdTop)
	return estimate.Estimate{
		Value: top - knee, Random: math.Hypot(std, w.trace.doubt(w.trace.windowS)),
		DoF: math.Min(c.Rising.Line.DoF, c.Falling.Line.DoF), Method: "from the top to the falling line at the top's extension",
	}
}
