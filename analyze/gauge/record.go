package gauge

import (
	"math"
	"strconv"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Record is the tested instrument with what the bench found: the correction at
// each point is the reading's error with its sign changed, from the untapped
// series where there are two, for nobody taps while measuring. Its rule of
// interpolation is mill.Bench.CorrectionAt's.
func (r *Result) Record() mill.Instrument {
	i := r.Test.Instruments.Tested
	if r.Test.NextDue != "" {
		i.Due = r.Test.NextDue
	}
	if !i.High.Given() {
		i.Low, i.High = r.Test.Plan.Low, r.Test.Plan.High
	}
	b := &mill.Bench{
		Checked: r.Test.Conditions.Day, Verdict: r.Verdict.Outcome.String(), Limit: r.Limit.Name, Rule: r.Rule.Name, Seal: r.Test.Seal,
	}
	unit := r.Curves[0].At[0].Nominal.Unit
	if r.UpDown.Known() {
		b.Hysteresis = quantity(r.UpDown.Value, unit, r.SpanSI)
	}
	for _, a := range r.Curves[0].At {
		b.Points = append(b.Points, r.benchPoint(a, unit))
	}
	i.Bench = b
	return i
}

func (r *Result) benchPoint(a At, unit mill.Unit) mill.BenchPoint {
	up, down := a.Up, a.Down
	if !up.Known() {
		up = down
	}
	p := mill.BenchPoint{At: quantity(a.IndicatedSI, unit, r.SpanSI), Rising: quantity(-up.Value, unit, r.SpanSI)}
	u := up.Expanded()
	if down.Known() {
		p.Falling = quantity(-down.Value, unit, r.SpanSI)
		u = math.Max(u, down.Expanded())
	}
	const least = 1e-7 // of the span: a record has no point without doubt
	p.Uncertainty = quantity(math.Max(u, least*r.SpanSI), unit, r.SpanSI)
	return p
}

// quantity writes a figure in a unit to a ten-millionth of the span.
func quantity(si float64, unit mill.Unit, spanSI float64) mill.Setting {
	step := math.Pow(10, math.Floor(math.Log10(unit.FromSI(spanSI)))-7)
	places := max(0, int(math.Round(-math.Log10(step))))
	text := strconv.FormatFloat(math.Round(unit.FromSI(si)/step)*step, 'f', places, 64) + " " + unit.Name
	q, err := mill.ParseQuantity(text, unit.Dim)
	if err != nil { // beyond every real quantity: written as what it is, and refused when read
		q = mill.Quantity{SI: si, Entered: text, Unit: unit}
	}
	return mill.Setting{Quantity: q}
}

// CorrectionAt is what to add to a reading of the tested instrument, SI.
func (r *Result) CorrectionAt(readSI float64, d Direction) estimate.Estimate {
	c, ok := r.Record().Bench.CorrectionAt(readSI, approach(d))
	if !ok {
		return estimate.Unknown("no correction was found")
	}
	return estimate.Estimate{Value: c.Add, System: c.Std, DoF: math.Inf(1), Method: "straight lines between the points of the bench record"}
}
