package visit

import (
	"math"

	"tautramp/analyze/estimate"
)

// A slope must be near what the geometry gives before the band is loaded higher.
const (
	slopeLow    = 0.7
	slopeHigh   = 1.1
	slopeFrom   = 0.9 // of the setting for half of the target
	slopePoints = 6
	slopeSpan   = 0.10 // of the limit
)

// slopeCheck measures the slope of the rise.
type slopeCheck struct {
	points []state
	judged bool   // in this rise
	advice string // what is wrong; "" when nothing is
	fitted straight
}

// straight is the last rise that fitted: extension since the zero over setting.
// The zero value is none.
type straight struct{ a, b float64 }

// settingAt is where the line has an extension; NaN without a line.
func (s straight) settingAt(stretchM float64) float64 {
	if !(s.b > 0) {
		return math.NaN()
	}
	return (stretchM - s.a) / s.b
}

// learnSlope collects the rise where it is straight: above the guard's grace.
func (k *tracker) learnSlope() {
	s := &k.check
	if k.cycle.top < k.guard.grace || !k.cycle.moved {
		return
	}
	if n := len(s.points); n == 0 || k.setting > s.points[n-1].p+spacing*k.site.limit {
		s.points = append(s.points, state{k.setting, k.stretch})
	}
	if !s.judged && k.cycle.top > slopeFrom*k.site.half {
		k.compareSlope()
	}
}

// line is that through the points so far, m over SI.
func (s *slopeCheck) line(limit float64) (straight, bool) {
	n := len(s.points)
	if n < slopePoints || s.points[n-1].p-s.points[0].p < slopeSpan*limit {
		return straight{}, false
	}
	x, y := make([]float64, n), make([]float64, n)
	for i, p := range s.points {
		x[i], y[i] = p.p, p.e
	}
	line, err := estimate.FitLine(x, y)
	return straight{line.A, line.B}, err == nil
}

// compareSlope judges this rise's slope against the geometry's, once it can be
// told.
func (k *tracker) compareSlope() {
	line, ok := k.check.line(k.site.limit)
	if !ok || math.IsNaN(k.site.slope) {
		return
	}
	k.check.judged, k.check.advice = true, ""
	if ratio := line.b / k.site.slope; ratio < slopeLow || ratio > slopeHigh {
		k.check.advice = k.site.slopeAdvice(ratio)
	}
}

// judgeSlope is at the end of a cycle: the next one expects this one's slope,
// kept near the geometry's, so that a bad first cycle cannot disarm the guard.
func (k *tracker) judgeSlope() {
	k.compareSlope()
	line, ok := k.check.line(k.site.limit)
	if !ok || k.guard.raised {
		return
	}
	if k.check.advice == "" && !math.IsNaN(k.zero.value) {
		k.check.fitted = straight{line.a - k.zero.value, line.b}
	}
	b := line.b
	if g := k.site.slope; !math.IsNaN(g) {
		b = min(max(b, slopeLow*g), slopeHigh*g)
	}
	k.guard.expected = b
}
