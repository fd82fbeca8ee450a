package findings

import "tautramp/acquire/mill"

// oilRows are the causes in oil, valves and gauge lines.
func oilRows(by mill.SetBy) []row {
	if by != mill.SetByPressure {
		return nil
	}
	return []row{airRow(), leakRow(), gaugeLeakRow(), lockedLeakRow(), pumpSideRow(), gaugeZeroRow(), sectionRow()}
}

func airRow() row {
	return row{
		key: Air, name: "Air in the oil", causes: group(Air),
		tests:  []test{{fSoft, Above, mill.AirSoftness}},
		rivals: []rival{{"slack taken up late", []test{{fToe, Above, mill.ToeReach}}}},
		level:  Service, region: lowEnd,
		next:   "Bleed, then pump again and count the strokes: they should gain the same from the slack band up.",
		advice: []string{"Bleed the cylinders and lines as the maker says. Block the wheel before a line is opened. Check the oil level and the suction side of the pump."},
	}
}

// holdRivals are what else lets a held setting fall.
func holdRivals() []rival {
	return []rival{
		{"oil, tyres and band still settling", []test{{fHoldCreeps, Above, mill.HoldFollow}}},
		{"a transducer on the pump side of the check valve", []test{{fCollapse, Above, mill.StrokeLoss}}},
	}
}

func shownHold() []FeatureKey {
	return []FeatureKey{fHoldSetting, fHoldStretch, fHoldFreed, fHoldFollow}
}

func leakRow() row {
	return row{
		key: Leak, name: "Leak-down: the band loses its pull", causes: group(Leak),
		tests: []test{{fHoldSetting, Above, mill.HoldLoss}, {fHoldFollow, Above, mill.HoldFollow}},
		shows: shownHold(), rivals: holdRivals(), level: Service, region: atHold,
		next: "Hold for five minutes with the pump shut off, then shut the valve at the cylinder, where there is one, and hold again: the side that still falls leaks.",
		advice: []string{
			"Look at check valve, return valve, seals and fittings: with a card, never with a hand.",
			"Do not run on this setting: the band loses its pull as it stands.",
		},
	}
}

func gaugeLeakRow() row {
	return row{
		key: GaugeLeak, name: "The gauge loses pressure, the band does not lose pull", causes: group(GaugeLeak),
		tests: []test{{fHoldSetting, Above, mill.HoldLoss}, {fHoldFollow, Below, mill.HoldFollow}},
		shows: shownHold(), rivals: holdRivals(), level: Service, region: atHold,
		next: "Tee a second gauge in at the cylinder and hold again.",
		advice: []string{
			"Look for a leak in the gauge line or a check valve between gauge and cylinder; check the transducer for drift on the bench.",
			"What the gauge says after a while is not what the band has.",
		},
	}
}

func lockedLeakRow() row {
	return row{
		key: "hold-falls", name: "The setting falls in the hold while friction may be holding the band",
		causes: group(Leak, GaugeLeak),
		tests:  []test{{fHoldSetting, Above, mill.HoldLoss}, {fHoldFollow, Missing, ""}},
		shows:  shownHold(), rivals: holdRivals(), level: Service, region: atHold,
		next: "Hold until the setting has fallen by more than twice the half-width of the loop: if the stretch then falls with it, the oil leaks; if not, only the gauge's side does.",
		advice: []string{
			"Look at check valve, return valve, seals, fittings and the gauge line: with a card, never with a hand.",
			"Until it is known which it is, do not trust the setting after the pump has stopped: read the stretch.",
		},
	}
}

func pumpSideRow() row {
	return row{
		key: PumpSide, name: "Transducer on the pump side of the check valve", causes: group(PumpSide),
		tests:  []test{{fCollapse, Above, mill.StrokeLoss}},
		rivals: []rival{{"a leak", []test{{fHoldSetting, Above, mill.HoldLoss}, {fHoldFollow, Above, mill.HoldFollow}}}},
		level:  Again, region: risingLine,
		next:   "Move the tee to the cylinder's side of the check valve and ramp again.",
		advice: []string{"Relieve the pressure, block the wheel, and move the tee between check valve and cylinder. Until then the setting between strokes says nothing of the band."},
	}
}

func gaugeZeroRow() row {
	return row{
		key: GaugeZero, name: "Gauge off its zero", causes: group(GaugeZero),
		tests: []test{{fVent, Above, mill.GaugeZero}}, shows: []FeatureKey{fVent, fWeight},
		level: Service, region: lowEnd,
		next:   "Vent the gauge and read it, before and after.",
		advice: []string{"Vent the gauge and set or note its zero at every visit. Every setting on a card is off by as much."},
	}
}

func sectionRow() row {
	return row{
		key: Section, name: "The area that works is not what the profile says", causes: group(Section),
		tests: []test{{fArea, Above, mill.AreaOff}},
		rivals: []rival{
			{"a bent gauge", []test{{fCurve, Above, mill.GaugeCurve}}},
			{"a mount that slipped", slipTests()},
		},
		level: Watch, region: bothLines,
		next:   "Measure thickness and net width again at three places, and put a second band section on the same tensioner: if its area is off by the same share, bore, cylinders or ratio are wrong; if not, the section is.",
		advice: []string{"Measure the band again, back to gullet bottom; check bore, number of cylinders and travel ratio in mill.toml. The band stress measured does not depend on them; wheel pull and other bands' settings do."},
	}
}
