package analyze

import "tautramp/analyze/estimate"

// Direction is the way the setting moves.
type Direction string

// The two directions.
const (
	Rising  Direction = "rising"
	Falling Direction = "falling"
)

// Branch is all fitted cycles together: stress = Stress0 + Slope * setting.
type Branch struct {
	Direction Direction
	Stress0   estimate.Estimate // Pa
	Slope     estimate.Estimate // Pa per SI unit of setting
	LowSI     float64           // captured range of setting
	HighSI    float64
	LowPa     float64 // captured range of stress; NaN where the zero is unknown
	HighPa    float64
	Cycles    int
}

// stressFigure is the band stress at a setting: (A + B p - zero) E / L.
func stressFigure(d Direction, settingSI float64) figure {
	return func(r ramp, k constants) float64 {
		l := r.line(d)
		return (l.A + l.B*settingSI - r.zeroM) * k.paPerM()
	}
}

// settingFigure is the setting at a band stress.
func settingFigure(d Direction, stressPa float64) figure {
	return func(r ramp, k constants) float64 {
		l := r.line(d)
		return (r.zeroM + stressPa/k.paPerM() - l.A) / l.B
	}
}

func (r *Result) branch(d Direction) Branch {
	if d == Falling {
		return r.Falling
	}
	return r.Rising
}

// StressAt is the band stress on a branch at a setting, Pa: the mean of the
// ramps at that setting, so that the doubt of intercept and slope enters with
// its correlation. Errors: *OutOfRangeError outside the captured settings,
// ErrNoZero, ErrNoCycle for a result that Analyze did not make.
func (r *Result) StressAt(d Direction, settingSI float64) (estimate.Estimate, error) {
	if err := r.usable(); err != nil {
		return estimate.Estimate{}, err
	}
	b := r.branch(d)
	if !(settingSI >= b.LowSI && settingSI <= b.HighSI) {
		t := r.Setup.Tensioner
		return estimate.Estimate{}, &OutOfRangeError{settingSI, b.LowSI, b.HighSI, "setting, " + string(d), d, t.SettingRole(), t.SetBy}
	}
	return r.work.stressAt(d, settingSI), nil
}

// stressAt is the stress at a setting, by the ramps that reach it.
func (w *work) stressAt(d Direction, settingSI float64) estimate.Estimate {
	return w.reaching(d, at(settingSI)).combine(stressFigure(d, settingSI), noZero)
}

func (r *Result) usable() error {
	switch {
	case r.work == nil || len(r.work.ramps) == 0:
		return ErrNoCycle
	case !r.work.zeroKnown():
		return ErrNoZero
	}
	return nil
}
