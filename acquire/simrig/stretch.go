package simrig

import "math"

// Stretch is how the band's stretch shows between the rig's clamps, beside
// Hooke's law.
type Stretch struct {
	SeatingStrain float64 // largest strain held back while the band seats on the wheel; 0 means 2e-6, negative none
	SeatingPa     float64 // band stress at which most is held back; 0 means 2.76 MPa (400 psi)
	CurlM         float64 // false extension of face A once the band's curl is pulled out, its opposite on face B; 0 means none
	CurlPa        float64 // band stress that pulls all but 1/e of the curl out; 0 means 4 MPa
	DriftMS       float64 // m/s of steady drift of the mount from the start of the drive; 0 means none
	SlipM         float64 // sudden step of the mount; 0 means none
	SlipAtS       float64 // s after the start of the drive at which it slips
	LengthFactor  float64 // true gauge length / profile's; 0 means 1
	TiltRad       float64 // of the rig against the pull: shows 1 - (1 + nu) angle^2 of the stretch; 0 means none
}

// poisson is Poisson's ratio of steel (general knowledge).
const poisson = 0.29

// gauge turns the pull of one span into the extension between the clamps.
type gauge struct {
	Stretch
	heat      heat
	span      int     // 1 or 2
	lengthM   float64 // L, true
	modulusPa float64 // E, true
	netM2     float64 // A_b, one span, true
	shows     float64 // part of the stretch that the mount passes on
}

func newGauge(s Stretch, lengthM, modulusPa, netM2 float64) gauge {
	s.SeatingStrain = orNone(s.SeatingStrain, 2e-6)
	s.SeatingPa = orElse(s.SeatingPa, 2.76e6)
	s.CurlPa = orElse(s.CurlPa, 4e6)
	shows := 1 - (1+poisson)*s.TiltRad*s.TiltRad
	return gauge{Stretch: s, span: 1, lengthM: lengthM, modulusPa: modulusPa, netM2: netM2, shows: shows}
}

// goneAt is the multiple of SeatingPa at which under 1e-6 of the most is left.
const goneAt = 20

// extensionM is the true extension between the clamps t seconds into the
// drive: 0 with a slack band on a mount that keeps still. What the seating
// holds back rises to its most at SeatingPa and is gone a few times beyond.
func (g *gauge) extensionM(spanN, t float64) float64 {
	stress := spanN / g.netM2
	e := g.lengthM * stress / g.modulusPa * g.shows
	if u := stress / g.SeatingPa; u < goneAt {
		e -= g.lengthM * g.SeatingStrain * u * math.Exp(1-u)
	}
	if g.CurlM != 0 {
		e += g.CurlM * (1 - math.Exp(-stress/g.CurlPa))
	}
	e += g.DriftMS*t + g.heat.mountM(g.lengthM, t)
	if g.SlipM != 0 && t >= g.SlipAtS {
		e += g.SlipM
	}
	return e
}
