package findings

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// data is a result made ready for the features.
type data struct {
	in  Input
	r   *analyze.Result
	set *pairing.Set

	t, p, e   []float64 // of the points: s, setting SI, extension m
	phase     []analyze.PhaseKind
	workingSI float64 // working setting
	workingM  float64 // stretch there, from the slack band
	countM    float64
	stepS     float64 // median time from point to point
	noiseM    float64 // standard deviation of one reading of a still extension, with its count
	up, down  line    // of all fitted ramps together
	lockSI    float64 // setting that friction locks at the working setting: twice the half-width
	follow    follow  // what the band would do, and what is left
	holds     []hold
	stages    []stage // rises, falls and rests, for drifts
	jumps     jumps
	late      estimate.Estimate // s
}

// line is extension on setting, m and SI.
type line struct{ a, b float64 }

func (l line) at(p float64) float64 { return l.a + l.b*p }

// leastPoints is fewer than any recording worth looking at has.
const leastPoints = 40

func newData(in Input) *data {
	d := &data{late: estimate.Unknown("too little was recorded"), in: in, r: in.Result, set: in.Set, countM: in.Result.Setup.CountM}
	for _, pt := range in.Result.Points {
		d.t, d.p, d.e = append(d.t, pt.T), append(d.p, pt.SettingSI), append(d.e, pt.ExtensionM)
		d.phase = append(d.phase, pt.Phase)
	}
	if len(d.t) == 0 && in.Set != nil {
		d.takePairs(in.Set)
		return d
	}
	d.scales()
	if len(d.t) < leastPoints || !(d.up.b > 0) || !(d.down.b > 0) || !(d.workingM > 0) {
		return d
	}
	d.stepS = d.medianStep()
	d.noiseM = d.stillNoise()
	d.follow = d.newFollow(0)
	d.late = d.findLag()
	d.jumps = d.findJumps()
	d.correctLag()
	d.holds = d.findHolds()
	d.stages = d.findStages()
	return d
}

// takePairs is for a recording of which nothing could be fitted.
func (d *data) takePairs(set *pairing.Set) {
	for _, q := range set.Pairs {
		d.t, d.p, d.e = append(d.t, q.T), append(d.p, q.Setting), append(d.e, q.Extension)
	}
	d.countM = set.Extension.CountSI
}

// correctLag takes a lag that is told from none off the setting's time, where
// fewer jumps are left of it: lag and strokes make jumps of their own.
func (d *data) correctLag() {
	late := d.late
	if !late.Known() || !(math.Abs(late.Value) > 3*late.Std()) || !(math.Abs(late.Value) > d.stepS/2) {
		return
	}
	was, wasJumps := d.follow, d.jumps
	before, _ := d.third()
	d.follow = d.newFollow(late.Value)
	d.jumps = d.findJumps()
	if after, _ := d.third(); after >= before {
		d.follow, d.jumps = was, wasJumps
	}
}

// usable is whether there is enough to look at more than the result's figures.
func (d *data) usable() bool { return len(d.follow.rest) > 0 }

func (d *data) scales() {
	var ua, ub, da, db []float64
	for _, c := range d.r.Cycles {
		if c.Rising.Points > 0 && c.Falling.Points > 0 {
			ua, ub = append(ua, c.Rising.Line.A), append(ub, c.Rising.Line.B)
			da, db = append(da, c.Falling.Line.A), append(db, c.Falling.Line.B)
		}
	}
	if len(ua) == 0 {
		return
	}
	d.up.b, d.down.b = estimate.Median(ub), estimate.Median(db)
	d.up.a, d.down.a = estimate.Median(ua), estimate.Median(da)
	d.workingSI = d.r.Working.RisingSI
	d.lockSI = 2 * math.Max(0, d.r.Working.HalfSI.Value)
	s := d.r.Setup
	switch {
	case d.r.Working.StressPa > 0:
		d.workingM = d.r.Working.StressPa * s.GaugeM.Value / s.ModulusPa.Value
	default:
		d.workingM = d.up.b * (d.workingSI - d.r.Rising.LowSI)
	}
}

// stillNoise is the scatter of the extension about a line while it rests, with
// what one count hides (rectangular, JCGM 100 F.2.2.1).
func (d *data) stillNoise() float64 {
	var steps []float64
	for i := 1; i < len(d.e); i++ {
		if still(d.phase[i]) && still(d.phase[i-1]) {
			steps = append(steps, d.e[i]-d.e[i-1])
		}
	}
	noise := 0.0
	if len(steps) >= 20 {
		noise = estimate.MAD(steps) / math.Sqrt2
	}
	return math.Hypot(noise, d.countM/math.Sqrt(12))
}

func still(p analyze.PhaseKind) bool { return p == analyze.Resting || p == analyze.Holding }

func (d *data) pressureSet() bool {
	by := d.r.Setup.Tensioner.SetBy
	return by == mill.SetByPressure || by == ""
}

// known is an estimate with a stated random uncertainty.
func known(value, random, dof float64, method string) estimate.Estimate {
	return estimate.Estimate{Value: value, Random: random, DoF: dof, Method: method}
}

// over is one figure from several places: its mean, with scatter between them
// or the doubt inside them, whichever is wider.
func over(values, stds []float64, method, why string) estimate.Estimate {
	if len(values) == 0 {
		return estimate.Unknown(why)
	}
	vars, dof := make([]float64, len(stds)), 0.0
	for i, s := range stds {
		vars[i] = s * s
		dof += 10
	}
	e := estimate.OverRamps(values, vars, dof)
	if e.Known() {
		e.Method = method
	}
	return e
}

// serialLine is the least-squares line of readings in the order in which they
// were made, its doubt raised by what neighbours have in common.
func serialLine(x, y []float64) (estimate.Line, error) {
	l, err := estimate.FitLine(x, y)
	if err != nil {
		return l, err
	}
	rest := make([]float64, len(x))
	for i := range x {
		rest[i] = y[i] - l.A - l.B*x[i]
	}
	tau := estimate.Dependence(rest)
	l.VarA, l.VarB, l.CovAB = l.VarA*tau, l.VarB*tau, l.CovAB*tau
	l.DoF = math.Max(1, float64(l.N)/tau-2)
	return l, nil
}
