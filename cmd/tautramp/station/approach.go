package station

import (
	"math"

	"tautramp/analyze/gauge"
)

// approach watches from which side a point is come to.
type approach struct {
	sign    float64 // +1 going up, -1 going down; 0 before a leg
	extreme float64 // farthest that was reached on this leg, times sign
}

func signOf(d gauge.Direction) float64 {
	if d == gauge.Down {
		return -1
	}
	return 1
}

// follow takes where things stand for a point that is to be come to. Going
// back beyond the turning place makes good what was overshot.
func (a *approach) follow(s step, x float64) {
	if sign := signOf(s.target.Direction); a.sign != sign {
		a.sign, a.extreme = sign, sign*x
	}
	if back, ok := s.backTo(); ok && a.sign*x <= a.sign*back {
		a.extreme = a.sign * x
	}
	a.extreme = math.Max(a.extreme, a.sign*x)
}

// past is how far beyond x things have been on this leg.
func (a *approach) past(x float64) float64 { return a.extreme - a.sign*x }

// backTo is how far to go back before a point is approached again: halfway to
// the point before it, or by as much where it is the first. ok is false for a
// point at the end of everything, which can be come to from one side only.
func (s step) backTo() (float64, bool) {
	from := s.from
	if math.IsNaN(from) {
		from = s.target.Nominal.SI - signOf(s.target.Direction)*s.near
	}
	if math.IsInf(from, 0) {
		return 0, false
	}
	return (s.target.Nominal.SI + from) / 2, true
}
