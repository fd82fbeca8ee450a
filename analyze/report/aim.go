package report

import (
	"fmt"

	"tautramp/analyze"
)

// aim is the setting for the target on one branch, with its three intervals
// apart by name.
type aim struct {
	Direction analyze.Direction
	How       string // how to approach, in words
	Set       figure // the number to set, rounded as its widest interval allows
	Intervals []interval
	Budget    []budgetLine
}

// interval is one of the three.
type interval struct {
	Name string // "fitted curve", "next setting", "band's true stress"
	Says string // what it answers
	figure
}

// budgetLine is one line of the budget of the true stress.
type budgetLine struct{ Name, Std, From string }

func aimOf(r *analyze.Result, d analyze.Direction, u units) aim {
	at := r.AtRising
	if d == analyze.Falling {
		at = r.AtFalling
	}
	a := aim{
		Direction: d,
		How:       approach(d),
		Set:       figureOf(at.TrueSI, u.setting),
		Intervals: []interval{
			{"fitted curve", "where this visit's line lies", figureOf(at.SettingSI, u.setting)},
			{"next setting", "how well the next approach repeats", figureOf(at.NextSI, u.setting)},
			{"band's true stress", "the setting at which the band truly has it", figureOf(at.TrueSI, u.setting)},
		},
	}
	if a.Set.Why != "" {
		a.Set = figureOf(at.SettingSI, u.setting)
	}
	a.Budget = budgetOf(at.Budget, u.setting)
	return a
}

// budgetOf keeps the lines that count, those of a tenth of the largest and more,
// and says how many it leaves out.
func budgetOf(terms []analyze.Term, u unit) []budgetLine {
	largest := 0.0
	for _, t := range terms {
		if finite(t.StdSI) {
			largest = max(largest, t.StdSI)
		}
	}
	var lines []budgetLine
	left := 0
	for _, t := range terms {
		if t.StdSI < largest/10 {
			left++
			continue
		}
		lines = append(lines, budgetLine{
			Name: clean(t.Name, nameLength), Std: u.with(stdText(u.show(t.StdSI))), From: clean(t.From, textLength),
		})
	}
	if left > 0 {
		lines = append(lines, budgetLine{Name: fmt.Sprintf("%d smaller ones", left), Std: "each below a tenth of the largest"})
	}
	return lines
}

// stdText is a standard uncertainty with two significant digits.
func stdText(std float64) string {
	switch {
	case !finite(std):
		return notKnown
	case std <= 0:
		return "0"
	}
	return grouped(fixed(std, uncertaintyDecimals(std)))
}

// approach is the rule of direction; no number is printed without it.
func approach(d analyze.Direction) string {
	if d == analyze.Falling {
		return "come down to it from above, after loading well past the target; never up to it"
	}
	return "come up to it from below and stop on it; never back down to it"
}

func targetText(r *analyze.Result, u units) string {
	if !finite(r.Setup.TargetPa) || r.Setup.TargetPa <= 0 {
		return notKnown + ": the band has no target in the profile and none was asked for"
	}
	return u.stress.with(plain(u.stress.show(r.Setup.TargetPa), 4))
}

func limitText(r *analyze.Result, u units) string {
	if !finite(r.Setup.LimitSI) || r.Setup.LimitSI <= 0 {
		return notKnown
	}
	return u.setting.with(plain(u.setting.show(r.Setup.LimitSI), 4))
}

func overshootText(r *analyze.Result, u units) string {
	reset := figureOf(r.ResetSI, u.setting)
	if reset.Why != "" {
		return fmt.Sprintf("Overshot while rising: the number to drop to is %s: %s. "+
			"Release well below the falling setting, then come up again.", notKnown, reset.Why)
	}
	return fmt.Sprintf("Overshot while rising: drop to %s, then come up again. Never back down to the number.", reset.short())
}
