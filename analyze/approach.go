package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// Agreement is whether a fresh approach says what the curve says. The zero
// value is inconclusive.
type Agreement string

// The agreements.
const (
	Undecided Agreement = ""
	Agrees    Agreement = "agrees"
	Differs   Agreement = "differs"
)

// Approach is one fresh approach to a setting from below, the band read again
// there: the proof of a card. What repeats (modulus, gauge length, the
// instruments' own errors) is in both readings and is left out of both.
type Approach struct {
	SettingSI  float64           // the highest reached
	ReadPa     estimate.Estimate // band stress read there, with the approach's own zero
	ExpectedPa estimate.Estimate // of the next setting, by the curve
	Agreement  Agreement
	Why        string // why it is undecided
}

// CheckApproach compares an approach from below with the curve at the highest
// setting that it reached. It agrees where the two differ by no more than the
// 95 % interval of their difference; it is undecided with one ramp, which tells
// nothing of the next setting, and where the approach has no zero. Errors:
// ErrTooFewPairs, *OutOfRangeError, ErrNoZero, ErrNoCycle.
func (r *Result) CheckApproach(set *pairing.Set) (Approach, error) {
	if err := r.usable(); err != nil {
		return Approach{}, err
	}
	setup := r.Setup
	w, err := newWork(set, setup)
	if err != nil {
		return Approach{}, fmt.Errorf("approach: %w", err)
	}
	top, hold := w.highest()
	a := Approach{SettingSI: w.trace.smooth(w.t[top])}
	curve, err := r.StressAt(Rising, a.SettingSI)
	if err != nil {
		return Approach{}, fmt.Errorf("approach: %w", err)
	}
	a.ExpectedPa = r.work.nextStress(a.SettingSI, curve)
	a.ReadPa = w.readStress(hold, w.slackBelow(r))
	a.ReadPa.Random = math.Hypot(a.ReadPa.Random, w.trace.doubt(w.trace.windowS)*r.Rising.Slope.Value)
	a.judge()
	return a, nil
}

// highest is the pair at the highest setting, and those after it in which the
// setting is held: friction holds the band there while the pressure sags.
func (w *work) highest() (top int, hold []int) {
	w.trace.windowS = math.Max(w.trace.windowS, 1)
	for i := range w.t {
		if w.trace.smooth(w.t[i]) > w.trace.smooth(w.t[top]) {
			top = i
		}
	}
	const heldShare = 0.03 // of the setting: a pump's sag. Judgement.
	level := w.trace.smooth(w.t[top])
	for i := top; i < len(w.t) && level-w.trace.smooth(w.t[i]) <= heldShare*level; i++ {
		hold = append(hold, i)
	}
	return top, hold
}

// slackBelow is the extension of the slack band: of the readings taken below the
// setting at which the curve says that a falling band goes slack, else of the
// operator's mark.
func (w *work) slackBelow(r *Result) estimate.Estimate {
	below := -r.Falling.Stress0.Value / r.Falling.Slope.Value
	var e []float64
	for i := range w.t {
		if w.trace.smooth(w.t[i]) < below {
			e = append(e, w.e[i])
		}
	}
	if len(e) >= leastPoints {
		_, sd := estimate.Mean(e)
		return estimate.Estimate{Value: estimate.Median(e), Random: math.Hypot(sd/math.Sqrt(float64(len(e))), w.setup.CountM/math.Sqrt(12)),
			DoF: math.Inf(1), Method: "stretch below the setting at which the band goes slack"}
	}
	for _, m := range w.set.Marks {
		if m.Kind == pairing.Zero {
			return w.extensionAbout(m.T)
		}
	}
	return estimate.Unknown("the approach did not start from a slack band, and nobody marked its zero")
}

// readStress is the band stress of some readings.
func (w *work) readStress(at []int, zero estimate.Estimate) estimate.Estimate {
	if !zero.Known() {
		return zero
	}
	if len(at) < leastPoints {
		return estimate.Unknown("the setting was not held: hold it for ten seconds")
	}
	e := pick(w.e, at)
	mean, sd := estimate.Mean(e)
	read := math.Hypot(sd/math.Sqrt(float64(len(e))), w.setup.CountM/math.Sqrt(12))
	return estimate.Estimate{
		Value: (mean - zero.Value) * w.k.paPerM(), Random: math.Hypot(read, zero.Random) * w.k.paPerM(),
		DoF: math.Inf(1), Method: "mean of the hold less the slack band",
	}
}

// nextStress adds to the curve how far one ramp strays from it, in stress.
func (w *work) nextStress(settingSI float64, curve estimate.Estimate) estimate.Estimate {
	if len(w.ramps) < 2 {
		return estimate.Unknown("one ramp only: how well the next setting repeats is not known")
	}
	curve.Random = math.Hypot(curve.Random, w.rampSD(stressFigure(Rising, settingSI)))
	curve.DoF = math.Min(curve.DoF, float64(len(w.ramps)-1))
	curve.System = 0
	curve.Method = "the curve, and scatter of one ramp"
	return curve
}

func (a *Approach) judge() {
	switch {
	case !a.ExpectedPa.Known():
		a.Why = a.ExpectedPa.Why
	case !a.ReadPa.Known():
		a.Why = a.ReadPa.Why
	default:
		parts := []estimate.Component{{Std: a.ExpectedPa.Random, DoF: a.ExpectedPa.DoF}, {Std: a.ReadPa.Random, DoF: a.ReadPa.DoF}}
		a.Agreement = Differs
		if math.Abs(a.ReadPa.Value-a.ExpectedPa.Value) <= estimate.Student95(estimate.EffectiveDoF(parts))*estimate.RootSum(parts) {
			a.Agreement = Agrees
		}
	}
}
