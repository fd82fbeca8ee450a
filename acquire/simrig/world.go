package simrig

import "math"

// world is the wheel, the drive that moves it, and time.
type world struct {
	conf   *rehearsal
	wheel  wheel
	drive  *driver // nil before the drive
	startS float64 // of the drive
	before view    // at the last step but one
	now    view    // at the last step
}

func newWorld(conf rehearsal) world {
	w := world{conf: &conf, wheel: newWheel(conf.plant, conf.Drive.LowPa)}
	w.observe(0)
	w.before = w.now
	return w
}

// start begins the drive. Until then nothing moves.
func (w *world) start(s float64) {
	d := w.conf.driver
	w.drive, w.startS = &d, s
}

// advance steps until time s is reached or just passed.
func (w *world) advance(s float64) {
	if w.drive == nil {
		w.wait(s)
		return
	}
	for w.now.t < s {
		w.before = w.now
		rate := w.drive.ratePaS(w.wheel.pressurePa, w.now.t-w.startS, stepS)
		w.wheel.step(rate, stepS)
		w.observe(w.now.t + stepS)
	}
}

// wait lets time pass for a rig at rest, however much.
func (w *world) wait(s float64) {
	if s > w.now.t {
		w.before = w.now
		w.observe(s)
	}
}

// observe notes what can be seen of the rig at time s.
func (w *world) observe(s float64) {
	last := w.now
	w.now = view{t: s, driveS: -1, pressurePa: w.wheel.pressurePa}
	gaugeS := 0.0
	if w.drive != nil {
		w.now.driveS = s - w.startS
		gaugeS = w.now.driveS
	}
	w.now.extensionM = w.conf.gauge.extensionM(w.wheel.pullN(), gaugeS)
	w.now.extensionSum = last.extensionSum + (s-last.t)*(last.extensionM+w.now.extensionM)/2
}

// warmingK is the temperature of the band: a morning that warms up slowly.
func warmingK(s float64) float64 { return iceK + 18 + 0.8*(1-math.Exp(-s/1800)) }

// at is the view between the last two steps.
func (w *world) at(s float64) view {
	a, b := w.before, w.now
	part := 1.0
	if b.t > a.t {
		part = max(0, min(1, (s-a.t)/(b.t-a.t)))
	}
	mix := func(from, to float64) float64 { return from + part*(to-from) }
	return view{
		t: s, driveS: mix(a.driveS, b.driveS),
		pressurePa:   mix(a.pressurePa, b.pressurePa),
		extensionM:   mix(a.extensionM, b.extensionM),
		extensionSum: mix(a.extensionSum, b.extensionSum),
		temperatureK: warmingK(s),
	}
}
