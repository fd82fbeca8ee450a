package simrig

import (
	"fmt"
	"math"
)

// Shape is how the pressure rises.
type Shape string

// The shapes. The release is smooth in all but Stairs.
const (
	Smooth  Shape = "smooth"  // steady rate
	Strokes Shape = "strokes" // a hand pump, with a sag after each stroke
	Stairs  Shape = "stairs"  // steps with holds, up and down
	Still   Shape = "still"   // rests at the low end; the drive never ends
)

// Shapes lists the shapes, the default first.
func Shapes() []Shape { return []Shape{Smooth, Strokes, Stairs, Still} }

// Drive is what the pretended operator does. Pressures are gauge, in Pa, and
// of a tensioner set by pressure; another is driven by its own setting.
type Drive struct {
	Shape   Shape   // "" means Smooth
	TopPa   float64 // top of the ramps; 0 means that of 1.22 times the band's target, or 0.95 of the limit if lower
	LowPa   float64 // low end, where the band is slack; 0 means 0.6 of the falling slack lift
	RatePaS float64 // Pa/s; 0 means TopPa in 107.5 s

	TopSI    float64 // not by pressure: top of the ramps in N m, rad or m; 0 means as TopPa
	TurnRadS float64 // not by pressure: speed of the screw, rad/s; 0 means the top in 107.5 s

	Exercise   int     // cycles to half the target first; 0 means 1, negative none
	ExercisePa float64 // top of those; 0 means the setting for half of the band's target
	Ramps      int     // cycles to the top; 0 means 3, negative none
	Repeat     bool    // start over when all boards are told to run after the drive has ended

	MostS float64 // s that the drive may take where it is run flat out; 0 means 14,400 (4 h)

	RestS    float64 // s at rest before the first rise; 0 means 10, negative none
	HoldTopS float64 // s at the top; 0 means 5, negative none
	HoldLowS float64 // s at the low end; 0 means 10, negative none

	Ragged    float64 // Smooth: swing of the rate on the way up, part of it: above 1 it goes back and forth; 0 means none
	SagPart   float64 // Strokes: part of the pressure that leaks back after a stroke; 0 means 0.01, negative none
	StrokeS   float64 // Strokes: s from stroke to stroke; 0 means 2
	Steps     int     // Stairs: steps to the top; 0 means 8
	StepHoldS float64 // Stairs: s on each step; 0 means 6, negative none
	Presses   bool    // the operator presses the first board's switch near the end of each wait, at rest, on steps and at both ends
}

// leg is one piece of a drive: go to a mark, or wait.
type leg struct {
	mark    mark
	to      float64 // SI
	rate    float64 // SI of the hand's quantity a second, without a sign
	up      bool
	strokes bool
	waitS   float64 // above 0: wait instead
	cycle   int     // from 0
}

// mark is what the operator looks at to know that a leg is done.
type mark byte

const (
	byHand    mark = iota // what the hand works on: pressure of the oil, turn of the screw
	bySetting             // torque of the hand, or the length of the spring
)

// seen is what the operator sees of the rig.
type seen struct{ hand, setting float64 }

// driver follows the legs. It sees the rig, so a wheel that takes all the
// pump gives only makes a leg longer.
type driver struct {
	legs    []leg
	sag     float64
	ragged  float64
	strokeS float64
	near    float64 // a mark is met within this, SI of the hand
	at      int
	begunS  float64 // start of the leg; NaN before it

	strokeT  float64 // start of the stroke
	pressing bool    // else the pump is drawing back
	peak     float64 // what the hand had at the end of the last stroke
}

// strokePart is the part of a stroke's time in which the pump presses.
const strokePart = 0.3

// course is a drive in SI of what the hand works on and of what it looks at.
type course struct {
	low, top, exercise float64 // tops are of the mark
	mark               mark    // of the tops
	rate               float64 // of the hand
	sags               bool    // pressure leaks back between strokes; a screw stays
	near               float64
}

func newDriver(d Drive, c course) (driver, error) {
	r := driver{strokeS: orElse(d.StrokeS, 2), near: c.near, ragged: max(0, d.Ragged), begunS: math.NaN()}
	if c.sags {
		r.sag = orNone(d.SagPart, 0.01)
	}
	r.wait(orNone(d.RestS, 10), 0)
	if d.Shape == Still {
		r.wait(math.Inf(1), 0)
		return r, nil
	}
	cycle := 0
	for range cycles(d.Exercise, 1) {
		if err := r.cycle(d, c, c.exercise, cycle); err != nil {
			return driver{}, err
		}
		cycle++
	}
	for range cycles(d.Ramps, 3) {
		if err := r.cycle(d, c, c.top, cycle); err != nil {
			return driver{}, err
		}
		cycle++
	}
	return r, nil
}

// cycles is n, or the default where n is 0, or none where it is negative.
func cycles(n, otherwise int) int {
	if n == 0 {
		return otherwise
	}
	return max(0, n)
}

