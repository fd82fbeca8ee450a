package simrig

import "math"

// Chain is what gives way between the wheel's slide and the band beside the
// band itself, and where the wheel's travel ends. Under oil it only changes
// the travel; under a screw that is set by turns it changes the pull.
type Chain struct {
	FrameNM     float64 // stiffness of frame and shaft; 0 means rigid
	TyreMN      float64 // m per newton by which the tyres give at once; 0 means none
	TyreCreepMN float64 // m per newton by which they give later, near enough with the logarithm of time from 2 s to 10 min; 0 means none
	ToeM        float64 // travel that slack joints and tyres take before they bear; 0 means none
	ToeN        float64 // ToeM: pull at which all but 1/e of it is taken; 0 means 1,500 N
	EndM        float64 // travel beyond the taut band at which the wheel meets its upper stop; 0 means none
	BrakeN      float64 // pull that brake or dragging wheel can carry from span to span; 0 means none, the spans pull alike
	Lopsided    float64 // with BrakeN: difference of the spans, part of their mean, while the wheel cannot turn
}

// tyreS are the times of the tyres' late give, s: evenly spread on a logarithm,
// which makes it look like one.
func tyreS() [3]float64 { return [3]float64{4, 40, 400} }

// chain is the way from the travel of the wheel to the pull of the band.
type chain struct {
	Chain
	bandNM float64    // wheel pull per metre with the band taut: 4 E A_b / loop
	warmM  float64    // lengthening of the half loop by warmth
	crept  [3]float64 // m that the tyres have given late
	pullN  float64    // now, both spans
	skewN  float64    // pull of span 1 less that of span 2

	// For this step.
	soft float64 // m/N
	offM float64 // travel that carries no pull
	part [3]float64
}

func (c *chain) begin(dt float64) {
	c.soft = 1/c.bandNM + c.TyreMN
	if c.FrameNM > 0 {
		c.soft += 1 / c.FrameNM
	}
	c.offM = c.warmM
	if c.TyreCreepMN == 0 {
		return
	}
	for i, s := range tyreS() {
		c.part[i] = settles(dt, s)
		c.soft += c.TyreCreepMN / 3 * c.part[i]
		c.offM += c.crept[i] * (1 - c.part[i])
	}
}

// pull is the pull of both spans at a travel of the wheel at the end of the
// step, and by how much it grows for each metre.
func (c *chain) pull(travelM float64) (pullN, slopeNM float64) {
	x := travelM - c.offM
	if x <= 0 {
		return 0, 0
	}
	if c.ToeM == 0 {
		return x / c.soft, 1 / c.soft
	}
	f := x / c.soft
	for range 30 {
		left := math.Exp(-f / c.ToeN)
		slope := c.soft + c.ToeM/c.ToeN*left
		off := f*c.soft + c.ToeM*(1-left) - x
		f = max(0, f-off/slope)
		slopeNM = 1 / slope
		if math.Abs(off) < 1e-13 {
			break
		}
	}
	return f, slopeNM
}

// stopStiff is the stiffness of the upper stop, in those of the band.
const stopStiff = 100

// endStop is the push of the upper stop on the wheel, and its slope.
func (c *chain) endStop(travelM float64) (forceN, slopeNM float64) {
	if c.EndM == 0 || travelM <= c.EndM {
		return 0, 0
	}
	return stopStiff * c.bandNM * (travelM - c.EndM), stopStiff * c.bandNM
}

// end carries the chain over the step.
func (c *chain) end(travelM float64) {
	before := c.pullN
	c.pullN, _ = c.pull(travelM)
	if c.TyreCreepMN > 0 {
		for i := range c.crept {
			c.crept[i] += (c.TyreCreepMN/3*c.pullN - c.crept[i]) * c.part[i]
		}
	}
	if c.BrakeN > 0 {
		// The difference builds up with the pull until the wheel turns against its drag.
		skew := c.skewN + c.Lopsided/2*(c.pullN-before)
		c.skewN = max(-c.BrakeN, min(c.BrakeN, skew))
		if c.pullN == 0 {
			c.skewN = 0
		}
	}
}

// spanN is the pull of span 1 or 2.
func (c *chain) spanN(span int) float64 {
	if span == 2 {
		return max(0, (c.pullN-c.skewN)/2)
	}
	return max(0, (c.pullN+c.skewN)/2)
}
