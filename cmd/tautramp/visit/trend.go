package visit

import (
	"math"

	"tautramp/analyze/estimate"
)

// trendSlots is how many means a trend is made of.
const trendSlots = 16

// trend is the recent course of a series, in bounded memory: means over equal
// slots of the last span seconds.
type trend struct {
	span  float64
	slots []slot

	rate, std float64 // what slope returns, once judged
	judged    bool
}

// slot is a sum of n points that began at from.
type slot struct {
	from, t, x float64
	n          int
}

func (s *trend) add(t, x float64) {
	width := s.span / trendSlots
	if n := len(s.slots); n > 0 && t < s.slots[n-1].from+width {
		last := &s.slots[n-1]
		last.t, last.x, last.n = last.t+t, last.x+x, last.n+1
		return
	}
	old := 0
	for old < len(s.slots) && s.slots[old].from < t-s.span {
		old++
	}
	s.slots = append(s.slots[:copy(s.slots, s.slots[old:])], slot{from: t, t: t, x: x, n: 1})
	s.judged = false
}

func (s *trend) reset() { s.slots, s.judged = s.slots[:0], false }

// slope is the rate per second of the straight line through the means, and its
// standard uncertainty; NaN before half of the span is filled. It changes with
// each new slot.
func (s *trend) slope() (rate, std float64) {
	if !s.judged {
		s.rate, s.std = s.fit()
		s.judged = true
	}
	return s.rate, s.std
}

func (s *trend) fit() (rate, std float64) {
	n := len(s.slots)
	if n < 3 || s.slots[n-1].from-s.slots[0].from < s.span/2 {
		return math.NaN(), math.NaN()
	}
	x, y := make([]float64, n), make([]float64, n)
	for i, slot := range s.slots {
		x[i], y[i] = slot.t/float64(slot.n), slot.x/float64(slot.n)
	}
	line, err := estimate.FitLine(x, y)
	if err != nil {
		return math.NaN(), math.NaN()
	}
	return line.B, math.Sqrt(line.VarB)
}

// recent keeps the last values of a series.
type recent struct {
	most   int
	values []float64
}

func (r *recent) add(x float64) {
	if len(r.values) == r.most {
		r.values = r.values[:copy(r.values, r.values[1:])]
	}
	r.values = append(r.values, x)
}

func (r *recent) median() float64 { return estimate.Median(r.values) }
