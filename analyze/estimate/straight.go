package estimate

import (
	"errors"
	"math"
)

// StraightAbove is the x from which on y follows one straight line to the end
// of the data: seating, slack or a rounded reversal at the low end is left out.
// A broken stick is fitted, and what lies below its break is cut off, as long
// as the two lines differ by more than chance, allowing for serial dependence
// (a penalty of 3 ln n on the gain in log likelihood), and by more than 0.2 %
// of the range of y at the low end. At least the upper third of the range is
// kept; ok is false when what is kept is still bent.
//
// x and y are in the order in which they were read. Errors as FitStick.
func StraightAbove(x, y []float64) (from float64, ok bool, err error) {
	return straightAbove(x, y, cutting{penalty: breakPenalty, share: mostCut})
}

// cutting says what is cut: nothing where the broken line leaves the one line
// through all by less than worth, or gains less than penalty ln n in log likelihood,
// and at most a share of the range.
type cutting struct{ worth, penalty, share float64 }

// What a break costs in log likelihood, in ln n: it was looked for everywhere.
const breakPenalty = 3.0

func straightAbove(x, y []float64, c cutting) (from float64, ok bool, err error) {
	const (
		worthCutting = 0.002
		mostCuts     = 12
	)
	if err := checkPoints(x, y, nil); err != nil {
		return 0, false, err
	}
	from = Quantile(x, 0)
	highest := from + c.share*(Quantile(x, 1)-from)
	rangeY := Quantile(y, 1) - Quantile(y, 0)
	for cuts := 0; ; cuts++ {
		s, err := fitStickBelow(x, y, highest)
		if errors.Is(err, ErrNoSpread) && cuts > 0 {
			return from, false, nil // no room for a further break
		}
		if err != nil {
			return from, cuts > 0, err
		}
		gap := math.Abs(s.Left(from) - s.Right(from))
		if gap < worthCutting*rangeY || s.leaves(x, y) < c.worth || !s.betterThanLine(x, y, c.penalty) {
			return from, !bent(x, y), nil
		}
		if cuts == mostCuts {
			return from, false, nil
		}
		from = s.Break
		x, y = above(x, y, from)
	}
}

// bent reports whether points that pass for a line are bent beyond chance: a
// broken stick leaves its chord by more than 0.5 % of the range of y.
func bent(x, y []float64) bool {
	const bendShare = 0.005
	s, err := FitStick(x, y)
	if err != nil {
		return false
	}
	low, high := Quantile(x, 0), Quantile(x, 1)
	leaves := math.Abs(s.BR-s.BL) * (s.Break - low) * (high - s.Break) / (high - low)
	return leaves > bendShare*(Quantile(y, 1)-Quantile(y, 0)) && s.betterThanLine(x, y, breakPenalty)
}

// leaves is how far the stick leaves the line through all at most.
func (s Stick) leaves(x, y []float64) float64 {
	l, err := FitLine(x, y)
	if err != nil {
		return 0
	}
	low, high := Quantile(x, 0), Quantile(x, 1)
	off := func(x, y float64) float64 { return math.Abs(y - l.A - l.B*x) }
	return math.Max(off(low, s.Left(low)), math.Max(off(s.Break, s.Right(s.Break)), off(high, s.Right(high))))
}

// betterThanLine reports whether the stick's gain over one line is beyond
// chance.
func (s Stick) betterThanLine(x, y []float64, penalty float64) bool {
	l, err := FitLine(x, y)
	if err != nil {
		return false
	}
	rest := make([]float64, len(x))
	for i := range x {
		at := s.Left(x[i])
		if x[i] > s.Break {
			at = s.Right(x[i])
		}
		rest[i] = y[i] - at
	}
	n := float64(len(x)) / Dependence(rest)
	one := l.ResidualSD * l.ResidualSD * l.DoF
	gain := n / 2 * math.Log(one/s.RSS)
	return gain > penalty*math.Log(math.Max(n, 3))
}

func above(x, y []float64, from float64) (ax, ay []float64) {
	for i := range x {
		if x[i] >= from {
			ax, ay = append(ax, x[i]), append(ay, y[i])
		}
	}
	return ax, ay
}
