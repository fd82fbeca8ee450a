package report

import (
	"strconv"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

func boxLine() draw.LineStyle { return stroke(ink(), 0.9, 2.5, 1.5) }

// boxes draws where the findings are seen: a dashed box and its number, kept
// inside the picture.
func (l loopPlotter) boxes(c draw.Canvas, toX, toY func(float64) vg.Length) {
	for i, b := range l.found {
		left, right := hold(toX(b.x0), c.Min.X, c.Max.X), hold(toX(b.x1), c.Min.X, c.Max.X)
		foot, top := hold(toY(b.y0), c.Min.Y, c.Max.Y), hold(toY(b.y1), c.Min.Y, c.Max.Y)
		if least := l.f.letters; right-left < least {
			left, right = left-least/2, right+least/2
		}
		c.StrokeLines(boxLine(), []vg.Point{{X: left, Y: foot}, {X: right, Y: foot}, {X: right, Y: top}, {X: left, Y: top}, {X: left, Y: foot}})
		radius := l.f.letters * 0.72
		// Boxes of one place have their numbers side by side.
		at := vg.Point{X: hold(left+radius*2.2*vg.Length(l.before(i)), c.Min.X+radius, c.Max.X-radius), Y: hold(top, c.Min.Y+radius, c.Max.Y-radius)}
		c.DrawGlyph(draw.GlyphStyle{Color: paper(), Radius: radius, Shape: draw.CircleGlyph{}}, at)
		c.DrawGlyph(draw.GlyphStyle{Color: ink(), Radius: radius, Shape: draw.RingGlyph{}}, at)
		style := letters(l.f, 0.9, ink())
		style.XAlign, style.YAlign = draw.XCenter, draw.YCenter
		c.FillText(style, at, strconv.Itoa(b.number))
	}
}

// before is how many earlier boxes begin at the same place.
func (l loopPlotter) before(i int) int {
	n := 0
	for _, b := range l.found[:i] {
		if b.x0 == l.found[i].x0 && b.y1 == l.found[i].y1 {
			n++
		}
	}
	return n
}

func hold(x, low, high vg.Length) vg.Length { return max(low, min(high, x)) }
