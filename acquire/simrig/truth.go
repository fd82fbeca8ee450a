package simrig

// Truth is what was planted, for tests. It never goes on the wire. Settings
// follow from the force balance of a steady ramp, p A* = S(1 +/- mu) +/- F0
// with S = F + W and F = 2 sigma A_b; the integration knows nothing of it.
// With the Stribeck and LuGre laws F0 and mu are those of fast sliding.
type Truth struct {
	F0N       float64 // constant friction
	Mu        float64 // friction proportional to the load
	SealPart  float64 // friction proportional to the push of the oil
	WeightN   float64 // W
	AreaM2    float64 // A*
	ModulusPa float64 // E
	GaugeM    float64 // L
	NetAreaM2 float64 // A_b, one span
	ZeroM     float64 // what the indicator shows of a slack band, before its display rounds
	ZeroPa    float64 // what the transducer shows of no pressure
	// Cycles is the friction of each cycle of the drive, exercise first, and of four
	// more after its end.
	Cycles []CycleFriction
}

// CycleFriction is the friction of one cycle.
type CycleFriction struct{ F0N, Mu float64 }

// InCycle is the truth of one cycle, from 0; a few beyond the drive's last are
// known too, the next settings.
func (t Truth) InCycle(i int) Truth {
	t.F0N, t.Mu = t.Cycles[i].F0N, t.Cycles[i].Mu
	return t
}

// PullN is the pull of both spans at a band stress.
func (t Truth) PullN(stressPa float64) float64 { return 2 * stressPa * t.NetAreaM2 }

// ExtensionM is the extension at a band stress, by Hooke.
func (t Truth) ExtensionM(stressPa float64) float64 { return t.GaugeM * stressPa / t.ModulusPa }

// RisingPa is the true pressure at a band stress, reached from below.
func (t Truth) RisingPa(stressPa float64) float64 {
	return ((t.PullN(stressPa)+t.WeightN)*(1+t.Mu) + t.F0N) / (t.AreaM2 * (1 - t.SealPart))
}

// FallingPa is the true pressure at a band stress, reached from above.
func (t Truth) FallingPa(stressPa float64) float64 {
	return ((t.PullN(stressPa)+t.WeightN)*(1-t.Mu) - t.F0N) / (t.AreaM2 * (1 + t.SealPart))
}

// LiftRisingPa is the slack lift on the way up: the pressure that moves the
// wheel while the band is slack.
func (t Truth) LiftRisingPa() float64 { return t.RisingPa(0) }

// LiftFallingPa is the slack lift on the way down. At or below 0 the band does
// not go slack by letting the oil out.
func (t Truth) LiftFallingPa() float64 { return t.FallingPa(0) }
