package report

import (
	"fmt"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// triedFacts set the intervals by Monte Carlo beside the printed ones.
func triedFacts(r *analyze.Result, u units) []fact {
	var facts []fact
	for _, t := range r.Tried {
		in := u.setting
		switch t.Role {
		case mill.RoleForce:
			in = u.force
		case "":
			in = bare()
		}
		mean := estimate.Estimate{Value: t.Drawn.Mean, Method: "trials"}
		f := figureBetween(mean, t.Drawn.Low, t.Drawn.High, in)
		says := fmt.Sprintf("95 %% from %s to %s", f.Low, in.with(f.High))
		if !t.Agree {
			says += ", not as printed"
		}
		facts = append(facts, fact{fmt.Sprintf("By %d trials, %s", t.Drawn.Trials, t.Name), says})
	}
	return facts
}

func trialJSON(t analyze.Trial) object {
	return object{
		{"name", clean(t.Name, nameLength)}, {"trials", t.Drawn.Trials}, {"mean", number(t.Drawn.Mean)}, {"std", number(t.Drawn.Std)},
		{"low", number(t.Drawn.Low)}, {"high", number(t.Drawn.High)},
		{"shortest_low", number(t.Drawn.ShortLow)}, {"shortest_high", number(t.Drawn.ShortHi)}, {"agrees", t.Agree},
	}
}
