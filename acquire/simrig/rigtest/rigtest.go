// Package rigtest is for tests that need many rehearsals: it turns one into
// the pairs that a recording of it would give, without lines, clocks and
// files. Start with Set.
package rigtest

import (
	"fmt"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/simrig"
	"tautramp/protocol"
)

// Set runs a whole rehearsal flat out and pairs what its sensors read. Time
// is the rig's own, in s from power-on; two boards are as one. Its errors are
// simrig.New's and pairing.ErrNoPairs.
func Set(c simrig.Config) (*pairing.Set, simrig.Truth, error) {
	rig, err := simrig.New(c)
	if err != nil {
		return nil, simrig.Truth{}, err
	}
	set, err := Of(rig)
	return set, rig.Truth(), err
}

// Of is Set for a rig that is there already.
func Of(rig *simrig.Rig) (*pairing.Set, error) {
	all, err := rig.Samples()
	if err != nil {
		return nil, err
	}
	quantity := settingOf(rig.Tensioner().SetBy)
	var setting, extension *pairing.Channel
	var others []pairing.Channel
	for _, s := range all {
		c := channel(s)
		switch q := s.Spec.Quantity; {
		case q == quantity && setting == nil:
			setting = &c
		case q == protocol.Extension && extension == nil:
			extension = &c
		default:
			others = append(others, c)
		}
	}
	if setting == nil || extension == nil {
		return nil, fmt.Errorf("%w: the rig measures no %s or no extension", pairing.ErrNoPairs, quantity)
	}
	set, err := pairing.FromChannels(*setting, *extension, others, 1e-6)
	set.Plan.Exercise, set.Plan.Ramps = rig.Plan()
	set.Simulated = true
	return set, err
}

func settingOf(by mill.SetBy) protocol.Quantity {
	switch by {
	case mill.SetByTorque:
		return protocol.Torque
	case mill.SetByTurns:
		return protocol.Angle
	case mill.SetBySpring:
		return protocol.Spring
	}
	return protocol.Pressure
}

// channel puts the samples of one channel into SI.
func channel(s simrig.Samples) pairing.Channel {
	c := pairing.Channel{Device: s.Board, Spec: s.Spec, CountSI: protocol.LeastSI(s.Spec),
		PeriodS: float64(s.Spec.Period) / float64(s.TickHz)}
	c.Readings = make([]pairing.Reading, len(s.Samples))
	base := protocol.ToSI(s.Spec, 0)
	unit := protocol.ToSI(s.Spec, 1) - base
	for i, v := range s.Samples {
		c.Readings[i] = pairing.Reading{T: v.T, Value: base + unit*float64(v.Count), Status: v.Status}
	}
	return c
}
