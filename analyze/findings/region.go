package findings

import (
	"math"
)

// Region is where in the loop a finding is seen.
type Region struct {
	Words         string
	LowSI, HighSI float64 // settings; NaN where it is in no picture of the loop
	LowPa, HighPa float64 // band stresses; NaN where the zero is not known
	LowM, HighM   float64 // stretch as indicated
	FromS, UntilS float64 // s; NaN where it belongs to no time
}

type regionKind int

const (
	nowhere regionKind = iota
	betweenLines
	risingLine
	bothLines
	topEnd
	lowEnd
	atHold
	atStep
	atTurn
)

// region is the box about what a finding rests on.
func (d *data) region(kind regionKind) Region {
	nan := math.NaN()
	r := Region{LowSI: nan, HighSI: nan, LowM: nan, HighM: nan, LowPa: nan, HighPa: nan, FromS: nan, UntilS: nan}
	low, high := d.r.Rising.LowSI, d.r.Rising.HighSI
	if !(high > low) {
		return r
	}
	box := func(words string, fromSI, toSI, fromM, toM float64) {
		r.Words, r.LowSI, r.HighSI, r.LowM, r.HighM = words, fromSI, toSI, fromM, toM
	}
	span := high - low
	switch kind {
	case betweenLines:
		at := d.workingSI
		box("the gap between the two lines", at-math.Max(d.lockSI, 0.03*span), at+0.01*span, d.up.at(at-0.03*span), d.up.at(at+0.03*span))
	case risingLine:
		box("stairs on the lines", low+0.3*span, high, d.up.at(low+0.3*span), d.up.at(high))
	case bothLines:
		box("the slope of both lines", low, high, d.up.at(low), d.down.at(high))
	case topEnd:
		box("the top of the rising line", high-0.12*span, high, d.up.at(high-0.15*span), d.down.at(high))
	case lowEnd:
		box("the foot of the loop", math.Max(0, low-0.15*span), low+0.1*span, d.zeroM(), d.up.at(low+0.1*span))
	case atTurn:
		box("the turn at the top", high-math.Max(d.lockSI, 0.05*span), high, d.up.at(high)-0.02*span*d.up.b, d.up.at(high)+0.02*span*d.up.b)
	case atHold:
		d.holdBox(&r)
	case atStep:
		d.stepBox(&r)
	}
	r.LowPa, r.HighPa = d.stress(r.LowM), d.stress(r.HighM)
	return r
}

func (d *data) holdBox(r *Region) {
	h, ok := d.deepest()
	if !ok {
		return
	}
	r.Words, r.FromS, r.UntilS = "the hold", d.t[h.first], d.t[h.last]
	d.boxOver(r, h.first, h.last)
}

func (d *data) stepBox(r *Region) {
	j, ok := d.largestStep()
	if !ok {
		return
	}
	r.Words, r.FromS, r.UntilS = "the step", d.t[max(0, j.at-1)], d.t[j.at]
	d.boxOver(r, max(0, j.at-d.jumps.window), min(len(d.t)-1, j.at+d.jumps.window))
}

// boxOver is the box about some points, never thinner than can be seen.
func (d *data) boxOver(r *Region, first, last int) {
	r.LowSI, r.HighSI, r.LowM, r.HighM = math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
	for i := first; i <= last; i++ {
		r.LowSI, r.HighSI = math.Min(r.LowSI, d.p[i]), math.Max(r.HighSI, d.p[i])
		r.LowM, r.HighM = math.Min(r.LowM, d.e[i]), math.Max(r.HighM, d.e[i])
	}
	room := 0.015 * (d.r.Rising.HighSI - d.r.Rising.LowSI)
	r.LowSI, r.HighSI = r.LowSI-room, r.HighSI+room
	r.LowM, r.HighM = r.LowM-room*d.up.b, r.HighM+room*d.up.b
}

func (d *data) stress(eM float64) float64 {
	known := false
	for _, c := range d.r.Cycles {
		known = known || c.Zero.Known()
	}
	if !known {
		return math.NaN()
	}
	s := d.r.Setup
	return (eM - d.zeroM()) * s.ModulusPa.Value / s.GaugeM.Value
}
