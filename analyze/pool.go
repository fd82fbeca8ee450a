package analyze

import (
	"fmt"
	"math"
	"slices"

	"tautramp/analyze/estimate"
)

// pool puts the fitted ramps together into branches and figures.
func (w *work) pool() error {
	w.keepRamps()
	if len(w.ramps) == 0 {
		return fmt.Errorf("analyze: no closed cycle has two straight branches: %w", ErrNoCycle)
	}
	w.markPoints()
	w.rates = w.alignment()
	w.early = len(w.res.Warnings)
	w.figures()
	w.warnings()
	return nil
}

// figures works out everything from the fitted ramps.
func (w *work) figures() {
	w.res.Rising.Direction, w.res.Falling.Direction = Rising, Falling
	w.captured(&w.res.Rising)
	w.captured(&w.res.Falling)
	w.sources = w.benchFrom(w.systematics())
	w.branch(&w.res.Rising)
	w.branch(&w.res.Falling)
	w.friction()
	w.widths()
	w.widthOfLag()
	w.screw()
	w.chain()
	w.aim()
	w.springs()
	w.running()
	w.zeros()
}

// keepRamps keeps the cycles that have both lines.
func (w *work) keepRamps() {
	planned := w.fitted
	w.fitted = nil
	for _, i := range planned {
		c := w.res.Cycles[i]
		if !w.legs[i].ok {
			w.warn("branch-not-fitted", fmt.Sprintf("Cycle %d has no straight stretch on both branches and is not fitted.", i+1))
			continue
		}
		r := ramp{rising: c.Rising.Line, falling: c.Falling.Line, zeroM: math.NaN(), opposed: w.opposed(), cycle: i}
		r.reach = [2][2]float64{{c.Rising.LowSI, c.Rising.HighSI}, {c.Falling.LowSI, c.Falling.HighSI}}
		if c.Zero.Known() {
			r.zeroM, r.zeroVar = c.Zero.Value, c.Zero.Random*c.Zero.Random
			if w.zeroFrom = c.ZeroFrom; w.zeroFrom == slackLift {
				r.lift = w.lifts[i]
			}
		}
		w.ramps, w.fitted = append(w.ramps, r), append(w.fitted, i)
	}
	for i := range w.res.Cycles {
		if !slices.Contains(w.fitted, i) {
			w.res.Cycles[i].Rising, w.res.Cycles[i].Falling = Fit{}, Fit{}
		}
	}
}

func (w *work) zeroKnown() bool { return w.zeroFrom != "" }

// alignment is the rate of the setting along each branch, rising and falling, SI/s
// on SI: in the strokes of a pump it is far above the ramp's, and grows with what
// each stroke has to win back.
func (w *work) alignment() (rates [2]estimate.Line) {
	var x, rate [2][]float64
	for i, pt := range w.res.Points {
		if !pt.Fitted {
			continue
		}
		way := 0
		if pt.Phase == Unloading {
			way = 1
		}
		x[way], rate[way] = append(x[way], w.x[i]), append(rate[way], w.trace.gain(w.own(i), w.trace.windowS)/w.trace.windowS)
	}
	for way := range rates {
		line, err := estimate.FitLine(x[way], rate[way])
		if err != nil { // too few for a slope
			line = estimate.Line{A: estimate.Median(rate[way])}
		}
		rates[way] = line
	}
	return rates
}

// captured is the range of setting that at least two ramps cover, or the only
// one.
func (w *work) captured(b *Branch) {
	var low, high []float64
	for _, i := range w.fitted {
		f := w.res.Cycles[i].Rising
		if b.Direction == Falling {
			f = w.res.Cycles[i].Falling
		}
		low, high = append(low, f.LowSI), append(high, f.HighSI)
	}
	slices.Sort(low)
	slices.Sort(high)
	second := min(1, len(low)-1)
	b.LowSI, b.HighSI = low[second], high[len(high)-1-second]
	b.Cycles = len(w.ramps)
}

// A ramp speaks for a setting this share of its own range beyond what it
// covered: ramps that were meant to be alike end a little apart. Judgement.
const nearEnough = 0.02

// reaching is the work on only those ramps that cover a setting in a direction,
// each with its own where it differs from ramp to ramp. A ramp that stopped
// lower says nothing of what lies above. All of them, where none does.
func (w *work) reaching(d Direction, setting figure) *work {
	var kept []ramp
	for _, r := range w.ramps {
		low, high := r.covers(d)
		slack := nearEnough * (high - low)
		if p := setting(r, w.k); !(p < low-slack || p > high+slack) {
			kept = append(kept, r)
		}
	}
	if len(kept) == 0 || len(kept) == len(w.ramps) {
		return w
	}
	some := *w
	some.ramps = kept
	return &some
}

// branch is the line of all ramps together.
func (w *work) branch(b *Branch) {
	d := b.Direction
	b.Slope = w.combine(func(r ramp, k constants) float64 { return r.line(d).B * k.paPerM() }, "no ramp gives a slope")
	b.Stress0 = w.combine(func(r ramp, k constants) float64 { return (r.line(d).A - r.zeroM) * k.paPerM() }, noZero)
	b.LowPa, b.HighPa = math.NaN(), math.NaN()
	if w.zeroKnown() {
		b.LowPa = w.stressAt(d, b.LowSI).Value
		b.HighPa = w.stressAt(d, b.HighSI).Value
	}
}

// reachM is the range of extension that all fitted lines cover.
func (w *work) reachM() (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, r := range w.ramps {
		for _, d := range []Direction{Rising, Falling} {
			fromSI, toSI := r.covers(d)
			from, _ := r.line(d).At(fromSI)
			to, _ := r.line(d).At(toSI)
			low, high = math.Min(low, from), math.Max(high, to)
		}
	}
	return low, high
}
