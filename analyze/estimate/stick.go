package estimate

import (
	"fmt"
	"math"
	"sort"
)

// Stick is two straight lines joined at a break, y = AL + BL x below it and
// AR + BR x above.
type Stick struct {
	Break    float64
	BreakStd float64 // standard uncertainty by the delta method; NaN where the break lies on a point
	AL, BL   float64
	AR, BR   float64
	RSS      float64 // sum of squared residuals
	N        int
}

// FitStick is the least-squares broken stick over every possible break. It is
// exact: in each gap between neighbouring x the two lines are free and must
// meet inside the gap, and else the break lies on a point. Needs six points
// and four different x. Errors: ErrTooFew, ErrNoSpread, ErrBadValue.
func FitStick(x, y []float64) (Stick, error) { return fitStickBelow(x, y, math.Inf(1)) }

// fitStickBelow searches breaks up to a limit only.
func fitStickBelow(x, y []float64, limit float64) (Stick, error) {
	if err := checkPoints(x, y, nil); err != nil {
		return Stick{}, err
	}
	if len(x) < 6 {
		return Stick{}, fmt.Errorf("fit a broken stick: %d points where 6 are needed: %w", len(x), ErrTooFew)
	}
	s := newStickSums(x, y)
	best, found := Stick{RSS: math.Inf(1)}, false
	for i := 2; i+2 <= len(s.x) && s.x[i-1]+s.mx <= limit; i++ { // the first i points left of the break
		for _, try := range []func(int) (Stick, bool){s.inGap, s.onPoint} {
			if c, ok := try(i); ok && c.RSS < best.RSS {
				best, found = c, true
			}
		}
	}
	if !found {
		return Stick{}, fmt.Errorf("fit a broken stick: %w", ErrNoSpread)
	}
	best.N = len(x)
	return best, nil
}

// Left and Right are the lines' values at x.
func (s Stick) Left(x float64) float64 { return s.AL + s.BL*x }

// Right is the right line's value at x.
func (s Stick) Right(x float64) float64 { return s.AR + s.BR*x }

// stickSums holds the points sorted by x about their means, and sums over the
// first i of them.
type stickSums struct {
	mx, my float64
	x, y   []float64
	sum    []moments
}

type moments struct{ n, x, y, xx, xy, yy float64 }

func (m moments) minus(o moments) moments {
	return moments{m.n - o.n, m.x - o.x, m.y - o.y, m.xx - o.xx, m.xy - o.xy, m.yy - o.yy}
}

// line is the least-squares line of the points summed, its residual sum and
// its Sxx; ok is false where x has no spread.
func (m moments) line() (a, b, rss, sxx float64, ok bool) {
	mx, my := m.x/m.n, m.y/m.n
	sxx = m.xx - m.n*mx*mx
	if !(m.n >= 2 && sxx > 1e-12*m.xx) {
		return 0, 0, 0, 0, false
	}
	sxy := m.xy - m.n*mx*my
	b = sxy / sxx
	return my - b*mx, b, math.Max(0, m.yy-m.n*my*my-b*sxy), sxx, true
}

func newStickSums(x, y []float64) *stickSums {
	order := make([]int, len(x))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(a, b int) bool { return x[order[a]] < x[order[b]] })
	s := &stickSums{sum: make([]moments, 1, len(x)+1)}
	s.mx, _ = Mean(x)
	s.my, _ = Mean(y)
	var m moments
	for _, i := range order {
		u, v := x[i]-s.mx, y[i]-s.my
		s.x, s.y = append(s.x, u), append(s.y, v)
		m = moments{m.n + 1, m.x + u, m.y + v, m.xx + u*u, m.xy + u*v, m.yy + v*v}
		s.sum = append(s.sum, m)
	}
	return s
}

// inGap has the two lines free and keeps them when they meet between the
// points i-1 and i.
func (s *stickSums) inGap(i int) (Stick, bool) {
	lo, hi := s.x[i-1], s.x[i]
	if !(hi > lo) {
		return Stick{}, false
	}
	left, right := s.sum[i], s.sum[len(s.x)].minus(s.sum[i])
	al, bl, rl, sxl, okL := left.line()
	ar, br, rr, sxr, okR := right.line()
	if !okL || !okR || bl == br {
		return Stick{}, false
	}
	at := (al - ar) / (br - bl)
	if at < lo || at > hi {
		return Stick{}, false
	}
	dof := math.Max(1, float64(len(s.x)-4))
	varMean := func(m moments, sxx float64) float64 {
		d := at - m.x/m.n
		return 1/m.n + d*d/sxx
	}
	std := math.Sqrt((rl+rr)/dof*(varMean(left, sxl)+varMean(right, sxr))) / math.Abs(br-bl)
	return s.stick(at, al, bl, ar, br, rl+rr, std), true
}

// onPoint has the break on the point i-1: y = a + b x + c max(0, x - break).
func (s *stickSums) onPoint(i int) (Stick, bool) {
	at := s.x[i-1]
	all, r := s.sum[len(s.x)], s.sum[len(s.x)].minus(s.sum[i])
	h := moments{n: r.n, x: r.x - r.n*at, xx: r.xx - 2*at*r.x + r.n*at*at} // of max(0, x - break)
	hx, hy := r.xx-at*r.x, r.xy-at*r.y
	// Sums about the means of all points, where sum x = sum y = 0.
	hh := h.xx - h.x*h.x/all.n
	det := all.xx*hh - hx*hx
	if !(det > 1e-12*all.xx*h.xx) {
		return Stick{}, false
	}
	b := (all.xy*hh - hy*hx) / det
	c := (hy*all.xx - all.xy*hx) / det
	a := -c * h.x / all.n
	rss := math.Max(0, all.yy-b*all.xy-c*hy)
	return s.stick(at, a, b, a-c*at, b+c, rss, math.NaN()), true
}

// stick puts a fit about the means back into the caller's axes.
func (s *stickSums) stick(at, al, bl, ar, br, rss, std float64) Stick {
	return Stick{
		Break: at + s.mx, BreakStd: std, RSS: rss,
		AL: al + s.my - bl*s.mx, BL: bl, AR: ar + s.my - br*s.mx, BR: br,
	}
}
