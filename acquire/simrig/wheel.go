package simrig

import "math"

// stepS is the fixed step of the integration, s.
const stepS = 0.0005

// plant is what a tensioner with a band is made of. All SI.
type plant struct {
	areaM2   float64 // A* = N A_c R, true
	weightN  float64 // W, carried by the oil wherever the wheel is above its stop
	bandNM   float64 // wheel pull per metre of travel with the band taut
	slackM   float64 // travel between the stop and the taut band
	dragNsM  float64 // viscous drag of the wheel
	oilM3Pa  float64 // give of oil, hose and gauge: volume per pascal
	flowM3S  float64 // most that the pump gives, or its release valve takes
	friction bristle // at rest, without history
}

// wheel is the moving state: oil pressure, travel, and the friction's strain.
// Travel is 0 where the band is just taut, and -slackM on the stop.
type wheel struct {
	plant
	pressurePa float64
	travelM    float64
}

// newWheel is a wheel at rest on its stop.
func newWheel(p plant, pressurePa float64) wheel {
	return wheel{plant: p, pressurePa: pressurePa, travelM: -p.slackM}
}

// pullN is F, the pull of both spans on the wheel.
func (w *wheel) pullN() float64 { return w.bandNM * max(0, w.travelM) }

// loadN is S = F + W.
func (w *wheel) loadN() float64 { return w.pullN() + w.weightN }

// step integrates over dt seconds in which the pump tries to change the
// pressure at the given rate (Pa/s). The force balance is
//
//	drag v = p A* - S(x) - friction
//
// with inertia left out: a wheel of 400 kg takes under a newton where it moves
// off, and nothing on a steady ramp. It is stiff, so the step is linearly
// implicit in x and, where the pump gives all it can, in p as well:
//
//	dp/dt = (flow - A* v) / give
func (w *wheel) step(ratePaS, dt float64) {
	level := w.friction.levelN(w.loadN())
	held := w.loadN() + level*w.friction.strain
	p := w.pressurePa + ratePaS*dt
	v := w.speedMS(p*w.areaM2-held, level, 0, dt)
	flow := w.oilM3Pa*ratePaS + w.areaM2*v
	if math.Abs(flow) > w.flowM3S {
		flow = math.Copysign(w.flowM3S, flow)
		given := w.pressurePa + flow*dt/w.oilM3Pa
		v = w.speedMS(given*w.areaM2-held, level, w.areaM2*w.areaM2/w.oilM3Pa, dt)
		p = given - w.areaM2*v*dt/w.oilM3Pa
	}
	dx := max(v*dt, -w.slackM-w.travelM)
	w.pressurePa = max(0, p)
	w.travelM += dx
	w.friction.move(dx, dt)
}

// speedMS is the wheel's speed under a force left over, with the stiffness of
// band, friction and oil (extraNM) that builds up against it within dt.
func (w *wheel) speedMS(excessN, levelN, extraNM, dt float64) float64 {
	if excessN < 0 && w.travelM <= -w.slackM {
		return 0 // the stop carries the rest
	}
	stiff := levelN*w.friction.slope(w.friction.strain, math.Copysign(1, excessN)) + extraNM
	if w.travelM > 0 {
		stiff += w.bandNM * (1 + w.friction.mu*w.friction.strain)
	}
	return excessN / (w.dragNsM + dt*stiff)
}
