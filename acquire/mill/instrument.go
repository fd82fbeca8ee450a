package mill

import "math"

// Instrument is one sensor or gauge as certified, and as the bench found it.
type Instrument struct {
	Name       string
	Serial     string
	Measures   string  // "setting", "extension" or "reference"
	Limit      Setting // largest error by its certificate or class; standard uncertainty = limit / sqrt 3
	Due        string  // next check, YYYY-MM-DD
	Low        Setting // range_low; not given: zero
	High       Setting // range_high
	Division   Setting // of a dial, or the least count; optional
	Revolution Length  // one turn of the pointer of a dial indicator; optional
	Bench      *Bench  // [instrument.bench]; nil: never on the bench
}

// Bench is what a bench test found of an instrument.
type Bench struct {
	Checked    string       // YYYY-MM-DD
	Verdict    string       // "pass", "fail", "undecided" or "inconclusive"
	Limit      string       // judged_by: name of the limit
	Rule       string       // name of the decision rule
	Seal       string       // of the recording of the test; optional
	Hysteresis Setting      // largest difference of falling less rising; optional
	Points     []BenchPoint // [[instrument.bench.point]], rising; empty: no correction is known
}

// BenchPoint is the correction at one point of the scale.
type BenchPoint struct {
	At          Setting // as indicated
	Rising      Setting // to be added to a reading that was approached from below
	Falling     Setting // from above; not given: as rising
	Uncertainty Setting // of the correction: 95 %, k = 2
}

// Approach is from which side a reading was come to. The zero value is not
// known.
type Approach int

// The approaches.
const (
	FromEither Approach = iota
	FromBelow
	FromAbove
)

// Correction is what to add to a reading, and the standard uncertainty of it;
// SI.
type Correction struct {
	Add, Std float64
	Outside  bool // the reading lies beyond the points that were tested
}

// CorrectionAt is the correction of a reading in SI. Between two points it lies
// on the straight line through theirs, and so does its uncertainty, with an
// allowance for the bend between points: a quarter of how far the nearest inner
// points lie off the chord of their neighbours, rectangular. Beyond the ends
// the last correction holds with twice its uncertainty. From neither side alone
// it is the mean of both, and half their difference, rectangular, is doubt
// besides. ok is false where the bench gives no correction.
func (b *Bench) CorrectionAt(si float64, a Approach) (c Correction, ok bool) {
	if b == nil || len(b.Points) == 0 {
		return c, false
	}
	low, high, share := b.around(si)
	mix := func(of func(BenchPoint) float64) float64 {
		return of(b.Points[low]) + share*(of(b.Points[high])-of(b.Points[low]))
	}
	c.Add = mix(func(p BenchPoint) float64 { return p.add(a) })
	parts := []float64{mix(func(p BenchPoint) float64 { return p.Uncertainty.SI / 2 })}
	if low != high {
		parts = append(parts, math.Max(b.bend(low, a), b.bend(high, a))/4/math.Sqrt(3))
	}
	if a == FromEither {
		parts = append(parts, mix(func(p BenchPoint) float64 { return math.Abs(p.add(FromAbove)-p.add(FromBelow)) / 2 })/math.Sqrt(3))
	}
	for _, v := range parts {
		c.Std = math.Hypot(c.Std, v)
	}
	first, last := b.Points[0].At.SI, b.Points[len(b.Points)-1].At.SI
	if rounding := 1e-9 * (last - first); si < first-rounding || si > last+rounding {
		c.Outside, c.Std = true, 2*c.Std
	}
	return c, true
}

// around finds the points on both sides of a reading, the same twice at a point
// and beyond the ends, and how far it lies from the lower to the higher.
func (b *Bench) around(si float64) (low, high int, share float64) {
	last := len(b.Points) - 1
	for i, p := range b.Points {
		switch {
		case si == p.At.SI || i == 0 && si < p.At.SI || i == last && si > p.At.SI:
			return i, i, 0
		case si < p.At.SI:
			below := b.Points[i-1].At.SI
			return i - 1, i, (si - below) / (p.At.SI - below)
		}
	}
	return last, last, 0 // not a number
}

