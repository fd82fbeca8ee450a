package report

import (
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tautramp/analyze"
)

// widths is what the half-width plot shows, in display units.
type widths struct {
	mid    []xy
	low    []float64 // ends of the 95 % intervals, beside mid
	high   []float64
	target float64
}

func widthChart(r *analyze.Result, u units) chart {
	over, title := u.stress, "band stress ("+u.stress.name+")"
	at := func(w analyze.WidthAt) float64 { return w.StressPa }
	w := widths{target: targetOf(r, u)}
	if !anyStress(r.Widths) {
		over, title = u.setting, u.settingIs.noun+", rising ("+u.setting.name+")"
		at = func(w analyze.WidthAt) float64 { return w.RisingSI }
		w.target = math.NaN()
	}
	for _, row := range r.Widths {
		if unknownWhy(row.HalfSI) == "" && finite(at(row)) {
			low, high := row.HalfSI.Interval95()
			w.mid = append(w.mid, xy{over.show(at(row)), u.setting.show(row.HalfSI.Value)})
			w.low, w.high = append(w.low, u.setting.show(low)), append(w.high, u.setting.show(high))
		}
	}
	x, y := []float64{w.target}, append(append([]float64{}, w.low...), w.high...)
	for _, p := range w.mid {
		x, y = append(x, p.x), append(y, p.y)
	}
	c := chart{
		name: "Half-width of the loop",
		says: "Half of what the setting differs at the same stretch, with 95 % intervals.",
		x:    spanning(title, x), y: spanning("half-width ("+u.setting.name+")", y).fromZero(),
		keys: []key{{words: "half-width", line: stroke(ink(), 1), glyph: draw.CircleGlyph{}, fill: ink()}},
	}
	if len(w.mid) == 0 {
		c.empty = "no half-width is known"
	}
	if finite(w.target) {
		c.keys = append(c.keys, key{words: "target", line: targetLine()})
	}
	c.plotters = func(f format) []plot.Plotter { return []plot.Plotter{widthPlotter{w, f}} }
	return c
}

// anyStress tells whether a half-width has a band stress, which needs a zero.
func anyStress(rows []analyze.WidthAt) bool {
	for _, w := range rows {
		if finite(w.StressPa) {
			return true
		}
	}
	return false
}

// widthPlotter draws half-widths.
type widthPlotter struct {
	widths
	f format
}

// Plot implements plot.Plotter.
func (w widthPlotter) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	if finite(w.target) {
		c.StrokeLine2(targetLine(), toX(w.target), c.Min.Y, toX(w.target), c.Max.Y)
	}
	points := onCanvas(w.mid, toX, toY)
	c.StrokeLines(stroke(ink(), 1), points)
	foot := w.f.letters * 0.25
	for i, pt := range points {
		if finite(w.low[i]) && finite(w.high[i]) {
			w.bar(c, pt.X, toY(w.low[i]), toY(w.high[i]), foot)
		}
		c.DrawGlyph(draw.GlyphStyle{Color: ink(), Radius: w.f.letters * 0.28, Shape: draw.CircleGlyph{}}, pt)
	}
}

// bar is an interval with feet.
func (w widthPlotter) bar(c draw.Canvas, x, low, high, foot vg.Length) {
	style := stroke(ink(), 0.8)
	c.StrokeLine2(style, x, low, x, high)
	c.StrokeLine2(style, x-foot, low, x+foot, low)
	c.StrokeLine2(style, x-foot, high, x+foot, high)
}
