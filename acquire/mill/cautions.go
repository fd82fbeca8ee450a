package mill

import (
	"fmt"
	"strings"
)

// Cautions are doubts about a profile that Parse accepted: figures that are
// possible but more often a slip, and figures that are missing. Each is one
// sentence that names its place. The limits are judgement.
func (p *Profile) Cautions() []string { return append(p.doubts(), p.gaps()...) }

// doubts are the figures that are more often a slip.
func (p *Profile) doubts() []string {
	var c cautions
	for _, t := range p.Tensioners {
		c.tensioner(t)
	}
	for _, b := range p.Bands {
		c.band(b)
	}
	c.rig(p.Rig)
	return c
}

// gaps are the figures that are missing.
func (p *Profile) gaps() []string {
	var c cautions
	for _, t := range p.Tensioners {
		place := "tensioner " + t.Name
		if what := t.lacks(); what != "" {
			c.about(place, "%s", what)
		}
		c.instrument(p, place, MeasuresSetting, t.SettingDim())
	}
	c.instrument(p, "rig", MeasuresExtension, DimLength)
	return c
}

// lacks says what the profile does not give of how the setting becomes wheel
// pull, and what cannot be done without it.
func (t Tensioner) lacks() string {
	switch {
	case t.SetBy == SetByPressure && t.GeometryAreaM2() == 0:
		return "without cylinders and bore the measured slope cannot be checked against geometry"
	case t.SetBy == SetByTorque && t.Screw == nil:
		return "without [tensioner.screw] the friction of its screw cannot be worked out"
	case t.SetBy == SetByTurns && t.WheelTravelM() == 0:
		return "without [tensioner.turns] and its lead the turns cannot be checked against what gives way"
	case t.SetBy == SetBySpring && t.Spring == nil:
		return "without [tensioner.spring] nothing says which way its length goes under load: a capture by spring length is refused"
	}
	return ""
}

// cautions collects sentences; about puts the place before each.
type cautions []string

func (c *cautions) about(place, format string, args ...any) {
	*c = append(*c, place+": "+fmt.Sprintf(format, args...))
}

// outside notes a given quantity that lies outside the usual range.
func (c *cautions) outside(place, what string, q Quantity, low, high float64, usual string) {
	if q.Given() && (q.SI < low || q.SI > high) {
		c.about(place, "%s %s is outside the usual %s: check the number and its unit", what, q, usual)
	}
}

func (c *cautions) tensioner(t Tensioner) {
	place := "tensioner " + t.Name
	c.outside(place, "bore", t.Bore.Quantity, 0.5*inchM, 20*inchM, "0.5 to 20 in (13 to 508 mm)")
	if t.SetBy == SetByPressure { // from an air bag to a press; what a mill's hoses and gauges are made for lies between
		c.outside(place, "setting limit", t.SettingLimit.Quantity, 20*psiPa, 10000*psiPa, "20 to 10,000 psi (1.4 to 690 bar)")
	}
	if t.TravelRatio != 0 && (t.TravelRatio < 0.2 || t.TravelRatio > 5) {
		c.about(place, "travel ratio %g is unusual: it is cylinder, screw or spring travel / wheel travel", t.TravelRatio)
	}
	c.drivetrain(place, t)
}

func (c *cautions) drivetrain(place string, t Tensioner) {
	if s := t.Screw; s != nil {
		c.outside(place, "screw diameter", s.Diameter.Quantity, 8e-3, 120e-3, "0.3 to 4.7 in (8 to 120 mm)")
		if !s.PitchDiameter.Given() && s.Lead.SI > 0.3*s.Diameter.SI { // one start has 0.13 to 0.25 of the diameter (ISO 2904; from memory)
			c.about(place, "a lead of %s is much for one start on %s: give the pitch_diameter of a thread of several starts", s.Lead, s.Diameter)
		}
	}
	if s := t.Spring; s != nil {
		c.outside(place, "spring rate", s.Rate.Quantity, 1e3, 1e9, "1 N/mm to 1,000 kN/mm (6 lbf/in to 5.7 million lbf/in)")
		if s.UnderLoad == Shorter && t.SetBy == SetBySpring && t.SettingLimit.SI < s.BindLength.SI {
			c.about(place, "the setting limit %s lies beyond the length %s at which the spring binds", t.SettingLimit, s.BindLength)
		}
	}
}

// leastSlim is how many times its thickness a band is wide at least: the example's
// narrowest is 33 times.
const leastSlim = 10

func (c *cautions) band(b Band) {
	place := "band " + b.Name
	c.outside(place, "thickness", b.Thickness.Quantity, 0.01*inchM, 0.2*inchM, "0.01 to 0.2 in (0.25 to 5 mm)")
	c.outside(place, "net width", b.NetWidth.Quantity, 0.2*inchM, 24*inchM, "0.2 to 24 in (5 to 610 mm)")
	c.outside(place, "target", b.Target.Quantity, 1000*psiPa, 40000*psiPa, "1,000 to 40,000 psi (7 to 276 MPa)")
	c.outside(place, "modulus", b.Modulus.Quantity, 180e9, 220e9, "180 to 220 GPa (26 to 32 Mpsi) of steel")
	if b.NetWidth.Given() && b.NetWidth.SI < leastSlim*b.Thickness.SI {
		c.about(place, "net width %s is less than %d times the thickness %s: check both numbers and their units", b.NetWidth, leastSlim, b.Thickness)
	}
	if gross := b.GrossWidth; gross.Given() && b.NetWidth.SI < 0.7*gross.SI {
		c.about(place, "net width %s is more than 30 %% below the gross width %s: measure from the back to the gullet bottom again",
			b.NetWidth, gross)
	}
}

func (c *cautions) rig(r Rig) {
	c.outside("rig", "gauge length", r.GaugeLength.Quantity, 4*inchM, 80*inchM, "4 to 80 in (0.1 to 2 m)")
	c.outside("rig", "gauge length uncertainty", r.GaugeLengthStd.Quantity, 0, r.GaugeLength.SI/50, "2 % of the gauge length or less")
	if r.Material != "" && !strings.Contains(strings.ToLower(r.Material), "steel") {
		c.about("rig", "a bar of %s does not grow with heat as the band does: work in the shade and keep the test short", r.Material)
	}
}

// instrument notes what is not known of the instrument that the figures rest on.
func (c *cautions) instrument(p *Profile, place, measures string, d Dim) {
	i, ok := p.FindInstrument(measures, d, "")
	if !ok {
		what := "setting"
		if measures == MeasuresExtension {
			what = "stretch"
		}
		c.about(place, "no instrument for the %s is written down: its error is left out of the uncertainty", what)
		return
	}
	place = "instrument " + i.Name
	if !i.Limit.Given() {
		c.about(place, "no limit is given: its error is left out of the uncertainty")
	}
	if i.Due == "" {
		c.about(place, "no day is given on which its check is due")
	}
}
