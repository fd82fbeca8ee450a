package estimate

import (
	"fmt"
	"math"
	"sort"
)

// Trace is one channel over time, in rising time.
type Trace struct {
	T []float64 // s
	V []float64
}

// Run is readings First to Last of one branch: y follows the setting's highest
// value so far for Sign +1, its lowest for -1. Holds and sags within it belong
// to it; the reversal does not. Runs of one cycle share a zero.
type Run struct {
	First, Last int
	Sign        float64
	Cycle       int
}

// Delay is by how much y is late on the setting.
type Delay struct {
	Late Estimate // s; unknown where the runs cannot tell it, Why says so
	// Alone is the same from changes of rate within runs alone, and Across from
	// runs of different rate as well; Late is the better known of the two.
	Alone, Across Estimate
	Stands        int // times that the setting stopped rising or falling within a run
}

// DelaySearch bounds the search. Zero fields take what their comment says.
type DelaySearch struct {
	Least, Most float64 // s; both 0: -1 to 3
	Enough      float64 // largest standard uncertainty that counts as identifiable, s; 0: 0.2
	Count       float64 // of the display that shows y: in a hold it errs by the same part of it all along; 0: none
	RunStd      float64 // standard deviation of y from ramp to ramp at a setting; 0: from the runs where they tell it
}

// FindDelay fits y = zero of the cycle + offset and slope of the direction x
// setting(t - delay) over the runs and minimises the residuals. At one constant
// rate the delay hides in the offset, so it is told only by changes of rate:
// starts of holds, strokes, steps, or ramps at another rate. A delay common to
// both directions opens the loop by 2 rate x delay; the offset of the direction
// takes the rest, which is friction.
//
// setting must be smoothed (evenly about each time, and by more than its noise
// changes from value to value): its highest value so far would else be noise,
// the more so the slower the ramp. A delay that is as good as another by a whole
// period of strokes is taken as the shorter. The uncertainty allows for serial dependence by blocks within runs, and across runs for their
// own scatter. Errors: ErrTooFew, ErrNoSpread, ErrBadValue.
func FindDelay(setting, y Trace, runs []Run, s DelaySearch) (Delay, error) {
	f, err := newDelayFit(setting, y, runs, s)
	if err != nil {
		return Delay{}, err
	}
	var d Delay
	d.Alone = f.find(offsetsOfRuns)
	d.Across = f.find(offsetsOfCycles)
	switch best := d.Alone; {
	case d.Across.Known() && (!best.Known() || d.Across.Random < best.Random):
		d.Late = d.Across
	default:
		d.Late = best
	}
	if d.Late.Known() {
		d.Stands = f.stands(d.Late.Value)
	}
	if d.Late.Known() && !(d.Late.Random <= f.Enough) {
		d.Late = Unknown(fmt.Sprintf("the runs leave it open by %.2g s", d.Late.Random))
	}
	return d, nil
}

// offsets says which constants a fit has.
type offsets int

const (
	offsetsOfRuns   offsets = iota // one a run: only changes within runs tell
	offsetsOfCycles                // one a cycle and one for the direction
)

type delayFit struct {
	DelaySearch
	setting Trace
	y       []float64
	t       []float64
	run     []int // of each reading used
	runs    []Run
	starts  []float64   // time of each run's first reading
	fixed   [][]float64 // the constants' columns
	// Of the setting at each delay tried; both fits try the same ones first.
	extremes map[float64][]float64
}

func newDelayFit(setting, y Trace, runs []Run, s DelaySearch) (*delayFit, error) {
	if err := checkTrace(setting); err != nil {
		return nil, fmt.Errorf("find a delay: setting: %w", err)
	}
	if err := checkTrace(y); err != nil {
		return nil, fmt.Errorf("find a delay: readings: %w", err)
	}
	if s.Least == 0 && s.Most == 0 {
		s.Least, s.Most = -1, 3
	}
	if s.Enough == 0 {
		s.Enough = 0.2
	}
	f := &delayFit{DelaySearch: s, setting: setting, runs: runs, extremes: map[float64][]float64{}}
	for k, r := range runs {
		if r.First < 0 || r.Last >= len(y.T) || r.Last-r.First < 3 || r.Sign*r.Sign != 1 {
			return nil, fmt.Errorf("find a delay: run %d, readings %d to %d of %d: %w", k, r.First, r.Last, len(y.T), ErrTooFew)
		}
		f.starts = append(f.starts, y.T[r.First])
		for i := r.First; i <= r.Last; i++ {
			f.t, f.y, f.run = append(f.t, y.T[i]), append(f.y, y.V[i]), append(f.run, k)
		}
	}
	if len(runs) == 0 {
		return nil, fmt.Errorf("find a delay: no runs: %w", ErrTooFew)
	}
	return f, nil
}

