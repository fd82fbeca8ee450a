package report

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tautramp/analyze/estimate"
	"tautramp/analyze/gauge"
)

// errorBar is an error with the ends of its 95 % interval, in display units.
type errorBar struct{ x, mid, low, high float64 }

// step is a limit that holds from one mark to another, in display units.
type step struct{ from, to, limit float64 }

// errorChart draws one series' errors over the scale, up and down, with the
// limits.
func errorChart(r *gauge.Result, c gauge.Curve, u benchUnits, y axis) chart {
	p := errorPlotter{
		up:     barsOf(c, u, func(a gauge.At) estimate.Estimate { return a.Up }),
		down:   barsOf(c, u, func(a gauge.At) estimate.Estimate { return a.Down }),
		limits: limitSteps(r, u),
	}
	name := "Error" + seriesSuffix(c.Series) + " (indicated less reference)"
	out := chart{
		name: name, says: name + " with 95 % intervals.",
		x: spanning("reference ("+u.scale.name+")", []float64{u.scale.show(r.Test.Plan.Low.SI), u.scale.show(r.Test.Plan.High.SI)}), y: y,
		keys: []key{
			{words: "up", line: risingLine(), glyph: upward{}, fill: blue()},
			{words: "down", line: fallingLine(), glyph: downward{}, fill: vermillion()},
		},
	}
	if len(p.limits) > 0 {
		words := "limit"
		if r.Limit.Origin == gauge.FromMemory {
			words = "limit (FROM MEMORY)"
		}
		out.keys = append(out.keys, key{words: words, line: limitLine()})
		out.says += fmt.Sprintf(" Limits: %s.", limitName(r.Limit))
	}
	if r.Test.Conditions.Simulated {
		out.keys = append([]key{{words: "REHEARSAL: made up", line: stroke(ink(), 4, 3, 2)}}, out.keys...)
	}
	if len(p.up)+len(p.down) == 0 {
		out.empty = "no point was captured"
	}
	out.plotters = func(f format) []plot.Plotter { p.f = f; return []plot.Plotter{p} }
	return out
}

// errorAxis holds the errors of every series and the limits, so that two
// pictures can be compared.
func errorAxis(r *gauge.Result, u benchUnits) axis {
	values := []float64{0}
	for _, c := range r.Curves {
		for _, way := range []func(gauge.At) estimate.Estimate{
			func(a gauge.At) estimate.Estimate { return a.Up }, func(a gauge.At) estimate.Estimate { return a.Down },
		} {
			for _, b := range barsOf(c, u, way) {
				values = append(values, b.low, b.high, b.mid)
			}
		}
	}
	for _, s := range limitSteps(r, u) {
		values = append(values, s.limit, -s.limit)
	}
	return spanning("error ("+u.err.name+")", values)
}

func barsOf(c gauge.Curve, u benchUnits, of func(gauge.At) estimate.Estimate) []errorBar {
	var all []errorBar
	for _, a := range c.At {
		e := of(a)
		if unknownWhy(e) != "" {
			continue
		}
		low, high := e.Interval95()
		b := errorBar{u.scale.show(a.Nominal.SI), u.err.show(e.Value), u.err.show(low), u.err.show(high)}
		if !finite(b.low) || !finite(b.high) {
			b.low, b.high = b.mid, b.mid
		}
		all = append(all, b)
	}
	return all
}

// limitSteps are the limits of error over the scale; none where the limit is
// not of single errors.
func limitSteps(r *gauge.Result, u benchUnits) []step {
	l, low, span := r.Limit, r.Test.Plan.Low.SI, r.SpanSI
	if !(l.ErrorSI > 0) && !(l.Shares[1] > 0) {
		return nil
	}
	at := func(share float64) float64 { return u.scale.show(low + share*span) }
	if l.ErrorSI > 0 {
		return []step{{at(0), at(1), u.err.show(l.ErrorSI)}}
	}
	var all []step
	for i, from := range []float64{0, 0.25, 0.75} {
		to := []float64{0.25, 0.75, 1}[i]
		all = append(all, step{at(from), at(to), u.err.show(l.Shares[i] * span)})
	}
	return all
}

// errorPlotter draws bars, curves and limits.
type errorPlotter struct {
	up, down []errorBar
	limits   []step
	f        format
}

// Plot implements plot.Plotter.
func (e errorPlotter) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	c.StrokeLine2(stroke(ink(), 0.8), c.Min.X, toY(0), c.Max.X, toY(0))
	for _, side := range []float64{1, -1} {
		var path []vg.Point
		for _, s := range e.limits {
			path = append(path, vg.Point{X: toX(s.from), Y: toY(side * s.limit)}, vg.Point{X: toX(s.to), Y: toY(side * s.limit)})
		}
		c.StrokeLines(limitLine(), path)
	}
	// The two ways stand a little apart, so that neither hides the other's bar.
	apart := e.f.letters * 0.16
	e.curve(c, e.up, toX, toY, -apart, risingLine(), blue(), upward{})
	e.curve(c, e.down, toX, toY, apart, fallingLine(), vermillion(), downward{})
}

func (e errorPlotter) curve(c draw.Canvas, bars []errorBar, toX, toY func(float64) vg.Length, aside vg.Length, line draw.LineStyle, fill color.Color, shape draw.GlyphDrawer) {
	var path []vg.Point
	cap := e.f.letters * 0.22
	for _, b := range bars {
		x := toX(b.x) + aside
		path = append(path, vg.Point{X: x, Y: toY(b.mid)})
		if b.high > b.low {
			bar := stroke(fill, 0.8)
			c.StrokeLine2(bar, x, toY(b.low), x, toY(b.high))
			c.StrokeLine2(bar, x-cap, toY(b.low), x+cap, toY(b.low))
			c.StrokeLine2(bar, x-cap, toY(b.high), x+cap, toY(b.high))
		}
	}
	if len(path) > 1 {
		c.StrokeLines(line, path)
	}
	for _, pt := range path {
		c.DrawGlyph(draw.GlyphStyle{Color: fill, Radius: vg.Length(math.Max(1.6, float64(e.f.letters*0.3))), Shape: shape}, pt)
	}
}
