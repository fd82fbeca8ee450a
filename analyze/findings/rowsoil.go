package findings

import "tautramp/acquire/mill"

// oilRows are the causes in oil, valves and gauge lines.
func oilRows(by mill.SetBy) []row {
	if by != mill.SetByPressure {
		return nil
	}
	return []row{airRow(), leakRow(), heldTyreRow(), gaugeLeakRow(), lockedLeakRow(), oilWarmsRow(), pumpSideRow(), gaugeZeroRow(), weightRow(), areaRow(), sectionRow(), spanRow()}
}

func collapseTests() []test {
	return []test{{fCollapse, Above, mill.StrokeLoss}, {fCollapseRate, Above, mill.StrokeRate}, {fDipFollow, Below, mill.HoldFollow}}
}

func fastTests() []test { return []test{{fFast, Above, mill.FastRamp}} }

func airRow() row {
	return row{
		key: Air, name: "Air in the oil", causes: group(Air),
		tests:  []test{{fSoft, Above, mill.AirSoftness}},
		rivals: []rival{{"a ramp so fast that the pump cannot keep up", fastTests()}},
		level:  Service, region: lowEnd,
		next:   "Bleed, then pump again and count the strokes: they should gain the same from the slack band up.",
		advice: []string{"Bleed the cylinders and lines as the maker says. Block the wheel before a line is opened. Check the oil level and the suction side of the pump."},
	}
}

// holdRivals are what else lets a held setting fall.
func holdRivals() []rival {
	return []rival{
		{"oil, tyres and band still settling", []test{{fHoldCreeps, Above, mill.HoldFollow}}},
		{"a transducer on the pump side of the check valve", collapseTests()},
		{"a band that warms in the hold", append(warmTests(), test{fHoldBeyond, Below, mill.HoldLoss})},
		{"a ramp so fast that oil and tyres still settle", fastTests()},
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

func heldTyreRow() row {
	return row{
		key: "tyre-gives", name: "A tyre gives in the hold", causes: group(Tyre),
		tests: []test{{fHoldStretch, Above, mill.HoldLoss}, {fHoldSetting, Above, mill.HoldLoss}, {fHoldFreed, Below, mill.HoldFreed}},
		shows: shownHold(), rivals: []rival{{"a transducer on the pump side of the check valve", collapseTests()}}, level: Watch, region: atHold,
		next:   "Hold for ten minutes: what a tyre gives becomes less and less, a leak goes on.",
		advice: []string{"Exercise once before setting, wait a few minutes and bring the number up again. Look at the tyres: soft, loose or worn through."},
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
		causes: group(Leak, GaugeLeak, Tyre), yields: []Key{Leak, GaugeLeak, "tyre-gives"},
		tests: []test{{fHoldSetting, Above, mill.HoldLoss}},
		shows: shownHold(), rivals: holdRivals(), level: Service, region: atHold,
		next: "Hold until the setting has fallen by more than twice the half-width of the loop: if the stretch then falls with it, the oil leaks; if not, only the gauge's side does.",
		advice: []string{
			"Look at check valve, return valve, seals, fittings and the gauge line: with a card, never with a hand.",
			"Until it is known which it is, do not trust the setting after the pump has stopped: read the stretch.",
		},
	}
}

func oilWarmsRow() row {
	return row{
		key: "oil-warms", name: "The setting rises in the hold: oil that warms", causes: group(Warmth),
		tests: []test{{fHoldRise, Above, mill.HoldRise}}, shows: []FeatureKey{fHoldRise, fHoldStretch},
		level: Watch, region: atHold,
		next: "Hold again when oil and mill have the same temperature, the pump shut off.",
		advice: []string{
			"Let the oil come to the mill's temperature before the number is set: shut in, it raises the pull as it warms and drops it as it cools.",
			"If a pump keeps the pressure, look at its regulator: it creeps.",
		},
	}
}

func pumpSideRow() row {
	return row{
		key: PumpSide, name: "Transducer on the pump side of the check valve", causes: group(PumpSide),
		tests:  collapseTests(),
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

func weightRow() row {
	return row{
		key: "weight-or-zero", name: "The lifted weight is not what the profile says, or the gauge is off its zero", causes: group(GaugeZero, Weight, Curl),
		tests: []test{{fWeight, Above, mill.WeightOff}}, yields: []Key{GaugeZero},
		rivals: []rival{{"slack taken up late", []test{{fToe, Above, mill.ToeReach}}}, {"a mount that slipped", slipTests()}, {"a gauge that does not read straight", []test{{fCurve, Above, mill.GaugeCurve}}}},
		level:  Watch, region: lowEnd,
		next:   "Vent the gauge and read it; measure the other face of the band; weigh or reckon again what the cylinders lift.",
		advice: []string{"Vent the gauge and set or note its zero. If it reads none, check lifted_weight in mill.toml, and measure the other face: curl of the band moves the zero."},
	}
}

// areaRivals are what else makes the area look off.
func areaRivals() []rival {
	return []rival{
		{"slack taken up late", []test{{fToe, Above, mill.ToeReach}}},
		{"a gauge at the end of its range", []test{{fFlatTop, Above, mill.FlatTop}}},
		{"a gauge that does not read straight", []test{{fCurve, Above, mill.GaugeCurve}}},
		{"a mount that slipped", slipTests()},
		{"stick-slip", jumpTests()},
		{"spans that do not share the pull", []test{{fSpans, Above, mill.SpanDiffer}}},
	}
}

func areaRow() row {
	r := sectionRow()
	r.key, r.name, r.causes = "area-off", "The area that works is not what the profile says", group(Section, GaugeSpan)
	r.tests, r.yields = []test{{fArea, Above, mill.AreaOff}}, []Key{Section, GaugeSpan}
	return r
}

func sectionRow() row {
	return row{
		key: Section, name: "Wrong section, bore or ratio in the profile", causes: group(Section),
		tests:  []test{{fArea, Above, mill.AreaOff}, {fGaugeSpan, Below, mill.GaugeSpan}},
		rivals: areaRivals(), level: Watch, region: bothLines,
		next:   "Measure thickness and net width again at three places, bench-test the gauge, and put a second band section on the same tensioner: if its area is off by the same share, bore, cylinders or ratio are wrong; if not, the section is.",
		advice: []string{"Measure the band again, back to gullet bottom; check bore, number of cylinders and travel ratio in mill.toml. The band stress measured does not depend on them; wheel pull and other bands' settings do."},
	}
}

func spanRow() row {
	return row{
		key: GaugeSpan, name: "Gauge that reads off in proportion", causes: group(GaugeSpan),
		tests: []test{{fGaugeSpan, Above, mill.GaugeSpan}}, shows: []FeatureKey{fArea}, level: Service, region: bothLines,
		next: benchNext(), advice: []string{"Have the gauge adjusted or replaced; until then use its bench errors. A card holds for the gauge it was made with, as it read that day."},
	}
}
