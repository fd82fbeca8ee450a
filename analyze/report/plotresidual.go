package report

import (
	"math"
	"sort"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tautramp/analyze"
)

// residuals is how far the fitted pairs lie off the lines, in display units.
type residuals struct {
	rising, falling []xy
}

func residualChart(r *analyze.Result, u units) chart {
	var all residuals
	rising, falling := lineOf(curveOf(r, analyze.Rising, r.Rising, u)), lineOf(curveOf(r, analyze.Falling, r.Falling, u))
	for _, d := range drawable(dotsOf(r, u)) {
		switch {
		case d.fitted && d.phase == analyze.Loading:
			all.rising = appendResidual(all.rising, d.xy, rising)
		case d.fitted && d.phase == analyze.Unloading:
			all.falling = appendResidual(all.falling, d.xy, falling)
		}
	}
	all.rising, all.falling = thinned(all.rising), thinned(all.falling)
	var x, y []float64
	for _, p := range append(append([]xy{}, all.rising...), all.falling...) {
		x, y = append(x, p.x), append(y, p.y)
	}
	c := chart{
		name: "Band stress off the lines against " + u.settingIs.noun,
		says: "How far the fitted pairs lie off their own line.",
		x:    spanning(u.settingIs.noun+" ("+u.setting.name+")", x),
		y:    spanning("off the line ("+u.stress.name+")", append(y, 0)),
		keys: []key{
			{words: "rising", line: stroke(blue(), 0), glyph: upward{}, fill: blue()},
			{words: "falling", line: stroke(vermillion(), 0), glyph: downward{}, fill: vermillion()},
		},
	}
	if len(x) == 0 {
		c.empty = "no pair was fitted, or the band stress is not known"
	}
	c.plotters = func(f format) []plot.Plotter { return []plot.Plotter{residualPlotter{all, f}} }
	return c
}

// lineOf reads a curve between its ends. The analysis gives lines that are
// straight in the setting, so two of its points say all, and a long recording
// need not ask it for each pair.
func lineOf(c curve) func(x float64) float64 {
	if len(c.mid) < 2 {
		return func(float64) float64 { return math.NaN() }
	}
	first, last := c.mid[0], c.mid[len(c.mid)-1]
	return func(x float64) float64 {
		return first.y + (last.y-first.y)*(x-first.x)/(last.x-first.x)
	}
}

func appendResidual(to []xy, at xy, line func(float64) float64) []xy {
	if off := at.y - line(at.x); finite(off) {
		to = append(to, xy{at.x, off})
	}
	return to
}

// thinned orders residuals by setting and keeps the extremes.
func thinned(points []xy) []xy {
	sort.SliceStable(points, func(i, j int) bool { return points[i].x < points[j].x })
	return decimate(points, maxDots/2)
}

// residualPlotter draws residuals.
type residualPlotter struct {
	residuals
	f format
}

// Plot implements plot.Plotter.
func (r residualPlotter) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	c.StrokeLine2(stroke(ink(), 0.8), c.Min.X, toY(0), c.Max.X, toY(0))
	radius := r.f.letters * 0.2
	draws := func(points []xy, sign vg.Length) {
		var path vg.Path
		for _, pt := range onCanvas(points, toX, toY) {
			appendTriangle(&path, pt, radius, sign)
		}
		c.Fill(path)
	}
	c.SetColor(see(blue()))
	draws(r.rising, 1)
	c.SetColor(see(vermillion()))
	draws(r.falling, -1)
}
