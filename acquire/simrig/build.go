package simrig

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
)

// find looks up tensioner and band.
func (r *rehearsal) find() (err error) {
	if r.Profile == nil {
		return fmt.Errorf("%w: no profile given", ErrConfig)
	}
	if r.tensioner, err = r.Profile.FindTensioner(r.Tensioner); err != nil {
		return err
	}
	if r.band, err = r.Profile.FindBand(r.Band); err != nil {
		return err
	}
	if r.tensioner.Rehearsal == nil {
		return fmt.Errorf("%w: add a [tensioner.rehearsal] table below %s in mill.toml", ErrNotRehearsable, r.tensioner.Name)
	}
	return nil
}

// byOil tells whether oil lifts the wheel; else a screw does.
func (r *rehearsal) byOil() bool { return r.tensioner.SetBy == mill.SetByPressure }

// measure is a length, area or the like that must be there.
type measure struct {
	name string
	si   float64
}

// must refuses a measure that is missing.
func (r *rehearsal) must(list ...measure) error {
	for _, m := range list {
		if !(m.si > 0) || math.IsInf(m.si, 0) {
			return fmt.Errorf("%w: %s with %s: the %s is %g; give it in mill.toml", ErrConfig, r.tensioner.Name, r.band.Name, m.name, m.si)
		}
	}
	return nil
}

// mechanics makes the wheel and what is true of it. The band is two straight
// halves of its loop side by side, each stretched by the wheel's travel:
// F = 2 sigma A_b and x = (sigma/E) loop/2.
func (r *rehearsal) mechanics() error {
	hidden := r.tensioner.Rehearsal
	area := r.tensioner.GeometryAreaM2() * orElse(r.AreaFactor, 1)
	net, loop := r.band.NetAreaM2()*orElse(r.SectionFactor, 1), hidden.BandLoop.SI
	modulus := r.band.Modulus.SI * orElse(r.ModulusFactor, 1)
	length := r.Profile.Rig.GaugeLength.SI * orElse(r.Stretch.LengthFactor, 1)
	if err := r.must(measure{"net section of the band", net}, measure{"length of the band", loop},
		measure{"modulus of the band", modulus}, measure{"gauge length", length}); err != nil {
		return err
	}
	if err := r.must(measure{"cylinder area", area}); err != nil && r.byOil() {
		return err
	}
	r.heat = newHeat(r.Heat, loop)
	for i := range r.gauges {
		r.gauges[i] = newGauge(r.Stretch, length, modulus, net)
		r.gauges[i].heat = r.heat
	}
	switch r.Second {
	case SecondFace:
		r.gauges[1].CurlM = -r.gauges[1].CurlM
	case SecondSpan:
		r.gauges[1].span = 2
	}
	start := wheel{weightN: hidden.Weight.SI, slackM: orElse(r.SlackM, 3e-3)}
	start.chain = newChain(r.Chain, 4*modulus*net/loop)
	if !r.byOil() {
		start.chain.FrameNM = orElse(r.Chain.FrameNM, hidden.GiveStiffness.SI)
	}
	var err error
	if start.slide, err = r.Law.newContact(hidden.FrictionConstant.SI+r.MoreF0N, hidden.FrictionProportional+r.MoreMu); err != nil {
		return err
	}
	if start.seals, err = r.Seals.newContact(); err != nil {
		return err
	}
	r.start = start
	r.truth = Truth{
		SetBy: r.tensioner.SetBy,
		F0N:   start.slide.f0N + start.seals.f0N, Mu: start.slide.mu, SealPart: start.seals.mu, WeightN: hidden.Weight.SI, AreaM2: area,
		ModulusPa: modulus, GaugeM: length, NetAreaM2: net,
	}
	if r.byOil() {
		return nil
	}
	return r.turning()
}

// wheel is a wheel at rest on its stop, with nothing of what has happened yet.
func (r *rehearsal) wheel() wheel {
	w := r.start
	w.travelM = -w.slackM
	if !r.byOil() {
		s := r.screw
		s.wheelM = w.travelM
		w.actuator = &s
		return w
	}
	o := r.oil
	o.pressurePa, o.gaugePa = r.Drive.LowPa, r.Drive.LowPa
	w.actuator = &o
	return w
}

// Seals is the friction of the rods' seals, beside that of the ways.
type Seals struct {
	ConstantN   float64 // drag that is always there; 0 means none
	Part        float64 // drag that grows with the pressure, part of the push; 0 means none
	PreslidingM float64 // m of travel over which it builds up; 0 means 0.06 mm: seals give before they slide
	RestRatio   float64 // drag at a breakaway after a long rest / drag when sliding; 0 means 1
	RestS       float64 // s of rest after which half of the excess is there; 0 means 60
}

// newContact makes their friction. Its load is the push of the oil.
func (s Seals) newContact() (contact, error) {
	return Law{PreslidingM: orElse(s.PreslidingM, 6e-5), RestRatio: s.RestRatio, RestS: orElse(s.RestS, 60),
		RenewM: 2e-4}.newContact(s.ConstantN, s.Part)
}

func newChain(c Chain, bandNM float64) chain {
	c.ToeN = orElse(c.ToeN, 1500)
	return chain{Chain: c, bandNM: bandNM}
}

// push sizes what pushes the wheel.
func (r *rehearsal) push() error {
	time := orElse(r.SlackTimeS, 8)
	if !(r.start.slackM > 0) || !(time > 0) {
		return fmt.Errorf("%w: a slack of %g m crossed in %g s", ErrConfig, r.start.slackM, time)
	}
	if r.byOil() {
		return r.pump(time)
	}
	// As for the oil: a drag that does not show.
	speed := r.Drive.TurnRadS * r.screw.leadM / (2 * math.Pi)
	r.start.dragNsM = 1e-4 * r.truth.PullN(r.workStressPa()) / speed
	return nil
}

// pump sizes the pump so that the wheel crosses the slack at a walk while it
// never holds back the ramp, the oil so stiff that a stroke soon makes good a
// sag, and the drag so that neither shows: 0.02 % of the
// top pull at the slack's speed, and far less on the ramp.
func (r *rehearsal) pump(slackS float64) error {
	p, d := &r.start, r.Drive
	area := r.truth.AreaM2
	ramp := d.RatePaS * area / p.bandNM
	speed := max(p.slackM/slackS, 10*ramp)
	flow := area * speed
	r.oil = oil{Oil: r.Oil, areaM2: area, flowM3S: flow, giveM3P: 0.03 * flow / d.RatePaS * orElse(r.Oil.Give, 1)}
	r.oil.AirS, r.oil.HoseS = orElse(r.Oil.AirS, 1.5), orElse(r.Oil.HoseS, 4)
	r.oil.VolumeM3 = orElse(r.Oil.VolumeM3, 6e-4)
	if r.Oil.Give < 0 || r.Oil.Give > 10 || r.Oil.HosePart < 0 || r.Oil.HosePart > 0.9 || r.Oil.AirM3 < 0 || r.Oil.LeakPerS < 0 || r.Oil.TeePerS < 0 {
		return fmt.Errorf("%w: oil side %+v", ErrConfig, r.Oil)
	}
	p.dragNsM = 2e-4 * area * d.TopPa / speed
	return nil
}
