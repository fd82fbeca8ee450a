package analyze

import (
	"fmt"
	"math"
)

// What the mounting of the rig may do to the stretch where the profile does not
// say. Judgement.
const (
	assumedWarmthK = 5.0 / 9 // 1 degF
	assumedTilt    = 2 * math.Pi / 180
	// Of the gauge length: an indicator 15 mm off mid-thickness and a band that
	// still bends by 1 km of radius between zero and target.
	assumedCurl = 15e-6
)

// Band steel grows by this share for each kelvin, at most and at least by what is
// published: 10.4e-6 (DOE-HDBK-1017/2-93) to 12e-6.
const (
	expansionPerK = 11.5e-6
	expansionLow  = 10.4e-6
	expansionHigh = 12.0e-6
	poisson       = 0.3
)

// mounting is what temperature, the bar's direction and curl leave in doubt,
// each taken as rectangular within its limit.
func (s *Setup) mounting() {
	r := s.Rig
	warmth, from := assumedWarmthK, "assumed 1 degF"
	if r.WarmthLimit.Given() {
		warmth, from = r.WarmthLimit.SI, r.WarmthLimit.Entered
	}
	spread := (expansionHigh - expansionLow) / math.Sqrt(12)
	s.WarmthStd = warmth / math.Sqrt(3) * math.Hypot(expansionPerK, spread)
	s.WarmthFrom = fmt.Sprintf("%s x 11.5e-6 per K (10.4 to 12e-6 published)", from)
	tilt := assumedTilt
	if r.Misalignment.Given() {
		tilt = r.Misalignment.SI
	}
	s.CosineStd = (1 + poisson) * tilt * tilt / math.Sqrt(3)
	if r.Faces >= 2 {
		return
	}
	s.CurlSd = assumedCurl * r.GaugeLength.SI / math.Sqrt(3)
	if r.Curl.Given() {
		s.CurlSd = r.Curl.SI / math.Sqrt(3)
	}
}

// mountingSources is what the rig cannot see of itself. Curl and warmth shift a
// loaded band's stretch against a slack one's; a zero by the slack lift is of the
// loaded band, and free of both.
func (w *work) mountingSources() []source {
	s := w.setup
	list := []source{
		{name: "temperature of band and rig", from: s.WarmthFrom, enter: inTruth, flat: true, moves: []mover{shiftExtension(s.WarmthStd*s.GaugeM.Value, false)}},
		{name: "bar not along the band", from: "(1 + 0.3) x the angle squared / sqrt 3", enter: inTruth, flat: true, moves: []mover{func(r ramp, k constants, by float64) (ramp, constants) {
			k.gaugeM *= 1 - by*s.CosineStd
			return r, k
		}}},
	}
	if s.CurlSd > 0 {
		list = append(list, source{name: "curl, one face measured", from: "limit of what it may feign / sqrt 3", enter: inTruth, flat: true, moves: []mover{shiftExtension(s.CurlSd, false)}})
	}
	return list
}
