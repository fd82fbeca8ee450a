package report

import (
	"image/color"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// Colours are the colour-blind palette of M. Okabe and K. Ito, Color Universal
// Design (2008); values from memory. No meaning rests on colour alone: lines
// differ in dash, points in shape, and words stand beside both.
func blue() color.NRGBA       { return color.NRGBA{0x00, 0x72, 0xB2, 0xFF} } // rising
func vermillion() color.NRGBA { return color.NRGBA{0xD5, 0x5E, 0x00, 0xFF} } // falling
func green() color.NRGBA      { return color.NRGBA{0x00, 0x9E, 0x73, 0xFF} } // target
func purple() color.NRGBA     { return color.NRGBA{0xCC, 0x79, 0xA7, 0xFF} } // exercise
func ink() color.NRGBA        { return color.NRGBA{0x1D, 0x24, 0x29, 0xFF} }
func faint() color.NRGBA      { return color.NRGBA{0x8A, 0x93, 0x99, 0xFF} }
func hairline() color.NRGBA   { return color.NRGBA{0xE3, 0xE6, 0xE8, 0xFF} }
func paper() color.NRGBA      { return color.NRGBA{0xFF, 0xFF, 0xFF, 0xFF} }

// washed is a colour for areas behind lines.
func washed(c color.NRGBA) color.NRGBA {
	c.A = 0x2C
	return c
}

func stroke(c color.Color, width vg.Length, dashes ...vg.Length) draw.LineStyle {
	return draw.LineStyle{Color: c, Width: width, Dashes: dashes}
}

func risingLine() draw.LineStyle   { return stroke(blue(), 1.6) }
func fallingLine() draw.LineStyle  { return stroke(vermillion(), 1.6, 6, 2.5) }
func targetLine() draw.LineStyle   { return stroke(green(), 1.1, 1.5, 2) }
func limitLine() draw.LineStyle    { return stroke(ink(), 1.6, 9, 2, 2, 2) }
func exerciseLine() draw.LineStyle { return stroke(purple(), 1.2, 1.2, 3) }
func pairLine() draw.LineStyle     { return stroke(faint(), 0.5) }

// letters is the style of text at a share of the format's size.
func letters(f format, share float64, c color.Color) text.Style {
	return text.Style{
		Color: c, Handler: plot.DefaultTextHandler,
		Font: font.From(font.Font{Typeface: "Liberation", Variant: "Sans"}, f.letters*vg.Length(share)),
	}
}

// slack is the room left for a font that runs wider than the one measured.
const slack = 1.1

// drawEmpty says why there is no picture.
func drawEmpty(dc draw.Canvas, f format, why string) {
	style := letters(f, 1, ink())
	style.XAlign, style.YAlign = draw.XCenter, draw.YCenter
	perLine := max(10, int((dc.Max.X-dc.Min.X)/(f.letters*0.6)))
	lines := wrap("Nothing to draw: "+why+".", perLine)
	pt := dc.Center()
	pt.Y += f.letters * 0.7 * vg.Length(len(lines)-1)
	for _, line := range lines {
		dc.FillText(style, pt, line)
		pt.Y -= f.letters * 1.4
	}
}

// see is a colour for crowded points, that lets those behind show.
func see(c color.NRGBA) color.NRGBA {
	c.A = 0xA0
	return c
}
