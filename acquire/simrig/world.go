package simrig

import (
	"math"

	"tautramp/acquire/mill"
)

// Steps of the integration, s: as long as nothing sudden happens, and never
// shorter than the least. All that follows the travel is exact over a step.
const (
	restStepS  = 0.1 // hands off, and the wheel at rest
	longStepS  = 0.02
	leastStepS = 0.0005
)

// pastViews is how many views are kept: a second of the shortest steps, for
// sensors that lag behind.
const pastViews = 512

// world is the wheel, the drive that moves it, and time.
type world struct {
	conf   *rehearsal
	wheel  wheel
	drive  *driver // nil before the drive
	startS float64 // of the drive
	past   [pastViews]view
	last   int // index of the view after the last step
	cycle  int // whose friction the wheel has
	stepS  float64
}

func newWorld(conf rehearsal) *world {
	w := &world{conf: &conf, wheel: conf.wheel(), stepS: longStepS, cycle: -1}
	w.observe(0)
	for i := range w.past {
		w.past[i] = *w.now()
	}
	return w
}

// now is the view after the last step.
func (w *world) now() *view { return &w.past[w.last] }

// start begins the drive. Until then nothing moves.
func (w *world) start(s float64) {
	d := w.conf.driver
	w.drive, w.startS = &d, s
}

// advance steps until time s is reached or just passed.
func (w *world) advance(s float64) {
	if w.drive == nil {
		if s > w.now().t {
			w.observe(s)
		}
		return
	}
	for w.now().t < s {
		t := w.now().t
		c, forS := w.drive.next(w.seen(), t-w.startS)
		if n := w.drive.cycleNow(); n != w.cycle {
			w.cycle = n
			w.conf.varied(&w.wheel, n)
		}
		dt := max(leastStepS, min(w.longest(c), forS, w.sudden()))
		w.wheel.warmM = w.conf.heat.bandM(t + dt - w.startS)
		w.wheel.step(c, dt)
		w.observe(t + dt)
	}
}

// longest is the longest step of a command. A contact that minds the speed
// cannot be trusted to stay at rest.
func (w *world) longest(c command) float64 {
	const restMS = 1e-8
	slide := &w.wheel.slide.law
	if c.hold && w.stepS == longStepS && math.Abs(w.wheel.speedMS) < restMS && slide.staticRatio == 1 && slide.restRatio == 1 {
		return restStepS
	}
	return w.stepS
}

// trace runs the drive from its start and notes what happens.
func (w *world) trace(everyS float64) (list []Moment, err error) {
	w.start(0)
	for i := 0; !w.drive.over(); i++ {
		t := float64(i) * everyS
		if err := w.conf.inTime(t); err != nil {
			return nil, err
		}
		w.advance(t)
		v := w.at(t)
		list = append(list, Moment{v.driveS, v.pressurePa, v.pullN, v.extensionM[0], v.travelM, v.torqueNM, v.angleRad, v.springM})
	}
	return list, nil
}

// sudden is the longest step that follows a wheel breaking loose.
func (w *world) sudden() float64 {
	h := math.Inf(1)
	for _, c := range []*contact{&w.wheel.slide, &w.wheel.seals} {
		if v := math.Abs(w.wheel.speedMS); c.law.restRatio > 1 && v > 0 {
			h = min(h, c.law.renewM/4/v)
		}
	}
	return h
}

// seen is what the operator looks at.
func (w *world) seen() seen {
	switch a := w.wheel.actuator.(type) {
	case *oil:
		return seen{hand: a.pressurePa}
	case *screw:
		if w.conf.tensioner.SetBy == mill.SetBySpring {
			return seen{hand: a.handRad, setting: a.squeezeM}
		}
		return seen{hand: a.handRad, setting: a.torqueNM}
	}
	return seen{}
}

// observe notes what can be seen of the rig at time s, in the place of the
// oldest view.
func (w *world) observe(s float64) {
	before := w.now()
	w.last = (w.last + 1) % pastViews
	v := w.now()
	*v = view{t: s, driveS: -1, pullN: w.wheel.pullN, travelM: w.wheel.travelM}
	gaugeS := 0.0
	if w.drive != nil {
		v.driveS = s - w.startS
		gaugeS = v.driveS
	}
	w.wheel.show(v)
	for i := range w.conf.gauges[:w.conf.indicatorCount()] {
		g := &w.conf.gauges[i]
		v.extensionM[i] = g.extensionM(w.wheel.spanN(g.span), gaugeS)
		v.extensionSum[i] = before.extensionSum[i] + (s-before.t)*(before.extensionM[i]+v.extensionM[i])/2
	}
}

// at is the view at an instant of the last steps, or the oldest kept.
func (w *world) at(s float64) view {
	i := w.last
	for n := 1; n < pastViews-1; n++ {
		before := (i + pastViews - 1) % pastViews
		if w.past[before].t <= s {
			break
		}
		i = before
	}
	a, b := &w.past[(i+pastViews-1)%pastViews], &w.past[i]
	part := 1.0
	if b.t > a.t {
		part = max(0, min(1, (s-a.t)/(b.t-a.t)))
	}
	return between(a, b, part, s)
}

func between(a, b *view, part, s float64) view {
	mix := func(from, to float64) float64 { return from + part*(to-from) }
	v := view{
		t: s, driveS: mix(a.driveS, b.driveS),
		pullN: mix(a.pullN, b.pullN), travelM: mix(a.travelM, b.travelM),
		pressurePa: mix(a.pressurePa, b.pressurePa),
		torqueNM:   mix(a.torqueNM, b.torqueNM),
		angleRad:   mix(a.angleRad, b.angleRad),
		springM:    mix(a.springM, b.springM),
	}
	for i := range v.extensionM {
		v.extensionM[i] = mix(a.extensionM[i], b.extensionM[i])
		v.extensionSum[i] = mix(a.extensionSum[i], b.extensionSum[i])
	}
	return v
}
