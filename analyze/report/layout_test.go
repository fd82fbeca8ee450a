package report

import (
	"fmt"
	"image"
	"image/color"
	"math"
	"testing"

	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// box is where a text lies on the picture, with room for a wider font.
type box struct {
	text                   string
	left, right, low, high float64
}

func (b box) crosses(o box) bool {
	return b.left < o.right && o.left < b.right && b.low < o.high && o.low < b.high
}

// boxes is a canvas that only notes where text goes.
type boxes struct {
	at   [][6]float64 // stack of affine transforms: x' = a x + c y + e, y' = b x + d y + f
	text []box
}

func (b *boxes) top() *[6]float64 { return &b.at[len(b.at)-1] }

func (b *boxes) apply(m [6]float64) {
	t := *b.top()
	*b.top() = [6]float64{
		t[0]*m[0] + t[2]*m[1], t[1]*m[0] + t[3]*m[1], t[0]*m[2] + t[2]*m[3], t[1]*m[2] + t[3]*m[3],
		t[0]*m[4] + t[2]*m[5] + t[4], t[1]*m[4] + t[3]*m[5] + t[5],
	}
}

func (b *boxes) Push()                               { b.at = append(b.at, *b.top()) }
func (b *boxes) Pop()                                { b.at = b.at[:len(b.at)-1] }
func (b *boxes) Translate(p vg.Point)                { b.apply([6]float64{1, 0, 0, 1, float64(p.X), float64(p.Y)}) }
func (b *boxes) Scale(x, y float64)                  { b.apply([6]float64{x, 0, 0, y, 0, 0}) }
func (b *boxes) Rotate(r float64)                    { s, c := math.Sincos(r); b.apply([6]float64{c, s, -s, c, 0, 0}) }
func (b *boxes) SetLineWidth(vg.Length)              {}
func (b *boxes) SetLineDash([]vg.Length, vg.Length)  {}
func (b *boxes) SetColor(color.Color)                {}
func (b *boxes) Stroke(vg.Path)                      {}
func (b *boxes) Fill(vg.Path)                        {}
func (b *boxes) DrawImage(vg.Rectangle, image.Image) {}
func (b *boxes) FillString(f font.Face, pt vg.Point, s string) {
	width, up, down := float64(f.Width(s))*slack, float64(f.Extents().Ascent)*0.8, float64(f.Extents().Descent)*0.5
	x, y, t := float64(pt.X), float64(pt.Y), *b.top()
	out := box{s, math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)}
	for _, c := range [][2]float64{{x, y - down}, {x + width, y - down}, {x, y + up}, {x + width, y + up}} {
		px, py := t[0]*c[0]+t[2]*c[1]+t[4], t[1]*c[0]+t[3]*c[1]+t[5]
		out.left, out.right = min(out.left, px), max(out.right, px)
		out.low, out.high = min(out.low, py), max(out.high, py)
	}
	b.text = append(b.text, out)
}

func layoutOf(c chart, f format) []box {
	canvas := &boxes{at: [][6]float64{{1, 0, 0, 1, 0, 0}}}
	c.draw(draw.NewCanvas(canvas, f.width, f.height), f)
	return canvas.text
}

// resultsToDraw are results of every kind of setting, with and without a zero,
// with a limit far and near, and with ranges from tiny to huge.
func resultsToDraw(t testing.TB) map[string]*analyze.Result {
	all := map[string]*analyze.Result{"T-1": t1(t), "nothing": blank(mill.SetByPressure)}
	for _, by := range []mill.SetBy{mill.SetByTorque, mill.SetByTurns, mill.SetBySpring} {
		r := t1(t)
		r.Setup.Tensioner.SetBy = by
		all["as "+string(by)] = r
	}
	all["no zero"] = withoutZero(t)
	far := t1(t)
	far.Setup.LimitSI = 1e9
	all["far limit"] = far
	low := t1(t)
	low.Setup.TargetPa = low.Rising.LowPa
	all["low target"] = low
	return all
}

func TestTextInPicturesNeitherClipsNorCrosses(t *testing.T) {
	for name, r := range resultsToDraw(t) {
		for _, s := range []mill.System{mill.US, mill.SI}[:systemsTested()] {
			for _, p := range Plots() {
				c, err := chartOf(r, Meta{}, p, s)
				if err != nil {
					t.Fatal(err)
				}
				onPage := narrow()
				if p == PlotLoop {
					onPage = wide()
				}
				for _, f := range []format{alone(), onPage} {
					checkLayout(t, fmt.Sprintf("%s, %s, %s, %g wide", name, p, s, f.width), layoutOf(c, f), f)
				}
			}
		}
	}
}

func checkLayout(t *testing.T, name string, text []box, f format) {
	t.Helper()
	if len(text) == 0 {
		t.Errorf("%s: no text at all", name)
	}
	for i, b := range text {
		if b.left < 0 || b.low < 0 || b.right > float64(f.width) || b.high > float64(f.height) {
			t.Errorf("%s: %q leaves the picture: %.1f to %.1f, %.1f to %.1f of %g x %g", name, b.text, b.left, b.right, b.low, b.high, f.width, f.height)
		}
		for _, o := range text[i+1:] {
			if b.crosses(o) {
				t.Errorf("%s: %q crosses %q", name, b.text, o.text)
			}
		}
	}
}
