package gauge

import (
	"math"

	"tautramp/analyze/estimate"
)

// Guide is the budget of one point as EURAMET cg-17 and DKD-R 6-1 write it, for
// whoever asks for it; its formulas are from memory. It takes spreads of few
// readings for half-widths; the errors' own intervals pool the scatter of all
// points and use Student's t instead.
type Guide struct {
	DeviationSI  float64 // mean of all readings less the reference
	Terms        []Term  // of the mean of up and down
	ExpandedSI   float64 // U = 2 u
	ErrorSpanSI  float64 // size of the deviation and U
	HysteresisSI float64 // mean of the sizes of falling less rising
	RepeatSI     float64 // b': largest spread of like readings, zeros taken off
	ZeroSI       float64 // f0: largest shift of the zero
}

func (w *work) guide(g group) Guide {
	half := func(v float64) float64 { return v / 2 / math.Sqrt(3) }
	b := Guide{DeviationSI: g.mean(func(o observation) float64 { return o.errSI }), ZeroSI: 2 * w.zeroHalf}
	for _, v := range g.pairs() {
		b.HysteresisSI += math.Abs(v) / float64(len(g.pairs()))
	}
	zeroed := g.zeroed()
	b.RepeatSI = orNone(zeroed.repeatability(estimate.Estimate{}))
	inf := math.Inf(1)
	b.Terms = []Term{
		{"standard", g.mean(stdOf), inf, "B", w.referenceFrom()},
		{"resolution", half(w.test.Instruments.TestedCountSI), inf, "B", "r / (2 sqrt 3)"},
		{"zero", half(b.ZeroSI), inf, "B", "f0 / (2 sqrt 3)"},
		{"repeatability", half(b.RepeatSI), inf, "B", "b' / (2 sqrt 3)"},
		{"reproducibility", half(orNone(zeroed.reproducibility(estimate.Estimate{}))), inf, "B", "b / (2 sqrt 3)"},
		{"hysteresis", half(b.HysteresisSI), inf, "B", "h / (2 sqrt 3)"},
	}
	b.ExpandedSI = 2 * sumOf(b.Terms)
	b.ErrorSpanSI = math.Abs(b.DeviationSI) + b.ExpandedSI
	return b
}

func orNone(e estimate.Estimate) float64 {
	if !e.Known() {
		return 0
	}
	return e.Value
}

// zeroed takes the zero before each series off its readings, where all are
// known.
func (g group) zeroed() group {
	out := group{append([]observation(nil), g.all...)}
	for i, o := range g.all {
		if math.IsNaN(o.zeroSI) {
			return g
		}
		out.all[i].errSI -= o.zeroSI
	}
	return out
}
