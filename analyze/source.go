package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// sourceKind says which figures a source of doubt touches.
type sourceKind int

const (
	// onCurve touches figures at one setting, stress or load.
	onCurve sourceKind = 1 << iota
	// onSlope touches slopes and what is made of them.
	onSlope
)

// source is one cause of doubt that repeats from ramp to ramp.
type source struct {
	name string
	from string
	kind sourceKind
	move func(r ramp, k constants, sign float64) (ramp, constants)
}

// systematics lists what repeats. An instrument's error is taken as one shift
// where a figure belongs to one point of its scale, and as a change of gain
// over the captured range besides where a figure is made of a slope. The
// section counts for forces only: stress comes from stretch.
func (w *work) systematics() []source {
	s := w.setup
	lowSI, highSI, spanM := w.reach()
	midSI, spanSI := (lowSI+highSI)/2, highSI-lowSI
	both := onCurve | onSlope
	settingFrom := "limit of the instrument / sqrt 3"
	return []source{
		{"modulus of the steel", s.ModulusPa.Method, both, func(r ramp, k constants, sign float64) (ramp, constants) {
			k.modulusPa += sign * s.ModulusPa.System
			return r, k
		}},
		{"gauge length", s.GaugeM.Method, both, func(r ramp, k constants, sign float64) (ramp, constants) {
			k.gaugeM += sign * s.GaugeM.System
			return r, k
		}},
		{"thickness and net width", "assumed", both, func(r ramp, k constants, sign float64) (ramp, constants) {
			k.areaM2 *= 1 + sign*s.SectionRelStd
			return r, k
		}},
		{"extension instrument", settingFrom, both, func(r ramp, k constants, sign float64) (ramp, constants) {
			return moveLines(r, func(l estimate.Line, _ Direction) estimate.Line {
				l.A += sign * s.ExtensionSd
				return l
			}), k
		}},
		{"extension instrument, gain", settingFrom, onSlope, func(r ramp, k constants, sign float64) (ramp, constants) {
			gain := sign * math.Sqrt2 * s.ExtensionSd / spanM
			return moveLines(r, func(l estimate.Line, _ Direction) estimate.Line {
				mid := l.A + l.B*midSI
				l.B *= 1 + gain
				l.A = mid - l.B*midSI
				return l
			}), k
		}},
		{"setting instrument", settingFrom, both, func(r ramp, k constants, sign float64) (ramp, constants) {
			return moveLines(r, func(l estimate.Line, _ Direction) estimate.Line {
				l.A += l.B * sign * s.SettingStd
				return l
			}), k
		}},
		{"setting instrument, gain", settingFrom, onSlope, func(r ramp, k constants, sign float64) (ramp, constants) {
			gain := sign * math.Sqrt2 * s.SettingStd / spanSI
			return moveLines(r, func(l estimate.Line, _ Direction) estimate.Line {
				mid := l.A + l.B*midSI
				l.B *= 1 + gain
				l.A = mid - l.B*midSI
				return l
			}), k
		}},
		{"zero", w.zeroFrom, both, func(r ramp, k constants, sign float64) (ramp, constants) {
			r.zeroM += sign * w.zeroStd
			return r, k
		}},
		{"time alignment", "time error of the pairs x rate", both, func(r ramp, k constants, sign float64) (ramp, constants) {
			return moveLines(r, func(l estimate.Line, d Direction) estimate.Line {
				shift := sign * w.timeStd
				if d == Falling {
					shift = -shift
				}
				l.A += l.B * shift
				return l
			}), k
		}},
	}
}

func moveLines(r ramp, move func(estimate.Line, Direction) estimate.Line) ramp {
	r.rising = move(r.rising, Rising)
	r.falling = move(r.falling, Falling)
	return r
}
