package gauge

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Verdict is what all comparisons with a limit say together. Its zero value is
// inconclusive.
type Verdict struct {
	Outcome Outcome
	Chance  float64 // the least of all comparisons that the true value keeps its limit; NaN where none was made
	Checks  []Check
	Why     []string // what stands against a verdict, or against taking it for more than it is
}

// Check is one comparison.
type Check struct {
	What    string // "error, up"
	Series  Series
	Nominal mill.Setting // not given where it is of the whole scale
	Value   estimate.Estimate
	LimitSI float64
	Origin  Origin
	Decision
}

// judge compares all that the limit speaks of.
func (w *work) judge() {
	v := &w.res.Verdict
	v.Chance = math.NaN()
	l := w.res.Limit
	if l.Name == "" {
		v.Why = append(v.Why, "no limit was chosen")
		return
	}
	for _, c := range w.judged() {
		w.judgePoints(c)
		w.judgeShape(c)
	}
	v.conclude(w.gaps())
	if l.Origin == FromMemory || l.HystOrigin == FromMemory {
		v.Why = append(v.Why, w.memory())
	}
}

// judged are the series that count: where friction does not and there is a
// tapped series, that alone.
func (w *work) judged() []Curve {
	if w.res.Limit.TappedOnly {
		for _, c := range w.res.Curves {
			if c.Series == Tapped {
				return []Curve{c}
			}
		}
	}
	return w.res.Curves
}

func (w *work) judgePoints(c Curve) {
	l := w.res.Limit
	for _, a := range c.At {
		tight, loose := l.errorAt(a.Nominal.SI, w.test.Plan.Low.SI, w.res.SpanSI)
		for _, side := range []struct {
			what  string
			value estimate.Estimate
		}{{"error, up", a.Up}, {"error, down", a.Down}} {
			if tight > 0 && side.value.Known() {
				w.check(Check{What: side.what, Series: c.Series, Nominal: a.Nominal, Value: side.value, LimitSI: tight, Origin: l.Origin}, loose)
			}
		}
		if most := l.hysteresis(w.res.SpanSI); most > 0 && a.UpDown.Known() {
			w.check(Check{What: "falling less rising", Series: c.Series, Nominal: a.Nominal, Value: a.UpDown, LimitSI: most, Origin: l.HystOrigin}, most)
		}
		if l.RepeatSI > 0 && a.Repeatability.Known() {
			w.check(Check{What: "repeatability", Series: c.Series, Nominal: a.Nominal, Value: a.Repeatability, LimitSI: l.RepeatSI, Origin: l.Origin}, l.RepeatSI)
		}
	}
}

// judgeShape compares the span of the error curve over the whole range and over
// parts of a turn, rising.
func (w *work) judgeShape(c Curve) {
	l := w.res.Limit
	whole := func(what string, windowSI, limitSI float64) {
		if e := spanOfErrors(c, windowSI); limitSI > 0 && e.Known() {
			w.check(Check{What: what, Series: c.Series, Value: e, LimitSI: limitSI, Origin: l.Origin}, limitSI)
		}
	}
	whole("errors over the whole range", math.Inf(1), l.EntireSI)
	turn := w.test.Instruments.Tested.Revolution.SI
	for _, p := range l.Partial {
		if turn > 0 {
			whole(fmt.Sprintf("errors over %g turn", p.Turns), p.Turns*turn, p.LimitSI)
		}
	}
}

// spanOfErrors is the largest difference of two rising errors no further apart
// than a window.
func spanOfErrors(c Curve, windowSI float64) estimate.Estimate {
	most := estimate.Unknown("no two points so near")
	for i, a := range c.At {
		for _, b := range c.At[:i] {
			if a.Nominal.SI-b.Nominal.SI > windowSI*(1+rounding) || !a.Up.Known() || !b.Up.Known() {
				continue
			}
			most = larger(most, estimate.Estimate{
				Value: math.Abs(a.Up.Value - b.Up.Value), Random: math.Hypot(a.Up.Random, b.Up.Random),
				System: math.Hypot(a.Up.System, b.Up.System), DoF: a.Up.DoF, Method: "largest less smallest error",
			})
		}
	}
	return most
}

// check takes one comparison in. Where two parts of a scale meet, what fails
// only the tighter limit is not decided.
func (w *work) check(c Check, loose float64) {
	c.Decision = w.res.Rule.Decide(c.Value, c.LimitSI)
	if c.Outcome == Fail && w.res.Rule.Decide(c.Value, loose).Outcome != Fail {
		c.Outcome = Undecided
	}
	w.res.Verdict.Checks = append(w.res.Verdict.Checks, c)
}

// conclude puts the comparisons together. One fail is a fail whatever else is
// missing; a pass needs everything.
func (v *Verdict) conclude(gaps []string) {
	count := map[Outcome]int{}
	for _, c := range v.Checks {
		count[c.Outcome]++
		if !(c.Chance >= v.Chance) { // the first one too: Chance is NaN before it
			v.Chance = c.Chance
		}
	}
	v.Why = append(v.Why, gaps...)
	switch {
	case count[Fail] > 0:
		v.Outcome = Fail
	case len(gaps) > 0 || count[Inconclusive] > 0 || len(v.Checks) == 0:
		v.Outcome = Inconclusive
	case count[Undecided] > 0:
		v.Outcome = Undecided
	default:
		v.Outcome = Pass
	}
}

// gaps are what a pass may not rest on.
func (w *work) gaps() []string {
	var gaps []string
	add := func(when bool, format string, args ...any) {
		if when {
			gaps = append(gaps, fmt.Sprintf(format, args...))
		}
	}
	l, n := w.res.Limit, len(w.test.Plan.Points)
	add(w.res.Missing > 0, "%d of the plan's points were not captured", w.res.Missing)
	add(n < l.LeastPoints, "%d points where %s asks for at least %d", n, l.Name, l.LeastPoints)
	add(w.referenceFrom() == "not known", "nothing is known of the error of the reference")
	for _, c := range w.res.Curves {
		add(!c.Scatter.Known(), "how a reading scatters is not known: %s", c.Scatter.Why)
	}
	add(l.hysteresis(w.res.SpanSI) > 0 && !w.res.UpDown.Known(), "the limit speaks of falling against rising, and the test only rose")
	add(l.RepeatSI > 0 && !w.res.Curves[0].At[0].Repeatability.Known(), "the limit speaks of repeatability, and each point was read once")
	if b := w.test.Instruments.Reference.Bench; b != nil {
		add(b.Verdict == Fail.String(), "the reference itself failed its bench test of %s", b.Checked)
	}
	return gaps
}

// memory says which limits are from memory.
func (w *work) memory() string {
	what := "the limits of " + w.res.Limit.Name
	if w.res.Limit.Origin != FromMemory {
		what = "the limits of falling against rising of " + w.res.Limit.Name
	}
	return what + " are from memory, not confirmed in a copy of the standard: look them up and write them as [[gauge_limit]] in mill.toml"
}
