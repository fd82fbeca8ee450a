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
	facts := []fact{
		{"Half-width", widthAtTarget(r, u)},
		{"Half-width / setting", figureOf(r.WidthRatio, percent()).String()},
		{"F0, constant", figureOf(f.F0N, u.force).String()},
		{"mu, in proportion", figureOf(f.Mu, bare()).String()},
		{"W, lifted weight", zeroEnters(figureOf(f.WeightN, u.force))},
		{"F0 + mu W", zeroEnters(figureOf(f.F0MuWN, u.force))},
	}
	if r.Setup.Tensioner.SetBy == mill.SetByPressure {
		facts = append(facts,
			fact{"A*, working area", figureOf(f.AreaM2, u.area).String()},
			fact{"A* / by geometry", figureOf(f.AreaRatio, bare()).String()})
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

// widthAtTarget is the half-width nearest to the target stress, or where there
// is no stress at the highest setting.
func widthAtTarget(r *analyze.Result, u units) string {
	if len(r.Widths) == 0 {
		return notKnown + ": no stretch was reached in both directions of one cycle"
	}
	best := r.Widths[len(r.Widths)-1]
	for _, w := range r.Widths {
		if distance(w.StressPa, r.Setup.TargetPa) < distance(best.StressPa, r.Setup.TargetPa) {
			best = w
		}
	}
	half := figureOf(best.HalfSI, u.setting)
	switch {
	case half.Why != "":
		return half.String()
	case !finite(best.StressPa):
		return fmt.Sprintf("%s at %s rising", half, u.setting.with(plain(u.setting.show(best.RisingSI), 3)))
	}
	return fmt.Sprintf("%s at %s", half, u.stress.with(plain(u.stress.show(best.StressPa), 3)))
}

func distance(a, b float64) float64 { return max(a-b, b-a) }

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
