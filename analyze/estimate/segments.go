package estimate

import (
	"math"
	"slices"
	"sort"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// Segments is one to three straight lines joined at breaks, in rising x.
type Segments struct {
	Breaks []float64    // one fewer than lines
	Lines  [][2]float64 // intercept and slope of each
	RSS    float64      // sum of squared residuals
	N      int
}

// FitSegments is the broken line with as many breaks, none to two, as the
// points ask for. A break must gain more than 3 ln n in log likelihood, n being
// how many independent points the series is worth: a BIC-like penalty of 6 ln n
// a break on -2 log L, twice what its two parameters alone would cost, because
// the break was looked for everywhere. One break is found exactly (FitStick),
// two by a search on a grid that is refined.
//
// x and y are in the order in which they were read. Errors as FitStick.
func FitSegments(x, y []float64) (Segments, error) { return fitSegments(x, y, 0) }

// fitSegments takes a broken line for one only where it leaves the one line
// through all by so much somewhere: less than that the instrument's own scale may
// bend.
func fitSegments(x, y []float64, worth float64) (Segments, error) {
	stick, err := FitStick(x, y)
	if err != nil {
		return Segments{}, err
	}
	line, err := FitLine(x, y)
	if err != nil {
		return Segments{}, err
	}
	all := []Segments{
		{Lines: [][2]float64{{line.A, line.B}}, RSS: line.ResidualSD * line.ResidualSD * line.DoF},
		{Breaks: []float64{stick.Break}, Lines: [][2]float64{{stick.AL, stick.BL}, {stick.AR, stick.BR}}, RSS: stick.RSS},
	}
	if two, ok := twoBreaks(x, y, stick.Break); ok {
		all = append(all, two)
	}
	low, high := Quantile(x, 0), Quantile(x, 1)
	best := cheapest(slices.DeleteFunc(all, func(s Segments) bool {
		return len(s.Breaks) > 0 && s.leaves(all[0].Lines[0], low, high) < worth
	}), x, y)
	best.N = len(x)
	return best, nil
}

// At is the broken line at x.
func (s Segments) At(x float64) float64 {
	l := s.Lines[sort.SearchFloat64s(s.Breaks, x)]
	return l[0] + l[1]*x
}

// Main is the index of the line that covers most of the x from low to high.
func (s Segments) Main(low, high float64) int {
	best, widest := 0, -1.0
	for i := range s.Lines {
		from, to := s.ends(i, low, high)
		if to-from > widest {
			best, widest = i, to-from
		}
	}
	return best
}

// ends is the x between which a line holds.
func (s Segments) ends(i int, low, high float64) (from, to float64) {
	from, to = low, high
	if i > 0 {
		from = s.Breaks[i-1]
	}
	if i < len(s.Breaks) {
		to = s.Breaks[i]
	}
	return from, to
}

// leaves is how far the broken line leaves another at most.
func (s Segments) leaves(line [2]float64, low, high float64) float64 {
	most := 0.0
	for i, l := range s.Lines {
		from, to := s.ends(i, low, high)
		for _, x := range []float64{from, to} {
			most = math.Max(most, math.Abs(l[0]-line[0]+(l[1]-line[1])*x))
		}
	}
	return most
}

// cheapest chooses by the penalised likelihood. What a series is worth is taken
// from the residuals of the model with most breaks.
func cheapest(all []Segments, x, y []float64) Segments {
	const rounding = 1e-9
	last := all[len(all)-1]
	rest := make([]float64, len(x))
	for i := range x {
		rest[i] = y[i] - last.At(x[i])
	}
	n := math.Max(3, float64(len(x))/Dependence(rest))
	least := rounding * (Quantile(y, 1) - Quantile(y, 0))
	least *= least * float64(len(x))
	best, cost := all[0], math.Inf(1)
	for _, s := range all {
		c := n/2*math.Log(math.Max(s.RSS, least)) + breakPenalty*math.Log(n)*float64(len(s.Breaks))
		if c < cost {
			best, cost = s, c
		}
	}
	return best
}

// twoBreaks searches every pair of breaks on a grid of x, then finer about the
// best. Each segment keeps at least two points.
func twoBreaks(x, y []float64, hint float64) (Segments, bool) {
	const grid, rounds = 32, 24
	s := newStickSums(x, y)
	if len(s.x) < 8 {
		return Segments{}, false
	}
	var at []float64
	for k := 1; k < grid; k++ {
		at = append(at, Quantile(s.x, float64(k)/grid))
	}
	at = append(at, hint-s.mx)
	sort.Float64s(at)
	best := hinge{rss: math.Inf(1)}
	for i, t1 := range at {
		for _, t2 := range at[i+1:] {
			best = best.orBetter(s, t1, t2)
		}
	}
	if math.IsInf(best.rss, 1) {
		return Segments{}, false
	}
	step := (s.x[len(s.x)-1] - s.x[0]) / grid
	for range rounds {
		t1, t2 := best.t1, best.t2
		for _, d1 := range []float64{-step, 0, step} {
			for _, d2 := range []float64{-step, 0, step} {
				best = best.orBetter(s, t1+d1, t2+d2)
			}
		}
		if best.t1 == t1 && best.t2 == t2 {
			step /= 2
		}
	}
	return best.segments(s), true
}

// hinge is y = a + b x + c1 max(0, x - t1) + c2 max(0, x - t2) about the means.
type hinge struct {
	t1, t2, rss  float64
	a, b, c1, c2 float64
}

func (h hinge) orBetter(s *stickSums, t1, t2 float64) hinge {
	if next, ok := s.hinges(t1, t2); ok && next.rss < h.rss {
		return next
	}
	return h
}

// hinges is the least-squares fit at two given breaks, from the sums.
func (s *stickSums) hinges(t1, t2 float64) (hinge, bool) {
	n := len(s.x)
	k1 := sort.SearchFloat64s(s.x, math.Nextafter(t1, math.Inf(1)))
	k2 := sort.SearchFloat64s(s.x, math.Nextafter(t2, math.Inf(1)))
	if !(t1 < t2) || k1 < 2 || k2 < k1+2 || n < k2+2 {
		return hinge{}, false
	}
	all := s.sum[n]
	m1, m2 := all.minus(s.sum[k1]), all.minus(s.sum[k2])
	cross := func(m moments, t, u float64) float64 { return m.xx - (t+u)*m.x + m.n*t*u }
	sums := blas64.Symmetric{N: 4, Stride: 4, Uplo: blas.Upper, Data: []float64{
		all.n, all.x, m1.x - m1.n*t1, m2.x - m2.n*t2,
		0, all.xx, m1.xx - t1*m1.x, m2.xx - t2*m2.x,
		0, 0, cross(m1, t1, t1), cross(m2, t1, t2),
		0, 0, 0, cross(m2, t2, t2),
	}}
	right := [4]float64{all.y, all.xy, m1.xy - t1*m1.y, m2.xy - t2*m2.y}
	c := right
	factor, ok := lapack64.Potrf(sums)
	if !ok {
		return hinge{}, false
	}
	lapack64.Potrs(factor, blas64.General{Rows: 4, Cols: 1, Stride: 1, Data: c[:]})
	rss := all.yy
	for i, r := range right {
		rss -= c[i] * r
	}
	return hinge{t1: t1, t2: t2, a: c[0], b: c[1], c1: c[2], c2: c[3], rss: math.Max(0, rss)}, true
}

func (h hinge) segments(s *stickSums) Segments {
	out := Segments{Breaks: []float64{h.t1 + s.mx, h.t2 + s.mx}, RSS: h.rss}
	a, b := h.a, h.b
	for _, add := range [][2]float64{{0, 0}, {h.c1, h.t1}, {h.c2, h.t2}} {
		a, b = a-add[0]*add[1], b+add[0]
		out.Lines = append(out.Lines, [2]float64{a + s.my - b*s.mx, b})
	}
	return out
}
