package findings

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// benched is the setting gauge that was used, where the bench has seen it, and
// the span of its scale.
func (d *data) benched() (b *mill.Bench, spanSI float64, ok bool) {
	if d.in.Profile == nil {
		return nil, 0, false
	}
	serial := ""
	if d.set != nil {
		serial = d.set.Setting.Spec.Serial
	}
	i, found := d.in.Profile.FindInstrument(mill.MeasuresSetting, d.r.Setup.Tensioner.SettingDim(), serial)
	if !found || i.Bench == nil {
		return nil, 0, false
	}
	spanSI = i.High.SI - i.Low.SI
	if n := len(i.Bench.Points); !(spanSI > 0) && n > 1 {
		spanSI = i.Bench.Points[n-1].At.SI - i.Bench.Points[0].At.SI
	}
	return i.Bench, spanSI, spanSI > 0
}

const noBench = "mill.toml has no bench test of the setting gauge: test it against a reference, up and down"

// sticky is the largest difference between rising and falling on the bench.
func (d *data) sticky() estimate.Estimate {
	b, span, ok := d.benched()
	switch {
	case !ok:
		return estimate.Unknown(noBench)
	case b.Hysteresis.Given():
		return estimate.Estimate{Value: math.Abs(b.Hysteresis.SI) / span, System: benchStd(b) * math.Sqrt2 / span, DoF: math.Inf(1), Method: "bench test in mill.toml"}
	}
	worst, seen := 0.0, false
	for _, p := range b.Points {
		if p.Falling.Given() {
			seen = true
			worst = math.Max(worst, math.Abs(p.Falling.SI-p.Rising.SI))
		}
	}
	if !seen {
		return estimate.Unknown("the bench test has no falling readings")
	}
	return estimate.Estimate{Value: worst / span, System: benchStd(b) * math.Sqrt2 / span, DoF: math.Inf(1), Method: "bench test in mill.toml"}
}

// curve is how far the gauge's corrections leave their own straight line.
func (d *data) curve() estimate.Estimate {
	b, span, ok := d.benched()
	if !ok {
		return estimate.Unknown(noBench)
	}
	var at, add []float64
	for _, p := range b.Points {
		correction := p.Rising.SI
		if p.Falling.Given() {
			correction = (p.Rising.SI + p.Falling.SI) / 2
		}
		at, add = append(at, p.At.SI), append(add, correction)
	}
	l, err := estimate.FitLine(at, add)
	if err != nil || len(at) < 4 {
		return estimate.Unknown("the bench test has too few points to show a bend")
	}
	worst := 0.0
	for i := range at {
		worst = math.Max(worst, math.Abs(add[i]-l.A-l.B*at[i]))
	}
	return estimate.Estimate{Value: worst / span, System: benchStd(b) / span, DoF: math.Inf(1), Method: "bench test in mill.toml"}
}

// gaugeSpan is how far the gauge reads off in proportion.
func (d *data) gaugeSpan() estimate.Estimate {
	b, span, ok := d.benched()
	if !ok {
		return estimate.Unknown(noBench)
	}
	var at, add []float64
	for _, p := range b.Points {
		at, add = append(at, p.At.SI), append(add, p.Rising.SI)
	}
	l, err := estimate.FitLine(at, add)
	if err != nil {
		return estimate.Unknown("the bench test has too few points to show the gauge's span")
	}
	return estimate.Estimate{Value: math.Abs(l.B), System: benchStd(b) / span, DoF: math.Inf(1), Method: "bench test in mill.toml"}
}

// benchStd is the largest standard uncertainty of the bench's corrections.
func benchStd(b *mill.Bench) float64 {
	worst := 0.0
	for _, p := range b.Points {
		worst = math.Max(worst, p.Uncertainty.SI/2)
	}
	return worst
}
