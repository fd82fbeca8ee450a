package gauge

import (
	"fmt"

	"tautramp/acquire/mill"
)

// Limits are the built-in limits, each with its origin.
func Limits() []Limit {
	all := en837()
	all = append(all, asmeB40()...)
	all = append(all, jisB7503()...)
	return append(all, Limit{
		Name: "band indicator", Dim: mill.DimLength, ErrorSI: 3e-6, HysteresisSI: 2e-6, Origin: Judgement, HystOrigin: Judgement,
		Source: "what an indicator on a band of 20 in needs so that it does not lead the budget",
	})
}

// en837 has the classes of EN 837-1:1996 Table 11: the limit is a share of the
// span, the same over the whole scale. At least 10 points for the classes up to
// 0.6 and 5 above are a maker's test instructions that cite EN 837-1 and -3.
// That falling less rising may not exceed the limit either is from memory.
func en837() []Limit {
	var all []Limit
	for _, c := range []struct {
		class   string
		percent float64
		points  int
	}{{"0.1", 0.1, 10}, {"0.25", 0.25, 10}, {"0.6", 0.6, 10}, {"1", 1, 5}, {"1.6", 1.6, 5}, {"2.5", 2.5, 5}, {"4", 4, 5}} {
		s := c.percent / 100
		all = append(all, Limit{
			Name: "EN 837-1 class " + c.class, Shares: [3]float64{s, s, s}, HysteresisShare: s, LeastPoints: c.points,
			Origin: FromStandard, HystOrigin: FromMemory, Source: "EN 837-1:1996 Table 11",
		})
	}
	return all
}

// asmeB40 has the grades of ASME B40.100: shares of the span for the lower
// quarter, the middle half and the upper quarter of the scale. Accuracy counts
// hysteresis and repeatability and not friction. Where exactly the parts meet
// was not read: at 25 % and 75 % only the tighter limit passes and only the
// looser fails.
func asmeB40() []Limit {
	var all []Limit
	for _, g := range []struct {
		grade   string
		percent [3]float64
		origin  Origin
	}{
		{"4A", [3]float64{0.1, 0.1, 0.1}, FromStandard},
		{"3A", [3]float64{0.25, 0.25, 0.25}, FromMemory},
		{"2A", [3]float64{0.5, 0.5, 0.5}, FromMemory},
		{"1A", [3]float64{1, 1, 1}, FromMemory},
		{"A", [3]float64{2, 1, 2}, FromStandard},
		{"B", [3]float64{3, 2, 3}, FromMemory},
		{"C", [3]float64{4, 3, 4}, FromMemory},
		{"D", [3]float64{5, 5, 5}, FromStandard},
	} {
		l := Limit{Name: "ASME B40.100 grade " + g.grade, TappedOnly: true, Origin: g.origin, Source: "ASME B40.100 accuracy grades"}
		for i, p := range g.percent {
			l.Shares[i] = p / 100
		}
		all = append(all, l)
	}
	return all
}

// jisB7503 has the rows of JIS B 7503:2011 for dial indicators, as read from a
// reprinted table. Lengths in micrometres: retrace, repeatability, a tenth of a
// turn, half a turn, one turn, the entire range. That the errors over a part are
// counted from the lowest to the highest within it is from memory.
func jisB7503() []Limit {
	var all []Limit
	for _, r := range []struct {
		row string
		um  [6]float64
	}{
		{"0.01 mm, range to 1 mm", [6]float64{3, 3, 5, 8, 8, 8}},
		{"0.01 mm, range 1 to 3 mm", [6]float64{3, 3, 5, 8, 9, 10}},
		{"0.01 mm, range 3 to 5 mm", [6]float64{3, 3, 5, 9, 10, 12}},
		{"0.01 mm, range 5 to 10 mm", [6]float64{3, 3, 5, 9, 10, 15}},
		{"0.01 mm, range 10 to 20 mm", [6]float64{5, 4, 8, 10, 15, 25}},
		{"0.01 mm, range 20 to 30 mm", [6]float64{7, 5, 10, 12, 15, 30}},
		{"0.01 mm, range 30 to 50 mm", [6]float64{8, 5, 10, 12, 15, 40}},
		{"0.01 mm, range 50 to 100 mm", [6]float64{9, 5, 12, 17, 20, 50}},
		{"0.005 mm, range to 5 mm", [6]float64{3, 3, 5, 9, 10, 12}},
		{"0.001 mm, range to 1 mm", [6]float64{2, 0.5, 2, 3.5, 4, 5}},
		{"0.001 mm, range 1 to 2 mm", [6]float64{2, 0.5, 2, 4, 5, 7}},
		{"0.001 mm, range 2 to 5 mm", [6]float64{3, 1, 3.5, 5, 6, 10}},
		{"small, 0.01 mm, range to 1 mm", [6]float64{4, 3, 8, 11, 12, 15}},
		{"small, 0.01 mm, range 1 to 3 mm", [6]float64{4, 3, 8, 11, 12, 16}},
		{"small, 0.01 mm, range 3 to 5 mm", [6]float64{4, 3, 8, 12, 14, 18}},
		{"small, 0.01 mm, range 5 to 10 mm", [6]float64{5, 3, 9, 12, 14, 20}},
		{"small, 0.005 mm, range to 5 mm", [6]float64{3.5, 3, 6, 9, 10, 12}},
		{"small, 0.002 mm, range to 1 mm", [6]float64{2.5, 1, 2.5, 4.5, 5, 6}},
		{"small, 0.001 mm, range to 1 mm", [6]float64{2, 1, 2.5, 4, 4.5, 5}},
	} {
		um := func(i int) float64 { return r.um[i] * 1e-6 }
		all = append(all, Limit{
			Name:         fmt.Sprintf("JIS B 7503:2011, %s", r.row),
			Dim:          mill.DimLength,
			HysteresisSI: um(0), RepeatSI: um(1), EntireSI: um(5),
			Partial: []PartialSI{{0.1, um(2)}, {0.5, um(3)}, {1, um(4)}},
			Origin:  FromStandard, HystOrigin: FromStandard, Source: "JIS B 7503:2011, reprinted table",
		})
	}
	return all
}