func checkTrace(t Trace) error {
	if len(t.T) != len(t.V) || len(t.T) < 4 {
		return fmt.Errorf("%d values at %d times: %w", len(t.V), len(t.T), ErrTooFew)
	}
	for i := range t.T {
		if !finite(t.T[i]) || !finite(t.V[i]) || i > 0 && t.T[i] < t.T[i-1] {
			return fmt.Errorf("value %d: %w", i, ErrBadValue)
		}
	}
	return nil
}

// extreme is the setting's extreme so far at each reading, the setting taken so
// much earlier. A run starts where its first reading looks.
func (f *delayFit) extreme(late float64) []float64 {
	out := make([]float64, len(f.t))
	var e *follower
	for i, k := range f.run {
		if i == 0 || f.run[i-1] != k {
			e = f.setting.follow(f.starts[k]-late, f.runs[k].Sign)
		}
		out[i] = e.until(f.t[i] - late)
	}
	return out
}

// standing is at which readings the setting's extreme stands: it moves by less than
// a fifth of its mean over the run, for noise makes it creep on in a hold.
func (f *delayFit) standing(extreme []float64) []bool {
	const share = 0.2
	out := make([]bool, len(extreme))
	for first := 0; first < len(extreme); {
		next := first
		for next < len(extreme) && f.run[next] == f.run[first] {
			next++
		}
		each := math.Abs(extreme[next-1]-extreme[first]) / float64(next-first)
		for i := first + 1; i < next; i++ {
			out[i] = math.Abs(extreme[i]-extreme[i-1]) <= share*each
		}
		first = next
	}
	return out
}

// stands is how often the setting's extreme stops within a run, for three readings at
// least.
func (f *delayFit) stands(late float64) int {
	const few = 3
	n, long := 0, 0
	for _, yes := range f.standing(f.extreme(late)) {
		if long++; !yes {
			long = 0
		}
		if long == few-1 {
			n++
		}
	}
	return n
}

// follower walks along a trace and keeps its extreme.
type follower struct {
	trace Trace
	sign  float64
	next  int
	best  float64
}

func (t Trace) follow(from, sign float64) *follower {
	next := sort.SearchFloat64s(t.T, from)
	return &follower{trace: t, sign: sign, next: next, best: sign * t.at(from)}
}

// until is for times that do not fall.
func (w *follower) until(t float64) float64 {
	for ; w.next < len(w.trace.T) && w.trace.T[w.next] <= t; w.next++ {
		if v := w.sign * w.trace.V[w.next]; v > w.best {
			w.best = v
		}
	}
	if v := w.sign * w.trace.near(w.next, t); v > w.best {
		w.best = v
	}
	return w.sign * w.best
}

// at is straight between the values and level beyond them.
func (t Trace) at(x float64) float64 { return t.near(sort.SearchFloat64s(t.T, x), x) }

// near is at, with the index of the first value after x known.
func (t Trace) near(i int, x float64) float64 {
	switch {
	case i == 0:
		return t.V[0]
	case i == len(t.T):
		return t.V[i-1]
	case t.T[i] == t.T[i-1]:
		return t.V[i]
	}
	share := (x - t.T[i-1]) / (t.T[i] - t.T[i-1])
	return t.V[i-1] + share*(t.V[i]-t.V[i-1])
}

// constants is the columns that do not hang on the delay: one a run, or one a
// cycle and one for the direction where there are both.
func (f *delayFit) constants(of offsets) [][]float64 {
	var columns [][]float64
	index := map[int]int{}
	column := func(key int) []float64 {
		j, ok := index[key]
		if !ok {
			j = len(columns)
			index[key] = j
			columns = append(columns, make([]float64, len(f.t)))
		}
		return columns[j]
	}
	const falling = -1 // cycles and runs count from 0
	both := f.bothDirections()
	for i, k := range f.run {
		if of == offsetsOfRuns {
			column(k)[i] = 1
			continue
		}
		column(f.firstOfCycle(f.runs[k].Cycle))[i] = 1
		if both && f.runs[k].Sign < 0 {
			column(falling)[i] = 1
		}
	}
	return columns
}

// firstOfCycle is the first run of a cycle, to name it by.
func (f *delayFit) firstOfCycle(cycle int) int {
	for k, r := range f.runs {
		if r.Cycle == cycle {
			return k
		}
	}
	return 0
}

// slopes is the settings m as columns, one a direction.
func (f *delayFit) slopes(m []float64) [][]float64 {
	up, down := make([]float64, len(m)), make([]float64, len(m))
	mean, spread := Mean(m)
	var rises, falls bool
	for i, k := range f.run {
		if f.runs[k].Sign > 0 {
			up[i], rises = (m[i]-mean)/spread, true
		} else {
			down[i], falls = (m[i]-mean)/spread, true
		}
	}
	switch {
	case !falls:
		return [][]float64{up}
	case !rises:
		return [][]float64{down}
	}
	return [][]float64{up, down}
}

func (f *delayFit) bothDirections() bool {
	for _, r := range f.runs {
		if r.Sign != f.runs[0].Sign {
			return true
		}
	}
	return false
}
