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

// Drive is what the pretended operator does. Pressures are gauge, in Pa.
type Drive struct {
	Shape   Shape   // "" means Smooth
	TopPa   float64 // top of the ramps; 0 means that of 1.22 times the band's target, or 0.95 of the limit if lower
	LowPa   float64 // low end, where the band is slack; 0 means 0.6 of the falling slack lift
	RatePaS float64 // Pa/s; 0 means TopPa in 107.5 s

	Exercise   int     // cycles to ExercisePa first; 0 means 1, negative none
	ExercisePa float64 // top of those; 0 means the setting for half of the band's target
	Ramps      int     // cycles to the top; 0 means 3, negative none
	Repeat     bool    // start over when all boards are told to run after the drive has ended

	RestS    float64 // s at rest before the first rise; 0 means 10, negative none
	HoldTopS float64 // s at the top; 0 means 5, negative none
	HoldLowS float64 // s at the low end; 0 means 10, negative none

	SagPart   float64 // Strokes: part of the pressure that leaks back after a stroke; 0 means 0.01, negative none
	StrokeS   float64 // Strokes: s from stroke to stroke; 0 means 2
	Steps     int     // Stairs: steps to the top; 0 means 8
	StepHoldS float64 // Stairs: s on each step; 0 means 6, negative none
}

// leg is one piece of a drive: go to a pressure, or wait.
type leg struct {
	toPa    float64
	ratePaS float64
	strokes bool
	waitS   float64 // above 0: wait instead
}

// driver follows the legs. It sees the pressure, so a wheel that takes all the
// pump gives only makes a leg longer.
type driver struct {
	legs    []leg
	sag     float64
	strokeS float64
	at      int
	begunS  float64 // start of the leg; NaN before it

	strokeT  float64 // start of the stroke
	pressing bool    // else the pump is drawing back
	peakPa   float64 // pressure at the end of the last stroke
}

// strokePart is the part of a stroke's time in which the pump presses.
const strokePart = 0.3

func newDriver(d Drive) (driver, error) {
	r := driver{sag: orNone(d.SagPart, 0.01), strokeS: orElse(d.StrokeS, 2), begunS: math.NaN()}
	r.wait(orNone(d.RestS, 10))
	if d.Shape == Still {
		r.wait(math.Inf(1))
		return r, nil
	}
	for range cycles(d.Exercise, 1) {
		if err := r.cycle(d, d.ExercisePa); err != nil {
			return driver{}, err
		}
	}
	for range cycles(d.Ramps, 3) {
		if err := r.cycle(d, d.TopPa); err != nil {
			return driver{}, err
		}
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
func (r *driver) cycle(d Drive, topPa float64) error {
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
	level := func(i int) float64 { return d.LowPa + (topPa-d.LowPa)*float64(i)/float64(steps) }
	stepHold := orNone(d.StepHoldS, 6)
	for i := 1; i <= steps; i++ {
		r.legs = append(r.legs, leg{toPa: level(i), ratePaS: d.RatePaS, strokes: d.Shape == Strokes})
		if i < steps {
			r.wait(stepHold)
		}
	}
	r.wait(orNone(d.HoldTopS, 5))
	for i := steps - 1; i >= 0; i-- {
		r.legs = append(r.legs, leg{toPa: level(i), ratePaS: d.RatePaS})
		if i > 0 {
			r.wait(stepHold)
		}
	}
	r.wait(orNone(d.HoldLowS, 10))
	return nil
}

func (r *driver) wait(s float64) {
	if s > 0 {
		r.legs = append(r.legs, leg{waitS: s})
	}
}

// over tells whether every leg is done.
func (r *driver) over() bool { return r.at == len(r.legs) }

// ratePaS is the rate of pressure wanted now, t seconds into the drive, for
// the next dt seconds.
func (r *driver) ratePaS(pressurePa, t, dt float64) float64 {
	for !r.over() {
		l := r.legs[r.at]
		if math.IsNaN(r.begunS) {
			r.begunS = t
			r.strokeT, r.pressing, r.peakPa = t, true, pressurePa
		}
		if !l.reached(pressurePa, t-r.begunS) {
			return r.legRate(l, pressurePa, t, dt)
		}
		r.at++
		r.begunS = math.NaN()
	}
	return 0
}

// reached tells whether a leg is done after s seconds.
func (l leg) reached(pressurePa, s float64) bool {
	if l.waitS > 0 {
		return s >= l.waitS
	}
	return math.Abs(pressurePa-l.toPa) < 1 // a pascal; the last step lands on the mark
}

func (r *driver) legRate(l leg, pressurePa, t, dt float64) float64 {
	if l.waitS > 0 {
		return 0
	}
	rest := (l.toPa - pressurePa) / dt
	rate := l.ratePaS
	if l.strokes {
		rate = r.strokeRate(l, pressurePa, t, dt)
	}
	if rate <= 0 {
		return rate // the sag between strokes
	}
	return math.Copysign(min(rate, math.Abs(rest)), rest)
}

// strokeRate is a pump's: it presses up to its next peak, then oil leaks back
// through the valve until the next stroke. Peaks rise at the leg's rate.
func (r *driver) strokeRate(l leg, pressurePa, t, dt float64) float64 {
	if t-r.strokeT >= r.strokeS {
		r.strokeT += r.strokeS
		r.pressing = true
	}
	press := strokePart * r.strokeS
	since := t - r.strokeT
	if r.pressing && since >= press {
		r.pressing, r.peakPa = false, pressurePa
	}
	if r.pressing {
		goal := r.peakPa + l.ratePaS*r.strokeS
		return max(0, (goal-pressurePa)/max(press-since, dt))
	}
	floor := r.peakPa * (1 - r.sag)
	return -max(0, pressurePa-floor) * 4 / (r.strokeS - press)
}
