package report

import (
	"strings"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// runningNote keeps the running band apart from the intervals.
func runningNote() string {
	return "Once it is set, friction lets the band stress drift to one side. This stands beside the intervals and is not added to them."
}

func runningFacts(r *analyze.Result, u units) []fact {
	run := r.Running
	if up, down := run.AfterRisingPa[1], run.AfterFallingPa[0]; !up.Known() && !down.Known() && up.Why == down.Why && !run.MiddlePa.Known() {
		return heldIn(r, []fact{{"After setting it", notKnown + ": " + unknownWhy(up)}})
	}
	middle := figureOf(run.MiddlePa, u.stress).String()
	if underOil(r) && run.Hold != mill.HoldMaintained {
		middle += ", where the pressure is kept up"
	}
	return heldIn(r, []fact{
		{"Set rising, may drift by", oneSided(run.AfterRisingPa, u.stress)},
		{"Set falling, may drift by", oneSided(run.AfterFallingPa, u.stress)},
		{"Vibration brings it to", middle},
	})
}

// underOil is whether the setting is the pressure of something: only that can be
// kept up or locked in.
func underOil(r *analyze.Result) bool {
	by := r.Setup.Tensioner.SetBy
	return by != mill.SetByTorque && by != mill.SetByTurns && by != mill.SetBySpring
}

func heldIn(r *analyze.Result, facts []fact) []fact {
	if !underOil(r) {
		return facts
	}
	return append(facts, fact{"Held by", holdText(r.Running.Hold)})
}

// oneSided is a change from the target, signs written out: one end is nothing.
func oneSided(change [2]estimate.Estimate, u unit) string {
	low, high := figureOf(change[0], u), figureOf(change[1], u)
	for _, f := range []figure{low, high} {
		if f.Why != "" {
			return f.String()
		}
	}
	return signed(low) + " to " + u.with(signed(high))
}

func signed(f figure) string {
	text := f.Value
	if text != "0" && !strings.HasPrefix(text, "-") {
		text = "+" + text
	}
	if f.PlusMinus != "" {
		text += " +/- " + f.PlusMinus
	}
	return text
}

func holdText(h mill.Hold) string {
	switch h {
	case mill.HoldMaintained:
		return "pressure kept up (profile)"
	case mill.HoldLocked:
		return "a valve that locks the oil in (profile): the band then gains far less, and the gauge falls instead"
	}
	return notKnown + ": the profile does not say whether the pressure is kept up or locked in; locked in, the band gains far less, and the gauge falls instead"
}
