package findings

import (
	"math"

	"tautramp/acquire/pairing"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// stage is what the lines leave of the stretch, on average over one rise, hold,
// fall or rest.
type stage struct {
	kind  analyze.PhaseKind
	t     float64 // s, its middle
	restM float64
	stdM  float64 // of restM: what the count hides of it
	tempK float64
}

// findStages averages over each rise, fall and rest that is long enough; what lies
// between the points of one, a hold or a sag, is left out.
func (d *data) findStages() []stage {
	var out []stage
	zero := d.zeroM()
	temp := d.thermometer()
	var at []int
	var kind analyze.PhaseKind
	flush := func() {
		if s, ok := d.stage(kind, at, zero, temp); ok {
			out = append(out, s)
		}
		at = at[:0]
	}
	for i, is := range d.phase {
		switch is {
		case analyze.SlackLift: // a slack band too
			is = analyze.Resting
		case analyze.Loading, analyze.Unloading:
			if !d.follow.good[i] {
				continue
			}
		case analyze.Resting:
		default:
			continue
		}
		if is != kind {
			flush()
			kind = is
		}
		at = append(at, i)
	}
	flush()
	return out
}

// stage is one of the points given.
func (d *data) stage(kind analyze.PhaseKind, at []int, zero float64, temp pairing.Channel) (stage, bool) {
	if len(at) < 10 {
		return stage{}, false
	}
	first, last := at[0], at[len(at)-1]
	s := stage{kind: kind, t: (d.t[first] + d.t[last]) / 2, tempK: math.NaN()}
	rest, e := make([]float64, len(at)), make([]float64, len(at))
	for k, i := range at {
		e[k], rest[k] = d.e[i], d.follow.rest[i]
		if kind == analyze.Resting {
			rest[k] = d.e[i] - zero
		}
	}
	s.restM, _ = estimate.Mean(rest)
	// A still display hides a count; over a ramp its steps average out.
	crossed := (estimate.Quantile(e, 1) - estimate.Quantile(e, 0)) / d.countM
	s.stdM = math.Hypot(d.countM/math.Sqrt(12*math.Max(1, crossed)), d.noiseM/math.Sqrt(float64(len(at))))
	var temps []float64
	for _, r := range temp.Readings {
		if r.Status.Ok() && r.T >= d.t[first]-2 && r.T <= d.t[last]+2 {
			temps = append(temps, r.Value)
		}
	}
	if len(temps) > 0 {
		s.tempK, _ = estimate.Mean(temps)
	}
	return s, true
}

// The quantities that a channel may declare, as the wire has them.
const (
	temperature = "temperature"
	extension   = "extension"
	torque      = "torque"
	angle       = "angle"
	spring      = "spring"
)

// thermometer is the first channel of a temperature; without readings where there is none.
func (d *data) thermometer() pairing.Channel {
	if d.set != nil {
		for _, c := range d.set.Others {
			if c.Spec.Quantity == temperature && len(c.Readings) > 0 {
				return c
			}
		}
	}
	return pairing.Channel{}
}

// drifted is one stage about the mean of its kind.
type drifted struct{ x, y, std float64 }

// against is the stages' drift against time or temperature, each kind of stage
// about its own mean.
func against(all []stage, of func(stage) float64) []drifted {
	kinds := map[analyze.PhaseKind][]stage{}
	var order []analyze.PhaseKind
	for _, s := range all {
		if math.IsNaN(of(s)) {
			continue
		}
		if len(kinds[s.kind]) == 0 {
			order = append(order, s.kind)
		}
		kinds[s.kind] = append(kinds[s.kind], s)
	}
	var out []drifted
	for _, k := range order {
		var mx, my float64
		n := float64(len(kinds[k]))
		if n < 2 {
			continue
		}
		for _, s := range kinds[k] {
			mx += of(s) / n
			my += s.restM / n
		}
		for _, s := range kinds[k] {
			out = append(out, drifted{of(s) - mx, s.restM - my, s.stdM})
		}
	}
	return out
}

// throughNought is the slope of a line through the origin, each point weighted by
// its doubt, the slope's own doubt, and the correlation.
func throughNought(all []drifted) (slope, std, r float64, ok bool) {
	var sxx, sxy, syy float64
	for _, p := range all {
		w := 1 / (p.std * p.std)
		sxx += w * p.x * p.x
		sxy += w * p.x * p.y
		syy += w * p.y * p.y
	}
	if len(all) < 5 || !(sxx > 0) || math.IsInf(sxx, 0) {
		return 0, 0, 0, false
	}
	slope = sxy / sxx
	chi := math.Max(0, syy-slope*sxy) / float64(len(all)-4)
	if syy > 0 {
		r = sxy / math.Sqrt(sxx*syy)
	}
	return slope, math.Sqrt(math.Max(1, chi) / sxx), r, true
}

const noTemperature = "no temperature was recorded: fit the sensor to the band"

func (d *data) warmth() (slope, std, r, range_ float64, n int, ok bool) {
	stages := d.stages
	all := against(stages, func(s stage) float64 { return s.tempK })
	slope, std, r, ok = throughNought(all)
	low, high := math.Inf(1), math.Inf(-1)
	for _, s := range stages {
		if !math.IsNaN(s.tempK) {
			low, high = math.Min(low, s.tempK), math.Max(high, s.tempK)
		}
	}
	return slope, std, r, high - low, len(all), ok
}

func (d *data) warmLink() estimate.Estimate {
	if len(d.thermometer().Readings) == 0 || !d.usable() {
		return estimate.Unknown(noTemperature)
	}
	_, _, r, _, n, ok := d.warmth()
	if !ok || n < 5 {
		return estimate.Unknown("too few stretches to compare with the temperature")
	}
	return known(math.Abs(r), (1-r*r)/math.Sqrt(float64(n-3)), float64(n-4), "means of each rise, fall and rest")
}

func (d *data) warmShift() estimate.Estimate {
	if len(d.thermometer().Readings) == 0 || !d.usable() {
		return estimate.Unknown(noTemperature)
	}
	slope, std, _, span, n, ok := d.warmth()
	if !ok {
		return estimate.Unknown("too few stretches to compare with the temperature")
	}
	return known(math.Abs(slope)*span/d.workingM, std*span/d.workingM, float64(max(1, n-4)), "drift with the temperature x its range")
}

// mountCreep is how fast the stretch drifts through the recording, whatever the
// setting does.
func (d *data) mountCreep() estimate.Estimate {
	if !d.usable() {
		return estimate.Unknown("too little was recorded")
	}
	return size(d.drift())
}

// drift is the same with its sign, m a minute.
func (d *data) drift() estimate.Estimate {
	all := against(d.stages, func(s stage) float64 { return s.t / 60 })
	slope, std, _, ok := throughNought(all)
	if !ok {
		return estimate.Unknown("too few ramps to see a drift")
	}
	return known(slope, std, float64(max(1, len(all)-4)), "means of each rise, fall and rest, over time")
}

// driftWidth is the half-width that a drift pretends, by a line in the setting:
// what the stretch gains between the rise and the fall through one setting opens
// the loop there. SI of setting at none, and for each of setting; 0 where no
// drift is told from none.
func (d *data) driftWidth() (constantSI, growing float64) {
	if !d.usable() || !(d.up.b > 0) {
		return 0, 0
	}
	drift := d.drift()
	if !drift.Known() || math.Abs(drift.Value) < 3*drift.Std() {
		return 0, 0
	}
	var levels, gaps []float64
	for _, c := range d.r.Cycles {
		if c.Rising.Points == 0 {
			continue
		}
		for _, share := range []float64{0.4, 0.9} {
			if g, ok := d.gapS(c, share*d.workingSI); ok {
				levels, gaps = append(levels, share*d.workingSI), append(gaps, g)
			}
		}
	}
	l, err := estimate.FitLine(levels, gaps)
	if err != nil {
		return 0, 0
	}
	by := drift.Value / 60 / 2 / d.up.b
	return by * l.A, by * l.B
}

// gapS is the time from a setting on the way up to the same on the way down, s.
func (d *data) gapS(c analyze.Cycle, settingSI float64) (s float64, ok bool) {
	up, down := -1, -1
	for i := c.First; i <= c.Peak && i < len(d.p) && up < 0; i++ {
		if d.p[i] >= settingSI {
			up = i
		}
	}
	for i := c.Peak; i <= c.Last && i < len(d.p) && down < 0; i++ {
		if d.p[i] <= settingSI {
			down = i
		}
	}
	if up < 0 || down < 0 {
		return 0, false
	}
	return d.t[down] - d.t[up], true
}

// warmCoefficient is the drift for each degree, over what a bar of steel of the
// gauge length does: beyond a few it is not warmth.
func (d *data) warmCoefficient() estimate.Estimate {
	if len(d.thermometer().Readings) == 0 || !d.usable() {
		return estimate.Unknown(noTemperature)
	}
	slope, std, _, _, n, ok := d.warmth()
	steel := steelPerK * d.r.Setup.GaugeM.Value
	if !ok || !(steel > 0) {
		return estimate.Unknown("too few stretches to compare with the temperature")
	}
	return known(math.Abs(slope)/steel, std/steel, float64(max(1, n-4)), "drift for each degree over that of a steel bar")
}

// steelPerK is the thermal expansion of a steel end gauge, 1/K (JCGM 100:2008
// H.1).
const steelPerK = 11.5e-6
