package gauge

import (
	"math"

	"tautramp/analyze/estimate"
)

// FlowFigures are the terms of 43 CFR 3175.135, as shares of the span. The
// regulation asks for three pairs of up and down; Pairs says how many there
// were. That they combine by root sum of squares is from memory.
type FlowFigures struct {
	Error         estimate.Estimate // largest size of output less reference
	Hysteresis    estimate.Estimate // largest difference of rising and falling at one input, within a pair
	Repeatability estimate.Estimate // largest spread of the rising, or of the falling readings at one input
	Combined      estimate.Estimate // root of the sum of their squares
	Pairs         int
}

func (w *work) flowFigures() {
	f := FlowFigures{Error: share(w.worst(observation.size), w.res.SpanSI, "no point")}
	c := w.res.Curves[0]
	f.Hysteresis = estimate.Unknown("not read both up and down")
	f.Repeatability = estimate.Unknown("read once on each way")
	for _, a := range c.At {
		g := w.group(c.Series, a.Index)
		for _, v := range g.pairs() {
			e := a.UpDown
			e.Value, e.Random, e.Method = math.Abs(v), math.Sqrt2*c.Scatter.Value, "largest within a pair"
			f.Hysteresis = larger(f.Hysteresis, e)
		}
		f.Pairs = max(f.Pairs, len(g.pairs()))
		for i := range g.all { // over all repeats and mountings
			g.all[i].Run = 0
		}
		f.Repeatability = larger(f.Repeatability, g.repeatability(c.Scatter))
	}
	f.Hysteresis = share(f.Hysteresis, w.res.SpanSI, f.Hysteresis.Why)
	f.Repeatability = share(f.Repeatability, w.res.SpanSI, f.Repeatability.Why)
	f.Combined = combined(f.Error, f.Hysteresis, f.Repeatability)
	w.res.Flow = f
}

// worst is the observation of the first series whose figure is largest, with
// the doubt of one reading.
func (w *work) worst(of func(observation) float64) estimate.Estimate {
	c := w.res.Curves[0]
	e := estimate.Unknown("no point")
	for _, o := range w.seen {
		if v := of(o); o.Series == c.Series && (!e.Known() || v > e.Value) {
			e = estimate.Estimate{Value: v, System: math.Hypot(o.refStd, w.test.Instruments.TestedCountSI/math.Sqrt(12)), Method: "largest of all readings"}
			e.Random, e.DoF = scatterOf(c.Scatter, 1)
		}
	}
	return e
}

func (o observation) size() float64 { return math.Abs(o.errSI) }

func share(e estimate.Estimate, spanSI float64, why string) estimate.Estimate {
	if !e.Known() {
		return estimate.Unknown(why)
	}
	return e.Scale(1 / spanSI)
}

// combined is the root of the sum of squares, and what each leaves in doubt.
func combined(parts ...estimate.Estimate) estimate.Estimate {
	c := estimate.Estimate{DoF: math.Inf(1), Method: "root of the sum of squares"}
	for _, p := range parts {
		if !p.Known() {
			return estimate.Unknown(p.Why)
		}
		c.Value = math.Hypot(c.Value, p.Value)
		c.DoF = math.Min(c.DoF, p.DoF)
	}
	for _, p := range parts {
		if c.Value > 0 {
			c.Random = math.Hypot(c.Random, p.Value/c.Value*p.Random)
			c.System = math.Hypot(c.System, p.Value/c.Value*p.System)
		}
	}
	return c
}
