package visit

import (
	"fmt"
	"math"
	"strconv"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
)

// site is what the profile lets us expect. Settings are in the SI unit of
// what the tensioner is set by; a figure that the profile does not give is NaN.
type site struct {
	tensioner mill.Tensioner

	limit  float64   // as a setting that rises with the load
	slack  float64   // share of the limit below which a resting band may be slack, where the weight is not known
	unit   mill.Unit // in which the limit was entered: the one that the people here use
	words  words
	target float64 // band stress wanted, Pa
	full   float64 // setting for it without friction
	half   float64 // setting for half of it without friction
	slope  float64 // extension per setting without friction, m per SI
	lift   float64 // setting that lifts the weight alone, without friction

	modulus float64
	gauge   float64 // L, m
	stepped bool    // the setting is known at presses alone
}

// words are what people do to one kind of tensioner.
type words struct{ name, raise, lower, toSlack, release string }

func wordsOf(by mill.SetBy) words {
	if by == mill.SetByPressure {
		return words{"gauge", "pump up slowly", "open the valve slowly", ", all the way until the band is slack, then rest", "release the pressure slowly"}
	}
	return words{"setting", "tighten slowly", "back it off slowly", ", until the band is slack and rest, or declare the lower turn", "back it off slowly"}
}

// newSite works out the expected figures:
//
//	p A* = F + W, F = 2 sigma A_b, sigma = E e / L
//
// so that de/dp = A* L / (2 A_b E).
func newSite(h recording.Header) (site, error) {
	if h.Parsed == nil {
		return site{}, fmt.Errorf("start a visit: the profile was not read")
	}
	t, err := h.Parsed.FindTensioner(h.Tensioner)
	if err != nil {
		return site{}, fmt.Errorf("start a visit: %w", err)
	}
	if t.SetBy == mill.SetBySpring && t.Spring == nil {
		return site{}, fmt.Errorf("start a visit: %w", &mill.ProfileError{Key: "tensioner.set_by",
			Problem: fmt.Sprintf("tensioner %s is set by spring length, and nothing says whether that falls or rises with the load: its limit might not stop anybody", t.Name),
			Hint:    "write [tensioner.spring] with under_load and free_length"})
	}
	b, err := h.Parsed.FindBand(h.Band)
	if err != nil {
		return site{}, fmt.Errorf("start a visit: %w", err)
	}
	nan := math.NaN()
	s := site{tensioner: t, limit: t.LimitSI(), slack: slackOf(t.SetBy), unit: t.SettingLimit.Unit, words: wordsOf(t.SetBy),
		target: orNaN(b.Target.SI), full: nan, half: nan, slope: nan, lift: nan,
		modulus: b.Modulus.SI, gauge: h.Parsed.Rig.GaugeLength.SI,
		stepped: h.Presses.As == recording.PressStep}
	area, net := t.GeometryAreaM2(), b.NetAreaM2()
	if !(area > 0) {
		return s, nil
	}
	s.slope = area * s.gauge / (2 * net * s.modulus)
	s.full = (2*s.target*net + t.LiftedWeight.SI) / area
	s.half = (s.target*net + t.LiftedWeight.SI) / area
	if t.LiftedWeight.SI > 0 {
		s.lift = t.LiftedWeight.SI / area
	}
	return s, nil
}

func orNaN(v float64) float64 {
	if v > 0 {
		return v
	}
	return math.NaN()
}

// orElse is v, or the other where v is not known.
func orElse(v, other float64) float64 {
	if math.IsNaN(v) {
		return other
	}
	return v
}

// figure writes a setting in the unit of the limit, to three digits.
func (s site) figure(si float64) string {
	v := s.unit.FromSI(si)
	decimals := 0
	if a := math.Abs(v); a > 0 && a < 100 {
		decimals = 2 - int(math.Floor(math.Log10(a)))
	}
	return strconv.FormatFloat(v, 'f', min(max(decimals, 0), 6), 64) + " " + s.unit.Name
}
