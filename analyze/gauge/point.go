package gauge

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// At is one point of the scale in one series. Errors are indicated less
// reference.
type At struct {
	Index           int
	Nominal         mill.Setting
	ReferenceSI     float64 // mean, corrected
	IndicatedSI     float64 // mean
	Up, Down        estimate.Estimate
	Mean            estimate.Estimate // of up and down, their difference in its doubt
	UpDown          estimate.Estimate // falling less rising
	Repeatability   estimate.Estimate // largest spread of like readings
	Reproducibility estimate.Estimate // largest spread between mountings
	TapShift        estimate.Estimate // tapped less untapped; in the tapped curve
	Budget          []Term            // of Mean
	Guide           Guide
}

// Term is one line of a budget.
type Term struct {
	Name  string
	StdSI float64 // standard uncertainty, SI
	DoF   float64
	Type  string // "A" or "B"
	From  string
}

// curves works out every point of every series.
func (w *work) curves() {
	w.zeroHalf = math.Abs(w.largestZeroShift().Value) / 2
	if math.IsNaN(w.zeroHalf) {
		w.zeroHalf = 0
	}
	for _, s := range w.test.Plan.AllSeries() {
		c := Curve{Series: s, Scatter: w.scatter(s)}
		for i := range w.test.Plan.Points {
			if a, ok := w.at(s, i, c.Scatter); ok {
				c.At = append(c.At, a)
			}
		}
		if len(c.At) > 0 {
			w.res.Curves = append(w.res.Curves, c)
		}
	}
	w.tapShifts()
	w.res.Missing = max(0, len(w.test.Plan.Targets())-len(w.seen))
}

func (w *work) at(s Series, index int, scatter estimate.Estimate) (At, bool) {
	g := w.group(s, index)
	if len(g.all) == 0 {
		return At{}, false
	}
	a := At{Index: index, Nominal: w.test.Plan.Points[index], ReferenceSI: g.mean(refOf), IndicatedSI: g.mean(indOf)}
	lines := w.terms(g, scatter)
	a.Up = g.one(Up, lines, scatter)
	a.Down = g.one(Down, lines, scatter)
	a.UpDown = w.upDown(g, scatter)
	a.Repeatability = g.repeatability(scatter)
	a.Reproducibility = g.reproducibility(scatter)
	a.Guide = w.guide(g)
	a.Mean, a.Budget = g.both(a, lines, scatter)
	return a, true
}

// terms are the lines that every figure of a point has (EURAMET cg-17, its
// formulas from memory): the reference, the resolution of the tested
// instrument, what its zero moved, and how mountings differ, each a rectangular
// distribution but the reference.
func (w *work) terms(g group, scatter estimate.Estimate) []Term {
	count := w.test.Instruments.TestedCountSI
	spread := g.reproducibility(scatter).Value
	lines := []Term{
		{"reference", g.mean(stdOf), math.Inf(1), "B", w.referenceFrom()},
		{"resolution of the tested instrument", count / math.Sqrt(12), math.Inf(1), "B", "least count / (2 sqrt 3)"},
		{"shift of its zero", w.zeroHalf / math.Sqrt(3), math.Inf(1), "B", "largest shift / (2 sqrt 3)"},
	}
	if finite(spread) && w.test.Plan.Runs > 1 {
		lines = append(lines, Term{"mounting anew", spread / 2 / math.Sqrt(3), math.Inf(1), "B", "largest spread between mountings / (2 sqrt 3)"})
	}
	return lines
}

func (w *work) referenceFrom() string {
	i := w.test.Instruments.Reference
	switch {
	case i.Bench != nil && len(i.Bench.Points) > 0:
		return "bench record of " + i.Bench.Checked
	case i.Limit.Given():
		return "limit " + i.Limit.Entered + " / sqrt 3"
	}
	return "not known"
}

func sumOf(lines []Term) float64 {
	parts := make([]estimate.Component, len(lines))
	for i, l := range lines {
		parts[i] = estimate.Component{Std: l.StdSI, DoF: l.DoF}
	}
	return estimate.RootSum(parts)
}

// tapShifts compares the tapped curve with the untapped one, point by point
// and way by way.
func (w *work) tapShifts() {
	var plain, tapped *Curve
	for i := range w.res.Curves {
		switch c := &w.res.Curves[i]; c.Series {
		case Untapped:
			plain = c
		case Tapped:
			tapped = c
		}
	}
	if plain == nil || tapped == nil {
		return
	}
	for i := range tapped.At {
		for _, p := range plain.At {
			if a := &tapped.At[i]; a.Index == p.Index {
				a.TapShift = larger(shiftOf(p.Up, a.Up), shiftOf(p.Down, a.Down))
			}
		}
	}
}

// shiftOf is what one error has moved against another: what repeats is common
// to both.
func shiftOf(before, after estimate.Estimate) estimate.Estimate {
	if !before.Known() || !after.Known() {
		return estimate.Unknown("not read in both series")
	}
	return estimate.Estimate{
		Value: after.Value - before.Value, Random: math.Hypot(before.Random, after.Random),
		DoF: before.DoF + after.DoF, Method: "tapped less untapped",
	}
}

// larger is the one of greater size; an unknown one yields.
func larger(a, b estimate.Estimate) estimate.Estimate {
	if !a.Known() || b.Known() && math.Abs(b.Value) > math.Abs(a.Value) {
		return b
	}
	return a
}