// cycle adds one rise to the top and one release, with their holds.
func (r *driver) cycle(d Drive, c course, top float64, cycle int) error {
	steps := 1
	switch d.Shape {
	case Smooth, "":
	case Strokes:
		if r.sag > 0.1 || !(r.strokeS > 0) {
			return fmt.Errorf("%w: a sag of %g of the pressure every %g s is no hand pump", ErrConfig, r.sag, r.strokeS)
		}
	case Stairs:
		steps = max(1, cycles(d.Steps, 8))
	default:
		return fmt.Errorf("%w: no drive shape %q; known: %v", ErrConfig, d.Shape, Shapes())
	}
	low := c.low
	if c.mark == bySetting {
		low = 0 // a loose screw has neither torque nor squeeze
	}
	// Steps are of one height, in exercise too; the odd step's half is left out.
	steps = max(1, int(math.Ceil(float64(steps)*(top-low)/(c.top-low)-0.5)))
	level := func(i int) float64 { return low + (top-low)*float64(i)/float64(steps) }
	stepHold := orNone(d.StepHoldS, 6)
	for i := 1; i <= steps; i++ {
		r.legs = append(r.legs, leg{mark: c.mark, to: level(i), rate: c.rate, up: true, strokes: d.Shape == Strokes, cycle: cycle})
		if i < steps {
			r.wait(stepHold, cycle)
		}
	}
	r.wait(orNone(d.HoldTopS, 5), cycle)
	for i := steps - 1; i > 0; i-- {
		if c.mark == bySetting {
			break // loosened in one go: what is looked at has jumped
		}
		r.legs = append(r.legs, leg{to: level(i), rate: c.rate, cycle: cycle})
		r.wait(stepHold, cycle)
	}
	r.legs = append(r.legs, leg{to: c.low, rate: c.rate, cycle: cycle})
	r.wait(orNone(d.HoldLowS, 10), cycle)
	return nil
}

func (r *driver) wait(s float64, cycle int) {
	if s > 0 {
		r.legs = append(r.legs, leg{waitS: s, cycle: cycle})
	}
}

// over tells whether every leg is done.
func (r *driver) over() bool { return r.at == len(r.legs) }

// pressesNow tells whether the operator's foot is on the switch, t seconds into
// the drive: a second before the end of a wait, for a fifth of one.
func (r *driver) pressesNow(t float64) bool {
	const before, held = 1.0, 0.2 // s
	if r.over() || math.IsNaN(r.begunS) {
		return false
	}
	left := r.legs[r.at].waitS - (t - r.begunS)
	return r.legs[r.at].waitS > before && left <= before && left > before-held
}

// cycleNow is the cycle of the leg that is on.
func (r *driver) cycleNow() int {
	if len(r.legs) == 0 {
		return 0
	}
	return r.legs[min(r.at, len(r.legs)-1)].cycle
}

// rising tells whether the hand is on its way up.
func (r *driver) rising() bool { return !r.over() && r.legs[r.at].up }

// next is what the hand does now, t seconds into the drive, and for how long
// at most it goes on so.
func (r *driver) next(s seen, t float64) (command, float64) {
	for !r.over() {
		l := r.legs[r.at]
		if math.IsNaN(r.begunS) {
			r.begunS = t
			r.strokeT, r.pressing, r.peak = t, true, s.hand
		}
		if !r.reached(l, s, t-r.begunS) {
			return r.legCommand(l, s, t)
		}
		r.at++
		r.begunS = math.NaN()
	}
	return command{hold: true}, math.Inf(1)
}

// reached tells whether a leg is done after so many seconds.
func (r *driver) reached(l leg, s seen, after float64) bool {
	switch {
	case l.waitS > 0:
		return after >= l.waitS-1e-9
	case l.mark == bySetting:
		return s.setting >= l.to
	case l.up:
		return s.hand >= l.to-r.near
	}
	return s.hand <= l.to+r.near
}

func (r *driver) legCommand(l leg, s seen, t float64) (command, float64) {
	switch {
	case l.waitS > 0:
		return command{hold: true}, r.begunS + l.waitS - t
	case l.strokes:
		return r.strokeCommand(l, s, t)
	case !l.up:
		return command{rate: -l.rate, toSI: l.to}, (s.hand - l.to) / l.rate
	}
	c := command{rate: l.rate, toSI: l.to}
	if r.ragged > 0 {
		// Two swings that never meet again in the same way.
		c.rate *= 1 + r.ragged*(math.Sin(2*math.Pi*t/2.3)+math.Sin(2*math.Pi*t/3.7))/2
	}
	switch {
	case c.rate <= 0:
		c.toSI = 0
	case l.mark == bySetting:
		c.toSI = math.Inf(1)
	default:
		return c, (l.to - s.hand) / c.rate
	}
	return c, math.Inf(1)
}

// strokeCommand is a pump's or a wrench's: it presses up to its next peak,
// then oil leaks back through the valve, or the wrench takes a new grip, until
// the next stroke. Peaks rise at the leg's rate.
func (r *driver) strokeCommand(l leg, s seen, t float64) (command, float64) {
	const instant = 1e-9
	if t-r.strokeT >= r.strokeS-instant {
		r.strokeT += r.strokeS
		r.pressing = true
	}
	press := strokePart * r.strokeS
	since := t - r.strokeT
	if r.pressing && since >= press-instant {
		r.pressing, r.peak = false, s.hand
	}
	if r.pressing {
		goal := r.peak + l.rate*r.strokeS
		if l.mark == byHand {
			goal = min(goal, l.to)
		}
		left := max(press-since, instant)
		return command{rate: max(0, goal-s.hand) / left, toSI: goal}, left
	}
	rest := r.strokeT + r.strokeS - t
	floor := r.peak * (1 - r.sag)
	if r.sag == 0 || s.hand <= floor {
		return command{hold: true}, rest
	}
	return command{rate: -(s.hand - floor) * 4 / (r.strokeS - press), toSI: floor, sags: true}, rest
}
