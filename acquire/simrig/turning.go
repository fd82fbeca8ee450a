package simrig

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
)

// Screw is what is wrong with a tensioner's screw and its springs.
type Screw struct {
	MoreThread float64 // friction of the thread on top of the rehearsal table's
	MoreCollar float64 // and of the collar
	MorePlay   float64 // rad of free turn on top of the rehearsal table's
	StackMu    float64 // friction within the stack of disc springs, part of its force; 0 means none
	BindPart   float64 // the springs are solid at this part of the squeeze at 1.22 times the band's target; 0 means at the rehearsal table's length
	RestRatio  float64 // torque to break loose after a rest / when turning; 0 means 1
	PreslideM  float64 // way along the thread over which its friction builds up; 0 means 0.005 mm
}

// turning makes the screw, its springs and what is true of them.
func (r *rehearsal) turning() error {
	hidden, t := r.tensioner.Rehearsal, r.tensioner
	s := screw{leadM: t.WheelTravelM() * t.Ratio(), ratio: t.Ratio(), slackM: r.start.slackM,
		playRad: hidden.Play.SI + r.Screw.MorePlay, idleNM: hidden.RestTorque.SI, springMu: r.Screw.StackMu}
	if err := r.must(measure{"lead of the screw", s.leadM}); err != nil {
		return err
	}
	s.meanM = 2 * s.leadM // set by turns and not described: the torque is nobody's business
	if t.Screw != nil {
		s.meanM, s.flankRad, s.collarM = t.Screw.PitchDiameterM()/2, t.Screw.FlankRad(), t.Screw.CollarRadius.SI
	}
	s.springNM = hidden.SpringRate.SI
	if t.Spring != nil {
		s.springNM *= float64(max(1, t.Spring.Parallel))
	}
	if hidden.SpringBind.SI > 0 {
		s.bindM = hidden.SpringFree.SI - hidden.SpringBind.SI
	}
	if s.springNM == 0 {
		if t.SetBy == mill.SetBySpring {
			return r.must(measure{"spring_rate of the rehearsal", 0})
		}
		s.springNM = 200 * r.start.bandNM // none: the screw bears on the slide
	}
	if t.SetBy == mill.SetBySpring && t.Spring == nil {
		return fmt.Errorf("%w: %s is set by spring length; give [tensioner.spring] in mill.toml", ErrConfig, t.Name)
	}
	var err error
	if s.thread, err = r.screwContact(hidden.FrictionThread + r.Screw.MoreThread); err != nil {
		return err
	}
	if s.collar, err = r.screwContact(hidden.FrictionCollar + r.Screw.MoreCollar); err != nil {
		return err
	}
	if s.stack, err = (Law{PreslidingM: stackM}).newContact(1, 0); err != nil {
		return err
	}
	r.screw = s
	r.truth.Screw = r.screwTruth()
	return nil
}

func (r *rehearsal) screwContact(mu float64) (contact, error) {
	return Law{PreslidingM: orElse(r.Screw.PreslideM, flankM), RestRatio: r.Screw.RestRatio, RestS: 30, RenewM: 1e-3}.newContact(mu, 0)
}

func (r *rehearsal) screwTruth() ScrewTruth {
	s, give := &r.screw, 1/r.start.bandNM+r.start.TyreMN
	if r.start.chain.FrameNM > 0 {
		give += 1 / r.start.chain.FrameNM
	}
	t := ScrewTruth{LeadM: s.leadM, MeanM: s.meanM, FlankRad: s.flankRad, CollarM: s.collarM,
		ThreadMu: s.thread.f0N, CollarMu: s.collar.f0N, RestNM: s.idleNM, PlayRad: s.playRad,
		Ratio: s.ratio, SpringNM: s.springNM, GiveMN: give, SlackM: s.slackM}
	if spring := r.tensioner.Spring; spring != nil {
		t.FreeM, t.Shorter = spring.FreeLength.SI, spring.UnderLoad == mill.Shorter
	}
	return t
}

// springLengthM is what a scale at the spring shows.
func (r *rehearsal) springLengthM(squeezeM float64) float64 {
	spring := r.tensioner.Spring
	if spring == nil {
		return squeezeM
	}
	if spring.UnderLoad == mill.Shorter {
		return spring.FreeLength.SI - squeezeM
	}
	return spring.FreeLength.SI + squeezeM
}

// turned fills in the drive of a screw: marks are torque, turn or squeeze.
func (r *rehearsal) turned() error {
	d, t := &r.Drive, r.truth
	stress := 1.22 * r.band.Target.SI
	limit := r.tensioner.LimitSI()
	if r.band.Target.SI <= 0 {
		return fmt.Errorf("%w: %s: a tensioner with a screw is rehearsed up to the band's target; give %s one", ErrConfig, r.tensioner.Name, r.band.Name)
	}
	measure := func(stressPa float64) float64 { return r.tensioner.Rising(t.Setting(stressPa, true)) }
	top := orElse(d.TopSI, math.Inf(1))
	if math.IsInf(top, 1) {
		top = measure(stress)
		if limit > 0 {
			top = min(top, 0.95*limit)
		}
	}
	if limit > 0 && top > limit {
		return fmt.Errorf("%w: top %.4g, limit of %s %.4g (SI)", ErrOverLimit, top, r.tensioner.Name, limit)
	}
	d.TopSI = top
	d.TurnRadS = orElse(d.TurnRadS, t.TurnRad(stress, true)/107.5)
	c := course{top: top, exercise: min(top, measure(r.band.Target.SI/2)), mark: bySetting, rate: d.TurnRadS}
	c.near = 1e-9
	if r.tensioner.SetBy == mill.SetByTurns {
		c.mark = byHand
	}
	if !(d.TurnRadS > 0) || !(top > 0) || math.IsInf(top, 0) || !(c.exercise > 0) {
		return fmt.Errorf("%w: a drive up to %g (SI) at %g rad/s", ErrConfig, top, d.TurnRadS)
	}
	if r.Screw.BindPart > 0 {
		r.screw.bindM = r.Screw.BindPart * t.pushN(stress, true) / r.screw.springNM
	}
	var err error
	r.driver, err = newDriver(*d, c)
	return err
}
