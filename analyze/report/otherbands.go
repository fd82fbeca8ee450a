package report

import (
	"fmt"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// predictedText says above everything that a result was not measured with its
// band; "" where it was.
func predictedText(r *analyze.Result, u units) string {
	p := r.Predicted
	if p == nil {
		return ""
	}
	ratio := figureOf(p.AreaRatio, bare())
	return fmt.Sprintf("PREDICTED, NOT MEASURED: %s. At the same wheel pull this band has %s times the stress. "+
		"The doubt of both net sections is in the figures, and of modulus and gauge length as measured.",
		madeText(r), ratio)
}

// reachFacts says of each band on file whether this tensioner can bring it to
// its target; none where there is only the band of the result.
func reachFacts(r *analyze.Result, u units) []fact {
	if len(r.Setup.Bands) < 2 {
		return nil
	}
	var facts []fact
	for _, e := range r.Reaches() {
		text := reachText(e, u)
		if e.Rising.TrueSI.Known() {
			text += ": " + figureOf(e.Rising.TrueSI, u.setting).short() + " rising"
		}
		facts = append(facts, fact{named(e.Band.Name, "band of no name") + reachTarget(e, u), text})
	}
	return facts
}

func reachTarget(e analyze.Reach, u units) string {
	if e.TargetPa <= 0 {
		return ""
	}
	return ", " + u.stress.with(plain(u.stress.show(e.TargetPa), 4))
}

func predictedJSON(r *analyze.Result) any {
	p := r.Predicted
	if p == nil {
		return nil
	}
	return object{
		{"measured_band", clean(p.Measured.Name, nameLength)}, {"measured_net_area_m2", given(p.Measured.NetAreaM2())},
		{"area_ratio", estimateJSON(p.AreaRatio)}, {"worn", p.Worn},
	}
}

func reachJSON(r *analyze.Result, by setBy) []object {
	if len(r.Setup.Bands) < 2 {
		return []object{}
	}
	return each(r.Reaches(), func(e analyze.Reach) object {
		return object{
			{"band", clean(e.Band.Name, nameLength)}, {"measured", e.Measured}, {"target_pa", given(e.TargetPa)},
			{"wheel_pull_n", estimateJSON(e.PullN)}, {"rising", targetJSON(e.Rising, by)}, {"falling", targetJSON(e.Falling, by)},
			{"carried_on", by.inSetting(estimateJSON(e.Carried))}, {"captured", e.Captured},
			{"within_limit", withinJSON(e.Within)}, {"why", clean(e.Why, textLength)},
		}
	})
}

func withinJSON(w analyze.Within) string {
	switch w {
	case analyze.WithinLimit:
		return "yes"
	case analyze.PastLimit:
		return "no"
	}
	return "undecided"
}

// drivetrainJSON is the screw, the chain or the springs, whichever the tensioner
// has; null under oil.
func drivetrainJSON(r *analyze.Result) any {
	switch r.Setup.Tensioner.SetBy {
	case mill.SetByTorque:
		s := r.Screw
		return object{
			{"kind", "screw"}, {"wheel_pull_n", estimateJSON(s.PullN)}, {"lifting_torque_n_m", estimateJSON(s.LeadNm)},
			{"friction_torque_n_m", estimateJSON(s.FrictionNm)}, {"rest_torque_n_m", estimateJSON(s.RestNm)},
			{"raise_n_m_per_n", estimateJSON(s.RaisePerN)}, {"loosen_n_m_per_n", estimateJSON(s.LoosenPerN)},
			{"raise_n_m_per_pa", estimateJSON(s.RaisePerPa)}, {"loosen_n_m_per_pa", estimateJSON(s.LoosenPerPa)},
			{"thread_friction", estimateJSON(s.ThreadMu)}, {"lead_ratio", estimateJSON(s.LeadRatio)},
			{"efficiency", estimateJSON(s.Efficiency)}, {"efficiency_expected", estimateJSON(s.Expected)},
			{"efficiency_ratio", estimateJSON(s.EffOfExpect)}, {"locks_itself", s.Opposed},
		}
	case mill.SetByTurns:
		c := r.Chain
		return object{
			{"kind", "turns"}, {"stress_pa_per_rad", estimateJSON(c.PerRadPa)}, {"free_stress_pa_per_rad", estimateJSON(c.FreePa)},
			{"lost_travel_m_per_turn", estimateJSON(c.GiveM)}, {"give_n_per_m", estimateJSON(c.GiveNM)},
			{"give_expected_n_per_m", estimateJSON(c.Expected)}, {"expected_of", clean(c.ExpectedOf, nameLength)},
			{"lost_turn_rad", estimateJSON(c.LostRad)}, {"lost_turn_at_no_pull_rad", estimateJSON(c.LostIdle)},
			{"solid_above_rad", estimateJSON(c.BoundRad)},
		}
	case mill.SetBySpring:
		p := r.Springs
		return object{
			{"kind", "spring"}, {"rate_n_per_m", estimateJSON(p.RateNM)}, {"rate_ratio", estimateJSON(p.Ratio)},
			{"solid_above_m", estimateJSON(p.BoundSI)}, {"bind_m", number(p.BindSI)}, {"left_at_target_m", estimateJSON(p.LeftSI)},
		}
	}
	return nil
}

// predictedFrom names the band that was measured, where that is another; "none"
// where the figures were measured.
func predictedFrom(r *analyze.Result) string {
	if r.Predicted == nil {
		return "none"
	}
	return cellText(named(r.Predicted.Measured.Name, notKnown))
}
