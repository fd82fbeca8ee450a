package report

import (
	"image/color"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tautramp/analyze"
)

// loop is what the loop plot shows, in display units.
type loop struct {
	pairs, exercise [][]xy
	rising, falling curve
	target          float64 // band stress; NaN without one
	limit           float64 // setting; NaN where it lies off the picture
	found           []spot  // where findings are seen
}

// curve is one direction with the interval of the band's true stress. The three
// run along the same settings.
type curve struct{ mid, low, high []xy }

// curvePoints is how many settings a curve is computed at; its band is bent.
const curvePoints = 41

func loopChart(r *analyze.Result, m Meta, u units) chart {
	dots, inStretch := dotsOf(r, u), false
	c := chart{
		name: "Band stress against " + u.settingIs.noun,
		says: "Band stress rising and falling, over the pairs measured. Shaded: the band's true stress, 95 %.",
	}
	l := loop{
		rising:  curveOf(r, analyze.Rising, r.Rising, u),
		falling: curveOf(r, analyze.Falling, r.Falling, u),
		target:  targetOf(r, u),
	}
	title := "band stress (" + u.stress.name + ")"
	if len(drawable(dots)) == 0 && len(l.rising.mid) == 0 && len(l.falling.mid) == 0 {
		dots, title, l.target, inStretch = stretchDots(r, u), "stretch as indicated ("+u.extension.name+")", math.NaN(), true
		c.name, c.says = "Stretch against "+u.settingIs.noun, "The pairs measured. The band stress is not known."
	}
	dots = drawable(dots)
	l.pairs = paths(r, dots, func(role analyze.Role) bool { return role != analyze.Exercise })
	l.exercise = paths(r, dots, func(role analyze.Role) bool { return role == analyze.Exercise })
	c.x = spanning(u.settingIs.noun+" ("+u.setting.name+")", l.settings())
	c.y = spanning(title, l.stresses())
	if len(l.settings()) == 0 {
		c.empty = "no pairs were measured"
	}
	c.x, l.limit = stretchTo(c.x, u.setting.show(r.Setup.LimitSI))
	l.found = boxesOf(m.Found, u, inStretch)
	c.keys = l.keys(r, u)
	c.plotters = func(f format) []plot.Plotter { return []plot.Plotter{loopPlotter{l, f}} }
	return c
}

// targetOf is the target stress for a plot; NaN without one.
func targetOf(r *analyze.Result, u units) float64 {
	if r.Setup.TargetPa > 0 && finite(r.Setup.TargetPa) {
		return u.stress.show(r.Setup.TargetPa)
	}
	return math.NaN()
}

// stretchTo widens an axis to show a limit that is not far off; a limit that
// would squeeze the loop stays off the picture and is NaN.
func stretchTo(a axis, limit float64) (axis, float64) {
	span := a.max - a.min
	switch {
	case !finite(limit) || limit <= 0 || limit > a.max+0.4*span:
		return a, math.NaN()
	case limit > a.max-0.02*span:
		a.max = limit + 0.04*span
	}
	return a, limit
}

// curveOf samples a direction over its captured range. Without an interval the
// band is empty.
func curveOf(r *analyze.Result, d analyze.Direction, b analyze.Branch, u units) curve {
	var c curve
	for i := range curvePoints {
		if b.HighSI <= b.LowSI {
			return c
		}
		setting := b.LowSI + (b.HighSI-b.LowSI)*float64(i)/(curvePoints-1)
		e := stressAt(r, d, setting)
		if !e.Known() || !finite(setting) || !finite(e.Value) {
			continue
		}
		x := u.setting.show(setting)
		c.mid = append(c.mid, xy{x, u.stress.show(e.Value)})
		if low, high := e.Interval95(); finite(low) && finite(high) {
			c.low = append(c.low, xy{x, u.stress.show(low)})
			c.high = append(c.high, xy{x, u.stress.show(high)})
		}
	}
	return c
}

func (l loop) all() [][]xy {
	all := append([][]xy{l.rising.low, l.rising.mid, l.rising.high, l.falling.low, l.falling.mid, l.falling.high}, l.pairs...)
	return append(all, l.exercise...)
}

func (l loop) settings() []float64 {
	var out []float64
	for _, path := range l.all() {
		for _, p := range path {
			out = append(out, p.x)
		}
	}
	return out
}

func (l loop) stresses() []float64 {
	out := []float64{l.target}
	for _, path := range l.all() {
		for _, p := range path {
			out = append(out, p.y)
		}
	}
	return out
}

func (l loop) keys(r *analyze.Result, u units) []key {
	var keys []key
	if len(l.rising.mid) > 0 {
		keys = append(keys, key{words: "rising: come up", wash: washed(blue()), line: risingLine(), glyph: upward{}, fill: blue()})
	}
	if len(l.falling.mid) > 0 {
		keys = append(keys, key{words: "falling: come down", wash: washed(vermillion()), line: fallingLine(), glyph: downward{}, fill: vermillion()})
	}
	keys = append(keys, key{words: "pairs measured", line: pairLine()})
	if len(l.exercise) > 0 {
		keys = append(keys, key{words: "exercise, not fitted", line: exerciseLine()})
	}
	if finite(l.target) {
		keys = append(keys, key{words: "target " + u.stress.with(plain(l.target, 4)), line: targetLine()})
	}
	if len(l.found) > 0 {
		keys = append(keys, key{words: "where a finding is seen", line: boxLine()})
	}
	if limit := limitText(r, u); limit != notKnown {
		words := "limit " + limit
		if !finite(l.limit) {
			words += " (off to the right)"
		}
		keys = append(keys, key{words: words, line: limitLine()})
	}
	return keys
}

// loopPlotter draws a loop from back to front.
type loopPlotter struct {
	loop
	f format
}

// Plot implements plot.Plotter.
func (l loopPlotter) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	draws := func(style draw.LineStyle, points []xy) { c.StrokeLines(style, onCanvas(points, toX, toY)) }
	l.wash(c, l.rising, washed(blue()), toX, toY)
	l.wash(c, l.falling, washed(vermillion()), toX, toY)
	for _, path := range l.pairs {
		draws(pairLine(), path)
	}
	for _, path := range l.exercise {
		draws(exerciseLine(), path)
	}
	if finite(l.target) {
		c.StrokeLine2(targetLine(), c.Min.X, toY(l.target), c.Max.X, toY(l.target))
	}
	if finite(l.limit) {
		c.StrokeLine2(limitLine(), toX(l.limit), c.Min.Y, toX(l.limit), c.Max.Y)
	}
	draws(risingLine(), l.rising.mid)
	draws(fallingLine(), l.falling.mid)
	l.arrows(c, l.rising, blue(), 1, toX, toY)
	l.arrows(c, l.falling, vermillion(), -1, toX, toY)
	l.crossing(c, l.rising, upward{}, blue(), toX, toY)
	l.crossing(c, l.falling, downward{}, vermillion(), toX, toY)
	l.words(c, toX, toY)
	l.boxes(c, toX, toY)
}

func (l loopPlotter) wash(c draw.Canvas, band curve, fill color.Color, toX, toY func(float64) vg.Length) {
	if len(band.low) < 2 {
		return
	}
	outline := onCanvas(band.low, toX, toY)
	for i := len(band.high) - 1; i >= 0; i-- {
		outline = append(outline, vg.Point{X: toX(band.high[i].x), Y: toY(band.high[i].y)})
	}
	c.FillPolygon(fill, outline)
}
