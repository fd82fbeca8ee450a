package estimate

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Step is a sudden lasting change of y that x has no part in: the mount of a
// gauge that slipped.
type Step struct {
	Index int      // the first reading after it
	Size  Estimate // of y; Random from noise and count
}

// StepSearch says what is looked for. Zero fields take what their comment says.
type StepSearch struct {
	Window     int     // readings to either side that must show it; 0: 12, or three times what the noise remembers
	Least      float64 // smallest size that is looked for, in y; 0: two counts, or twice the noise
	FalseAlarm float64 // chance to find one in a whole series that has none; 0: 1e-5
}

// FindSteps looks for steps in readings in time order, display and noise
// allowed for: within a window about every place at which y changes by most of
// Least more than x explains, y less the series' slope times x is fitted as a straight line in time with a
// step and without, through the readings' intervals. A step is told where the
// log likelihood gains so much that noise alone would do it anywhere in the
// series with at most the chance FalseAlarm (a normal tail shared over the
// readings), the noise's memory allowed for, and its size is at least Least.
// Rounding alone never does: without noise, the line without a step passes
// through every reading.
//
// Toe, knee, curve and lag bend the line but do not break it. Stick-slip does
// break it; steps in x do not. Errors as FitBranch.
func FindSteps(r Readings, s StepSearch) ([]Step, error) {
	if err := checkIntervals(r.X, r.Lo, r.Hi); err != nil {
		return nil, err
	}
	f, err := newStepFinder(r, s)
	if err != nil {
		return nil, err
	}
	var steps []Step
	f.search(0, len(r.X), &steps)
	return steps, nil
}

// stepFinder works on what is left of y when the slope times x is taken off, in
// counts.
type stepFinder struct {
	StepSearch
	lo, hi, mid []float64
	y, follows  []float64 // y itself, and the slope times x
	count       float64   // in y
	least       float64   // in counts
	sd          float64   // of the noise, in counts
	tau         float64   // its memory
	enough      float64   // gain of log likelihood
	seen        map[[3]int]tried
}

// tried is a step that was tried, to be asked for again in a part of the series.
type tried struct {
	size Estimate
	gain float64
}

func newStepFinder(r Readings, s StepSearch) (*stepFinder, error) {
	f := &stepFinder{StepSearch: s, seen: map[[3]int]tried{}}
	var y []float64
	for i := range r.X {
		f.count = math.Max(f.count, r.Hi[i]-r.Lo[i])
		y = append(y, (r.Lo[i]+r.Hi[i])/2)
	}
	_, b, err := robustStart(r.X, y)
	if err != nil {
		return nil, err
	}
	if f.count == 0 {
		f.count = math.Max(Noise(residuals(r.X, y, 0, b)), math.SmallestNonzeroFloat64)
	}
	for i, x := range r.X {
		f.lo = append(f.lo, (r.Lo[i]-b*x)/f.count)
		f.hi = append(f.hi, (r.Hi[i]-b*x)/f.count)
		f.mid = append(f.mid, (y[i]-b*x)/f.count)
		f.y, f.follows = append(f.y, y[i]/f.count), append(f.follows, b*x/f.count)
	}
	f.tau = math.Max(1, 2.0/3*float64(r.Memory))
	if f.Window == 0 {
		f.Window = max(12, int(3*f.tau))
	}
	if f.FalseAlarm == 0 {
		f.FalseAlarm = 1e-5
	}
	f.noise(math.Hypot(r.YStd, b*r.XStd) / f.count)
	if f.least = f.Least / f.count; f.least == 0 {
		f.least = math.Max(2, 2*f.sd)
	}
	z := distuv.UnitNormal.Quantile(1 - f.FalseAlarm/2/float64(len(r.X)))
	f.enough = z * z / 2 * f.tau
	return f, nil
}

