package findings

import (
	"math"

	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

func (d *data) half() estimate.Estimate {
	constant, growing := d.driftWidth()
	if constant == 0 && growing == 0 {
		return d.r.WidthRatio
	}
	return lessDrift(d.r.WidthRatio, constant/d.workingSI+growing)
}

// constant is F0 / A* over the working setting; of a tensioner that is not set
// by pressure, the half-width carried on to no load.
func (d *data) constant() estimate.Estimate {
	f := d.r.Friction
	if !d.pressureSet() {
		c, _ := d.widthLine()
		return c
	}
	if !f.F0N.Known() || !(f.AreaM2.Value > 0) || !(d.workingSI > 0) {
		return estimate.Unknown("the loop does not give its friction")
	}
	e := f.F0N.Scale(1 / f.AreaM2.Value / d.workingSI)
	by, _ := d.driftWidth()
	return lessDrift(e, by/d.workingSI)
}

// lessDrift takes off what a drift pretends, a tenth of it in doubt.
func lessDrift(e estimate.Estimate, by float64) estimate.Estimate {
	e.Value -= by
	e.System = math.Hypot(e.System, 0.1*by)
	return e
}

// proportional is mu.
func (d *data) proportional() estimate.Estimate {
	if !d.pressureSet() {
		_, p := d.widthLine()
		return p
	}
	_, by := d.driftWidth()
	return lessDrift(d.r.Friction.Mu, by)
}

// widthLine splits the half-width of the loop, h = h0 + h1 pbar with pbar midway
// between the branches, by its two ends; h0 as a share of the working setting.
func (d *data) widthLine() (constant, growing estimate.Estimate) {
	rows := d.r.Widths
	no := estimate.Unknown("the loop's width is not known")
	if len(rows) < 2 || !(d.workingSI > 0) {
		return no, no
	}
	low, high := rows[0], rows[len(rows)-1]
	if !low.HalfSI.Known() || !high.HalfSI.Known() {
		return no, no
	}
	at := func(w analyze.WidthAt) float64 { return w.RisingSI - w.HalfSI.Value }
	apart := at(high) - at(low)
	if !(apart > 0) {
		return no, no
	}
	h1 := (high.HalfSI.Value - low.HalfSI.Value) / apart
	random := math.Hypot(low.HalfSI.Random, high.HalfSI.Random) / apart
	growing = estimate.Estimate{Value: h1, Random: random, DoF: low.HalfSI.DoF, Method: "half-widths at both ends of the loop"}
	share := at(low) / apart
	constant = estimate.Estimate{
		Value:  (low.HalfSI.Value - h1*at(low)) / d.workingSI,
		Random: math.Hypot((1+share)*low.HalfSI.Random, share*high.HalfSI.Random) / d.workingSI,
		System: math.Max(low.HalfSI.System, high.HalfSI.System) / d.workingSI,
		DoF:    low.HalfSI.DoF, Method: "half-widths at both ends of the loop, carried on to no load",
	}
	return constant, growing
}

// offLoad compares the drag of the cylinders with nothing on them with the
// constant part.
func (d *data) offLoad() estimate.Estimate {
	drag, constant := d.r.Setup.Tensioner.OffLoadDrag, d.constant()
	switch {
	case !drag.Given():
		return estimate.Unknown("no off-load test of the cylinders is in mill.toml")
	case !constant.Known() || !(constant.Value > 0):
		return estimate.Unknown("the loop does not give its friction")
	}
	ratio := drag.SI / d.workingSI / constant.Value
	return estimate.Estimate{Value: ratio, Random: ratio * constant.Random / constant.Value,
		System: ratio * math.Hypot(constant.System/constant.Value, 0.1), DoF: constant.DoF,
		Method: "off-load test in mill.toml, taken as good to 10 %"}
}

// play is the reversal beyond what the loop's own width explains.
func (d *data) play() estimate.Estimate {
	var values, stds []float64
	for _, c := range d.r.Cycles {
		if c.Rising.Points == 0 || !c.ReversalSI.Known() || !(d.workingSI > 0) {
			continue
		}
		values = append(values, (c.ReversalSI.Value-2*d.halfAt(c.TopSI))/d.workingSI)
		stds = append(stds, c.ReversalSI.Std()/d.workingSI)
	}
	return over(values, stds, "from the top to where the stretch follows, less twice the half-width there", "no ramp shows its reversal")
}

// halfAt is the loop's half-width about a rising setting, by its table.
func (d *data) halfAt(risingSI float64) float64 {
	rows := d.r.Widths
	if len(rows) < 2 {
		return d.r.Working.HalfSI.Value
	}
	low, high := rows[0], rows[len(rows)-1]
	if !low.HalfSI.Known() || !high.HalfSI.Known() || high.RisingSI == low.RisingSI {
		return d.r.Working.HalfSI.Value
	}
	share := (risingSI - low.RisingSI) / (high.RisingSI - low.RisingSI)
	return math.Max(0, low.HalfSI.Value+share*(high.HalfSI.Value-low.HalfSI.Value))
}

// toe is the stress up to which the rising readings stay off the line of the
// upper part of the rise by more than a hundredth of the working stretch, and
// more than the display hides, of the target: how far slack, curl or flattening
// reach.
func (d *data) toe() estimate.Estimate {
	if !d.usable() {
		return estimate.Unknown("no rise was long enough")
	}
	var values, stds []float64
	for _, c := range d.r.Cycles {
		if v, ok := d.toeOf(c); ok && c.Role == analyze.Ramp {
			values, stds = append(values, v), append(stds, toeStd)
		}
	}
	return over(values, stds, "readings off the line of the upper rise by 1 % of the working stretch", "no rise was long enough")
}

const (
	offLine = 0.01 // of the working stretch
	// How well the end of a toe, which is gentle, is known, of the target.
	// Judgement.
	toeStd = 0.02
	// The part of a rise, by setting, that its line is taken from. Judgement.
	upperFrom, upperTo = 0.6, 0.95
)

func (d *data) toeOf(c analyze.Cycle) (share float64, ok bool) {
	at := d.leads(c)
	if len(at) < 24 {
		return 0, false
	}
	p, e := make([]float64, len(at)), make([]float64, len(at))
	for k, i := range at {
		p[k], e[k] = d.follow.p[i], d.e[i]
	}
	low, span := p[0], p[len(p)-1]-p[0]
	upper, fits := fitPart(p, e, low+upperFrom*span, low+upperTo*span)
	if !fits || !(upper.B > 0) {
		return 0, false
	}
	p, e = thinned(p, 80), thinned(e, 80)
	off := math.Max(offLine*d.workingM, d.countM+3*d.noiseM)
	zero := d.zeroM()
	for i := range p {
		if is := upper.A + upper.B*p[i]; p[i] < low+upperFrom*span && math.Abs(e[i]-is) > off {
			share = math.Max(share, (e[i]-zero)/d.workingM)
		}
	}
	return share, true
}

const noLoop = "the two lines are not those of one loop"

// plausible is whether the slopes of the two lines can be those of one tensioner:
// a friction that grows by half of the load and more is none.
func (d *data) plausible() bool { return math.Abs(d.r.Friction.Mu.Value) < 0.5 }

func (d *data) area() estimate.Estimate {
	r := d.r.Friction.AreaRatio
	if !r.Known() {
		return r
	}
	if !d.plausible() {
		return estimate.Unknown(noLoop)
	}
	// The section and the modulus enter forces: what they leave open is in System.
	r.Value--
	return size(r)
}

// weight is the lifted weight by the loop less the profile's, as a setting.
func (d *data) weight() estimate.Estimate {
	given, f := d.r.Setup.Tensioner.LiftedWeight, d.r.Friction
	switch {
	case !given.Given():
		return estimate.Unknown("mill.toml gives no lifted weight")
	case !f.WeightN.Known() || !(f.AreaM2.Value > 0) || !(d.workingSI > 0):
		return estimate.Unknown("the loop does not give the lifted weight: " + f.WeightN.Why)
	case !d.plausible():
		return estimate.Unknown(noLoop)
	}
	w := f.WeightN
	w.Value -= given.SI
	w.System = math.Hypot(w.System, weightDoubt*given.SI)
	w = w.Scale(1 / f.AreaM2.Value / d.workingSI)
	if d.usable() {
		w.System = math.Hypot(w.System, d.zeroDoubtM()/d.up.b/d.workingSI)
	}
	return size(w)
}

// zeroDoubtM is what the zero leaves open of the weight: one count of the display
// either way (rectangular), how far the zero that was used lies from the stretch
// that the slack band showed, and a quarter of what the stretch drifts in a cycle.
func (d *data) zeroDoubtM() float64 {
	apart := 0.0
	if slack := d.slackM(); !math.IsNaN(slack) {
		apart = math.Abs(d.zeroM() - slack)
	}
	drifts := 0.0
	if drift := d.drift(); drift.Known() && len(d.r.Cycles) > 0 {
		drifts = math.Abs(drift.Value) / 60 * (d.t[len(d.t)-1] - d.t[0]) / float64(len(d.r.Cycles)) / 4
	}
	return math.Hypot(math.Hypot(d.countM/math.Sqrt(3), apart), drifts)
}

// slackM is the lowest stretch that stayed for a while: the slack band's, however
// the zero was found.
func (d *data) slackM() float64 {
	low := math.NaN()
	n := d.points(slackS)
	for i := 0; i+n <= len(d.e); i += n {
		if e := estimate.Median(d.e[i : i+n]); !(e >= low) {
			low = e
		}
	}
	return low
}

// slackS is for how long, s.
const slackS = 3.0

// weightDoubt is how well a lifted weight is commonly known, relative. Judgement.
const weightDoubt = 0.05

// ramps counts the closed cycles that are not for exercise, fitted or not.
func (d *data) ramps() estimate.Estimate {
	if len(d.r.Cycles) == 0 {
		return estimate.Unknown("no ramp could be fitted")
	}
	n := 0
	for _, c := range d.r.Cycles {
		if c.Role == analyze.Ramp {
			n++
		}
	}
	return estimate.Exact(float64(n), "counted")
}

// fast is the pace of the fastest ramp; of the setting alone, where nothing could
// be fitted.
func (d *data) fast() estimate.Estimate {
	worst := math.NaN()
	for _, c := range d.r.Cycles {
		if c.Rising.Points > 0 && c.TopSI > 0 && !(c.RateSI/c.TopSI <= worst) {
			worst = c.RateSI / c.TopSI
		}
	}
	if math.IsNaN(worst) {
		worst = d.bareRate()
	}
	if math.IsNaN(worst) {
		return estimate.Unknown("the setting never rises")
	}
	return estimate.Estimate{Value: worst, System: rateStd * worst, DoF: math.Inf(1), Method: "median rate on the branches"}
}

// rateStd is how well the pace of a hand is told by one number, relative.
// Judgement.
const rateStd = 0.05

// paceS is over how long the pace is taken where no branch was fitted, s: longer
// than two strokes. Judgement.
const paceS = 4.5

// strokeS is longer than one stroke of a pump, s: a rise that takes no longer is none
// of the ramp. Judgement.
const strokeS = 2.0

// paceShare is the part of a rise that is slower than its pace: the holds of a
// staircase. Judgement.
const paceShare = 0.8

// bareRate is the pace of the setting's highest so far in the fastest rise, of its
// top.
func (d *data) bareRate() float64 {
	worst := math.NaN()
	if len(d.p) < leastPoints {
		return worst
	}
	turns := analyze.Turning(d.p, 0.5*(estimate.Quantile(d.p, 0.999)-estimate.Quantile(d.p, 0.001)))
	for k := 1; k < len(turns); k++ {
		first, peak := turns[k-1], turns[k]
		top, best := d.p[peak], d.p[first]
		if !(top > best) || d.t[peak]-d.t[first] < strokeS {
			continue
		}
		lead := make([]float64, peak-first+1)
		for i := range lead {
			best = math.Max(best, d.p[first+i])
			lead[i] = best
		}
		var paces []float64
		for i, from := first, first; i <= peak; i++ {
			for d.t[from] < d.t[i]-paceS {
				from++
			}
			paces = append(paces, (lead[i-first]-lead[from-first])/paceS/top)
		}
		if r := estimate.Quantile(paces, paceShare); !(r <= worst) {
			worst = r
		}
	}
	return worst
}
