package report

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// drivetrain is what the loop says of what lies between the setting and the
// wheel, where that is no oil. Title is "" under oil.
type drivetrain struct {
	Title string
	Facts []fact
}

func drivetrainOf(r *analyze.Result, u units, s mill.System) drivetrain {
	switch r.Setup.Tensioner.SetBy {
	case mill.SetByTorque:
		return drivetrain{"Screw", screwFacts(r, u)}
	case mill.SetByTurns:
		return drivetrain{"What the turns stretch", chainFacts(r, u, s)}
	case mill.SetBySpring:
		return drivetrain{"Springs", springFacts(r, u, s)}
	}
	return drivetrain{}
}

func screwFacts(r *analyze.Result, u units) []fact {
	s := r.Screw
	mu := figureOf(s.ThreadMu, bare()).String()
	if s.ThreadMu.Known() {
		mu += "; " + clean(s.CollarNotice, textLength)
	}
	perStress := thousand(u.setting, u.stress)
	facts := []fact{
		{"Torque that lifts", figureOf(s.LeadNm, u.setting).String()},
		{"Torque that friction takes", figureOf(s.FrictionNm, u.setting).String()},
		{"Efficiency", figureOf(s.Efficiency, percent()).String()},
		{"Efficiency expected of this screw", figureOf(s.Expected, percent()).String()},
		{"Efficiency, share of expected", figureOf(s.EffOfExpect, percent()).String()},
		{"Friction of the thread, apparent", mu},
		{"Torque at rest, no load", figureOf(s.RestNm, u.setting).String()},
		{"Tightening takes", figureOf(s.RaisePerPa, perStress).String()},
		{"Loosening takes", figureOf(s.LoosenPerPa, perStress).String()},
		{"Lead, share of the given one", figureOf(s.LeadRatio, percent()).String()},
	}
	if s.Opposed {
		return append(facts, fact{"Locks itself", "yes: it was loosened by a torque the other way, which is counted by its size here"})
	}
	return append(facts, fact{"Locks itself", "not seen: the torque kept its sense on the way down"})
}

// thousand is a setting for each 1,000 band psi or 10 band MPa.
func thousand(setting, stress unit) unit {
	n := math.Pow(10, math.Round(math.Log10(1e7/stress.factor)))
	return unit{fmt.Sprintf("%s for each %s %s", setting.name, grouped(fixed(n, 0)), stress.name), setting.factor / (n * stress.factor)}
}

func chainFacts(r *analyze.Result, u units, s mill.System) []fact {
	c := r.Chain
	aTurn := unit{u.stress.name + " a turn", u.stress.factor / (2 * math.Pi)}
	stiff := stiffness(s)
	lost := figureOf(c.GiveM, u.section).String()
	if c.GiveM.Known() {
		lost += " of " + u.section.with(plain(u.section.show(c.TravelM), 3))
	}
	expected := notKnown + ": " + unknownWhy(c.Expected)
	if c.Expected.Known() {
		expected = stiff.with(plain(stiff.show(c.Expected.Value), 3)) + " (" + c.ExpectedOf + " in series)"
	}
	return []fact{
		{"One turn makes", figureOf(c.PerRadPa, aTurn).String()},
		{"Were only the band to give", figureOf(c.FreePa, aTurn).String()},
		{"Wheel travel lost in one turn", lost},
		{"Stiffness of what gives", figureOf(c.GiveNM, stiff).String()},
		{"By the profile", expected},
		{"Turn lost at a reversal", figureOf(c.LostRad, u.setting).String() + ": play and friction"},
		{"The same at no wheel pull", figureOf(c.LostIdle, u.setting).String() + ", the lines carried on"},
		{"Springs solid above", figureOf(c.BoundRad, u.setting).String()},
	}
}

func springFacts(r *analyze.Result, u units, s mill.System) []fact {
	p := r.Springs
	facts := []fact{
		{"Rate of one spring", figureOf(p.RateNM, stiffness(s)).String()},
		{"Rate, share of the profile's", figureOf(p.Ratio, percent()).String()},
		{"Left at the target before they bind", figureOf(p.LeftSI, u.section).String()},
		{"Springs solid above", figureOf(p.BoundSI, u.setting).String()},
	}
	if r.WidthRatio.Value < 0 {
		facts = append(facts, fact{"Friction", "the loop runs the other way: the springs rub on themselves more than the slide does; mu and F0 above are the slide's less the springs'"})
	}
	return facts
}

func stiffness(s mill.System) unit {
	u := s.Unit(mill.RoleStiffness)
	return unit{u.Name, u.SI}
}

// shownAs is what the mill's own scale shows at a setting, where that falls as
// the load rises; "" elsewhere.
func shownAs(t mill.Tensioner, e estimate.Estimate, u unit) string {
	if !t.FallsWithLoad() || !e.Known() {
		return ""
	}
	e.Value = t.Rising(e.Value)
	return "spring length " + figureOf(e, unit{u.name, u.factor}).short()
}
