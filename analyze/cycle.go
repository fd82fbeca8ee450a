package analyze

import (
	"fmt"
	"math"

	"tautramp/analyze/estimate"
)

// Role says whether a cycle is fitted.
type Role string

// The roles of a cycle.
const (
	Exercise   Role = "exercise"   // first, never fitted
	Ramp       Role = "ramp"       // fitted
	Incomplete Role = "incomplete" // no closed loop
)

// Cycle is one rise and fall.
type Cycle struct {
	Role         Role
	First, Peak  int // pair indexes of the low turning point and the top
	Last         int // pair index of the next low turning point
	CutAt        int // pair index from which nothing is fitted because the mount slipped; Last+1 where it did not
	TopSI        float64
	Zero         estimate.Estimate // m, extension at zero tension
	ZeroFrom     string            // convention used: "slack band", "operator's mark", or ""
	Rising       Fit
	Falling      Fit
	ReturnM      estimate.Estimate // m, extension at the end of the cycle minus at its start, same setting
	ReversalSI   estimate.Estimate // fall of setting at the top before the extension follows
	RateSI       float64           // mean |rate of setting| on the branches, SI/s
	StopSI       float64           // setting above which the rising branch is no longer straight: end of travel, a spring gone solid; +Inf where there is none
	StopRatio    float64           // slope above StopSI / slope below it; NaN where there is none
	SeatingEndSI float64           // setting above which the rising branch is straight; NaN where it was not found
}

const (
	// A rise below this share of the largest is no cycle: wiggles, strokes with
	// sag, a staircase. Judgement.
	cycleShare = 0.15
	// A cycle whose fall is a smaller share of its rise is not closed. Judgement.
	closedShare = 0.75
)

// deadBand is above the noise from peak to peak, 2 s sqrt(2 ln N) for normal
// noise, and above what is no cycle.
func (w *work) deadBand() float64 {
	low, high := estimate.Quantile(w.p, 0.001), estimate.Quantile(w.p, 0.999)
	noise := math.Max(estimate.Noise(w.p), w.setup.CountSI/math.Sqrt(12))
	if w.set.Stepped { // the steps themselves would pass for noise
		noise = w.set.StepStd
	}
	return math.Max(2*noise*math.Sqrt(2*math.Log(float64(len(w.p)))), cycleShare*(high-low))
}

// findCycles cuts the pairs into rises and falls at the turning points of the
// setting and says which of them are exercise.
func (w *work) findCycles() error {
	turns := Turning(w.p, w.deadBand())
	for i := 1; i < len(turns); i++ {
		first, peak := turns[i-1], turns[i]
		if w.p[peak] <= w.p[first] {
			continue
		}
		c := Cycle{Role: Incomplete, First: first, Peak: peak, Last: len(w.p) - 1, TopSI: w.p[peak]}
		if i+1 < len(turns) {
			c.Last = turns[i+1]
			if w.p[peak]-w.p[c.Last] >= closedShare*(w.p[peak]-w.p[first]) {
				c.Role = Ramp
			}
		}
		w.res.Cycles = append(w.res.Cycles, c)
	}
	closed := w.assignRoles()
	switch {
	case len(w.res.Cycles) == 0:
		return fmt.Errorf("analyze: the setting never rises clear of its noise: %w", ErrNoCycle)
	case closed == 0:
		return fmt.Errorf("analyze: the setting rises but does not come down again: %w", ErrNoCycle)
	case len(w.fitted) == 0:
		return fmt.Errorf("analyze: the only closed cycles are for exercise; ramp once more: %w", ErrNoCycle)
	}
	w.chooseWindow()
	return nil
}

// assignRoles makes the first closed cycles exercise, as planned, and returns
// how many are closed.
func (w *work) assignRoles() (closed int) {
	for _, c := range w.res.Cycles {
		if c.Role == Ramp {
			closed++
		}
	}
	exercise := w.set.Plan.Exercise
	for i := range w.res.Cycles {
		c := &w.res.Cycles[i]
		switch {
		case c.Role != Ramp:
		case exercise > 0:
			c.Role = Exercise
			exercise--
		default:
			w.fitted = append(w.fitted, i)
		}
	}
	return closed
}

// chooseWindow smooths the setting for the mean rate of the fitted rises, and
// sees how the extension's noise looks then.
func (w *work) chooseWindow() {
	var rates []float64
	for _, i := range w.fitted {
		c := w.res.Cycles[i]
		rates = append(rates, w.meanRate(c))
	}
	w.rate = estimate.Median(rates)
	w.trace.smoothFor(w.rate)
	if w.wrench != nil { // loosening torques fall far slower than raising ones rise
		w.trace.smoothFor(math.Min(w.rate, w.wrench.loosenRate()))
	}
	w.x = make([]float64, len(w.t))
	for i := range w.t {
		if w.x[i] = w.p[i]; !w.set.Stepped { // a step is what was pressed for
			w.x[i] = w.trace.smooth(w.own(i))
		}
	}
	w.noiseM = w.stillNoise()
	w.clockS = w.stated()
}

// meanRate is a cycle's rise over the time it took, rests left out: the middle
// half of the rise.
func (w *work) meanRate(c Cycle) float64 {
	low, span := w.p[c.First], c.TopSI-w.p[c.First]
	from, to := c.First, c.Peak
	for i := c.First; i <= c.Peak; i++ {
		if w.p[i] <= low+span/4 {
			from = i
		}
		if w.p[i] <= low+span*3/4 {
			to = i
		}
	}
	if w.t[to] <= w.t[from] {
		return 0
	}
	return (w.p[to] - w.p[from]) / (w.t[to] - w.t[from])
}
