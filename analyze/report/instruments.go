package report

import (
	"strings"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// instrumentFacts is what the figures were read on, with the dates of their
// checks.
func instrumentFacts(r *analyze.Result, u units) []fact {
	var facts []fact
	for _, i := range r.Setup.Used {
		name := named(i.Name, "instrument for the "+i.Measures)
		if serial := clean(i.Serial, nameLength); serial != "" {
			name += " (" + serial + ")"
		}
		var says []string
		if i.Limit.Given() {
			of := u.setting
			if i.Measures == mill.MeasuresExtension {
				of = u.extension
			}
			says = append(says, "limit of error "+of.with(plain(of.show(i.Limit.SI), 3)))
		}
		switch b := i.Bench; {
		case b == nil:
			says = append(says, "no bench record")
		case i.Corrected:
			says = append(says, "corrected by its bench test of "+named(b.Checked, "a day "+notKnown)+": "+named(b.Verdict, "no verdict"))
		default:
			says = append(says, "bench test of "+named(b.Checked, "a day "+notKnown)+": "+named(b.Verdict, "no verdict")+", no correction")
		}
		says = append(says, "next check due "+named(i.Due, notKnown))
		facts = append(facts, fact{name, strings.Join(says, "; ")})
	}
	return facts
}
