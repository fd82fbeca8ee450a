package analyze

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// lift is the slack lift of one cycle: the setting that moves the wheel while the
// band is slack, (W(1+mu)+F0)/A* rising and (W(1-mu)-F0)/A* falling. There the
// band's tension is zero whatever its stretch then reads, so that each branch's
// straight line has the true zero at it. 0 where it was not recorded.
type lift struct {
	settingSI [2]float64 // rising, falling
	stdSI     [2]float64
}

func (l lift) known() bool { return l.settingSI[0] > 0 || l.settingSI[1] > 0 }

// zero is the extension at zero tension by the lines: the mean of both
// directions, or the one that there is.
func (l lift) zero(r ramp) float64 {
	sum, n := 0.0, 0.0
	for i, d := range []Direction{Rising, Falling} {
		if l.settingSI[i] > 0 {
			e, _ := r.line(d).At(l.settingSI[i])
			sum, n = sum+e, n+1
		}
	}
	return sum / n
}

// zeroVar is what the reading of the lift leaves open of it, m2.
func (l lift) zeroVar(r ramp) float64 {
	sum, n := 0.0, 0.0
	for i, d := range []Direction{Rising, Falling} {
		if l.settingSI[i] > 0 {
			by := r.line(d).B * l.stdSI[i]
			sum, n = sum+by*by, n+1
		}
	}
	return sum / (n * n)
}

const (
	// The wheel's way to the taut band takes longer than this. Judgement.
	leastLiftS = 1.5
	// A lift lies by this share of the cycle's top above the lowest setting: at the
	// lowest itself the setting rests for other reasons. Judgement.
	liftAbove = 0.01
	// The setting stands still where it moves by less than this share of what the
	// ramp would in the time. Judgement.
	liftShare = 0.2
)

// findLifts looks for the slack lift before and after each fitted ramp: there
// the setting stands still above its lowest, the stretch shows what it shows of
// the slack band, and the line comes down to just that stretch.
func (w *work) findLifts() {
	w.lifts = make([]lift, len(w.res.Cycles))
	for i := range w.res.Cycles {
		c := &w.res.Cycles[i]
		if c.Role != Ramp || !w.legs[i].ok || w.setup.Tensioner.SetBy != mill.SetByPressure {
			continue
		}
		from := 0
		if i > 0 {
			from = w.res.Cycles[i-1].Peak
		}
		to := len(w.t) - 1
		if i+1 < len(w.res.Cycles) {
			to = w.res.Cycles[i+1].Peak
		}
		l := &w.lifts[i]
		l.settingSI[0], l.stdSI[0] = w.liftIn(from, c.Peak, c.Rising.Line, c.TopSI, +1)
		l.settingSI[1], l.stdSI[1] = w.liftIn(c.Peak, to, c.Falling.Line, c.TopSI, -1)
	}
}

// liftIn is the longest stand of the setting between two pairs that can be a
// lift, with its standard uncertainty; 0 where there is none. For sign +1 it
// must come after the lowest setting, for -1 before it.
func (w *work) liftIn(first, last int, line estimate.Line, topSI, sign float64) (settingSI, stdSI float64) {
	lowest := first
	for i := first; i <= last; i++ {
		if w.x[i] < w.x[lowest] {
			lowest = i
		}
	}
	if sign > 0 {
		first = lowest
	} else {
		last = lowest
	}
	longest := leastLiftS
	level := w.lowestBetween(first, last)
	for i := first; i <= last; {
		j := i
		for j <= last && w.stands(j) {
			j++
		}
		if j == i {
			i++
			continue
		}
		if took := w.t[j-1] - w.t[i]; took > longest {
			if p, std := w.standing(i, j-1); p > w.x[lowest]+liftAbove*topSI && w.zeroLike(i, j-1, level, line, p) {
				settingSI, stdSI, longest = p, std, took
			}
		}
		i = j
	}
	return settingSI, stdSI
}

// stands is whether the setting moves by less than a share of what the ramp
// would.
func (w *work) stands(i int) bool {
	window := math.Max(w.trace.windowS, 0.5)
	moved := math.Abs(w.trace.gain(w.t[i], window))
	return moved < math.Max(2*math.Sqrt2*w.trace.doubt(window), liftShare*w.rate*window)
}

// standing is the mean setting over the middle half of a stand, with half of what
// it moved meanwhile for its doubt, beside noise.
func (w *work) standing(i, j int) (settingSI, stdSI float64) {
	quarter := (j - i) / 4
	i, j = i+quarter, j-quarter
	p := w.x[i : j+1]
	mean, _ := estimate.Mean(p)
	moved := estimate.Quantile(p, 1) - estimate.Quantile(p, 0)
	return mean, math.Hypot(moved/2, w.trace.noise/math.Sqrt(float64(len(p))))
}

// lowestBetween is the lowest stretch between two pairs, three readings together.
func (w *work) lowestBetween(first, last int) float64 {
	low := math.Inf(1)
	for i := first + 2; i <= last; i++ {
		low = math.Min(low, estimate.Median(w.e[i-2:i+1]))
	}
	return low
}

// zeroLike is whether the stretch stood still meanwhile at its lowest level, and
// at what the line has at that setting, to within what count, noise, scale, curl
// and toe hide.
func (w *work) zeroLike(i, j int, level float64, line estimate.Line, settingSI float64) bool {
	e := w.e[i : j+1]
	if estimate.Quantile(e, 0.9)-level > w.stillM() {
		return false
	}
	at, std := line.At(settingSI)
	const toe = 2 // as many bends of the scale
	return math.Abs(estimate.Median(e)-at) < w.setup.CountM/2+3*(std+w.noiseM)+toe*w.scaleBendM()+math.Sqrt(3)*w.setup.CurlSd
}
