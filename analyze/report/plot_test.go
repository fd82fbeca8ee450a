package report

import (
	"bytes"
	"encoding/xml"
	"errors"
	"image"
	"image/color"
	"image/png"
	"io"
	"math"
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

func TestDecimationLosesNoExtreme(t *testing.T) {
	points := make([]xy, 100_000)
	for i := range points {
		points[i] = xy{float64(i), math.Sin(float64(i) / 3000)}
	}
	points[54_321].y, points[77_777].y = 40, -40
	kept := decimate(points, maxDots)
	if len(kept) > maxDots {
		t.Errorf("%d points kept, want at most %d", len(kept), maxDots)
	}
	found := 0
	for i, p := range kept {
		if math.Abs(p.y) == 40 {
			found++
		}
		if i > 0 && p.x <= kept[i-1].x {
			t.Fatalf("point %d is out of order", i)
		}
	}
	if found != 2 {
		t.Errorf("%d of 2 spikes kept", found)
	}
	if kept[0] != points[0] || kept[len(kept)-1] != points[len(points)-1] {
		t.Error("the ends moved")
	}
	if few := decimate(points[:50], maxDots); len(few) != 50 {
		t.Errorf("a short series lost points: %d", len(few))
	}
}

func TestAllPathsTogetherStayBounded(t *testing.T) {
	r := t1(t)
	u := unitsFor(r.Setup.Tensioner, mill.US)
	for name, want := range map[string]func(analyze.Role) bool{
		"all":      func(analyze.Role) bool { return true },
		"exercise": func(role analyze.Role) bool { return role == analyze.Exercise },
	} {
		total := 0
		for _, path := range paths(r, drawable(dotsOf(r, u)), want) {
			total += len(path)
		}
		if total == 0 || total > maxDots {
			t.Errorf("%s: %d points, want 1 to %d", name, total, maxDots)
		}
	}
}

func TestPicturesAreSmallWholeAndNamed(t *testing.T) {
	r := t1(t)
	for _, p := range Plots() {
		out := written(t, func(b *bytes.Buffer) error { return SVG(b, r, Meta{}, p, mill.SI) })
		if len(out) > 160_000 {
			t.Errorf("%s: %d bytes", p, len(out))
		}
		for _, want := range []string{"<title ", "<desc ", "sans-serif", "gauge bar"} {
			if !strings.Contains(string(out), want) {
				t.Errorf("%s lacks %q", p, want)
			}
		}
		dec := xml.NewDecoder(bytes.NewReader(out))
		for {
			_, err := dec.Token()
			if errors.Is(err, io.EOF) {
				break
			}
			if err != nil {
				t.Fatalf("%s is not XML: %v", p, err)
			}
		}
	}
}

func TestPixelsShowBothDirections(t *testing.T) {
	img, err := png.Decode(bytes.NewReader(written(t, func(b *bytes.Buffer) error { return PNG(b, t1(t), Meta{}, PlotLoop, mill.US) })))
	if err != nil {
		t.Fatal(err)
	}
	if size := img.Bounds().Size(); size.X != 1083 || size.Y != 729 {
		t.Errorf("size %v", size)
	}
	count := map[color.NRGBA]int{}
	pixels, ok := img.(*image.RGBA) // the picture is opaque
	if !ok {
		t.Fatalf("pixels are %T", img)
	}
	for i := 0; i < len(pixels.Pix); i += 4 {
		if p := pixels.Pix[i : i+4]; p[0] != 0xFF || p[1] != 0xFF {
			count[color.NRGBA{p[0], p[1], p[2], p[3]}]++
		}
	}
	for name, c := range map[string]color.NRGBA{"rising": blue(), "falling": vermillion(), "target": green(), "limit": ink()} {
		if count[c] < 50 {
			t.Errorf("%s: %d pixels of its colour", name, count[c])
		}
	}
}

func TestNoPlotOfThatName(t *testing.T) {
	if Plot("pie").Known() {
		t.Error("a pie is known")
	}
	err := SVG(io.Discard, t1(t), Meta{}, "pie", mill.US)
	if err == nil || !strings.Contains(err.Error(), "half-width") {
		t.Errorf("%v: want the names that exist", err)
	}
	if PNG(io.Discard, t1(t), Meta{}, "", mill.US) == nil {
		t.Error("no name, and no error")
	}
}

func TestLimitFarOffIsSaidNotDrawn(t *testing.T) {
	r := t1(t)
	r.Setup.LimitSI = 3000 * psi
	out := string(written(t, func(b *bytes.Buffer) error { return SVG(b, r, Meta{}, PlotLoop, mill.US) }))
	if !strings.Contains(out, "limit 3,000 gauge psi (off to the right)") {
		t.Error("the limit off the picture is not said")
	}
}

func TestWithoutZeroTheLoopShowsTheStretch(t *testing.T) {
	r := withoutZero(t)
	out := string(written(t, func(b *bytes.Buffer) error { return SVG(b, r, Meta{}, PlotLoop, mill.US) }))
	if !strings.Contains(out, "stretch as indicated (in)") || strings.Contains(out, "Nothing to draw") {
		t.Error("the loop without band stress is not drawn over the stretch")
	}
	out = string(written(t, func(b *bytes.Buffer) error { return SVG(b, r, Meta{}, PlotWidth, mill.US) }))
	if !strings.Contains(out, "gauge pressure, rising (gauge psi)") {
		t.Error("the half-width without band stress is not drawn over the setting")
	}
}

func TestLinesAreStraight(t *testing.T) {
	r := t1(t)
	u := unitsFor(r.Setup.Tensioner, mill.US)
	for _, b := range []analyze.Branch{r.Rising, r.Falling} {
		c := curveOf(r, b.Direction, b, u)
		line := lineOf(c)
		if len(c.mid) != curvePoints {
			t.Fatalf("%s: %d points", b.Direction, len(c.mid))
		}
		for _, p := range c.mid {
			if math.Abs(line(p.x)-p.y) > 1e-6 {
				t.Errorf("%s at %g: %g, the analysis says %g", b.Direction, p.x, line(p.x), p.y)
			}
		}
	}
}

func BenchmarkLoopOfAnHour(b *testing.B) {
	r := t1(b)
	for len(r.Points) < 360_000 {
		r.Points = append(r.Points, r.Points...)
	}
	for b.Loop() {
		if err := SVG(io.Discard, r, Meta{}, PlotLoop, mill.US); err != nil {
			b.Fatal(err)
		}
	}
}
