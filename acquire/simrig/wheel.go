package simrig

import "math"

// wheel is the slide with the band on its wheel, what pushes it, and what rubs
// on it. Travel is 0 where the band is just taut, and -slackM on the lower
// stop. All SI.
type wheel struct {
	actuator
	chain
	weightN float64 // W, carried wherever the wheel is above its stop
	slackM  float64 // travel between the stop and the taut band
	dragNsM float64 // viscous drag of the slide
	slide   contact // of the ways: F0 + mu S
	seals   contact // of the rods: constant, and with the pressure

	travelM float64
	speedMS float64 // over the last step
}

// step integrates over dt seconds of a command. The force balance is
//
//	drag v = push - S(x) - friction
//
// with inertia left out: a wheel of 400 kg takes under a newton where it moves
// off, and nothing on a steady ramp. All forces are those at the end of the
// step, so that it may be long: what follows the travel alone is exact.
func (w *wheel) step(c command, dt float64) {
	w.actuator.begin(c, dt)
	w.chain.begin(dt)
	dx := w.settle(dt)
	w.actuator.end(dx)
	w.travelM += dx
	w.speedMS = dx / dt
	w.chain.end(w.travelM)
	w.slide.move(dx, dt)
	w.seals.move(dx, dt)
}

const (
	leftN     = 0.01 // force that a step may leave over, N
	mostTries = 200
)

// settle finds the travel of the step that leaves no force over: Newton's rule,
// kept between the travels already known to be too little and too much. The
// force left over grows with the travel.
func (w *wheel) settle(dt float64) float64 {
	least := -w.slackM - w.travelM // down to the stop
	little, much := math.Inf(-1), math.Inf(1)
	dx := max(least, w.speedMS*dt)
	for range mostTries {
		over, slope := w.over(dx, dt)
		switch {
		case math.Abs(over) < leftN, over > 0 && dx == least:
			return dx
		case over > 0:
			much = dx
		default:
			little = dx
		}
		next := max(least, dx-over/slope)
		if !(next > little && next < much) {
			next = (max(little, least) + much) / 2
		}
		if next == dx {
			return dx
		}
		dx = next
	}
	return dx
}

// over is what holds the wheel back at the end of a step of dx less what
// pushes it, and how it grows with dx.
func (w *wheel) over(dx, dt float64) (forceN, slopeNM float64) {
	pull, pullNM := w.chain.pull(w.travelM + dx)
	stop, stopNM := w.endStop(w.travelM + dx)
	push, fallNM := w.force(dx)
	load := pull + stop + w.weightN
	rub, rubNM := w.slide.forceN(dx, dt, load, pullNM+stopNM)
	forceN = w.dragNsM*dx/dt + load + rub - push
	slopeNM = w.dragNsM/dt + pullNM + stopNM + rubNM + fallNM
	if w.seals.f0N > 0 || w.seals.mu > 0 {
		rub, rubNM := w.seals.forceN(dx, dt, push, 0)
		forceN, slopeNM = forceN+rub, slopeNM+rubNM
	}
	return forceN, slopeNM
}
