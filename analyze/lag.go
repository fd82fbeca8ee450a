package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// Lag is by how much the extension is late on the setting, and what that does to
// the loop: a delay opens it in proportion to the rate, friction does not.
type Lag struct {
	LateS     estimate.Estimate // s; unknown where the ramps do not tell it
	Corrected bool              // the pairs were moved by it
	RateSI    float64           // of the setting on the branches, SI/s: one second of delay is so much half-width
	CouldBeSI estimate.Estimate // half-width that the delay may still make, beside the one measured: what is left of it after the correction is 0 +/- this
	StaticSI  estimate.Estimate // half-width at the working setting that does not depend on the rate
	PerRateS  estimate.Estimate // and by how much it grows with the rate: delay, and friction of a fluid; s
}

const (
	// The delay is taken out where it is so many times what it may be by chance: its
	// standard uncertainty and that of the pairs' instants together. Twice would take
	// out a delay that is not there in one analysis of twenty.
	toldFromNone = 3
	// By so much of the window over which the setting is smoothed the beginnings of
	// holds and strokes are in doubt, all alike and each by chance: the highest setting
	// of a hold is noise's in part. From simulated visits with 4 to 140 of them, see
	// TestLagIsFoundInStrokesAndStairs.
	blurAlways, blurOfOne = 0.05, 0.6
	// Half-widths of one tensioner differ by this share from ramp to ramp, where
	// there are too few ramps to see it. Judgement.
	widthWander = 0.02
	// Rates further apart than this share tell what depends on them. Judgement.
	ratesApart = 0.25
)

// findLag looks for the delay in the branches found. What the pairs are to be
// moved by is 0 where it is not told from none.
func (w *work) findLag() (lateS float64, told bool) {
	w.res.Lag = Lag{}
	lag := &w.res.Lag
	if w.set.Stepped {
		lag.LateS = estimate.Unknown("not looked for: the setting is known at presses alone")
		return 0, false
	}
	if w.wrench != nil {
		lag.LateS = estimate.Unknown("not looked for with a torque wrench: its torque is read when it is let go")
		return 0, false
	}
	runs := w.runs()
	d, err := estimate.FindDelay(w.trace.smoothed(w.delayWindow(runs)), estimate.Trace{T: w.t, V: w.e}, runs, estimate.DelaySearch{Count: w.setup.CountM, RunStd: w.runStdM()})
	switch {
	case len(runs) == 0:
		lag.LateS = estimate.Unknown("not identifiable: no branch was found")
	case err != nil:
		lag.LateS = estimate.Unknown("not identifiable: " + err.Error())
	case !d.Late.Known():
		lag.LateS = estimate.Unknown("not identifiable: " + d.Late.Why)
	default:
		lag.LateS = d.Late
		if d.Alone.Known() { // smoothing blurs when a hold or stroke begins
			lag.LateS.System = (blurAlways + blurOfOne/math.Sqrt(math.Max(1, float64(d.Stands)))) * w.delayWindow(runs)
		}
		lag.Corrected = math.Abs(d.Late.Value) > toldFromNone*math.Hypot(lag.LateS.Std(), w.clockS)
	}
	if lag.Corrected {
		lateS = lag.LateS.Value
	}
	return lateS, lag.LateS.Known()
}

// delayWindow is so long that the highest setting so far is not made by noise:
// over it the setting, where it moves, rises by three times the noise of one
// value.
func (w *work) delayWindow(runs []estimate.Run) float64 {
	const times, longest = 3.0, 3.0
	var rates []float64
	for _, r := range runs {
		for i := r.First; i <= r.Last; i++ {
			if gain := w.trace.gain(w.t[i], w.trace.windowS); r.Sign*gain > 2*math.Sqrt2*w.trace.doubt(w.trace.windowS) {
				rates = append(rates, math.Abs(gain)/w.trace.windowS)
			}
		}
	}
	if len(rates) == 0 {
		return w.trace.windowS
	}
	return math.Min(longest, math.Max(w.trace.windowS, times*w.trace.noise/estimate.Median(rates)))
}

// runs is the branches of the fitted cycles, each with the holds in it: rising
// from where the band is seated until the setting falls, falling from below the
// knee down to the seating.
func (w *work) runs() []estimate.Run {
	var runs []estimate.Run
	for _, i := range w.fitted {
		c, l := &w.res.Cycles[i], &w.legs[i]
		rise, fall := w.onRising(c, l), w.onFalling(c, l)
		if !l.ok || len(rise) == 0 || len(fall) == 0 {
			continue
		}
		turn := c.Peak
		for k, yes := range l.fall {
			if yes {
				turn = c.Peak + k
				break
			}
		}
		last := max(rise[len(rise)-1], turn-1)
		if !math.IsInf(l.stopSI, 1) {
			last = rise[len(rise)-1]
		}
		runs = append(runs, estimate.Run{First: rise[0], Last: last, Sign: +1, Cycle: i},
			estimate.Run{First: fall[0], Last: fall[len(fall)-1], Sign: -1, Cycle: i})
	}
	return runs
}

// runStdM is by how much the extension differs at one setting from ramp to
// ramp, stated where there are too few ramps to see it; else 0.
func (w *work) runStdM() float64 {
	n, half := 0, 0.0
	for _, i := range w.fitted {
		if c := w.res.Cycles[i]; w.legs[i].ok {
			n++
			half = math.Max(half, c.Rising.Line.B*c.ReversalSI.Value/2)
		}
	}
	if n > 2 {
		return 0
	}
	return math.Hypot(w.setup.CountM/2, widthWander*half)
}

