package gauge

import (
	"math"

	"tautramp/analyze/estimate"
)

// Lines are the least-squares lines of indicated on reference, SI; a line of
// fewer than three readings has N = 0.
type Lines struct {
	All, Rising, Falling estimate.Line
	ZeroError            estimate.Estimate // at the lowest point
	SpanError            estimate.Estimate // at the highest point less that at the lowest
}

// Straight is a line through the means of up and down, indicated on reference,
// and the largest deviation from it.
type Straight struct {
	Line      estimate.Line
	Deviation estimate.Estimate
}

// Conformity is the linearity by each of its definitions (the terms of
// ISA-51.1 and IEC 61298-2), judged on the average of up and down readings.
type Conformity struct {
	Independent  Straight // the line that makes the largest deviation least
	Terminal     Straight // through the end points
	ZeroBased    Straight // through the first point, its slope making the largest deviation least
	LeastSquares Straight
}

func (w *work) lines() {
	w.res.Lines = Lines{All: w.fitted(Up, Down), Rising: w.fitted(Up), Falling: w.fitted(Down)}
	at := w.res.Curves[0].At
	first, last := at[0].Mean, at[len(at)-1].Mean
	w.res.Lines.ZeroError = first
	w.res.Lines.SpanError = estimate.Unknown("one point shows no span")
	if len(at) > 1 {
		w.res.Lines.SpanError = estimate.Estimate{
			Value: last.Value - first.Value, Random: math.Hypot(first.Random, last.Random),
			System: math.Hypot(first.System, last.System), DoF: math.Min(first.DoF, last.DoF),
			Method: "error at the highest point less that at the lowest",
		}
	}
	w.conformity()
}

// fitted is the line of the first series' readings on the ways.
func (w *work) fitted(ways ...Direction) estimate.Line {
	var x, y []float64
	for _, o := range w.seen {
		for _, d := range ways {
			if o.Series == w.res.Curves[0].Series && o.Direction == d {
				x, y = append(x, o.refSI), append(y, o.indSI)
			}
		}
	}
	l, err := estimate.FitLine(x, y)
	if err != nil {
		return estimate.Line{}
	}
	return l
}

// conformity finds each line, and how far its largest deviation follows when
// each point moves by its own scatter (JCGM 100, 5.1.3 note 2).
func (w *work) conformity() {
	at := w.res.Curves[0].At
	x, y := make([]float64, len(at)), make([]float64, len(at))
	for i, a := range at {
		x[i], y[i] = a.ReferenceSI, a.ReferenceSI+a.Mean.Value
	}
	judge := func(method string, least int, find func(x, y []float64) (a, b float64)) Straight {
		if len(at) < least {
			return Straight{Deviation: estimate.Unknown("too few points")}
		}
		deviation := func(y []float64) float64 {
			a, b := find(x, y)
			return farthest(x, y, a, b)
		}
		e := estimate.Estimate{Value: deviation(y), DoF: at[0].Mean.DoF, Method: method}
		for i := range y {
			e.Random = math.Hypot(e.Random, follows(deviation, y, i, at[i].Mean.Random))
		}
		a, b := find(x, y)
		return Straight{Line: estimate.Line{A: a, B: b, N: len(at)}, Deviation: e}
	}
	c := &w.res.Conformity
	c.Independent = judge("largest deviation from the line that makes it least", 3, minimaxLine)
	c.Terminal = judge("largest deviation from the line through the end points", 3, terminalLine)
	c.ZeroBased = judge("largest deviation from the line through the first point that makes it least", 3, zeroBasedLine)
	c.LeastSquares = judge("largest deviation from the least-squares line", 3, leastSquaresLine)
	if c.Terminal.Deviation.Known() {
		c.Terminal.Line = throughTwo(w.end(at[0]), w.end(at[len(at)-1]))
		c.Terminal.Line.N = len(at)
	}
}

// follows is half of what f moves when one value moves up and down by std.
func follows(f func([]float64) float64, y []float64, i int, std float64) float64 {
	moved := append([]float64(nil), y...)
	moved[i] = y[i] + std
	up := f(moved)
	moved[i] = y[i] - std
	return (up - f(moved)) / 2
}

func farthest(x, y []float64, a, b float64) float64 {
	most := 0.0
	for i := range x {
		most = math.Max(most, math.Abs(y[i]-a-b*x[i]))
	}
	return most
}

// minimaxLine is the line of least largest deviation: it runs parallel to one
// edge of the points' convex hull, so every pair's slope is tried.
func minimaxLine(x, y []float64) (a, b float64) {
	least := math.Inf(1)
	for i := range x {
		for k := range i {
			if x[i] == x[k] {
				continue
			}
			slope := (y[i] - y[k]) / (x[i] - x[k])
			low, high := math.Inf(1), math.Inf(-1)
			for j := range x {
				r := y[j] - slope*x[j]
				low, high = math.Min(low, r), math.Max(high, r)
			}
			if high-low < least {
				least, a, b = high-low, (low+high)/2, slope
			}
		}
	}
	return a, b
}

func terminalLine(x, y []float64) (a, b float64) {
	last := len(x) - 1
	b = (y[last] - y[0]) / (x[last] - x[0])
	return y[0] - b*x[0], b
}

// zeroBasedLine tries every slope at which two points' deviations are of one
// size: the least of the largest is at one of them.
func zeroBasedLine(x, y []float64) (a, b float64) {
	least := math.Inf(1)
	try := func(dy, dx float64) {
		if dx == 0 {
			return
		}
		slope := dy / dx
		if most := farthest(x, y, y[0]-slope*x[0], slope); most < least {
			least, a, b = most, y[0]-slope*x[0], slope
		}
	}
	for i := 1; i < len(x); i++ {
		for k := 1; k <= i; k++ {
			try(y[i]-y[0]+y[k]-y[0], x[i]-x[0]+x[k]-x[0])
			try(y[i]-y[k], x[i]-x[k])
		}
	}
	return a, b
}

func leastSquaresLine(x, y []float64) (a, b float64) {
	l, err := estimate.FitLine(x, y)
	if err != nil {
		return terminalLine(x, y)
	}
	return l.A, l.B
}

// measured is a point in doubt in both coordinates.
type measured struct{ x, y, xStd, yStd float64 }

func (w *work) end(a At) measured {
	std := math.Hypot(w.test.Instruments.TestedCountSI/math.Sqrt(12), a.Mean.Random)
	m := measured{x: a.ReferenceSI, y: a.ReferenceSI + a.Mean.Value, yStd: std}
	for _, t := range a.Budget {
		if t.Name == "reference" {
			m.xStd = t.StdSI
		}
	}
	return m
}

// throughTwo is the line through two points with the covariance that their own
// doubts, independent of each other, give it; DoF 0.
func throughTwo(p, q measured) estimate.Line {
	dx := q.x - p.x
	l := estimate.Line{B: (q.y - p.y) / dx, N: 2}
	l.A = p.y - l.B*p.x
	for _, end := range []struct {
		m    measured
		perY float64 // slope for one of this point's y
	}{{p, -1 / dx}, {q, 1 / dx}} {
		std := math.Hypot(end.m.yStd, l.B*end.m.xStd)
		b := end.perY * std
		a := -p.x * b
		if end.m == p {
			a += std
		}
		l.VarA += a * a
		l.VarB += b * b
		l.CovAB += a * b
	}
	return l
}
