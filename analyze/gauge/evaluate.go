package gauge

import (
	"errors"
	"fmt"
	"math"

	"tautramp/analyze/estimate"
)

// ErrNoPoints is a test without a single captured point, or without a span.
var ErrNoPoints = errors.New("the bench test has no points to evaluate")

// Result is a test worked out. Errors are indicated less reference, SI.
type Result struct {
	Test      Test
	SpanSI    float64
	Curves    []Curve           // one for each series, in the plan's order
	ZeroShift estimate.Estimate // after less before, the largest
	Missing   int               // points of the plan that were not captured

	Lines      Lines
	Conformity Conformity
	UpDown     estimate.Estimate // largest difference of falling less rising: hysteresis and dead band together
	MeanUpDown estimate.Estimate // its mean over the points
	DeadBand   estimate.Estimate // input change after a reversal without a change of output, the largest
	Hysteresis estimate.Estimate // the largest difference less the dead band
	TapShift   estimate.Estimate // tapped less untapped, the largest
	Largest    estimate.Estimate // error of the largest size
	Flow       FlowFigures
	Force      ForceFigures

	Limit      Limit
	Rule       Rule
	Verdict    Verdict
	Warnings   []Warning
	NotChecked []string
}

// Warning is something the reader must know beside the figures.
type Warning struct {
	Code string // stable word for machines
	Text string
}

// Curve is one series over the scale.
type Curve struct {
	Series  Series
	Scatter estimate.Estimate // standard deviation of one reading, SI: the value; how it was found is its method
	At      []At              // in the order of Plan.Points; those never captured are left out
}

// Evaluate works a test out. The same test gives the same result to the last
// bit. Errors: ErrNoPoints, estimate.ErrBadValue, mill.ErrUnknownName for a limit
// or rule that is not known, ErrKind.
func Evaluate(t Test) (*Result, error) {
	w, err := newWork(t)
	if err != nil {
		return nil, fmt.Errorf("evaluate a bench test: %w", err)
	}
	w.curves()
	w.zeroShift()
	w.extremes()
	w.lines()
	w.deadBand()
	w.flowFigures()
	w.forceFigures()
	w.judge()
	w.warnings()
	return w.res, nil
}

// work is one evaluation under way.
type work struct {
	test     Test
	res      *Result
	seen     []observation
	zeroHalf float64 // half-width of what the zero moved, SI
}

// observation is one point with the reference corrected.
type observation struct {
	Target
	refSI, indSI float64
	errSI        float64 // indicated less reference
	refStd       float64 // standard uncertainty of the reference, SI
	zeroSI       float64 // error at the zero before its series; NaN: not known
}

func newWork(t Test) (*work, error) {
	w := &work{test: t, res: &Result{Test: t, SpanSI: t.Plan.SpanSI()}}
	if len(t.Points) == 0 {
		return nil, ErrNoPoints
	}
	if !(w.res.SpanSI > 0) {
		return nil, fmt.Errorf("the range is not known: %w", ErrNoPoints)
	}
	for i, p := range t.Points {
		if !finite(p.Reference.SI) || !finite(p.Indicated.SI) {
			return nil, fmt.Errorf("point %d: %w", i+1, estimate.ErrBadValue)
		}
		if p.Index < 0 || p.Index >= len(t.Plan.Points) {
			return nil, fmt.Errorf("point %d belongs to none of the plan's: %w", i+1, estimate.ErrBadValue)
		}
		w.seen = append(w.seen, w.observe(p))
	}
	var err error
	if w.res.Rule, err = FindRule(orText(t.Rule, t.Plan.Rule)); err != nil {
		return nil, err
	}
	if w.res.Limit, err = ChooseLimit(t); err != nil {
		return nil, err
	}
	return w, checkKinds(t, w.res.Limit)
}

// ChooseLimit is the limit that a test is judged by: the one named, the plan's,
// or the instrument's own; the zero Limit where there is none. The error is a
// mill.ErrUnknownName.
func ChooseLimit(t Test) (Limit, error) {
	switch name := orText(t.Limit, t.Plan.Limit); {
	case name != "":
		return FindLimit(name, t.Limits)
	case t.Instruments.Tested.Limit.Given():
		return plateLimit(t.Instruments.Tested), nil
	}
	return Limit{}, nil
}

func orText(a, b string) string {
	if a != "" {
		return a
	}
	return b
}

// observe corrects the reference by its own bench record.
func (w *work) observe(p Point) observation {
	o := observation{Target: p.Target, indSI: p.Indicated.SI, zeroSI: w.zeroOf(p.Target)}
	o.refSI, o.refStd = w.reference(p.Reference.SI, p.Direction)
	o.errSI = o.indSI - o.refSI
	return o
}

func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }
