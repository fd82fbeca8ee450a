package report

import (
	"bufio"
	"fmt"
	"io"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// Plot names one of the plots.
type Plot string

// The plots.
const (
	PlotLoop      Plot = "loop"       // band stress against setting, both directions
	PlotWidth     Plot = "half-width" // half-width of the loop against band stress
	PlotResiduals Plot = "residuals"  // band stress off the lines, against setting
)

// Plots lists the plots in the order of the report.
func Plots() []Plot { return []Plot{PlotLoop, PlotWidth, PlotResiduals} }

// Known reports whether p is one of Plots.
func (p Plot) Known() bool {
	for _, known := range Plots() {
		if p == known {
			return true
		}
	}
	return false
}

// format is the paper size of a plot in points, and of its letters.
type format struct{ width, height, letters vg.Length }

// alone is the format of a plot in a file of its own.
func alone() format { return format{width: 520, height: 350, letters: 11} }

// dotsPerInch is the resolution of PNG files: 1,083 pixels wide.
const dotsPerInch = 150

// SVG writes a plot as one SVG picture. Its letters ask for a list of common
// sans fonts; the layout leaves them 10 % of slack. Errors are the writer's, or
// that the plot is none of Plots.
func SVG(w io.Writer, r *analyze.Result, m Meta, p Plot, s mill.System) error {
	c, err := chartOf(r, m, p, s)
	if err != nil {
		return err
	}
	_, err = io.WriteString(w, c.svg(alone(), ""))
	return err
}

// PNG writes the same plot as pixels. Errors as for SVG.
func PNG(w io.Writer, r *analyze.Result, m Meta, p Plot, s mill.System) error {
	c, err := chartOf(r, m, p, s)
	if err != nil {
		return err
	}
	f := alone()
	canvas := vgimg.NewWith(vgimg.UseWH(f.width, f.height), vgimg.UseDPI(dotsPerInch))
	c.draw(draw.New(canvas), f)
	out := bufio.NewWriter(w)
	if _, err := (vgimg.PngCanvas{Canvas: canvas}).WriteTo(out); err != nil {
		return err
	}
	return out.Flush()
}

// chart is a plot before it has a size.
type chart struct {
	name     string // for those who cannot see it
	says     string
	empty    string // why there is nothing to draw; "" when there is
	x, y     axis
	keys     []key
	plotters func(f format) []plot.Plotter // from back to front
}

func chartOf(r *analyze.Result, m Meta, p Plot, s mill.System) (chart, error) {
	u := unitsFor(r.Setup.Tensioner, s)
	var c chart
	switch p {
	case PlotLoop:
		c = loopChart(r, m, u)
	case PlotWidth:
		c = widthChart(r, u)
	case PlotResiduals:
		c = residualChart(r, u)
	default:
		return chart{}, fmt.Errorf("no plot is called %q: choose one of %q", p, Plots())
	}
	if r.Simulated { // a picture alone has no ribbon
		c.keys = append([]key{{words: "REHEARSAL: made up", line: stroke(ink(), 4, 3, 2)}}, c.keys...)
	}
	return c, nil
}

// draw lays the key out on top and the axes with the data below.
func (c chart) draw(dc draw.Canvas, f format) {
	dc.SetColor(paper())
	dc.Fill(dc.Rectangle.Path())
	dc = draw.Crop(dc, f.letters/2, -f.letters, f.letters/4, -f.letters/4)
	if c.empty != "" {
		drawEmpty(dc, f, c.empty)
		return
	}
	used := drawKeys(dc, f, c.keys)
	p := plot.New()
	p.BackgroundColor = nil
	x, y := c.x.ticksAcross(f, f.width*3/4), c.y.ticks(maxTicks)
	c.x.apply(&p.X, f, x)
	c.y.apply(&p.Y, f, y)
	p.Add(grid{x, y})
	p.Add(c.plotters(f)...)
	p.Draw(draw.Crop(dc, 0, 0, 0, -used))
}

// svg draws the chart as SVG text. The id keeps names apart where several stand
// in one page; with one, the picture has no size of its own and fills its box.
func (c chart) svg(f format, id string) string {
	canvas := vgsvg.New(f.width, f.height)
	c.draw(draw.New(canvas), f)
	return dressSVG(canvas, c, f, id)
}
