package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// scope says what a figure is made of.
type scope int

const (
	onePoint  scope = iota // one setting, stress or load on one branch
	wholeLoop              // slopes, or both branches against each other
)

// source is one cause of doubt that repeats from ramp to ramp.
type source struct {
	name      string
	from      string
	wholeOnly bool // only touches figures made of the whole loop
	forces    bool // only touches forces and areas
	move      func(r ramp, k constants, sign float64) (ramp, constants)
}

// An indicator's own reversal is taken for at most this share of its limit of
// error. Judgement, after bench limits of 3 um for error and 2 um for
// reversal.
const reversalOfLimit = 2.0 / 3

// systematics lists what repeats. An instrument's error is one shift where a
// figure belongs to one point of its scale; where a figure is made of the
// whole loop, its gain may be off besides, by as much from end to end of the
// captured range, and an indicator reads rising and falling apart.
func (w *work) systematics() []source {
	s := w.setup
	lowSI, highSI, spanM := w.reach()
	middle, spanSI := (lowSI+highSI)/2, highSI-lowSI
	limit := "limit of its error / sqrt 3"
	return w.ofOther([]source{
		{name: "modulus of the steel", from: s.ModulusPa.Method, move: func(r ramp, k constants, sign float64) (ramp, constants) {
			k.modulusPa += sign * s.ModulusPa.System
			return r, k
		}},
		{name: "gauge length", from: s.GaugeM.Method, move: func(r ramp, k constants, sign float64) (ramp, constants) {
			k.gaugeM += sign * s.GaugeM.System
			return r, k
		}},
		{name: ofSection, from: "assumed 1 %", forces: true, move: func(r ramp, k constants, sign float64) (ramp, constants) {
			k.areaM2 *= 1 + sign*s.SectionRelStd
			return r, k
		}},
		{name: "stretch indicator", from: limit, move: shiftExtension(s.ExtensionSd, false)},
		{name: "stretch indicator, gain", from: limit, wholeOnly: true, move: turnLines(math.Sqrt2*s.ExtensionSd/spanM, middle)},
		{name: "stretch indicator, its own reversal", from: "assumed 2/3 of " + limit, wholeOnly: true,
			move: shiftExtension(reversalOfLimit*s.ExtensionSd/2, true)},
		{name: "setting gauge", from: limit, move: shiftSetting(s.SettingStd, false)},
		{name: "setting gauge, gain", from: limit, wholeOnly: true, move: turnLines(math.Sqrt2*s.SettingStd/spanSI, middle)},
		{name: "zero", from: w.zeroDoubt(), move: func(r ramp, k constants, sign float64) (ramp, constants) {
			r.zeroM += sign * w.zeroStd
			return r, k
		}},
		w.instantSource(),
	})
}

// instantSource is the doubt about which setting belongs to a reading of the
// stretch.
func (w *work) instantSource() source {
	s := source{name: "time alignment", from: "time between the channels x rate of the setting", move: shiftSetting(w.timeStd, true)}
	if w.set.Stepped {
		s.name, s.from = "step reached", "how near each step is met, as declared or a twentieth of a step"
	}
	return s
}

func (w *work) zeroDoubt() string {
	return "least count of the stretch indicator, at the " + w.zeroFrom
}

type mover func(r ramp, k constants, sign float64) (ramp, constants)

// shiftExtension moves the lines by std in extension, the falling one the
// other way where apart is set.
func shiftExtension(std float64, apart bool) mover {
	return lineMover(func(l estimate.Line, d Direction, sign float64) estimate.Line {
		l.A += sign * std * side(d, apart)
		return l
	})
}

// shiftSetting moves the lines by std in setting.
func shiftSetting(std float64, apart bool) mover {
	return lineMover(func(l estimate.Line, d Direction, sign float64) estimate.Line {
		l.A += l.B * sign * std * side(d, apart)
		return l
	})
}

// turnLines changes the slopes by a share, about a setting.
func turnLines(share, aboutSI float64) mover {
	return lineMover(func(l estimate.Line, _ Direction, sign float64) estimate.Line {
		by := l.B * sign * share
		l.B += by
		l.A -= by * aboutSI
		return l
	})
}

func side(d Direction, apart bool) float64 {
	if apart && d == Falling {
		return -1
	}
	return 1
}

func lineMover(move func(l estimate.Line, d Direction, sign float64) estimate.Line) mover {
	return func(r ramp, k constants, sign float64) (ramp, constants) {
		r.rising = move(r.rising, Rising, sign)
		r.falling = move(r.falling, Falling, sign)
		return r, k
	}
}
