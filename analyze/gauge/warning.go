package gauge

import (
	"fmt"
	"math"
	"time"
)

// warnings says what the figures do not, and lists what was not checked.
func (w *work) warnings() {
	r, t := w.res, w.test
	add := func(when bool, code, format string, args ...any) {
		if when {
			r.Warnings = append(r.Warnings, Warning{code, fmt.Sprintf(format, args...)})
		}
	}
	add(t.Conditions.Simulated, "simulated", "What was measured here is made up by a simulated bench: no instrument may be judged by it.")
	add(r.Missing > 0, "incomplete", "%d of %d points were not captured.", r.Missing, len(t.Plan.Targets()))
	day, err := time.Parse(time.DateOnly, t.Conditions.Day)
	add(err == nil && t.Instruments.Reference.OverdueOn(day), "reference-overdue", "The check of the reference was due %s, before this test.", t.Instruments.Reference.Due)
	add(w.referenceFrom() == "not known", "reference-unknown", "Nothing is known of the error of the reference: it is in no interval.")
	add(t.Plan.ReferenceStreams() && t.Instruments.ReferenceCountSI == 0, "reference-count", "The least count of the reference is not known.")
	add(t.Instruments.TestedCountSI == 0, "tested-count", "How finely the tested instrument can be read is not known: it is in no interval.")
	add(!w.zeroTaken(), "no-zero", "The zero was not read both before and after.")
	add(w.warm(), "warm", "The test was %.0f K away from 20 degrees C: a Bourdon tube may move by about 0.04 %% of its span for each.", w.awayK())
	add(r.Flow.Pairs < 3 && t.Plan.Down, "few-pairs", "43 CFR 3175.135 asks for three rises and falls; there were %d.", r.Flow.Pairs)
	w.notChecked()
}

func (w *work) zeroTaken() bool { return w.largestZeroShift().Known() }

// awayK is how far from the reference temperature of 20 degrees Celsius.
func (w *work) awayK() float64 { return math.Abs(w.test.Conditions.Temperature.Value - 20) }

// warm tells whether temperature may have moved a dial gauge by more than a
// quarter of its limit: 0.04 % of span per kelvin, as published test
// instructions for EN 837-1 restate it.
func (w *work) warm() bool {
	const perK = 0.0004
	least := w.res.Limit.least(w.res.SpanSI)
	return w.test.Plan.Kind == Dial && w.test.Conditions.Temperature.Known() && least > 0 && w.awayK()*perK*w.res.SpanSI > referenceShare*least
}

func (w *work) notChecked() {
	r, t := w.res, w.test
	add := func(when bool, text string) {
		if when {
			r.NotChecked = append(r.NotChecked, text)
		}
	}
	dial := t.Plan.Kind == Dial
	add(true, "how it drifts until the next check")
	add(!t.Conditions.Temperature.Known(), "temperature: nothing measured it")
	add(t.Conditions.Temperature.Known(), "its change with temperature: one temperature only")
	add(!r.DeadBand.Known(), "the dead band apart from hysteresis")
	add(dial && len(t.Plan.Series) < 2, "what a tap moves")
	add(dial, "what tilting moves")
	add(dial && !t.Conditions.Height.Given(), "the height between gauge and reference: taken as level")
	add(t.Plan.Runs < 2, "what mounting it anew moves")
	add(!t.Plan.Down, "hysteresis: the test only rose")
	add(t.Plan.Skip, "the zero mark, where a stop pin may hold the pointer")
	turn := t.Instruments.Tested.Revolution.SI
	add(len(r.Limit.Partial) > 0 && turn == 0, "errors over parts of a turn: one turn is not stated (revolution in mill.toml)")
	if turn > 0 {
		for _, p := range r.Limit.Partial {
			add(!spanOfErrors(r.Curves[0], p.Turns*turn).Known(), fmt.Sprintf("errors over %g turn: the points are too far apart", p.Turns))
		}
	}
}
