package simrig

import "math"

const atmospherePa = 101325

// Oil is what is wrong with the oil side of a tensioner set by pressure.
type Oil struct {
	AirM3     float64 // air in the oil, at the pressure of the open air; 0 means none
	AirS      float64 // s by which its warmth is gone after a stroke; 0 means 1.5
	HosePart  float64 // part of the give of hose and oil that follows late: a rebound after a release, a sag after a stroke; 0 means none
	HoseS     float64 // s by which it follows; 0 means 4
	LeakPerS  float64 // part of the pressure that leaks out of the cylinder each second while nothing moves; 0 means none
	CheckTee  bool    // the transducer sits on the pump's side of the check valve
	TeePerS   float64 // CheckTee: part of the reading lost each second behind the shut valve
	Give      float64 // give of oil and hoses, times that of stiff ones; 0 means 1
	VolumeM3  float64 // of oil locked in, for its warmth; 0 means 0.6 litres
	WarmingKS float64 // K/s of the oil from the start of the drive; 0 means none
}

// oil is the pump, its valve, the cylinders and what lies between.
type oil struct {
	Oil
	areaM2  float64 // A* = N A_c R, true
	giveM3P float64 // give of oil, hose and gauge: volume per pascal
	flowM3S float64 // most that the pump gives, or its release valve takes

	pressurePa float64
	gaugePa    float64 // where the transducer sits
	airM3      float64 // volume the air still has to give up or get back as its warmth goes
	hoseM3     float64 // volume by which the hose has yet to follow

	// For this step.
	now          command
	dt           float64
	wantPa       float64
	soft         float64 // give now, m3/Pa
	spare        float64 // m3 that come in by themselves over the step
	airPart      float64 // of what is late, what comes within the step
	hosePart     float64
	lowM3, topM3 float64 // least and most that the pump brings in
}

// expansion of oil by warmth, per K (common practice, no source: 7e-4).
const oilPerK = 7e-4

// lateAir is what air gives way by as it cools, part of what it gives at once:
// 1.4 times as much in all (isothermal and adiabatic law of a gas).
const lateAir = 0.4

// airGive is how much the air gives way for each pascal, at once.
func (o *oil) airGive() float64 {
	abs := o.pressurePa + atmospherePa
	return o.AirM3 * atmospherePa / (abs * abs) / (1 + lateAir)
}

func (o *oil) begin(c command, dt float64) {
	o.now, o.dt = c, dt
	o.soft, o.spare = o.giveM3P, -o.leakM3(dt)
	o.airPart, o.hosePart = 0, 0
	if o.AirM3 > 0 {
		o.airPart = settles(dt, o.AirS)
		o.soft += o.airGive() * (1 + lateAir*o.airPart)
		o.spare -= o.airM3 * o.airPart
	}
	if o.HosePart > 0 {
		o.hosePart = settles(dt, o.HoseS)
		o.soft -= o.giveM3P * o.HosePart * (1 - o.hosePart)
		o.spare -= o.hoseM3 * o.hosePart
	}
	if o.WarmingKS != 0 {
		o.spare += oilPerK * o.VolumeM3 * o.WarmingKS * dt
	}
	o.lowM3, o.topM3 = 0, 0
	o.wantPa = o.pressurePa
	if !c.hold {
		o.lowM3, o.topM3 = -o.flowM3S*dt, o.flowM3S*dt
		o.wantPa = o.pressurePa + c.rate*dt
		if c.rate > 0 {
			o.wantPa = min(o.wantPa, max(c.toSI, o.pressurePa))
		} else {
			o.wantPa = max(o.wantPa, min(c.toSI, o.pressurePa))
		}
	}
}

// settles is the part of a late answer that comes within dt seconds.
func settles(dt, tauS float64) float64 {
	return -math.Expm1(-dt / tauS)
}

// leakM3 is what leaks out of the cylinder in dt seconds, laminar: in
// proportion to the pressure.
func (o *oil) leakM3(dt float64) float64 { return o.LeakPerS * o.giveM3P * o.pressurePa * dt }

// after is the pressure at the end of the step if the wheel moves dx, and by
// how much it falls for each metre: what the volumes say,
//
//	give dp = in - A dx
//
// with the pump bringing in what the wanted pressure takes, within its means.
func (o *oil) after(dx float64) (pa, fallPaM float64) {
	in := o.soft*(o.wantPa-o.pressurePa) + o.areaM2*dx - o.spare
	if in > o.lowM3 && in < o.topM3 {
		return o.wantPa, 0
	}
	in = max(o.lowM3, min(o.topM3, in))
	pa = o.pressurePa + (in+o.spare-o.areaM2*dx)/o.soft
	if pa <= 0 {
		return 0, 0
	}
	return pa, o.areaM2 / o.soft
}

func (o *oil) force(dx float64) (forceN, fallNM float64) {
	pa, fall := o.after(dx)
	return pa * o.areaM2, fall * o.areaM2
}

func (o *oil) end(dx float64) {
	before := o.pressurePa
	late := o.airGive() * lateAir
	o.pressurePa, _ = o.after(dx)
	rise := o.pressurePa - before
	// What is late builds up with the pressure and is given back as time goes.
	o.airM3 = (o.airM3 + late*rise) * (1 - o.airPart)
	o.hoseM3 = (o.hoseM3 + o.giveM3P*o.HosePart*rise) * (1 - o.hosePart)
	o.tee(rise)
}

// tee is where the transducer sits. Behind a check valve the pump's side shows
// the cylinder's pressure only while the pump presses or the valve is open.
func (o *oil) tee(rise float64) {
	open := !o.now.hold && (rise > 0 || o.now.rate < 0 && !o.now.sags)
	if !o.CheckTee || open {
		o.gaugePa = o.pressurePa
		return
	}
	o.gaugePa *= math.Exp(-o.TeePerS * o.dt)
}

func (o *oil) show(v *view) { v.pressurePa = o.gaugePa }
