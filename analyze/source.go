package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// stage is which of the three intervals a cause of doubt first enters.
type stage int

const (
	inCurve  stage = iota // the fitted curve already: the indicator's own error, and the zero
	inTruth               // only what is true: constants, the gauge, what the rig cannot see
	inForces              // only forces and areas
)

// source is one cause of doubt that repeats from ramp to ramp: it is not made
// less by ramping again.
type source struct {
	name  string
	from  string
	enter stage
	flat  bool    // rectangular, and not normal
	moves []mover // each by one standard uncertainty, independent of the others
}

// mover changes a ramp and the constants by so many standard uncertainties.
type mover func(r ramp, k constants, by float64) (ramp, constants)

// systematics lists what repeats.
func (w *work) systematics() []source {
	s := w.setup
	list := append(w.rigSources(), w.mountingSources()...)
	return w.ofOther(append(list,
		source{name: "modulus of the steel", from: s.ModulusPa.Method, enter: inTruth, moves: []mover{func(r ramp, k constants, by float64) (ramp, constants) {
			k.modulusPa += by * s.ModulusPa.System
			return r, k
		}}},
		source{name: "gauge length", from: s.GaugeM.Method, enter: inTruth, moves: []mover{func(r ramp, k constants, by float64) (ramp, constants) {
			k.gaugeM += by * s.GaugeM.System
			return r, k
		}}},
		source{name: ofSection, from: "assumed 1 %", enter: inForces, moves: []mover{func(r ramp, k constants, by float64) (ramp, constants) {
			k.areaM2 *= 1 + by*s.SectionRelStd
			return r, k
		}}},
		source{name: "setting gauge", from: limitOf("its error"), enter: inTruth, flat: true, moves: w.gaugeCurve()},
		source{name: "vented zero of the setting gauge", from: "its least count / sqrt 12", enter: inTruth, flat: true, moves: []mover{shiftSetting(s.CountSI / math.Sqrt(12))}},
		w.instantSource(),
	))
}

// instantSource is the doubt about which setting belongs to a reading of the
// stretch.
func (w *work) instantSource() source {
	if w.set.Stepped {
		return source{
			name: "step reached", from: "how near each step is met, as declared or a twentieth of a step",
			enter: inTruth, moves: []mover{apart(w.set.StepStd)},
		}
	}
	return source{
		name: "time alignment", from: "time between the channels x rate of the setting",
		enter: inTruth, moves: []mover{w.late(w.instantStdS())},
	}
}

// rigSources is what the measuring of the stretch repeats.
func (w *work) rigSources() []source {
	s := w.setup
	return []source{
		{name: "stretch indicator", from: limitOf("its error"), flat: true, moves: w.indicatorCurve()},
		{name: "steps of the indicator's display", from: "assumed a tenth of a count each, the same for every ramp", moves: w.stepMoves()},
		{name: "indicator's own reversal", from: s.ReversalFrom, flat: true, moves: []mover{shiftExtension(s.ReversalSd/2, true)}},
		{name: "drift between rising and falling", from: "return of the slack band, anywhere within half of it", flat: true, moves: []mover{shiftExtension(w.driftStdM()/2, true)}},
		{name: "zero", from: w.zeroDoubt(), flat: true, moves: []mover{func(r ramp, k constants, by float64) (ramp, constants) {
			r.zeroM += by * w.zeroStd
			return r, k
		}}},
	}
}

func limitOf(what string) string { return "limit of " + what + " / sqrt 3" }

func (w *work) zeroDoubt() string {
	if w.zeroFrom == slackLift {
		return "line carried down to the slack lift, 0.3 of the indicator's limit / sqrt 3"
	}
	return "least count of the stretch indicator, at the " + w.zeroFrom
}

// An instrument's error over its scale is one curve, the same for every ramp:
// anything within its limit at each point, one end of the captured range half
// independent of the other. Such a curve is u cos(q) + v sin(q) with q from -30
// to +30 degrees over that range and u, v of one standard uncertainty each; a
// branch's line sees of it what the best line through it over the branch's own
// stretch of the scale has. So a shift, a wrong gain and a bend all come of it.
type errorCurve struct{ from, to float64 } // the captured range

// lines is the best straight lines through the cosine and the sine over part of
// the scale: value at its middle, and slope.
func (c errorCurve) lines(low, high float64) (cos, sin [2]float64) {
	q := math.Pi / 3 / (c.to - c.from)
	half := (high - low) / 2
	at := q * ((low+high)/2 - (c.from+c.to)/2)
	flat, steep := 1.0, q
	if z := q * half; z > 1e-3 {
		flat = math.Sin(z) / z
		steep = 3 * (math.Sin(z) - z*math.Cos(z)) / (z * z * z) * q
	}
	return [2]float64{math.Cos(at) * flat, -math.Sin(at) * steep}, [2]float64{math.Sin(at) * flat, math.Cos(at) * steep}
}

// pick is the cosine's line or the sine's, as y = a + b x.
func (c errorCurve) line(low, high float64, sine bool) (a, b float64) {
	l, s := c.lines(low, high)
	if sine {
		l = s
	}
	return l[0] - l[1]*(low+high)/2, l[1]
}

