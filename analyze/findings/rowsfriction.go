package findings

import (
	"slices"
	"strings"

	"tautramp/acquire/mill"
)

// frictionRows are the causes that make the loop wide.
func frictionRows(by mill.SetBy) []row {
	if by == mill.SetByTorque || by == mill.SetByTurns {
		return nil // a screw's friction has a row of its own; turns set no force
	}
	if by == mill.SetBySpring {
		return sealless(constantRow(), pinsRow(), bothRow(), growingRow(), wideRow())
	}
	return []row{constantRow(), slideRow(), sealRow(), pinsRow(), bothRow(), growingRow(), wideRow()}
}

// sealless is the rows of a tensioner without cylinders.
func sealless(rows ...row) []row {
	for i := range rows {
		rows[i].causes = slices.DeleteFunc(rows[i].causes, func(c Cause) bool { return c.Key == Seal })
		rows[i].advice = slices.DeleteFunc(rows[i].advice, func(s string) bool { return strings.Contains(s, "cylinder seals") })
		rows[i].next = "Clean and lubricate slide and pins as the maker says, ramp again, and see which part of the half-width fell."
	}
	return rows
}

func shownWidth() []FeatureKey { return []FeatureKey{fHalf, fConstant, fProportional, fOffLoad} }

func constantRow() row {
	return row{
		key: "constant-drag", name: "Drag that is there whatever the load",
		causes: group(Slide, Seal),
		tests:  []test{{fConstant, Above, mill.FrictionConstant}, {fProportional, Below, mill.FrictionProportional}},
		yields: []Key{Slide, Seal},
		shows:  shownWidth(), rivals: widthRivals(), level: Service, region: betweenLines,
		next: "Slide and seal drag the same in one loop. Where the maker allows it, test the cylinders with nothing on them and write the pressure that just moves them into mill.toml as off_load_drag; then analyze again.",
		advice: []string{
			"Look at the ways and gibs of the slide first: clean off rust, gum and packed dust, check the gib clearance, lubricate as the maker says. Ramp again and compare.",
			"If the loop stays as wide, have the cylinder seals looked at: a rod that is scored, seals that are swollen or the wrong size.",
		},
	}
}

func slideRow() row {
	return row{
		key: Slide, name: "Rusted slide or gummed guide", causes: group(Slide),
		tests: []test{{fConstant, Above, mill.FrictionConstant}, {fProportional, Below, mill.FrictionProportional}, {fOffLoad, Below, mill.SealShare}},
		shows: shownWidth(), rivals: widthRivals(), level: Service, region: betweenLines,
		next: offLoadNext(),
		advice: []string{
			"Clean and inspect the ways, check the gib clearance, lubricate as the maker says.",
			"Ramp again afterwards: the constant part should fall by what the slide took.",
		},
	}
}

func offLoadNext() string {
	return "An off-load test of the cylinders, where the maker allows it, tells slide from seal: write the pressure that just moves them into mill.toml as off_load_drag."
}

func sealRow() row {
	return row{
		key: Seal, name: "Dragging cylinder seal", causes: group(Seal),
		tests: []test{{fConstant, Above, mill.FrictionConstant}, {fOffLoad, Above, mill.SealShare}},
		shows: shownWidth(), rivals: widthRivals(), level: Service, region: betweenLines,
		next: offLoadNext(),
		advice: []string{
			"Have the cylinder seals and rods looked at: scored rod, swollen or wrong seals, oil that does not suit them.",
			"After a long rest the first ramp is the worst: compare it with the later ones.",
		},
	}
}

func pinsRow() row {
	return row{
		key: Pins, name: "Drag that grows with the load", causes: group(Pins),
		tests: []test{{fProportional, Above, mill.FrictionProportional}, {fConstant, Below, mill.FrictionFlat}},
		shows: shownWidth(), rivals: widthRivals(), level: Service, region: betweenLines,
		next: "Grease the pins and links as the maker says and ramp again: the part that grows with the load should fall.",
		advice: []string{
			"Look at what carries the load and turns or slides under it: pins, links, clevis, thrust collar. Clean, lubricate as the maker says, look for galling.",
			"A card made before greasing does not hold after it: make a new one.",
		},
	}
}

func bothRow() row {
	return row{
		key: "constant-and-growing-drag", name: "Drag that is there at no load and grows with it",
		causes: group(Seal, Slide, Pins),
		tests:  []test{{fProportional, Above, mill.FrictionProportional}, {fConstant, Above, mill.FrictionFlat}},
		shows:  shownWidth(), rivals: widthRivals(), yields: []Key{Seal}, level: Service, region: betweenLines,
		next: "A seal drags both ways at once; a rusted slide together with dry pins looks the same. Grease the pins and clean the slide, ramp again, and see which part fell.",
		advice: []string{
			"Start with what is easy: clean and lubricate slide and pins as the maker says, ramp again.",
			"If both parts stay, have the cylinder seals and rods looked at.",
		},
	}
}

// growingRow is for a constant part that lies on the limit between the two rows
// above it.
func growingRow() row {
	r := bothRow()
	r.key, r.name = "growing-drag", "Drag that grows with the load, perhaps with a constant part"
	r.tests = []test{{fProportional, Above, mill.FrictionProportional}}
	r.yields = []Key{Pins, "constant-and-growing-drag"}
	return r
}

func wideRow() row {
	return row{
		key: "wide-loop", name: "Wide loop, neither part beyond its limit alone",
		causes: group(Slide, Seal, Pins),
		tests:  []test{{fHalf, Above, mill.FrictionWide}},
		shows:  shownWidth(), level: Service, region: betweenLines,
		rivals: append(widthRivals(),
			rival{"a constant part beyond its own limit", []test{{fConstant, Above, mill.FrictionConstant}}},
			rival{"a growing part beyond its own limit", []test{{fProportional, Above, mill.FrictionProportional}}}),
		next: "Clean and lubricate slide and pins as the maker says, ramp again, and see which part of the half-width fell.",
		advice: []string{
			"Clean and lubricate slide, guides, pins and links as the maker says, then ramp again.",
			"If the loop stays as wide, have the cylinder seals looked at.",
		},
	}
}

// widthRivals are what else opens a loop.
func widthRivals() []rival {
	return []rival{
		{"lag between the instruments", []test{{fLagWidth, Above, mill.LagWidth}}},
		{"a mount that slipped between the branches", slipTests()},
		{"stick-slip", jumpTests()},
	}
}
