package report

import (
	"fmt"
	"strings"

	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// fitted is how the lines came about. It stands in the text and the JSON; the
// printed page has no room for it.
func fitted(r *analyze.Result, u units) []fact {
	facts := []fact{{"Lines fitted by", methodsText(r.Cycles)}, {"Stretch shown late by", lateText(r.Lag)}}
	facts = append(facts, fact{"Half-width that would make", lagWidthText(r.Lag, u)})
	if r.Lag.StaticSI.Known() {
		facts = append(facts, fact{"Half-width at no pace", figureOf(r.Lag.StaticSI, u.setting).String()},
			fact{"It grows by", figureOf(r.Lag.PerRateS, unit{"s", 1}).String() + " times the pace"})
	}
	return facts
}

// lateText is the delay of the stretch on the setting.
func lateText(l analyze.Lag) string {
	if why := unknownWhy(l.LateS); why != "" {
		return notKnown + ": " + why
	}
	what := ", not told from none and not taken out"
	if l.Corrected {
		what = ", taken out"
	}
	return figureOf(l.LateS, unit{"s", 1}).String() + what
}

// lagWidthText is what the delay may still make of the half-width.
func lagWidthText(l analyze.Lag, u units) string {
	if l.CouldBeSI.Known() {
		return figureOf(l.CouldBeSI, u.setting).String() + ", beside the one measured"
	}
	if !(l.RateSI > 0) {
		return notKnown
	}
	return u.setting.with(plain(u.setting.show(l.RateSI/10), 2)) + " for each 0.1 s, in the one measured"
}

// methodsText is how the branches were fitted, each way once, with how many
// branches went that way where there are several.
func methodsText(cycles []analyze.Cycle) string {
	var order []estimate.Method
	count := map[estimate.Method]int{}
	for _, c := range cycles {
		for _, f := range []analyze.Fit{c.Rising, c.Falling} {
			if f.Points == 0 {
				continue
			}
			if count[f.Method] == 0 {
				order = append(order, f.Method)
			}
			count[f.Method]++
		}
	}
	var parts []string
	for _, m := range order {
		part := named(string(m), "an unnamed way")
		if len(order) > 1 {
			part += fmt.Sprintf(" (%d)", count[m])
		}
		parts = append(parts, part)
	}
	if len(parts) == 0 {
		return "no line was fitted"
	}
	return strings.Join(parts, ", ")
}