// bend is how far a point lies off the chord of its neighbours; 0 at the ends.
func (b *Bench) bend(i int, a Approach) float64 {
	if i == 0 || i == len(b.Points)-1 {
		return 0
	}
	l, m, r := b.Points[i-1], b.Points[i], b.Points[i+1]
	share := (m.At.SI - l.At.SI) / (r.At.SI - l.At.SI)
	return math.Abs(m.add(a) - l.add(a) - share*(r.add(a)-l.add(a)))
}

func (p BenchPoint) add(a Approach) float64 {
	falling := p.Falling.SI
	if !p.Falling.Given() {
		falling = p.Rising.SI
	}
	switch a {
	case FromBelow:
		return p.Rising.SI
	case FromAbove:
		return falling
	}
	return (p.Rising.SI + falling) / 2
}

func readInstrument(t *table) Instrument {
	defer t.rest()
	i := Instrument{
		Name:     t.need("name", "write what it is called in the shop"),
		Serial:   t.text("serial"),
		Measures: oneOf(t, "measures", MeasuresSetting, MeasuresExtension, MeasuresReference),
	}
	if !t.has("measures") {
		t.faults.add(t.at("measures"), "write setting, extension or reference", missing)
	}
	dims := []Dim{DimLength}
	if i.Measures != MeasuresExtension {
		dims = []Dim{DimPressure, DimTorque, DimAngle, DimLength}
	}
	i.Limit = Setting{t.quantity("limit", dims...)}
	i.Due = t.date("due")
	i.Low, i.High = Setting{t.signed("range_low", dims...)}, Setting{t.quantity("range_high", dims...)}
	if i.High.Given() && i.High.SI <= i.Low.SI {
		t.faults.add(t.at("range_high"), "the range rises from range_low to range_high", "%s is not above %s", i.High, i.Low)
	}
	i.Division = Setting{t.quantity("division", dims...)}
	i.Revolution = Length{t.quantity("revolution", DimLength)}
	if b, ok := t.one("bench"); ok {
		i.Bench = readBench(b, dims)
	}
	return i
}

func readBench(t *table, dims []Dim) *Bench {
	defer t.rest()
	b := &Bench{
		Checked: t.date("checked"),
		Verdict: oneOf(t, "verdict", "pass", "fail", "undecided", "inconclusive"),
		Limit:   t.text("judged_by"), Rule: t.text("rule"), Seal: t.text("recording"),
		Hysteresis: Setting{t.signed("hysteresis", dims...)},
	}
	if !t.has("checked") {
		t.faults.add(t.at("checked"), "write the day of the bench test: year-month-day", missing)
	}
	if !t.has("verdict") {
		t.faults.add(t.at("verdict"), "write pass, fail, undecided or inconclusive", missing)
	}
	for _, e := range t.list("point") {
		b.Points = append(b.Points, readBenchPoint(e, b.Points, dims))
	}
	return b
}

// readBenchPoint takes one point; before are those above it in the file.
func readBenchPoint(t *table, before []BenchPoint, dims []Dim) BenchPoint {
	defer t.rest()
	p := BenchPoint{
		At:     Setting{t.signed("at", dims...)},
		Rising: Setting{t.signed("rising", dims...)}, Falling: Setting{t.signed("falling", dims...)},
		Uncertainty: Setting{t.needQuantity("uncertainty", "write the doubt about the correction: 95 %, k = 2", dims...)},
	}
	for _, k := range []struct {
		key string
		q   Setting
	}{{"at", p.At}, {"rising", p.Rising}, {"falling", p.Falling}} {
		if !t.has(k.key) && k.key != "falling" {
			t.faults.add(t.at(k.key), "write the indicated value, and the correction to be added to it", missing)
		} else if k.q.Given() && p.Uncertainty.Given() && k.q.Unit.Dim != p.Uncertainty.Unit.Dim {
			t.faults.add(t.at(k.key), "one instrument has one quantity", "%s is of another kind than %s", k.q, p.Uncertainty)
		}
	}
	if n := len(before); n > 0 && p.At.Given() && before[n-1].At.Given() && p.At.SI <= before[n-1].At.SI {
		t.faults.add(t.at("at"), "write the points rising", "%s does not rise above %s", p.At, before[n-1].At)
	}
	return p
}
