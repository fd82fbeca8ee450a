package analyze

import (
	"math"
	"strings"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Chain is what the loop says of a tensioner set by turns: how much of the
// wheel's travel stretches the band, and what is lost between. In a chain of
// springs the travel of one turn is shared out by how each gives:
//
//	sigma = 2 E (travel - give) / loop
type Chain struct {
	PerRadPa   estimate.Estimate // band stress for each radian turned, mean of both branches
	FreePa     estimate.Estimate // the same if nothing but the band gave: 2 E travel / loop
	GiveM      estimate.Estimate // wheel travel of one turn that frame, tyres and springs take
	GiveNM     estimate.Estimate // wheel pull for each metre that they give
	Expected   estimate.Estimate // GiveNM by the profile, of what it gives
	LostRad    estimate.Estimate // turn between rising and falling at one stretch: play, and friction on what gives
	LostIdle   estimate.Estimate // the same with the lines carried on to no wheel pull: play, and the friction that is always there
	BoundRad   estimate.Estimate // setting above which the loop shows springs gone solid
	TravelM    float64           // of the wheel for one turn; 0 when not given
	ExpectedOf string            // what the profile gives: "springs, frame"
}

// The length of the band all the way round, as people measure it. Common
// practice, no source.
const assumedLoopStd = 0.005

// perRad is a ramp's stretch for each radian, mean of both branches: play and
// friction move them apart, not the mean of their slopes.
func perRad(r ramp) float64 { return (r.rising.B + r.falling.B) / 2 }

// chain works out the chain of a tensioner that is set by turns.
func (w *work) chain() {
	c, t := &w.res.Chain, w.setup.Tensioner
	no := estimate.Unknown("worked out for tensioners set by turns only")
	*c = Chain{PerRadPa: no, FreePa: no, GiveM: no, GiveNM: no, Expected: no, LostRad: no, LostIdle: no, BoundRad: no}
	if t.SetBy != mill.SetByTurns {
		return
	}
	c.TravelM = t.WheelTravelM()
	c.PerRadPa = w.combine(func(r ramp, k constants) float64 { return perRad(r) * k.paPerM() }, "not a finite number")
	c.LostRad = w.res.Working.HalfSI.Scale(2)
	c.LostIdle = w.combine(func(r ramp, _ constants) float64 {
		return (r.zeroM-r.rising.A)/r.rising.B - (r.zeroM-r.falling.A)/r.falling.B
	}, noZero)
	c.BoundRad = w.bound()
	w.give(c, t)
	c.expect(t)
}

// give is what the band does not take of the wheel's travel. Young's modulus
// drops out of it; the pull behind it has it.
func (w *work) give(c *Chain, t mill.Tensioner) {
	loop, travel := 0.0, c.TravelM
	if t.Turns != nil {
		loop = t.Turns.BandLoop.SI
	}
	if travel == 0 || loop == 0 {
		no := estimate.Unknown("the profile gives no lead of the screw, or no band_loop")
		c.FreePa, c.GiveM, c.GiveNM = no, no, no
		return
	}
	give := func(loop float64) figure {
		return func(r ramp, k constants) float64 { return travel - 2*math.Pi*perRad(r)/k.gaugeM*loop/2 }
	}
	stiff := func(loop float64) figure {
		return func(r ramp, k constants) float64 { return 2 * math.Pi * perRad(r) * k.pullPerM() / give(loop)(r, k) }
	}
	free := func(loop float64) figure {
		return func(_ ramp, k constants) float64 { return 2 * k.modulusPa * travel / loop / (2 * math.Pi) }
	}
	c.GiveM, c.GiveNM, c.FreePa = w.ofLoop(give, loop), w.ofLoop(stiff, loop), w.ofLoop(free, loop)
	if lo, _ := c.GiveM.Interval95(); !(lo > 0) {
		c.GiveNM = estimate.Unknown("what gives beside the band is not told from nothing")
	}
}

// ofLoop is a figure that the length of the band enters, with its doubt.
func (w *work) ofLoop(of func(loop float64) figure, loop float64) estimate.Estimate {
	e := w.combine(of(loop), "not a finite number")
	if e.Known() {
		by := (w.meanOf(of(loop*(1+assumedLoopStd))) - w.meanOf(of(loop*(1-assumedLoopStd)))) / 2
		e.System = math.Hypot(e.System, by)
	}
	return e
}

// expect puts what the profile gives in series.
func (c *Chain) expect(t mill.Tensioner) {
	soft := 0.0
	var of []string
	add := func(name string, stiffNM float64) {
		if stiffNM > 0 {
			soft += 1 / stiffNM
			of = append(of, name)
		}
	}
	add("springs", t.WheelRate())
	if t.Turns != nil {
		add("frame", t.Turns.FrameStiffness.SI)
		add("tyres", t.Turns.TyreStiffness.SI)
	}
	c.ExpectedOf = strings.Join(of, ", ")
	c.Expected = estimate.Unknown("the profile gives no stiffness of springs, frame or tyres")
	if soft > 0 {
		c.Expected = estimate.Exact(1/soft, "given in the profile: "+c.ExpectedOf+" in series")
	}
}
