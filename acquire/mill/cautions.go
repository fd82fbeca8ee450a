package mill

import (
	"fmt"
	"strings"
)

// Cautions are doubts about a profile that Parse accepted: figures that are
// possible but more often a slip, and figures that are missing. Each is one
// sentence that names its place. The limits are judgement.
func (p *Profile) Cautions() []string {
	var c cautions
	for _, t := range p.Tensioners {
		c.tensioner(t)
		c.instrument(p, "tensioner "+t.Name, MeasuresSetting, t.SettingDim())
	}
	for _, b := range p.Bands {
		c.band(b)
	}
	c.rig(p.Rig)
	c.instrument(p, "rig", MeasuresExtension, DimLength)
	return c
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
	c.outside(place, "bore", t.Bore.Quantity, 0.5*inchM, 12*inchM, "0.5 to 12 in (13 to 305 mm)")
	if t.SetBy == SetByPressure && t.GeometryAreaM2() == 0 {
		c.about(place, "without cylinders and bore the measured slope cannot be checked against geometry")
	}
	if t.TravelRatio != 0 && (t.TravelRatio < 0.2 || t.TravelRatio > 5) {
		c.about(place, "travel ratio %g is unusual: it is cylinder travel / wheel travel", t.TravelRatio)
	}
}

func (c *cautions) band(b Band) {
	place := "band " + b.Name
	c.outside(place, "thickness", b.Thickness.Quantity, 0.01*inchM, 0.2*inchM, "0.01 to 0.2 in (0.25 to 5 mm)")
	c.outside(place, "net width", b.NetWidth.Quantity, 0.2*inchM, 20*inchM, "0.2 to 20 in (5 to 508 mm)")
	c.outside(place, "target", b.Target.Quantity, 1000*psiPa, 40000*psiPa, "1,000 to 40,000 psi (7 to 276 MPa)")
	c.outside(place, "modulus", b.Modulus.Quantity, 26e6*psiPa, 32e6*psiPa, "26 to 32 Mpsi (179 to 221 GPa) of steel")
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
		c.about(place, "no instrument for the %s is written down: its error is left out of the uncertainty", measures)
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
