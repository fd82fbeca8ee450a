package gauge

import (
	"fmt"
	"math"
	"strings"

	"tautramp/acquire/mill"
)

// Origin says how well a limit is known.
type Origin string

// The origins. The zero value must not be asserted.
const (
	FromStandard Origin = "read"            // read in a copy of the standard or a reprint of its table
	FromMemory   Origin = "from memory"     // not confirmed: replace it in mill.toml once it was looked up
	FromUser     Origin = "mill.toml"       // written down by the user, with his source
	Judgement    Origin = "judgement"       // this program's own
	FromPlate    Origin = "limit of itself" // the instrument's own limit in mill.toml
)

// Limit is what an instrument is judged by. Shares are of the span; a limit of
// zero is none.
type Limit struct {
	Name            string
	Dim             mill.Dim   // of the limits in SI; "" where all are shares
	Shares          [3]float64 // of error: lower quarter, middle half and upper quarter of the scale
	ErrorSI         float64    // of error, in place of Shares
	HysteresisShare float64
	HysteresisSI    float64
	RepeatSI        float64     // spread of like readings
	EntireSI        float64     // from the lowest to the highest error over the whole range
	Partial         []PartialSI // from the lowest to the highest error over a part of a turn
	TappedOnly      bool        // friction does not count: where there is a tapped series, it alone is judged
	LeastPoints     int
	Origin          Origin // of the limits of error
	HystOrigin      Origin // of the limit of hysteresis; "" where there is none
	Source          string
}

// PartialSI is a limit over a part of one turn of a pointer.
type PartialSI struct {
	Turns   float64
	LimitSI float64
}

// errorAt is the limit of error at a value, as a size in SI; where two parts
// of the scale meet, tight and loose are theirs.
func (l Limit) errorAt(si, lowSI, spanSI float64) (tight, loose float64) {
	if l.ErrorSI > 0 {
		return l.ErrorSI, l.ErrorSI
	}
	where := (si - lowSI) / spanSI
	edge := func(v float64) bool { return math.Abs(where-v) < rounding }
	lower, middle, upper := l.Shares[0]*spanSI, l.Shares[1]*spanSI, l.Shares[2]*spanSI
	switch {
	case edge(0.25):
		return math.Min(lower, middle), math.Max(lower, middle)
	case edge(0.75):
		return math.Min(middle, upper), math.Max(middle, upper)
	case where < 0.25:
		return lower, lower
	case where > 0.75:
		return upper, upper
	}
	return middle, middle
}

func (l Limit) hysteresis(spanSI float64) float64 {
	if l.HysteresisSI > 0 {
		return l.HysteresisSI
	}
	return l.HysteresisShare * spanSI
}

// least is the smallest limit of error anywhere on the scale, SI.
func (l Limit) least(spanSI float64) float64 {
	switch {
	case l.ErrorSI > 0:
		return l.ErrorSI
	case l.EntireSI > 0:
		return l.EntireSI
	}
	return spanSI * math.Min(l.Shares[0], math.Min(l.Shares[1], l.Shares[2]))
}

// FindLimit finds a limit by its name, in any case: the user's own first, then
// the built-in ones. The error is a mill.ErrUnknownName.
func FindLimit(name string, own []mill.GaugeLimit) (Limit, error) {
	for _, g := range own {
		if strings.EqualFold(g.Name, name) {
			return ownLimit(g), nil
		}
	}
	for _, l := range Limits() {
		if strings.EqualFold(l.Name, name) {
			return l, nil
		}
	}
	return Limit{}, fmt.Errorf("%w: no limit %q; known: %s", mill.ErrUnknownName, name, strings.Join(limitNames(own), "; "))
}

func limitNames(own []mill.GaugeLimit) []string {
	var names []string
	for _, g := range own {
		names = append(names, g.Name)
	}
	for _, l := range Limits() {
		names = append(names, l.Name)
	}
	return names
}

func ownLimit(g mill.GaugeLimit) Limit {
	l := Limit{
		Name: g.Name, Shares: g.ErrorShare, ErrorSI: g.Error.SI,
		HysteresisShare: g.HysteresisShare, HysteresisSI: g.Hysteresis.SI, RepeatSI: g.Repeatability.SI,
		Origin: FromUser, Source: g.Source,
	}
	for _, q := range []mill.Setting{g.Error, g.Hysteresis, g.Repeatability} {
		if q.Given() {
			l.Dim = q.Unit.Dim
		}
	}
	if l.HysteresisShare > 0 || l.HysteresisSI > 0 {
		l.HystOrigin = FromUser
	}
	return l
}

// plateLimit is an instrument's own limit of error.
func plateLimit(i mill.Instrument) Limit {
	return Limit{Name: "its own limit, " + i.Limit.Entered, Dim: i.Limit.Unit.Dim, ErrorSI: i.Limit.SI, Origin: FromPlate, Source: "limit in mill.toml"}
}
