package report

import (
	"fmt"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// verdict is the grade in words. Without a grade it is "no verdict".
type verdict struct {
	Word  string // good, watch, service, no verdict
	Says  string // what it means, or why there is none
	Ratio figure // half-width in percent of the working setting
}

func verdictOf(r *analyze.Result) verdict {
	v := verdict{Ratio: figureOf(r.WidthRatio, percent())}
	switch r.Grade {
	case analyze.Good:
		v.Word, v.Says = "good", "friction takes little of the setting"
	case analyze.Watch:
		v.Word, v.Says = "watch", "friction takes a fair part of the setting; measure again before long"
	case analyze.Indistinct:
		v.Word, v.Says = "not told", "the loop is no wider than the indicator's own reversal and drift may make it: not distinguishable from the indicator"
	case analyze.Service:
		v.Word, v.Says = "service", "friction takes much of the setting; service by the maker's manual"
	default:
		v.Word, v.Says = "no verdict", noVerdictWhy(r, v.Ratio)
	}
	return v
}

// noVerdictWhy says why the half-width was not graded.
func noVerdictWhy(r *analyze.Result, ratio figure) string {
	if ratio.Why != "" {
		return ratio.Why
	}
	for _, w := range r.Warnings {
		if w.Code == "no-grade" {
			return clean(w.Text, textLength)
		}
	}
	return "the half-width, " + ratio.String() + " of the setting, does not decide it"
}

func frictionFacts(r *analyze.Result, u units) []fact {
	f := r.Friction
	switch r.Setup.Tensioner.SetBy {
	case mill.SetByTorque: // see the screw
		return nil
	case mill.SetByTurns:
		return []fact{{"Half-width of the loop", widthText(r, u)}}
	}
	facts := []fact{
		{"Half-width of the loop", widthText(r, u)},
		{"Half-width, share of the setting", figureOf(r.WidthRatio, percent()).String()},
		{"F0, friction that is always there", figureOf(f.F0N, u.force).String()},
		{"mu, friction in proportion to load", figureOf(f.Mu, bare()).String()},
		{"W, lifted weight", zeroEnters(figureOf(f.WeightN, u.force))},
		{"F0 + mu W, friction at no wheel pull", zeroEnters(figureOf(f.F0MuWN, u.force))},
	}
	if r.Setup.Tensioner.SetBy == mill.SetByPressure {
		facts = append(facts,
			fact{"A*, working area", figureOf(f.AreaM2, u.area).String()},
			fact{"A*, share of geometry's", figureOf(f.AreaRatio, bare()).String()})
	}
	return facts
}

// zeroEnters marks figures that are only as good as the zero.
func zeroEnters(f figure) string {
	if f.Why != "" {
		return f.String()
	}
	return f.String() + ", if the zero holds"
}

// widthText is the half-width at the working setting: the target's where it is
// in range, else the highest one.
func widthText(r *analyze.Result, u units) string {
	at := r.Working
	if len(r.Widths) == 0 {
		return notKnown + ": no stretch was reached in both directions of one cycle"
	}
	half := figureOf(at.HalfSI, u.setting)
	rising := r.AtRising.SettingSI
	switch {
	case half.Why != "":
		return half.String()
	case rising.Known() && rising.Value == at.RisingSI:
		return half.String() + " at the target"
	case finite(at.StressPa):
		return fmt.Sprintf("%s at %s, the highest in both directions", half, u.stress.with(plain(u.stress.show(at.StressPa), 3)))
	}
	return fmt.Sprintf("%s at %s rising, the highest in both directions", half, u.setting.with(plain(u.setting.show(at.RisingSI), 3)))
}

func branchFact(d analyze.Direction, b analyze.Branch, u units) fact {
	label := string(d) + " line"
	if b.HighSI <= b.LowSI {
		return fact{label, notKnown + ": no range of it was captured"}
	}
	// Slope is Pa per SI unit of setting; factor is SI per display unit.
	slope := unit{u.stress.name + " per " + u.setting.name, u.stress.factor / u.setting.factor}
	return fact{label, fmt.Sprintf("%s, from %s to %s", figureOf(b.Slope, slope),
		plain(u.setting.show(b.LowSI), 3), u.setting.with(plain(u.setting.show(b.HighSI), 3)))}
}
