package mill

import (
	"math"
	"strings"
	"testing"
)

// A 24 x 5 trapezoidal thread has the pitch diameter 21.5 mm (ISO 2904, from
// memory), as the invented T-2.
func TestScrewFillsInATrapezoidalThread(t *testing.T) {
	s := Screw{Diameter: Length{quantity(t, "24 mm")}, Lead: Length{quantity(t, "5 mm")}}
	if got := s.PitchDiameterM(); math.Abs(got-0.0215) > 1e-15 {
		t.Errorf("pitch diameter %g m, want 0.0215", got)
	}
	if got := s.FlankRad(); math.Abs(got-math.Pi/12) > 1e-15 {
		t.Errorf("flank angle %g rad, want 15 deg", got)
	}
	s.PitchDiameter, s.FlankAngle = Length{quantity(t, "22 mm")}, Angle{quantity(t, "0 deg")}
	if s.PitchDiameterM() != 0.022 || s.FlankRad() != 0 {
		t.Errorf("a given square thread becomes %g m, %g rad", s.PitchDiameterM(), s.FlankRad())
	}
}

// The setting that the program works with must rise with the load, and the
// length that the mill shows must come back from it.
func TestRisingSettingOfASpring(t *testing.T) {
	spring := func(under UnderLoad) Tensioner {
		return Tensioner{SetBy: SetBySpring, SettingLimit: Setting{quantity(t, "70 mm")},
			Spring: &Spring{UnderLoad: under, FreeLength: Length{quantity(t, "80 mm")}}}
	}
	pressed := spring(Shorter)
	if got := pressed.Rising(0.075); math.Abs(got-0.005) > 1e-15 {
		t.Errorf("75 mm of 80 mm is %g m shorter, want 0.005", got)
	}
	if got := pressed.Rising(pressed.Rising(0.0731)); math.Abs(got-0.0731) > 1e-15 {
		t.Errorf("there and back gives %g", got)
	}
	if !(pressed.Rising(0.072) > pressed.Rising(0.075)) || math.Abs(pressed.LimitSI()-0.010) > 1e-15 {
		t.Errorf("a shorter spring does not count more, or the limit is %g m", pressed.LimitSI())
	}
	drawn := spring(Longer)
	if drawn.Rising(0.075) != 0.075 || drawn.LimitSI() != drawn.SettingLimit.SI {
		t.Error("a spring that is drawn apart does not count as it is shown")
	}
	screw := Tensioner{SetBy: SetByTorque, Spring: pressed.Spring}
	if screw.Rising(12) != 12 {
		t.Error("a torque is changed by the spring below the nut")
	}
}

func TestWheelTravelAndRateByTheRatio(t *testing.T) {
	s := Tensioner{TravelRatio: 2, Screw: &Screw{Lead: Length{quantity(t, "5 mm")}},
		Spring: &Spring{Rate: Stiffness{quantity(t, "100 N/mm")}, Parallel: 2}}
	if got := s.WheelTravelM(); got != 0.0025 {
		t.Errorf("the wheel moves %g m a turn, want 0.0025", got)
	}
	// A lever of 2 doubles the force and halves the travel at the wheel.
	if got := s.WheelRate(); math.Abs(got-800e3) > 1e-6 {
		t.Errorf("rate at the wheel %g N/m, want 800,000", got)
	}
	s.Turns = &TurnsChain{Lead: Length{quantity(t, "6 mm")}}
	if got := s.WheelTravelM(); got != 0.003 {
		t.Errorf("with the lead of the turns the wheel moves %g m, want 0.003", got)
	}
	if none := (Tensioner{}); none.WheelTravelM() != 0 || none.WheelRate() != 0 {
		t.Error("a tensioner of which nothing is known has a travel or a rate")
	}
}

func TestParseRefusesDrivetrains(t *testing.T) {
	torque := strings.NewReplacer(`"pressure"`, `"torque"`, "950 psi", "40 lbf ft").Replace(good)
	spring := strings.NewReplacer(`"pressure"`, `"spring"`, "950 psi", "70 mm").Replace(good)
	with := func(text, lines string) string { return strings.Replace(text, "[[band]]", lines+"[[band]]", 1) }
	const screw = "[tensioner.screw]\ndiameter = \"24 mm\"\nlead = \"5 mm\"\n"
	const pressed = "[tensioner.spring]\nunder_load = \"shorter\"\nfree_length = \"80 mm\"\n"
	for _, text := range []string{with(torque, screw), with(torque, screw+"flank_angle = \"0 deg\"\n"+pressed), with(spring, pressed), with(torque, screw+"[tensioner.turns]\nband_loop = \"4 m\"\n")} {
		if _, err := Parse([]byte(text)); err != nil {
			t.Errorf("%v", err)
		}
	}
	for name, c := range map[string]struct{ text, key, says string }{
		"a screw with pressure":      {with(good, screw), "tensioner.screw", "set by pressure"},
		"a screw without a lead":     {with(torque, "[tensioner.screw]\ndiameter = \"24 mm\"\n"), "tensioner.screw.lead", "one full turn"},
		"pitch diameter outside":     {with(torque, screw+"pitch_diameter = \"24 mm\"\n"), "tensioner.screw.pitch_diameter", "halfway"},
		"flank angle of both flanks": {with(torque, screw+"flank_angle = \"60 deg\"\n"), "tensioner.screw.flank_angle", "half the angle"},
		"lead in inches":             {with(torque, strings.Replace(screw, "5 mm", "5 in", 1)), "tensioner.screw.lead", "units"},
		"many starts on one":         {with(torque, strings.Replace(screw, "5 mm", "24 mm", 1)), "tensioner.screw.lead", "several starts"},
		"turns without a lead":       {with(torque, "[tensioner.turns]\nband_loop = \"4 m\"\n"), "tensioner.turns", "how far"},
		"a spring of either way":     {with(spring, "[tensioner.spring]\nfree_length = \"80 mm\"\n"), "tensioner.spring.under_load", "pressed together"},
		"no free length":             {with(spring, "[tensioner.spring]\nunder_load = \"shorter\"\n"), "tensioner.spring.free_length", "let down"},
		"a limit above free":         {with(strings.Replace(spring, "70 mm", "90 mm", 1), pressed), "tensioner.setting_limit", "not less than the free length"},
		"binding before it is free":  {with(spring, pressed+"bind_length = \"81 mm\"\n"), "tensioner.spring.bind_length", "touch"},
		"a rate that is a force":     {with(spring, pressed+"rate = \"12 N\"\n"), "tensioner.spring.rate", "of force, not of stiffness"},
	} {
		if f := firstFault(t, c.text); f.Key != c.key || !strings.Contains(f.Error(), c.says) {
			t.Errorf("%s: %v", name, f)
		}
	}
}
