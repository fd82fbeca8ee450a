package analyze

import (
	"math"

	"tautramp/acquire/mill"
)

// ScrewLaw is the torque of a power screw with a collar, after the equations of
// the machine-design textbooks:
//
//	raise:  T = F (d_m/2) tan(phi' + lambda) + mu_c F r_c + T0
//	loosen: T = F (d_m/2) tan(phi' - lambda) + mu_c F r_c + T0, the other way
//	tan lambda = l / (pi d_m), tan phi' = mu / cos alpha
//
// Torques are counted positive in the sense of their own turning: a screw that
// does not lock itself has a loosening torque below nothing.
type ScrewLaw struct {
	LeadM, PitchDiameterM float64 // l, d_m
	FlankRad              float64 // alpha
	CollarM               float64 // r_c
	ThreadMu, CollarMu    float64
	RestNm                float64 // T0
}

// expectedLaw is a screw with the frictions that the profile expects of it.
func expectedLaw(s mill.Screw) ScrewLaw {
	return ScrewLaw{
		LeadM: s.Lead.SI, PitchDiameterM: s.PitchDiameterM(), FlankRad: s.FlankRad(), CollarM: s.CollarRadius.SI,
		ThreadMu: s.ThreadFriction, CollarMu: s.CollarFriction, RestNm: s.RestTorque.SI,
	}
}

// slope is tan lambda.
func (s ScrewLaw) slope() float64 { return s.LeadM / (math.Pi * s.PitchDiameterM) }

// perN is the torque for each newton of load, rest torque left out.
func (s ScrewLaw) perN(sign float64) float64 {
	u, l := s.ThreadMu/math.Cos(s.FlankRad), s.slope()
	return s.PitchDiameterM/2*(u+sign*l)/(1-sign*u*l) + s.CollarMu*s.CollarM
}

// Raise is the torque in N m that turns the screw against a load in newtons.
func (s ScrewLaw) Raise(loadN float64) float64 { return s.perN(+1)*loadN + s.RestNm }

// Loosen is the torque in N m that turns it with the load, in the other sense.
func (s ScrewLaw) Loosen(loadN float64) float64 { return s.perN(-1)*loadN + s.RestNm }

// Load is the load in newtons that a raising torque in N m brings up.
func (s ScrewLaw) Load(torqueNm float64) float64 { return (torqueNm - s.RestNm) / s.perN(+1) }

// Efficiency is the work of the lead over that of the torque, F l / (2 pi T).
func (s ScrewLaw) Efficiency(loadN float64) float64 {
	return loadN * s.LeadM / (2 * math.Pi * s.Raise(loadN))
}

// threadMu is the thread friction whose torques, raising and loosening, have
// the mean given for each newton of load, the collar's share taken off:
//
//	mean = (d_m/2) u (1 + t^2) / (1 - u^2 t^2), u = tan phi', t = tan lambda
//
// The mean knows the lead only to second order.
func (s ScrewLaw) threadMu(meanPerN float64) float64 {
	m, t := 2*(meanPerN-s.CollarMu*s.CollarM)/s.PitchDiameterM, s.slope()
	u := 2 * m / (1 + t*t + math.Sqrt((1+t*t)*(1+t*t)+4*m*m*t*t))
	return u * math.Cos(s.FlankRad)
}

// leadShare is half the difference of the two torques for each newton of load:
// the lead's work, and what the inclined flanks add to it.
func (s ScrewLaw) leadShare() float64 { return (s.perN(+1) - s.perN(-1)) / 2 }
