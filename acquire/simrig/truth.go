package simrig

import (
	"math"

	"tautramp/acquire/mill"
)

// Truth is what was planted, for tests. It never goes on the wire. Settings
// follow from the force balance of a steady ramp, p A* = S(1 +/- mu) +/- F0
// with S = F + W and F = 2 sigma A_b; the integration knows nothing of it.
// With the Stribeck and LuGre laws F0 and mu are those of fast sliding.
type Truth struct {
	SetBy     mill.SetBy
	F0N       float64    // constant friction
	Mu        float64    // friction proportional to the load
	SealPart  float64    // friction proportional to the push of the oil
	WeightN   float64    // W
	AreaM2    float64    // A*
	ModulusPa float64    // E
	GaugeM    float64    // L
	NetAreaM2 float64    // A_b, one span
	ZeroM     float64    // what the indicator shows of a slack band, before its display rounds
	ZeroPa    float64    // what the setting's gauge shows of nothing; SI of the setting
	GaugeSpan float64    // of that gauge: shown = true * span + zero
	Screw     ScrewTruth // not set by pressure
	// Cycles is the friction of each cycle of the drive, exercise first, and of four
	// more after its end.
	Cycles []CycleFriction
}

// CycleFriction is the friction of one cycle.
type CycleFriction struct{ F0N, Mu float64 }

// Shown is what the setting's gauge shows of a true setting, but for its noise,
// bow, lag and stick.
func (t Truth) Shown(settingSI float64) float64 { return settingSI*t.GaugeSpan + t.ZeroPa }

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

// ScrewTruth is what was planted of a screw and what it works on.
type ScrewTruth struct {
	LeadM, MeanM, FlankRad float64
	CollarM                float64 // mean radius
	ThreadMu, CollarMu     float64
	RestNM                 float64 // T0
	PlayRad                float64
	Ratio                  float64 // travel of the screw / of the wheel
	SpringNM               float64 // N/m, all springs
	GiveMN                 float64 // of band, frame and tyres together: wheel travel per newton of pull
	SlackM                 float64 // wheel travel before the band is taut
	FreeM                  float64 // length of the spring without a load
	Shorter                bool    // under load
}

// Setting is the true setting, SI as the wire carries it, at a band stress
// reached from below or from above: Pa; N m of the turning hand; rad of the hand
// since the wheel lay on its stop; m of spring. It holds where nothing creeps,
// binds, or bears late.
func (t Truth) Setting(stressPa float64, rising bool) float64 {
	switch t.SetBy {
	case mill.SetByTorque:
		return t.TorqueNM(stressPa, rising)
	case mill.SetByTurns:
		return t.TurnRad(stressPa, rising)
	case mill.SetBySpring:
		squeeze := t.pushN(stressPa, rising) / t.Screw.SpringNM
		if t.Screw.Shorter {
			return t.Screw.FreeM - squeeze
		}
		return t.Screw.FreeM + squeeze
	}
	if rising {
		return t.RisingPa(stressPa)
	}
	return t.FallingPa(stressPa)
}

// pushN is the force of the springs at a band stress.
func (t Truth) pushN(stressPa float64, rising bool) float64 {
	s := t.PullN(stressPa) + t.WeightN
	if rising {
		return (s*(1+t.Mu) + t.F0N) / t.Screw.Ratio
	}
	return (s*(1-t.Mu) - t.F0N) / t.Screw.Ratio
}

// TorqueNM is the torque of a hand that turns the screw one way or the other,
// by the usual power screw equations; loosening a screw that holds by itself
// takes a torque below zero.
func (t Truth) TorqueNM(stressPa float64, rising bool) float64 {
	s := t.Screw
	lead, rub := math.Atan(s.LeadM/(2*math.Pi*s.MeanM)), math.Atan(s.ThreadMu/math.Cos(s.FlankRad))
	push := t.pushN(stressPa, rising)
	if rising {
		return push*(s.MeanM*math.Tan(lead+rub)+s.CollarMu*s.CollarM) + s.RestNM
	}
	return push*(s.MeanM*math.Tan(lead-rub)-s.CollarMu*s.CollarM) - s.RestNM
}

// TurnRad is the turn of the hand since the wheel lay on its stop, the play
// taken up on the way up.
func (t Truth) TurnRad(stressPa float64, rising bool) float64 {
	s := t.Screw
	travel := s.Ratio*(s.SlackM+t.PullN(stressPa)*s.GiveMN) + t.pushN(stressPa, rising)/s.SpringNM
	turn := travel * 2 * math.Pi / s.LeadM
	if rising {
		turn += s.PlayRad
	}
	return turn
}
