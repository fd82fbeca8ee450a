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

// usedJSON is one instrument that the figures rest on.
func usedJSON(i analyze.Used) object {
	var day, verdict any
	if i.Bench != nil {
		day, verdict = clean(i.Bench.Checked, nameLength), clean(i.Bench.Verdict, textLength)
	}
	return object{
		{"name", clean(i.Name, nameLength)}, {"serial", clean(i.Serial, nameLength)}, {"measures", clean(i.Measures, nameLength)},
		{"limit_si", given(i.Limit.SI)}, {"std_si", given(i.StdSI)}, {"corrected", i.Corrected},
		{"bench_day", day}, {"bench_verdict", verdict}, {"next_check", clean(i.Due, nameLength)},
	}
}

// dialJSON is the mill's own dial; nil where none was compared.
func dialJSON(r *analyze.Result) any {
	d := r.Dial
	if d.Unit == "" {
		return nil
	}
	at := func(l analyze.DialLine, s analyze.DialSetting) any {
		if l.Line.N == 0 {
			return nil
		}
		return object{{"reading", estimateJSON(s.Reading)}, {"exact", number(s.Exact)}}
	}
	return object{
		{"name", clean(d.Name, nameLength)}, {"unit", clean(d.Unit, nameLength)}, {"graduation", given(d.Graduation)},
		{"presses", len(d.Presses)}, {"rising", at(d.Rising, d.AtRising)}, {"falling", at(d.Falling, d.AtFalling)},
	}
}
