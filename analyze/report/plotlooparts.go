package report

import (
	"image/color"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// arrows puts heads on a curve that point the way it is run through: sign 1
// along the points, -1 against them. None lies on the mark of the target.
func (l loopPlotter) arrows(c draw.Canvas, along curve, fill color.Color, sign float64, toX, toY func(float64) vg.Length) {
	for _, share := range []float64{0.25, 0.88} {
		i := int(share * float64(len(along.mid)-1))
		if i < 1 || i+1 >= len(along.mid) {
			continue
		}
		before, after := along.mid[i-1], along.mid[i+1]
		angle := math.Atan2(float64(toY(after.y)-toY(before.y)), float64(toX(after.x)-toX(before.x)))
		if sign < 0 {
			angle += math.Pi
		}
		tip := vg.Point{X: toX(along.mid[i].x), Y: toY(along.mid[i].y)}
		if finite(l.target) && math.Abs(float64(tip.Y-toY(l.target))) < 1.5*float64(l.f.letters) {
			continue
		}
		c.SetColor(fill)
		c.Fill(arrowHead(tip, l.f.letters*0.62, angle))
	}
}

// arrowHead is a filled head around a point.
func arrowHead(at vg.Point, size vg.Length, angle float64) vg.Path {
	corner := func(turn float64, reach vg.Length) vg.Point {
		return vg.Point{X: at.X + reach*vg.Length(math.Cos(angle+turn)), Y: at.Y + reach*vg.Length(math.Sin(angle+turn))}
	}
	var p vg.Path
	p.Move(corner(0, size))
	p.Line(corner(2.5, size))
	p.Line(corner(math.Pi, size*0.45))
	p.Line(corner(-2.5, size))
	p.Close()
	return p
}

// crossing marks where a curve has the target stress.
func (l loopPlotter) crossing(c draw.Canvas, along curve, shape draw.GlyphDrawer, fill color.Color, toX, toY func(float64) vg.Length) {
	for i := 1; i < len(along.mid); i++ {
		a, b := along.mid[i-1], along.mid[i]
		if (a.y-l.target)*(b.y-l.target) > 0 || a.y == b.y || !finite(l.target) {
			continue
		}
		pt := vg.Point{X: toX(a.x + (b.x-a.x)*(l.target-a.y)/(b.y-a.y)), Y: toY(l.target)}
		c.DrawGlyph(draw.GlyphStyle{Color: paper(), Radius: l.f.letters * 0.66, Shape: draw.CircleGlyph{}}, pt)
		c.DrawGlyph(draw.GlyphStyle{Color: fill, Radius: l.f.letters * 0.55, Shape: shape}, pt)
		return
	}
}

// words names the two directions where there is room: rising right of and below
// its band, falling left of and above its own.
func (l loopPlotter) words(c draw.Canvas, toX, toY func(float64) vg.Length) {
	style := letters(l.f, 1, blue())
	style.XAlign, style.YAlign = draw.XLeft, draw.YCenter
	l.word(c, style, "rising", outer(l.rising.low, l.rising.mid), 1, toX, toY)
	style.Color, style.XAlign = vermillion(), draw.XRight
	l.word(c, style, "falling", outer(l.falling.high, l.falling.mid), -1, toX, toY)
}

func outer(edge, mid []xy) []xy {
	if len(edge) == len(mid) {
		return edge
	}
	return mid
}

// word writes at the first place beside an edge where it lies inside the
// picture and off the target line; nowhere, and it stays out: the key has it.
func (l loopPlotter) word(c draw.Canvas, style draw.TextStyle, text string, edge []xy, sign vg.Length, toX, toY func(float64) vg.Length) {
	gap, width := l.f.letters*0.8, style.Width(text)*slack
	for _, share := range []float64{0.55, 0.45, 0.65, 0.35} {
		if len(edge) == 0 {
			return
		}
		at := edge[int(share*float64(len(edge)-1))]
		pt := vg.Point{X: toX(at.x) + sign*gap, Y: toY(at.y)}
		far := pt.X + sign*width
		clear := !finite(l.target) || math.Abs(float64(pt.Y-toY(l.target))) > float64(l.f.letters)
		if finite(l.limit) && (pt.X-toX(l.limit))*(far-toX(l.limit)) < 0 {
			clear = false
		}
		if clear && min(pt.X, far) > c.Min.X && max(pt.X, far) < c.Max.X {
			c.FillText(style, pt, text)
			return
		}
	}
}
