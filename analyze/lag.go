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
	// The delay is taken out where it is so many times its standard uncertainty.
	toldFromNone = 2
	// Half-widths of one tensioner differ by this share from ramp to ramp, where
	// there are too few ramps to see it. Judgement.
	widthWander = 0.02
	// Rates further apart than this share tell what depends on them. Judgement.
	ratesApart = 0.25
)

// findLag looks for the delay in the branches found, and says whether the pairs
// are to be moved by it.
func (w *work) findLag() bool {
	lag := &w.res.Lag
	if w.wrench != nil {
		lag.LateS = estimate.Unknown("not looked for with a torque wrench: its torque is read when it is let go")
		return false
	}
	runs := w.runs()
	d, err := estimate.FindDelay(w.trace.smoothed(w.delayWindow()), estimate.Trace{T: w.t, V: w.e}, runs, estimate.DelaySearch{RunStd: w.runStdM()})
	switch {
	case len(runs) == 0:
		lag.LateS = estimate.Unknown("not identifiable: no branch was found")
	case err != nil:
		lag.LateS = estimate.Unknown("not identifiable: " + err.Error())
	case !d.Late.Known():
		lag.LateS = estimate.Unknown("not identifiable: " + d.Late.Why)
	default:
		lag.LateS = d.Late
		lag.Corrected = math.Abs(d.Late.Value) > toldFromNone*d.Late.Random
	}
	if lag.Corrected {
		w.lateS = lag.LateS.Value
	}
	return lag.Corrected
}

// delayWindow is so long that the highest setting so far is not made by noise:
// over it the setting rises by three times the noise of one value.
func (w *work) delayWindow() float64 {
	const times, longest = 3.0, 3.0
	if !(w.rate > 0) {
		return w.trace.windowS
	}
	return math.Min(longest, math.Max(w.trace.windowS, times*w.trace.noise/w.rate))
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

// align moves the pairs to the setting that their extension answers to, and
// cuts and fits them anew.
func (w *work) align() error {
	for i := range w.p {
		w.p[i] = w.trace.value(w.own(i))
	}
	w.res.Cycles, w.fitted = nil, nil
	if err := w.findCycles(); err != nil {
		return err
	}
	w.findSteps()
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
	lag.RateSI = estimate.Median(rates)
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

// lagStdSI is what is not known of the delay, as a setting.
func (w *work) lagStdSI() float64 {
	late := w.res.Lag.LateS
	if !late.Known() {
		return 0
	}
	return math.Abs(w.rate) * math.Hypot(late.Random, late.Value-w.lateS)
}
