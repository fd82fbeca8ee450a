package findings

import "tautramp/acquire/mill"

// shapeRows are the causes that bend or break the lines.
func shapeRows(by mill.SetBy) []row {
	rows := []row{stickSlipRow(), toeRow(by), endStopRow()}
	switch by {
	case mill.SetByTorque:
		rows = append(rows, screwRow())
	case mill.SetByTurns:
		rows = append(rows, playRow(), boundRow(), coilBindRow(), tyreRow(), softTyreRow())
	case mill.SetBySpring:
		rows = append(rows, boundRow(), coilBindRow())
	}
	return rows
}

func stickSlipRow() row {
	return row{
		key: StickSlip, name: "Stick-slip", causes: group(StickSlip),
		tests: jumpTests(),
		rivals: []rival{
			{"a gauge that sticks", []test{{fSticky, Above, mill.GaugeSticky}}},
			{"springs that go solid", boundTests()},
			{"a ramp too ragged", []test{{fRagged, Above, mill.RaggedRamp}}},
		},
		level: Service, region: risingLine,
		next: "Ramp once more at half the pace and once smoothly with a power pump: stick-slip grows when it is slower, strokes of a hand pump do not matter to it.",
		advice: []string{
			"Lubricate the slide and pins as the maker says and check their alignment: something holds until it lets go.",
			"Ramp smoothly; a setting made on a jump does not repeat.",
		},
	}
}

func jumpTests() []test {
	return []test{{fThirdJump, Above, mill.JumpSize}, {fJumpNoise, Above, mill.JumpNoise}}
}

// toeRow is for slack and curl; where the setting is a way, for tyres that are
// pressed together too.
func toeRow(by mill.SetBy) row {
	causes := group(Toe, Curl)
	if by == mill.SetByTurns {
		causes = group(Toe, Tyre, Curl)
	}
	return row{
		key: Toe, name: "The foot of the loop is bent high up", causes: causes,
		tests:  []test{{fToe, Above, mill.ToeReach}},
		rivals: []rival{{"springs that go solid", boundTests()}, {"air in the oil", []test{{fSoft, Above, mill.AirSoftness}}}, {"stick-slip", jumpTests()}, {"an end stop", stopTests()}, {"a gauge that does not read straight", []test{{fCurve, Above, mill.GaugeCurve}}}, {"a mount that slipped", slipTests()}},
		level:  Watch, region: lowEnd,
		next: "Measure the other face of the band too: a band that flattens shows the other sign there, slack shows the same.",
		advice: []string{
			"Do not set the band in this range: the line is not straight there.",
			"Look for a band that is not seated on the wheels, a loose clevis, or curl of the band below the rig.",
		},
	}
}

func endStopRow() row {
	return row{
		key: EndStop, name: "End stop: the setting rises and the stretch does not follow", causes: group(EndStop),
		tests:  stopTests(),
		rivals: []rival{{"an instrument at the end of its range", []test{{fSaturated, Above, mill.Saturated}}}, {"stick-slip", jumpTests()}},
		level:  Stop, region: topEnd,
		next: "None under more pressure. With the band slack and all locked out, look at how much stroke is left.",
		advice: []string{
			"Do not pump further: cylinder, slide or wheel has come to its stop, or something blocks it. Let the setting down.",
			"Check the stroke left, the length of the band and what the slide runs against.",
		},
	}
}

func stopTests() []test {
	return []test{{fTopSpan, Above, mill.StopSpan}, {fTopSlope, Below, mill.StopSlope}}
}

func playRow() row {
	return row{
		key: Play, name: "Play in pin, clevis or nut", causes: group(Play),
		tests: []test{{fIdle, Above, mill.PlayWidth}}, shows: []FeatureKey{fIdle, fPlay},
		rivals: []rival{{"lag between the instruments", []test{{fLagWidth, Above, mill.LagWidth}}}, {"an end stop", stopTests()}},
		level:  Service, region: atTurn,
		next:   "Turn round at half the load too: play is as wide there, friction is not.",
		advice: []string{"Look for wear in pins, clevis, screw and nut: move them by hand with the band slack and all locked out."},
	}
}

func coilBindRow() row {
	return row{
		key: CoilBind, name: "Spring near coil bind", causes: group(CoilBind),
		tests:  []test{{fBind, Above, mill.BindSlope}},
		rivals: []rival{{"slack taken up late", []test{{fToe, Above, mill.ToeReach}}}},
		level:  Service, region: topEnd,
		next: "Measure the spring's length at the top and compare it with the length at which its coils or discs touch.",
		advice: []string{
			"Set lower, below where the line steepens: above it a little turn makes a lot of pull.",
			"Check that the spring is the right one, whole, and not bottomed on a washer.",
		},
	}
}

func tyreRow() row {
	return row{
		key: Tyre, name: "Wheel tyre that gives", causes: group(Tyre),
		tests:  []test{{fFirst, Above, mill.FirstRamp}},
		rivals: []rival{{"play that is taken up", []test{{fIdle, Above, mill.PlayWidth}}}},
		level:  Watch, region: bothLines,
		next: "Exercise the band once more and ramp three times: a tyre that has settled gives the same slope each time.",
		advice: []string{
			"Exercise once before setting and wait a few minutes, then bring the number up again.",
			"Look at the tyres: soft, loose or worn through.",
		},
	}
}

func screwRow() row {
	return row{
		key: Screw, name: "Dry screw, nut or collar", causes: group(Screw),
		tests: []test{{fScrew, Below, mill.ScrewLow}}, shows: []FeatureKey{fScrew, fHalf, fConstant, fProportional},
		rivals: []rival{{"lag between the instruments", []test{{fLagWidth, Above, mill.LagWidth}}}, {"stick-slip", jumpTests()}},
		level:  Service, region: betweenLines,
		next: "Check the torque wrench on its bench, then clean and lubricate screw, nut and collar as the maker says and ramp again: the torque for the same pull should fall.",
		advice: []string{
			"Do not use a card made on a greased screw: on a dry one the same torque gives far less pull.",
			"Clean and lubricate screw, nut and collar as the maker says, ramp again, and make a new card.",
		},
	}
}

func boundRow() row {
	return row{
		key: "springs-solid", name: "The springs go solid below the top", causes: group(CoilBind),
		tests: boundTests(), shows: []FeatureKey{fBound, fBind}, level: Service, region: topEnd,
		next: "Measure the springs' length at the top and compare it with the length at which coils or discs touch.",
		advice: []string{
			"Set below the knee: above it a little more setting makes a lot of pull, or none that the setting shows.",
			"Check that the springs are the right ones, whole, and not bottomed on a washer.",
		},
	}
}

func boundTests() []test { return []test{{fBound, Above, mill.StopSpan}} }

func softTyreRow() row {
	return row{
		key: "soft-chain", name: "More gives than the profile says", causes: group(Tyre),
		tests: []test{{fGive, Below, mill.GiveLow}}, shows: []FeatureKey{fGive, fFirst}, level: Watch, region: bothLines,
		next:   "Push on tyres, frame and springs in turn with an indicator on each: see which of them gives.",
		advice: []string{"Look at the tyres first: soft, loose or worn through; then at the frame's bolts and the springs."},
	}
}