// indicatorCurve moves the lines as the indicator's error curve does.
func (w *work) indicatorCurve() []mover {
	std := w.setup.ExtensionSd
	low, high := w.reachM()
	curve := errorCurve{low, high}
	move := func(sine bool) mover {
		return lineMover(func(r ramp, d Direction, by float64) estimate.Line {
			l := r.line(d)
			fromSI, toSI := r.covers(d)
			a, b := curve.line(l.A+l.B*fromSI, l.A+l.B*toSI, sine)
			l.A += by * std * (a + b*l.A)
			l.B += by * std * b * l.B
			return l
		})
	}
	return []mover{move(false), move(true)}
}

// stepMoves move the lines as the steps of the display do, each off its place
// but the same for every ramp. Both branches pass the same steps; the falling one
// passes fewer, and its slope is off by what it lacks besides: of nested fits the
// variance of the difference is the difference of the variances.
func (w *work) stepMoves() []mover {
	low, high := w.reachM()
	fall := 0.0
	for _, r := range w.ramps {
		from, to := r.covers(Falling)
		fall += r.falling.B * (to - from) / float64(len(w.ramps))
	}
	count, span := w.setup.CountM, high-low
	if !(count > 0) || !(span > count) || !(fall > count) {
		return nil
	}
	tiltOf := func(span float64) float64 { return stepScatter * count * math.Sqrt(12*count/span) / span }
	extra := math.Sqrt(math.Max(0, tiltOf(fall)*tiltOf(fall)-tiltOf(span)*tiltOf(span)))
	tilt := func(rising, falling float64) mover {
		return lineMover(func(r ramp, d Direction, by float64) estimate.Line {
			l, share := r.line(d), rising
			if d == Falling {
				share = falling
			}
			share *= by
			l.A += share * (l.A - (low+high)/2)
			l.B += share * l.B
			return l
		})
	}
	return []mover{shiftExtension(stepScatter*count*math.Sqrt(count/span), false), tilt(tiltOf(span), tiltOf(span)), tilt(0, extra)}
}

// gaugeCurve moves the lines as the setting gauge's error curve does.
func (w *work) gaugeCurve() []mover {
	std := w.setup.SettingStd
	curve := errorCurve{math.Min(w.res.Rising.LowSI, w.res.Falling.LowSI), math.Max(w.res.Rising.HighSI, w.res.Falling.HighSI)}
	move := func(sine bool) mover {
		return lineMover(func(r ramp, d Direction, by float64) estimate.Line {
			l := r.line(d)
			fromSI, toSI := r.covers(d)
			a, b := curve.line(fromSI, toSI, sine)
			l.A += by * std * a * l.B
			l.B += by * std * b * l.B
			return l
		})
	}
	return []mover{move(false), move(true)}
}

// shiftExtension moves the lines by std in extension, the falling one the
// other way where apart is set.
func shiftExtension(std float64, apart bool) mover {
	return lineMover(func(r ramp, d Direction, by float64) estimate.Line {
		l := r.line(d)
		l.A += by * std * side(d, apart)
		return l
	})
}

// shiftSetting moves both lines by std in setting.
func shiftSetting(std float64) mover {
	return lineMover(func(r ramp, d Direction, by float64) estimate.Line {
		l := r.line(d)
		l.A += l.B * by * std
		return l
	})
}

// driftStdM is by how much the stretch may have drifted between the rising branch
// and the falling one: half of what it did not come back, mean of the ramps, and
// anywhere within that.
func (w *work) driftStdM() float64 {
	sum, n := 0.0, 0.0
	for _, i := range w.fitted {
		if r := w.res.Cycles[i].ReturnM; r.Known() {
			sum, n = sum+r.Value, n+1
		}
	}
	if n == 0 {
		return 0
	}
	return math.Abs(sum/n) / 2 / math.Sqrt(3)
}

// late moves the lines as a delay of so long does, at the rate that each branch had
// at each setting.
func (w *work) late(stdS float64) mover {
	return lineMover(func(r ramp, d Direction, by float64) estimate.Line {
		l, rate := r.line(d), w.rates[0]
		if d == Falling {
			rate = w.rates[1]
		}
		l.A -= l.B * by * stdS * rate.A
		l.B -= l.B * by * stdS * rate.B
		return l
	})
}

// apart moves the rising line by std in setting, and the falling one the other way.
func apart(stdSI float64) mover {
	return lineMover(func(r ramp, d Direction, by float64) estimate.Line {
		l := r.line(d)
		l.A += l.B * by * stdSI * side(d, true)
		return l
	})
}

func side(d Direction, apart bool) float64 {
	if apart && d == Falling {
		return -1
	}
	return 1
}

// lineMover moves both lines of a ramp.
func lineMover(move func(r ramp, d Direction, by float64) estimate.Line) mover {
	return func(r ramp, k constants, by float64) (ramp, constants) {
		out := r
		out.rising = move(r, Rising, by)
		out.falling = move(r, Falling, by)
		return out.tied(), k
	}
}