// settle finds cycles and branches, delay and steps. Slips are looked for in
// pairs that the delay no longer opens at every stroke; where there are any, all
// begins anew in what is left before them.
func (w *work) settle() error {
	if err := w.lay(0); err != nil {
		return err
	}
	late, told := w.findLag()
	trial := late
	if !told && w.wrench == nil && !w.set.Stepped { // a slip may hide it in all cycles together
		trial = w.lateOfCycles()
	}
	if err := w.stepsAt(trial); err != nil {
		return err
	}
	switch {
	case w.isCut():
		if err := w.lay(0); err != nil {
			return err
		}
		late, _ = w.findLag()
	case trial == late:
		return nil
	}
	if err := w.stepsAt(late); err != nil || !w.isCut() {
		return err
	}
	return w.lay(late)
}

// stepsAt looks for steps at a delay.
func (w *work) stepsAt(lateS float64) error {
	if lateS != w.lateS {
		if err := w.lay(lateS); err != nil {
			return err
		}
	}
	w.findSteps()
	return nil
}

// lateOfCycles is the delay as the most of the cycles show it, each alone; 0
// where they do not.
func (w *work) lateOfCycles() float64 {
	runs := w.runs()
	setting := w.trace.smoothed(w.delayWindow(runs))
	var late []float64
	for i := 0; i+1 < len(runs); i += 2 {
		d, err := estimate.FindDelay(setting, estimate.Trace{T: w.t, V: w.e}, runs[i:i+2], estimate.DelaySearch{Count: w.setup.CountM})
		if err == nil && d.Alone.Known() {
			late = append(late, d.Alone.Value)
		}
	}
	if len(late) < 2 {
		return 0
	}
	return estimate.Median(late)
}

// lay pairs the extension with the setting so much earlier, and finds cycles and
// branches in that.
func (w *work) lay(lateS float64) error {
	w.lateS = lateS
	for i, q := range w.set.Pairs {
		if w.p[i] = q.Setting; lateS != 0 {
			w.p[i] = w.trace.value(w.own(i))
		}
	}
	w.res.Cycles, w.fitted = nil, nil
	if err := w.findCycles(); err != nil {
		return err
	}
	w.cut()
	w.fitCycles()
	return nil
}

// widthOfLag is what delay and rate do to the half-width.
func (w *work) widthOfLag() {
	lag := &w.res.Lag
	var rates []float64
	for _, i := range w.fitted {
		rates = append(rates, w.res.Cycles[i].RateSI)
	}
	lag.RateSI = w.branchRate()
	lag.CouldBeSI = estimate.Unknown("the delay is not known")
	if late := lag.LateS; late.Known() {
		if lag.Corrected {
			late.Value = 0
			late.Method = "rate x what is not known of the delay, which is taken out"
		} else {
			late.Method = "rate x delay, which is not told from none"
		}
		lag.CouldBeSI = late.Scale(lag.RateSI)
	}
	lag.StaticSI, lag.PerRateS = w.byRate(rates)
}

// byRate splits the half-width at the working setting into what does not depend
// on the rate and what grows with it. Delay that was taken out is put back.
func (w *work) byRate(rates []float64) (static, perRate estimate.Estimate) {
	low, high := estimate.Quantile(rates, 0), estimate.Quantile(rates, 1)
	if !(high > (1+ratesApart)*low) {
		no := estimate.Unknown("all ramps have about one rate; ramp once at twice the rate to tell")
		return no, no
	}
	f := halfWidth(w.res.Working.RisingSI)
	halves, weights := make([]float64, len(rates)), make([]float64, len(rates))
	for i, r := range w.ramps {
		halves[i] = f(r, w.k)
		weights[i] = 1 / (withinVar(f, r, w.k) + widthWander*widthWander*halves[i]*halves[i])
	}
	l, err := estimate.FitWeighted(rates, halves, weights)
	if err != nil {
		no := estimate.Unknown("the half-widths cannot be fitted: " + err.Error())
		return no, no
	}
	const method = "half-widths of ramps of different rate; from ramp to ramp they differ by 2 %"
	static = estimate.Estimate{Value: l.A, Random: math.Sqrt(l.VarA), DoF: math.Inf(1), Method: method}
	perRate = estimate.Estimate{Value: l.B + w.lateS, Random: math.Sqrt(l.VarB), DoF: math.Inf(1), Method: method}
	return static, perRate
}

// instantStdS is the standard uncertainty of which instant of the setting a pair's
// stretch answers to: of the delay that was found, where it is taken out, else what
// the pairs state of their clocks. What a delay that is not told from none could
// make stands beside the figures: CouldBeSI.
func (w *work) instantStdS() float64 {
	if w.res.Lag.Corrected {
		return w.res.Lag.LateS.Std()
	}
	return w.clockS
}

// stated is the standard uncertainty of the pairs' instants, as they state it in
// setting at the rate about each.
func (w *work) stated() float64 {
	const around = 0.5 // s to either side, by which the pairs know the rate
	var late []float64
	for i, q := range w.set.Pairs {
		if rate := math.Abs(w.trace.gain(w.t[i], around)) / around; rate > w.rate/2 {
			late = append(late, q.SettingStd/rate)
		}
	}
	if len(late) == 0 {
		return 0
	}
	return estimate.Median(late)
}

// branchRate is the rate of the setting where the branches were fitted, the mean
// of rising and falling: strokes rise far faster than the ramp as a whole.
func (w *work) branchRate() float64 {
	up, down := w.rateOf(0, len(w.t)-1, Loading), w.rateOf(0, len(w.t)-1, Unloading)
	return (up + down) / 2
}
