package analyze

import (
	"fmt"
	"math"

	"tautramp/analyze/estimate"
)

// Fit is one branch of one fitted cycle: extension = Line.A + Line.B * setting,
// SI. Points is 0 in a cycle that is not fitted.
type Fit struct {
	Line       estimate.Line
	LowSI      float64 // range of setting fitted
	HighSI     float64
	Points     int                // pairs that the line was fitted to
	Outliers   int                // of these, pairs that the line does not explain: they have no weight in it
	Method     estimate.Method    // chosen by how the count compares with the noise
	Dependence float64            // factor already in Line's covariance from neighbouring readings' common errors
	Shape      estimate.Shape     // of what was fitted
	Bend       estimate.Estimate  // how far the pairs leave the line's chord in the middle, share of the range of extension
	Feasible   *estimate.Feasible // all lines through every reading, where there are any; else nil
}

const (
	// A line needs so many pairs and this share of the cycle's rise. Judgement.
	leastPoints = 8
	leastShare  = 0.2
)

// quickFit is a least-squares line through pairs of one branch; ok is false
// where they are too few or cover too little.
func (w *work) quickFit(c *Cycle, at []int) (f Fit, ok bool) {
	x := pick(w.x, at)
	if len(x) < leastPoints {
		return Fit{}, false
	}
	f = Fit{LowSI: estimate.Quantile(x, 0), HighSI: estimate.Quantile(x, 1), Points: len(x)}
	whole := c.TopSI - w.p[c.First]
	if w.wrench != nil && at[0] >= c.Peak { // loosening torques have a scale of their own
		whole = f.HighSI
	}
	if f.HighSI-f.LowSI < leastShare*whole {
		return Fit{}, false
	}
	var err error
	f.Line, err = estimate.FitLine(x, pick(w.e, at))
	return f, err == nil && f.Line.B > 0
}

// fitBranch is the line of extension on the smoothed setting through pairs of
// one branch, by the estimator that their count and noise ask for.
func (w *work) fitBranch(at []int) (f Fit, ok bool) {
	r := w.readings(at)
	b, err := estimate.FitBranch(r)
	if err != nil || !(b.B > 0) {
		return Fit{}, false
	}
	x, y := w.outline(at)
	shape, bend, err := estimate.ShapeOf(x, y, w.scaleBendM())
	if err != nil {
		bend = estimate.Unknown("too few steps of the display to tell")
	}
	return Fit{
		Line: b.Line, LowSI: estimate.Quantile(r.X, 0), HighSI: estimate.Quantile(r.X, 1), Points: len(at),
		Outliers: b.Outliers, Method: b.Method, Dependence: b.Dependence, Shape: shape, Bend: bend, Feasible: b.Feasible,
	}, true
}

// readings are pairs as a display shows them. A pair holds the middle of what
// its digits stand for, however the display cuts them: pairing has moved those
// of one that cuts off.
func (w *work) readings(at []int) estimate.Readings {
	r := estimate.Readings{X: pick(w.x, at), YStd: w.ownNoiseM(), Memory: w.memory()}
	r.Lo, r.Hi = estimate.Rounded(pick(w.e, at), w.setup.CountM, 0)
	stds := make([]float64, len(at))
	for k, i := range at {
		stds[k] = w.set.Pairs[i].SettingStd
	}
	r.XStd = math.Hypot(w.trace.doubt(w.trace.windowS), estimate.Median(stds))
	return r
}

// ownNoiseM is the noise of the extension before it was rounded; 0 where the
// count hides it.
func (w *work) ownNoiseM() float64 {
	noise, count := w.noiseM, w.setup.CountM
	if noise < count {
		return 0
	}
	return math.Sqrt(noise*noise - count*count/12)
}

// memory is over how many pairs the smoothing of the setting makes their noise
// alike.
func (w *work) memory() int {
	const alike = 0.95 // of the window: two means share a twentieth of their readings
	return int(alike * w.trace.windowS / w.pairStepS)
}

// warnOutliers counts the pairs that the lines gave no weight.
func (w *work) warnOutliers() {
	for _, i := range w.fitted {
		c := w.res.Cycles[i]
		if n := c.Rising.Outliers + c.Falling.Outliers; n > 0 {
			w.warn("outliers", fmt.Sprintf("Cycle %d: %d of %d pairs lie far off the lines and count for nothing in them.",
				i+1, n, c.Rising.Points+c.Falling.Points))
		}
	}
}
