package findings

import (
	"math"

	"tautramp/acquire/pairing"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

const noVent = "the gauge was not read vented: vent it, read it, and note it"

// vent is the reading of the gauge with no pressure on it.
func (d *data) vent() estimate.Estimate {
	if !d.usable() || !d.pressureSet() {
		return estimate.Unknown(noVent)
	}
	low := math.Inf(1)
	for _, p := range d.follow.p {
		low = math.Min(low, p)
	}
	noise := d.follow.noise
	if low < -4*noise { // no gauge pressure is below none
		return known(-low/d.workingSI, 2*noise/d.workingSI, math.Inf(1), "lowest reading: below none")
	}
	return estimate.Unknown(noVent)
}

// spans is how far the slopes of two spans differ, where both were measured.
func (d *data) spans() estimate.Estimate {
	other, ok := d.otherSpan()
	if !ok || !d.usable() {
		return estimate.Unknown("one span was measured: put a second indicator on the other one")
	}
	var x, y []float64
	next := 0
	for i := range d.t {
		for next < len(other.Readings) && other.Readings[next].T < d.t[i] {
			next++
		}
		if next == 0 || next == len(other.Readings) || !d.follow.good[i] || !other.Readings[next].Status.Ok() || !other.Readings[next-1].Status.Ok() {
			continue
		}
		a, b := other.Readings[next-1], other.Readings[next]
		x = append(x, d.e[i])
		y = append(y, a.Value+(b.Value-a.Value)*(d.t[i]-a.T)/(b.T-a.T))
	}
	l, err := serialLine(x, y)
	if err != nil {
		return estimate.Unknown("the second span was not measured for long enough")
	}
	// Two indicators of one kind: each may be off by its limit over the stretch.
	return size(estimate.Estimate{Value: l.B - 1, Random: math.Sqrt(l.VarB), DoF: l.DoF,
		System: math.Sqrt2 * d.r.Setup.ExtensionSd / math.Max(d.workingM, 1e-9), Method: "stretch of one span on that of the other"})
}

func (d *data) otherSpan() (pairing.Channel, bool) {
	if d.set == nil {
		return pairing.Channel{}, false
	}
	for _, c := range d.set.Others {
		if c.Spec.Quantity == extension && c.Spec.Span != 0 && c.Spec.Span != d.set.Extension.Spec.Span && len(c.Readings) > leastPoints {
			return c, true
		}
	}
	return pairing.Channel{}, false
}

// first is how much steeper the later ramps are than the first.
func (d *data) first() estimate.Estimate {
	var slopes, stds []float64
	for _, c := range d.r.Cycles {
		if c.Rising.Points > 0 {
			slopes, stds = append(slopes, c.Rising.Line.B), append(stds, math.Sqrt(c.Rising.Line.VarB))
		}
	}
	if len(slopes) < 2 || !(slopes[0] > 0) {
		return estimate.Unknown("fewer than two ramps could be fitted")
	}
	later, sd := estimate.Mean(slopes[1:])
	if len(slopes) == 2 {
		sd = stds[1]
	}
	return known(later/slopes[0]-1, math.Hypot(sd, stds[0])/slopes[0], 5, "slopes of the rising lines")
}

// lag is not told where the gauge stood at its end: the stretch that goes on there
// would pass for one that is late.
func (d *data) lag() estimate.Estimate {
	if flat := d.flatTop(); flat.Known() && flat.Value > 3*flat.Std() {
		return estimate.Unknown("the setting stood at its highest reading while the stretch went on")
	}
	return d.late
}

// findLag is by how much the stretch is late on the setting.
func (d *data) findLag() estimate.Estimate {
	if !d.usable() {
		return estimate.Unknown("too little was recorded")
	}
	var runs []estimate.Run
	var rising []analyze.Cycle
	for n, c := range d.r.Cycles {
		if c.Rising.Points == 0 {
			continue
		}
		rising = append(rising, c)
		if a, b, ok := d.goodRun(c.First, c.Peak); ok {
			b = d.intoHold(b, c.Last)
			runs = append(runs, estimate.Run{First: a, Last: b, Sign: 1, Cycle: n})
		}
		if a, b, ok := d.goodRun(c.Peak, c.Last); ok {
			runs = append(runs, estimate.Run{First: a, Last: b, Sign: -1, Cycle: n})
		}
	}
	if len(rising) == 0 || len(runs) == 0 {
		return estimate.Unknown("no ramp could be fitted")
	}
	late, err := estimate.FindDelay(estimate.Trace{T: d.t, V: d.follow.p}, estimate.Trace{T: d.t, V: d.e}, runs, estimate.DelaySearch{})
	if err != nil {
		return estimate.Unknown("the ramps do not tell a lag")
	}
	if late.Late.Known() { // a display steps so seldom that it hides some of the lag
		late.Late.System = hiddenByCount * d.countM / (d.up.b * math.Max(d.rampRate(), 1e-9*d.workingSI))
	}
	return late.Late
}

// hiddenByCount is how much of the time from count to count on the ramp a lag is
// in doubt by. Judgement.
const hiddenByCount = 0.3

// intoHold goes on some seconds into a hold after a rise: where the setting
// stops, a lag shows.
func (d *data) intoHold(last, end int) int {
	const on = 6.0 // s
	from, top := last, d.follow.p[last]
	for last+1 < min(end, len(d.t)) && d.t[last+1] < d.t[from]+on && d.follow.p[last+1] > top-0.4*d.lockAt(top)-0.002*top {
		last++
	}
	return last
}

// goodRun is the longest part of a leg that the lines speak for and that moves.
func (d *data) goodRun(first, last int) (from, to int, ok bool) {
	from, to = -1, -1
	for i := first; i <= last && i < len(d.t); i++ {
		moving := d.phase[i] == analyze.Loading || d.phase[i] == analyze.Unloading
		if d.follow.good[i] && moving {
			if from < 0 {
				from = i
			}
			to = i
		}
	}
	return from, to, from >= 0 && to-from > leastPoints
}

// lagWidth is the half-width that the lag pretends: lag x rate.
func (d *data) lagWidth() estimate.Estimate {
	lag := d.lag()
	rate := d.rampRate()
	if !lag.Known() {
		return lag
	}
	if !(rate > 0) || !(d.workingSI > 0) {
		return estimate.Unknown("no ramp could be fitted")
	}
	return lag.Scale(rate / d.workingSI)
}
