package findings

import "tautramp/acquire/mill"

// rigRows are the causes in the measuring rig and the instruments.
func rigRows() []row {
	return []row{mountSlipRow(), mountCreepRow(), driftRow(), warmthRow(), stickyGaugeRow(), bentGaugeRow(), lagRow(), saturationRow(), flatTopRow(), dragRow()}
}

func slipTests() []test {
	return []test{{fSlip, Above, mill.MountSlip}, {fSlipCounts, Above, mill.SlipCounts}, {fSlipAlone, Above, mill.SlipAlone}}
}

func mountSlipRow() row {
	return row{
		key: MountSlip, name: "The mount of the rig slipped", causes: group(MountSlip),
		tests:  slipTests(),
		rivals: []rival{{"stick-slip", jumpTests()}},
		level:  Again, region: atStep,
		next:   "Re-clamp, tap the rig with the band slack and see that the zero stays, then ramp again.",
		advice: []string{"Discard the ramp with the step and all after it. Clean paint and oil from under the clamps, re-clamp, zero, and measure again."},
	}
}

// creepRivals are what else makes the stretch drift.
func creepRivals() []rival {
	return []rival{{"a mount that slipped", slipTests()}}
}

func mountCreepRow() row {
	return row{
		key: MountCreep, name: "The mount of the rig creeps", causes: group(MountCreep),
		tests:  []test{{fMountCreep, Above, mill.MountCreep}, {fWarmPerK, Above, mill.WarmthPerK}},
		rivals: creepRivals(), shows: []FeatureKey{fMountCreep, fWarmLink, fWarmShift}, level: Again, region: nowhere,
		next:   "Leave the rig on the slack band for ten minutes and watch the zero, with the temperature beside it.",
		advice: []string{"Re-clamp on clean bare steel and measure again."},
	}
}

func warmTests() []test {
	return []test{{fWarmShift, Above, mill.WarmthShift}, {fWarmLink, Above, mill.WarmthLink}, {fWarmPerK, Below, mill.WarmthAgrees}}
}

func warmthRow() row {
	return row{
		key: Warmth, name: "The stretch drifts with the temperature", causes: group(Warmth),
		tests:  warmTests(),
		rivals: creepRivals(), shows: []FeatureKey{fWarmShift, fWarmLink, fMountCreep}, level: Again, region: nowhere,
		next:   "Measure again in the shade with a bar of steel, both temperatures logged.",
		advice: []string{"Shade band and rig, wait until both have settled, keep the test short, and measure again."},
	}
}

func driftRow() row {
	return row{
		key: "drift", name: "The stretch drifts whatever the setting does", causes: group(MountCreep, Warmth),
		tests:  []test{{fMountCreep, Above, mill.MountCreep}},
		yields: []Key{MountCreep, Warmth},
		rivals: creepRivals(), shows: []FeatureKey{fMountCreep}, level: Again, region: nowhere,
		next:   "Fit the temperature sensor to the band and measure again: a drift that follows it is warmth, one that does not is the mount.",
		advice: []string{"Re-clamp on clean bare steel, shade band and rig, wait until both have settled, and measure again."},
	}
}

func stickyGaugeRow() row {
	return row{
		key: Gauge, name: "Sticky gauge", causes: group(Gauge),
		tests: []test{{fSticky, Above, mill.GaugeSticky}}, level: Service, region: nowhere,
		next: benchNext(), advice: []string{"Repair or replace the gauge; until then tap it lightly before each reading."},
	}
}

func bentGaugeRow() row {
	return row{
		key: "gauge-bent", name: "Gauge that does not read straight", causes: group(Gauge),
		tests: []test{{fCurve, Above, mill.GaugeCurve}}, level: Service, region: nowhere,
		next: benchNext(), advice: []string{"Repair or replace the gauge; until then use its bench errors, point by point."},
	}
}

func benchNext() string {
	return "Bench-test the setting gauge against a reference, up and down, untapped and tapped."
}

func lagRow() row {
	return row{
		key: Lag, name: "The instruments lag each other", causes: group(Lag),
		tests: []test{{fLagWidth, Above, mill.LagWidth}}, shows: []FeatureKey{fLagWidth, fLag},
		rivals: []rival{
			{"stick-slip", jumpTests()}, {"a mount that slipped", slipTests()},
			{"springs that go solid", boundTests()},
			{"a gauge at the end of its range", []test{{fFlatTop, Above, mill.FlatTop}}},
			{"a gauge that does not read straight", []test{{fCurve, Above, mill.GaugeCurve}}},
		},
		level: Again, region: betweenLines,
		next:   "Ramp once at half the pace: what lag opens halves, what friction opens stays.",
		advice: []string{"Ramp more slowly; open the gauge's snubber if it is nearly shut; take the filter of the slower instrument down."},
	}
}

func saturationRow() row {
	return row{
		key: Saturation, name: "An instrument reached the end of its range", causes: group(Saturation),
		tests: []test{{fSaturated, Above, mill.Saturated}}, level: Again, region: topEnd,
		next:   "Measure again with an instrument of a longer range, or set the indicator lower before the ramp.",
		advice: []string{"Do not go by the top of this recording: the reading stood still, not the tensioner."},
	}
}

func flatTopRow() row {
	return row{
		key: "flat-top", name: "The setting gauge stands at its highest reading while the band goes on", causes: group(Saturation),
		tests: []test{{fFlatTop, Above, mill.FlatTop}}, yields: []Key{Saturation}, level: Again, region: topEnd,
		next:   "Measure again with a gauge of a longer range.",
		advice: []string{"Do not go by the top of this recording: the gauge stood at its end while the pull rose on."},
	}
}

func dragRow() row {
	return row{
		key: Drag, name: "The two spans do not share the pull: wheel or brake drags", causes: group(Drag),
		tests: []test{{fSpans, Above, mill.SpanDiffer}}, level: Service, region: bothLines,
		next:   "Measure both spans at once with two indicators, positions named, with the brake off and the wheel free as the maker allows.",
		advice: []string{"Free the brake and drive as the maker's procedure allows, check wheel bearings and alignment, and measure both spans again."},
	}
}

// rampRows are the causes in how the recording was made.
func rampRows() []row {
	return []row{
		{
			key: FewRamps, name: "Too few ramps", causes: group(FewRamps),
			tests: []test{{fRamps, Below, mill.LeastRamps}}, level: Again,
			next: "Ramp at least three times.", advice: []string{"Ramp three times: how well a setting repeats is not known from fewer."},
		},
		{
			key: Fast, name: "Ramp too fast", causes: group(Fast),
			tests: []test{{fFast, Above, mill.FastRamp}}, level: Again, region: bothLines,
			rivals: []rival{
				{"a gauge at the end of its range", []test{{fFlatTop, Above, mill.FlatTop}}},
				{"a transducer on the pump side of the check valve", collapseTests()},
			},
			next: "Ramp again, one to five minutes each way.", advice: []string{"Ramp more slowly: lag opens the loop in proportion to the pace."},
		},
		{
			key: Ragged, name: "Ramp too ragged", causes: group(Ragged),
			tests: []test{{fRagged, Above, mill.RaggedRamp}}, level: Again, region: risingLine,
			rivals: []rival{
				{"a transducer on the pump side of the check valve", collapseTests()},
				{"a leak", []test{{fHoldSetting, Above, mill.HoldLoss}}},
			},
			next: "Ramp again steadily, without letting the setting down on the way up.", advice: []string{"Come up in one direction: a fall beyond what friction holds takes the band off the rising line."},
		},
	}
}
