package report

import (
	"image/color"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// key is one entry of a plot's key: a swatch and words.
type key struct {
	words string
	wash  color.Color // area behind; nil for none
	line  draw.LineStyle
	glyph draw.GlyphDrawer // shape on the line; nil for none
	fill  color.Color      // of the glyph
}

// drawKeys writes the key from the top left in as many rows as it needs, and
// returns the height used.
func drawKeys(dc draw.Canvas, f format, keys []key) vg.Length {
	style := letters(f, 0.88, ink())
	style.YAlign = draw.YCenter
	swatch, gap, row := f.letters*2.4, f.letters*0.5, f.letters*1.4
	x, y := dc.Min.X, dc.Max.Y-row/2
	for _, k := range keys {
		width := swatch + gap + style.Width(k.words)*slack + 2*gap
		if x > dc.Min.X && x+width > dc.Max.X {
			x, y = dc.Min.X, y-row
		}
		drawSwatch(dc, k, vg.Point{X: x, Y: y}, swatch, f.letters)
		dc.FillText(style, vg.Point{X: x + swatch + gap, Y: y}, k.words)
		x += width
	}
	return dc.Max.Y - y + row/2 + gap
}

func drawSwatch(dc draw.Canvas, k key, left vg.Point, width, height vg.Length) {
	if k.wash != nil {
		dc.FillPolygon(k.wash, []vg.Point{
			{X: left.X, Y: left.Y - height*0.4}, {X: left.X + width, Y: left.Y - height*0.4},
			{X: left.X + width, Y: left.Y + height*0.4}, {X: left.X, Y: left.Y + height*0.4},
		})
	}
	dc.StrokeLine2(k.line, left.X, left.Y, left.X+width, left.Y)
	if k.glyph != nil {
		dc.DrawGlyph(draw.GlyphStyle{Color: k.fill, Radius: height * 0.33, Shape: k.glyph}, vg.Point{X: left.X + width/2, Y: left.Y})
	}
}

// upward and downward are filled triangles: rising and falling.
type (
	upward   struct{}
	downward struct{}
)

// DrawGlyph implements draw.GlyphDrawer.
func (upward) DrawGlyph(c *draw.Canvas, s draw.GlyphStyle, pt vg.Point) {
	c.SetColor(s.Color)
	c.Fill(trianglePath(pt, s.Radius, 1))
}

// DrawGlyph implements draw.GlyphDrawer.
func (downward) DrawGlyph(c *draw.Canvas, s draw.GlyphStyle, pt vg.Point) {
	c.SetColor(s.Color)
	c.Fill(trianglePath(pt, s.Radius, -1))
}

// trianglePath points up for sign 1 and down for -1.
func trianglePath(pt vg.Point, radius, sign vg.Length) vg.Path {
	var p vg.Path
	appendTriangle(&p, pt, radius, sign)
	return p
}

func appendTriangle(p *vg.Path, pt vg.Point, radius, sign vg.Length) {
	p.Move(vg.Point{X: pt.X, Y: pt.Y + sign*radius})
	p.Line(vg.Point{X: pt.X + 0.87*radius, Y: pt.Y - sign*radius/2})
	p.Line(vg.Point{X: pt.X - 0.87*radius, Y: pt.Y - sign*radius/2})
	p.Close()
}
