package report

import (
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// axis is a range in display units with its title.
type axis struct {
	title    string
	min, max float64
}

// maxTicks is the most labels on an axis.
const maxTicks = 8

// spanning makes an axis that holds all values with a margin. Values that are
// not finite are left out.
func spanning(title string, values []float64) axis {
	a := axis{title, math.Inf(1), math.Inf(-1)}
	for _, v := range values {
		if finite(v) {
			a.min, a.max = min(a.min, v), max(a.max, v)
		}
	}
	switch {
	case a.min > a.max:
		a.min, a.max = 0, 1
	case a.min == a.max:
		half := max(math.Abs(a.min)/10, 1e-9)
		a.min, a.max = a.min-half, a.max+half
	}
	margin := (a.max - a.min) * 0.04
	a.min, a.max = a.min-margin, a.max+margin
	return a
}

// fromZero stretches the axis to begin at zero.
func (a axis) fromZero() axis {
	a.min = min(a.min, 0)
	return a
}

// ticks are round values of the axis, at most so many.
func (a axis) ticks(most int) []plot.Tick {
	step, decimals := roundStep(a.max-a.min, most)
	var ticks []plot.Tick
	for n := math.Ceil(a.min / step); n*step <= a.max; n++ {
		ticks = append(ticks, plot.Tick{Value: n * step, Label: grouped(fixed(n*step, decimals))})
	}
	return ticks
}

// ticksAcross are the most round values whose labels stand apart in a width.
func (a axis) ticksAcross(f format, width vg.Length) []plot.Tick {
	style := letters(f, tickShare, ink())
	for most := maxTicks; ; most-- {
		ticks := a.ticks(most)
		widest := vg.Length(0)
		for _, t := range ticks {
			widest = max(widest, style.Width(t.Label)*slack+f.letters/2)
		}
		if most <= 1 || len(ticks) < 2 || widest < width*vg.Length((ticks[1].Value-ticks[0].Value)/(a.max-a.min)) {
			return ticks
		}
	}
}

// tickShare is the size of the numbers on the axes.
const tickShare = 0.88

func (a axis) apply(to *plot.Axis, f format, ticks []plot.Tick) {
	to.Min, to.Max = a.min, a.max
	to.Padding = 0
	to.LineStyle = stroke(faint(), 0.6)
	to.Tick.LineStyle = stroke(faint(), 0.6)
	to.Tick.Length = f.letters * 0.35
	to.Tick.Marker = plot.ConstantTicks(ticks)
	tick := letters(f, tickShare, ink())
	tick.XAlign, tick.YAlign = to.Tick.Label.XAlign, to.Tick.Label.YAlign
	to.Tick.Label = tick
	label := letters(f, 0.92, ink())
	label.XAlign, label.YAlign = to.Label.TextStyle.XAlign, to.Label.TextStyle.YAlign
	to.Label.TextStyle, to.Label.Text, to.Label.Padding = label, a.title, f.letters*0.3
}

// grid draws hairlines at the ticks.
type grid struct{ x, y []plot.Tick }

// Plot implements plot.Plotter.
func (g grid) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	for _, t := range g.x {
		c.StrokeLine2(stroke(hairline(), 0.5), toX(t.Value), c.Min.Y, toX(t.Value), c.Max.Y)
	}
	for _, t := range g.y {
		c.StrokeLine2(stroke(hairline(), 0.5), c.Min.X, toY(t.Value), c.Max.X, toY(t.Value))
	}
}

// xy is a point in display units.
type xy struct{ x, y float64 }

// onCanvas maps points into the picture.
func onCanvas(points []xy, toX, toY func(float64) vg.Length) []vg.Point {
	out := make([]vg.Point, len(points))
	for i, p := range points {
		out[i] = vg.Point{X: toX(p.x), Y: toY(p.y)}
	}
	return out
}
