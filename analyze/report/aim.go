package report

import (
	"fmt"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// aim is the setting for the target on one branch, with its three intervals
// apart by name.
type aim struct {
	Direction analyze.Direction
	How       string // how to approach, in words
	NoSetting bool   // it is a loosening torque: nothing to set by
	Shown     string // what the mill's own scale shows there, where that falls as the load rises
	Set       figure // the number to set, rounded as its widest interval allows
	Intervals []interval
	Budget    []budgetLine
}

// interval is one of the three.
type interval struct {
	Name string // for people
	figure
}

// budgetLine is one line of the budget of the true stress.
type budgetLine struct{ Name, Std, From string }

func aimOf(r *analyze.Result, d analyze.Direction, u units) aim {
	at := r.AtRising
	if d == analyze.Falling {
		at = r.AtFalling
	}
	count := r.Setup.CountSI
	a := aim{
		Direction: d,
		How:       approach(d),
		Set:       figureOf(at.TrueSI, u.setting),
		Intervals: []interval{
			{"this visit's curve", figureRead(at.SettingSI, u.setting, count)},
			{"next time you set it", figureRead(at.NextSI, u.setting, count)},
			{"counting all doubt (use this for the card)", figureRead(at.TrueSI, u.setting, count)},
		},
	}
	if a.Set.Why != "" && at.SettingSI.Known() {
		a.Set = figureOf(at.SettingSI, u.setting)
	}
	if a.Set.Why != "" { // said once, not three times more
		a.Intervals = nil
	}
	a.NoSetting = r.Setup.Tensioner.SetBy == mill.SetByTorque && d == analyze.Falling
	if a.NoSetting {
		a.How = "what it takes to loosen at the target, the other way round; tighten to the other number, never loosen to this one"
	}
	a.Shown = shownAs(r.Setup.Tensioner, at.TrueSI, u.section)
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
	text := u.setting.with(plain(u.setting.show(r.Setup.LimitSI), 4))
	if t := r.Setup.Tensioner; t.FallsWithLoad() {
		text += " (spring length " + lengthText(mill.Length{Quantity: t.SettingLimit.Quantity}, u.section) + ")"
	}
	return text
}

func overshootText(r *analyze.Result, u units) string {
	if r.Setup.Tensioner.SetBy == mill.SetByTorque {
		return "Overshot while tightening: loosen the screw by half a turn or more, then tighten again. Never loosen to the number."
	}
	reset := figureOf(r.ResetSI, u.setting)
	if reset.Why != "" {
		return "Overshot while rising: the number to drop to is " + notKnown + ". Release well below the falling setting, then come up again."
	}
	return fmt.Sprintf("Overshot while rising: drop to %s, then come up again. Never back down to the number.", reset.short())
}
