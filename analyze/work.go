package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// work is one analysis under way.
type work struct {
	res     *Result
	setup   Setup
	set     *pairing.Set
	t, p, e []float64 // pairs: s, setting SI, extension m

	ramps    []ramp
	k        constants
	sources  []source
	zeroStd  float64 // m, what repeats
	zeroFrom string
	timeStd  float64 // SI of setting
}

const leastPairs = 20

func newWork(set *pairing.Set, s Setup) (*work, error) {
	if set == nil || len(set.Pairs) < leastPairs {
		n := 0
		if set != nil {
			n = len(set.Pairs)
		}
		return nil, fmt.Errorf("analyze: %d pairs where %d are needed: %w", n, leastPairs, ErrTooFewPairs)
	}
	w := &work{setup: s, set: set, res: &Result{Setup: s}}
	w.k = constants{s.ModulusPa.Value, s.GaugeM.Value, s.NetAreaM2}
	for _, q := range set.Pairs {
		w.t, w.p, w.e = append(w.t, q.T), append(w.p, q.Setting), append(w.e, q.Extension)
	}
	return w, nil
}

func (w *work) zeroKnown() bool { return w.zeroFrom != "" }

func (w *work) findCycles() error {
	lo, hi := estimate.Quantile(w.p, 0), estimate.Quantile(w.p, 1)
	turns := Turning(w.p, 0.15*(hi-lo))
	for i := 1; i < len(turns); i++ {
		if w.p[turns[i]] > w.p[turns[i-1]] {
			c := Cycle{Role: Incomplete, First: turns[i-1], Peak: turns[i], Last: len(w.p) - 1, TopSI: w.p[turns[i]]}
			if i+1 < len(turns) {
				c.Role, c.Last = Ramp, turns[i+1]
			}
			w.res.Cycles = append(w.res.Cycles, c)
		}
	}
	if len(w.res.Cycles) == 0 {
		return fmt.Errorf("analyze: %w", ErrNoCycle)
	}
	return nil
}

func (w *work) fitCycles() {
	for i := range w.res.Cycles {
		c := &w.res.Cycles[i]
		if c.Role != Ramp {
			continue
		}
		low := w.p[c.First]
		span := c.TopSI - low
		c.Rising = w.fit(c.First, c.Peak, low+0.3*span, c.TopSI)
		c.Falling = w.fit(c.Peak, c.Last, low+0.2*span, low+0.75*span)
		w.ramps = append(w.ramps, ramp{rising: c.Rising.Line, falling: c.Falling.Line, zeroM: math.NaN()})
	}
}

func (w *work) fit(first, last int, low, high float64) Fit {
	var x, y []float64
	for i := first; i <= last; i++ {
		if w.p[i] >= low && w.p[i] <= high {
			x, y = append(x, w.p[i]), append(y, w.e[i])
		}
	}
	l, err := estimate.FitLine(x, y)
	if err != nil {
		return Fit{}
	}
	return Fit{l, low, high, len(x)}
}

func (w *work) findZeros() {}

func (w *work) reach() (lowSI, highSI, spanM float64) {
	return 0, w.p[w.res.Cycles[0].Peak], 1e-4
}

func (w *work) pool() error {
	if len(w.ramps) == 0 {
		return fmt.Errorf("analyze: %w", ErrNoCycle)
	}
	w.sources = w.systematics()
	w.res.work = w
	w.res.Rising.Direction, w.res.Falling.Direction = Rising, Falling
	return nil
}
