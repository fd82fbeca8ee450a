package simrig

import "math"

// Stretch is how the band's stretch shows between the rig's clamps, beside
// Hooke's law.
type Stretch struct {
	SeatingStrain float64 // largest strain held back while the band seats on the wheel; 0 means 2e-6, negative none
	SeatingPa     float64 // band stress at which most is held back; 0 means 2.76 MPa (400 psi)
	CurlM         float64 // false extension of this face once the band's curl is pulled out; 0 means none
	CurlPa        float64 // band stress that pulls all but 1/e of the curl out; 0 means 4 MPa
	DriftMS       float64 // m/s of steady drift of the mount from the start of the drive; 0 means none
	SlipM         float64 // sudden step of the mount; 0 means none
	SlipAtS       float64 // s after the start of the drive at which it slips
}

// gauge turns wheel pull into the extension between the clamps.
type gauge struct {
	Stretch
	lengthM   float64 // L
	modulusPa float64 // E
	netM2     float64 // A_b, one span
}

func newGauge(s Stretch, lengthM, modulusPa, netM2 float64) gauge {
	s.SeatingStrain = orNone(s.SeatingStrain, 2e-6)
	s.SeatingPa = orElse(s.SeatingPa, 2.76e6)
	s.CurlPa = orElse(s.CurlPa, 4e6)
	return gauge{Stretch: s, lengthM: lengthM, modulusPa: modulusPa, netM2: netM2}
}

// goneAt is the multiple of SeatingPa at which under 1e-11 of the most is left.
const goneAt = 30

// stressPa is the band stress under a wheel pull of both spans.
func (g *gauge) stressPa(pullN float64) float64 { return pullN / (2 * g.netM2) }

// extensionM is the true extension between the clamps t seconds into the
// drive: 0 with a slack band on a mount that keeps still. What the seating
// holds back rises to its most at SeatingPa and is gone a few times beyond.
func (g *gauge) extensionM(pullN, t float64) float64 {
	stress := g.stressPa(pullN)
	e := g.lengthM * stress / g.modulusPa
	if u := stress / g.SeatingPa; u < goneAt {
		e -= g.lengthM * g.SeatingStrain * u * math.Exp(1-u)
	}
	if g.CurlM != 0 {
		e += g.CurlM * (1 - math.Exp(-stress/g.CurlPa))
	}
	e += g.DriftMS * t
	if g.SlipM != 0 && t >= g.SlipAtS {
		e += g.SlipM
	}
	return e
}
