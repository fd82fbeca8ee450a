package findings

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

func (d *data) setBy(by mill.SetBy) bool { return d.r.Setup.Tensioner.SetBy == by }

// screw is the screw's efficiency over what the profile's frictions give.
func (d *data) screw() estimate.Estimate {
	if !d.setBy(mill.SetByTorque) {
		return estimate.Unknown("the tensioner is not set by torque")
	}
	return d.r.Screw.EffOfExpect
}

// idleTurn is the play of a tensioner set by turns: what is lost between rising
// and falling with the lines carried on to no pull.
func (d *data) idleTurn() estimate.Estimate {
	lost := d.r.Chain.LostIdle
	if !d.setBy(mill.SetByTurns) || !(d.workingSI > 0) {
		return estimate.Unknown("the tensioner is not set by turns")
	}
	return lost.Scale(1 / d.workingSI)
}

// bound is how far the setting went beyond where the springs went solid.
func (d *data) bound() estimate.Estimate {
	at := d.r.Chain.BoundRad
	if d.setBy(mill.SetBySpring) {
		at = d.r.Springs.BoundSI
	} else if !d.setBy(mill.SetByTurns) {
		return estimate.Unknown("no springs are seen in the setting")
	}
	switch {
	case !at.Known() && d.usable():
		return known(0, 0.01, math.Inf(1), "no knee was found")
	case !at.Known():
		return at
	}
	top := 0.0
	for _, c := range d.r.Cycles {
		top = math.Max(top, c.TopSI)
	}
	at.Value = top - at.Value
	return at.Scale(1 / math.Max(d.workingSI, math.SmallestNonzeroFloat64))
}

// give is how stiff frame, tyres and springs are, of what the profile says.
func (d *data) give() estimate.Estimate {
	if !d.setBy(mill.SetByTurns) {
		return estimate.Unknown("the tensioner is not set by turns")
	}
	return d.r.Chain.Expected
}
