package report

import (
	"fmt"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// madeText is whether a band's number was measured.
func madeText(r *analyze.Result) string {
	switch p := r.Predicted; {
	case p == nil:
		return "measured"
	case p.Worn:
		return fmt.Sprintf("worked out for a net width of %s from %s as measured", r.Setup.Band.NetWidth, p.Measured.NetWidth)
	default:
		return "worked out from the wheel pull measured with " + named(p.Measured.Name, "another band")
	}
}

// onFile says of each band on file that is not on the card whether the tensioner
// can bring it to its target inside its limit.
func onFile(r *analyze.Result, o CardOrder, u units) []string {
	shown := map[string]bool{r.Setup.Band.Name: true}
	for _, each := range o.Others {
		shown[each.Setup.Band.Name] = true
	}
	var out []string
	for _, reach := range r.Reaches() {
		if !shown[reach.Band.Name] {
			out = append(out, named(reach.Band.Name, "band of no name")+": "+reachText(reach, u))
		}
	}
	return out
}

func reachText(e analyze.Reach, u units) string {
	text := "cannot be told"
	switch e.Within {
	case analyze.WithinLimit:
		text = "can be brought to its target"
	case analyze.PastLimit:
		text = "its target lies past the limit of this tensioner, near " + figureOf(e.Carried, u.setting).short()
	}
	if why := clean(e.Why, textLength); why != "" {
		text += "; " + why
	}
	return text
}

// wornText is what grinding does: the same wheel pull on less steel.
func wornText(b mill.Band) string {
	const share = 0.1
	return fmt.Sprintf("%s ground narrower by %.0f %% of its net width carries %.0f %% more at the same number.", named(b.Name, "A band"), 100*share, 100*(1/(1-share)-1))
}