// noise is from second differences, which steps and bends do not reach, and at
// least what is stated; slow noise is seen in differences across a window.
func (f *stepFinder) noise(stated float64) {
	fast := Noise(f.mid)
	f.sd = math.Max(math.Max(stated, fast), 1e-3)
	var apart []float64
	for i := f.Window; i+2*f.Window <= len(f.mid); i++ {
		before, _ := Mean(f.mid[i-f.Window : i])
		after, _ := Mean(f.mid[i : i+f.Window])
		later, _ := Mean(f.mid[i+f.Window : i+2*f.Window])
		apart = append(apart, before-2*after+later)
	}
	// The second difference of three means of white noise has 6/window of its
	// variance.
	if len(apart) > 0 && f.sd > 0.5 {
		slow := MAD(apart) * math.Sqrt(float64(f.Window)/6)
		f.tau = math.Max(f.tau, slow*slow/(f.sd*f.sd))
	}
}

// search finds the clearest step between two readings, then looks to either
// side of it.
func (f *stepFinder) search(from, to int, steps *[]Step) {
	at, gain := -1, f.enough
	var size Estimate
	for k := from + 3; k+3 <= to; k++ {
		if !f.changes(from, k, to) {
			continue
		}
		if s, g := f.gainOnce(max(from, k-f.Window), k, min(to, k+f.Window)); g > gain && math.Abs(s.Value) >= f.least {
			at, gain, size = k, g, s
		}
	}
	if at < 0 {
		return
	}
	f.search(from, at, steps)
	*steps = append(*steps, Step{Index: at, Size: size.Scale(f.count)})
	f.search(at, to, steps)
}

// changes is whether y changes about a place by most of what is looked for more
// than x explains there. Friction lets y follow x or stand, so x explains of what y
// did between two readings anything up to the farthest that x went meanwhile: a
// stroke of a pump after which x sags leaves y where the highest x brought it.
func (f *stepFinder) changes(from, k, to int) bool {
	const few, most = 5, 0.7
	var beyond []float64
	for i := max(from, k-few); i < k; i++ {
		j := i + few
		if j < k || j >= to {
			continue
		}
		down, up := 0.0, 0.0
		for _, v := range f.follows[i : j+1] {
			down, up = math.Min(down, v-f.follows[i]), math.Max(up, v-f.follows[i])
		}
		moved := f.y[j] - f.y[i]
		beyond = append(beyond, math.Max(0, moved-up)+math.Min(0, moved-down))
	}
	return len(beyond) > 0 && math.Abs(Median(beyond)) >= most*f.least
}

func (f *stepFinder) gainOnce(from, k, to int) (size Estimate, gain float64) {
	at := [3]int{from, k, to}
	t, ok := f.seen[at]
	if !ok {
		t.size, t.gain = f.gain(from, k, to)
		f.seen[at] = t
	}
	return t.size, t.gain
}

// gain is what a step before reading k gains in log likelihood over none, and
// its size, from the readings between two places.
func (f *stepFinder) gain(from, k, to int) (size Estimate, gain float64) {
	n := to - from
	time, step := make([]float64, n), make([]float64, n)
	for i := range n {
		time[i] = float64(from+i-k) / float64(f.Window)
		if step[i] = -0.5; from+i >= k {
			step[i] = 0.5
		}
	}
	one := ones(n)
	none := &censored{columns: [][]float64{one, time}, lo: f.lo[from:to], hi: f.hi[from:to], fixed: true}
	with := &censored{columns: [][]float64{one, time, step}, lo: f.lo[from:to], hi: f.hi[from:to], fixed: true}
	before, after := Median(f.mid[from:k]), Median(f.mid[k:to])
	middle := (before + after) / 2 / f.sd
	flat, okFlat := none.maximise([]float64{middle, 0, 1 / f.sd}, 1/f.sd)
	broken, okBroken := with.maximise([]float64{middle, 0, (after - before) / f.sd, 1 / f.sd}, 1/f.sd)
	if !okFlat || !okBroken {
		return Estimate{}, 0
	}
	size = Estimate{
		Value: broken.coefficients()[2], DoF: math.Inf(1),
		Method: "step in a line through the readings' intervals",
	}
	if size.Random = math.Hypot(1/math.Sqrt(6), f.sd); f.sd > 0.5 {
		if cov := broken.covariance(); cov != nil {
			size.Random = math.Sqrt(cov.At(2, 2) * f.tau)
		}
	}
	return size, broken.logL - flat.logL
}
