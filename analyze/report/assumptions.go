package report

import (
	"fmt"
	"strings"

	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// assumptions are what the figures rest on and nobody measured here.
func assumptions(r *analyze.Result, u units) []fact {
	s := r.Setup
	facts := []fact{
		{"Band's modulus E", figureOf(s.ModulusPa, modulusUnit(u)).String()},
		{"Gauge length L", figureOf(s.GaugeM, u.section).String()},
		{"Net width", lengthText(s.Band.NetWidth, u.section) + ", back to gullet bottom: teeth carry nothing"},
		{"Net area", areaText(s.NetAreaM2, u.area) + ", " + lengthText(s.Band.Thickness, u.section) + " thick"},
		{"Faces measured", facesText(s.Rig.Faces)},
		{"Zero", zeroText(r)},
	}
	facts = append(facts, otherZeros(r, u)...)
	facts = append(facts, []fact{
		{"Least count", countText(s.CountM, u.extension) + " stretch, " + countText(s.CountSI, u.setting)},
	}...)
	if s.GeometryM2 > 0 {
		facts = append(facts, fact{"Area by geometry", areaText(s.GeometryM2, u.area)})
	}
	if material := clean(s.Rig.Material, nameLength); material != "" {
		facts = append(facts, fact{"Measuring bar", material})
	}
	return facts
}

// modulusUnit is a thousand thousand psi, or GPa.
func modulusUnit(u units) unit {
	if strings.HasSuffix(u.stress.name, "MPa") {
		return unit{"GPa", u.stress.factor * 1e3}
	}
	return unit{"million psi", u.stress.factor * 1e6}
}

func areaText(m2 float64, u unit) string {
	if !finite(m2) || m2 <= 0 {
		return notKnown
	}
	return u.with(plain(u.show(m2), 4))
}

func countText(si float64, u unit) string {
	if !finite(si) || si <= 0 {
		return notKnown
	}
	return u.with(plain(u.show(si), 3))
}

func facesText(faces int) string {
	if faces == 2 {
		return "2, their mean"
	}
	return "1: bending reads as band stress"
}

// zeroText is the convention of the zero, one for each fitted cycle.
func zeroText(r *analyze.Result) string {
	var from []string
	var last estimate.Estimate
	seen := map[string]bool{}
	for _, c := range r.Cycles {
		if c.Role != analyze.Ramp {
			continue
		}
		last = c.Zero
		name := named(c.ZeroFrom, "")
		if name != "" && !seen[name] {
			seen[name] = true
			from = append(from, name)
		}
	}
	if len(from) == 0 {
		if why := unknownWhy(last); why != "" {
			return notKnown + ": " + why
		}
		return notKnown + ": no fitted cycle has one"
	}
	text := "stretch at no wheel pull, one a cycle for both directions; from: " + strings.Join(from, ", ")
	if n := r.Marks.Agree; n > 0 {
		text += fmt.Sprintf("; operator's zero marks that agree: %d", n)
	}
	return text
}

// unchecked is what nobody looked at, and the reader may think somebody did.
// What the profile leaves out is among the warnings.
func unchecked() []string {
	return []string{
		"These settings by a fresh approach, with the band stress read again.",
		"Band stress while the mill runs: speed and heat change it.",
		"Temperatures of band and rig: they are not used.",
		"The other span, and other bands on this tensioner.",
	}
}

// otherZeros are the settings by the conventions of the zero that are not in
// use.
func otherZeros(r *analyze.Result, u units) []fact {
	var facts []fact
	for _, z := range r.Zeros {
		if z.Used || !z.Rising.Known() || !z.Falling.Known() {
			continue
		}
		facts = append(facts, fact{"By the " + clean(z.Name, nameLength), fmt.Sprintf("%s rising, %s falling",
			figureOf(z.Rising, u.setting).short(), figureOf(z.Falling, u.setting).short())})
	}
	return facts
}
