package main

import (
	"bytes"
	"context"
	"flag"
	"image"
	"image/color"
	"image/png"
	"maps"
	"os"
	"path/filepath"
	"slices"
	"testing"
	"time"

	"github.com/chromedp/chromedp"

	"tautramp/acquire/mill"
)

var pictures = flag.String("pictures", "", "folder for the pictures of README.md, made from a rehearsal")

// TestPicturesOfTheReadme makes the pictures of README.md again:
//
//	go test ./cmd/tautramp -run Pictures -pictures "$PWD/cmd/tautramp/page/testdata"
func TestPicturesOfTheReadme(t *testing.T) {
	if *pictures == "" {
		t.Skip("only when they are asked for, with -pictures")
	}
	needTerminals(t)
	t.Chdir(t.TempDir())
	if err := os.WriteFile("mill.toml", mill.Example(), 0o644); err != nil {
		t.Fatal(err)
	}
	b := openPage(t, 1000, 620, "band-port")
	b.dir = *pictures
	runHere(t, "rig", "--link", "band-port", "--speed", browserSpeed)
	b.start(`{kind: "ramps", tensioner: "T-1", band: "QW-6", ports: ["band-port"], exercise: 1, ramps: 3}`)
	b.do("touch the page", chromedp.MouseClickXY(500, 100))
	b.wait("/cycle 3 of 4\\s+loading/.test(document.querySelector('#facts').innerText) && parseInt(document.querySelector('#setting').innerText) > 560", 40*time.Second)
	b.shot("ramp")
	b.wait("document.querySelector('#ramp').hidden && document.querySelector('.aim .big')", 60*time.Second)
	address := ask[string](b, "document.querySelector('iframe.sheet').src")
	b.do("open the report", chromedp.EmulateViewport(1000, 1000, chromedp.EmulateScale(0.75)), chromedp.Navigate(address))
	ctx, stop := context.WithTimeout(b.ctx, 20*time.Second)
	defer stop()
	sheet, err := chromedp.Run(ctx, chromedp.FullScreenshot(100))
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(b.dir, "report.png"), sheet, 0o644); err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"ramp.png", "report.png"} {
		fewColours(t, filepath.Join(b.dir, name))
	}
}

// fewColours makes a picture small: the 255 colours that it has most of.
func fewColours(t *testing.T, path string) {
	t.Helper()
	file, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	img, err := png.Decode(bytes.NewReader(file))
	if err != nil {
		t.Fatal(err)
	}
	coarse := func(x, y int) color.RGBA {
		c := color.RGBAModel.Convert(img.At(x, y)).(color.RGBA)
		return color.RGBA{c.R | 7, c.G | 7, c.B | 7, 255}
	}
	box, count := img.Bounds(), map[color.RGBA]int{}
	for y := box.Min.Y; y < box.Max.Y; y++ {
		for x := box.Min.X; x < box.Max.X; x++ {
			count[coarse(x, y)]++
		}
	}
	colours := slices.SortedFunc(maps.Keys(count), func(a, b color.RGBA) int { return count[b] - count[a] })
	var palette color.Palette
	for _, c := range colours[:min(len(colours), 255)] {
		palette = append(palette, c)
	}
	out, index := image.NewPaletted(box, palette), map[color.RGBA]uint8{}
	for y := box.Min.Y; y < box.Max.Y; y++ {
		for x := box.Min.X; x < box.Max.X; x++ {
			c := coarse(x, y)
			i, known := index[c]
			if !known {
				i = uint8(palette.Index(c))
				index[c] = i
			}
			out.SetColorIndex(x, y, i)
		}
	}
	var b bytes.Buffer
	if err := (&png.Encoder{CompressionLevel: png.BestCompression}).Encode(&b, out); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, b.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
}

// start gives an order as the page's own script does.
func (b *browser) start(order string) {
	b.t.Helper()
	if says := ask[string](b, `fetch("/start", {method: "POST", headers: {"Content-Type": "application/json"}, body: JSON.stringify(`+order+`)}).then((r) => r.text())`); says != "" {
		b.t.Fatal(says)
	}
}
