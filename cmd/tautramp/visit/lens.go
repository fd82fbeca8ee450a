package visit

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/protocol"
)

// lens turns the settings of a visit into ones that rise and fall with the load,
// as the analysis does with the whole recording; see analyze's wrench for the
// three things that a torque shows. It only looks back, so what it says is
// provisional, as everything of a visit.
type lens struct {
	t        mill.Tensioner
	floor    float64 // torque that is no pull
	level    float64 // torque that turned the screw last
	loosens  bool    // by a torque of the other sign
	since    float64 // when that began
	loosened bool    // its torque has come up
}

// A torque that turns the screw stays above this share of the last one; below
// it the wrench is let go. Judgement, as the rest.
const (
	lensTurns  = 0.9
	lensFloor  = 0.01 // of the limit
	lensBuildS = 1.0  // in which a loosening torque comes up
)

func newLens(t mill.Tensioner) *lens {
	return &lens{t: t, floor: lensFloor * t.SettingLimit.SI}
}

// pair is a pair for the tracker.
func (l *lens) pair(p pairing.Pair) pairing.Pair {
	p.Setting = l.t.Rising(p.Setting)
	if l.t.SetBy == mill.SetByTorque {
		p.Setting = l.torque(p.T, p.Setting)
	}
	return p
}

// torque is the torque that turns the screw.
func (l *lens) torque(t, raw float64) float64 {
	switch {
	case raw < -l.floor && !l.loosens:
		l.loosens, l.loosened, l.since = true, false, t
	case raw < -l.floor && !l.loosened && t-l.since >= lensBuildS:
		l.loosened, l.level = true, -raw
	case raw < -l.floor && l.loosened && -raw >= lensTurns*l.level:
		l.level = -raw
	case raw > l.floor && l.loosens:
		l.loosens, l.level = false, raw
	case !l.loosens && raw >= lensTurns*l.level:
		l.level = raw
	}
	return l.level
}

// reading is a reading of the setting for the alarms: loosening too has a limit,
// and the end of a scale that matters is the one towards the load.
func (l *lens) reading(r pairing.Reading) pairing.Reading {
	r.Value = l.t.Rising(r.Value)
	if l.t.SetBy == mill.SetByTorque {
		r.Value = math.Abs(r.Value)
	}
	if l.t.FallsWithLoad() {
		switch r.Status {
		case protocol.High:
			r.Status = protocol.Low
		case protocol.Low:
			r.Status = protocol.High
		}
	}
	return r
}
