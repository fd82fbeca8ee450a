package findings

import (
	"math"

	"tautramp/acquire/pairing"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// leads is the points of a rise at which the setting is at its highest so far
// and the band is taut, the analysis' own choice left aside: it leaves out what
// is looked for here.
func (d *data) leads(c analyze.Cycle) []int {
	var at []int
	zero := d.zeroM()
	slack := 2 * d.follow.noise
	best := math.Inf(-1)
	for i := c.First; i <= c.Peak && i < len(d.t); i++ {
		if d.follow.p[i] < best-slack {
			continue
		}
		best = math.Max(best, d.follow.p[i])
		if d.e[i] > zero+tautShare*d.workingM {
			at = append(at, i)
		}
	}
	return at
}

// risingPairs is setting and stretch of the points that lead a rise, in order,
// from above the seating share to the top.
func (d *data) risingPairs(c analyze.Cycle) (p, e []float64) {
	for _, i := range d.leads(c) {
		if d.e[i] > d.zeroM()+seatedShare*d.workingM {
			p, e = append(p, d.follow.p[i]), append(e, d.e[i])
		}
	}
	return p, e
}

// knee is the upper part of a rising branch against the part below it.
type knee struct {
	ratio, std float64 // slope above over slope below
	spanSI     float64 // range of setting above
	fromSI     float64
	found      bool
}

// A knee is not found to the point: where the part above it is worth more than so
// many counts, its slope is taken clear of it, from this share of it on. Judgement.
const (
	kneePart   = 0.3
	kneeCounts = 3
)

// topKnee looks for a change of slope in the upper half of a rise.
func (d *data) topKnee(c analyze.Cycle) (knee, bool) {
	p, e := d.risingPairs(c)
	if len(p) < 24 {
		return knee{}, false
	}
	gp, ge := thinned(p, 160), thinned(e, 160)
	s, err := estimate.FitStick(gp, ge)
	if err != nil {
		return knee{}, false
	}
	low, high := estimate.Quantile(gp, 0), estimate.Quantile(gp, 1)
	k := knee{ratio: 1, fromSI: high}
	if !(s.Break > low+0.3*(high-low)) || !(high > s.Break) || !(s.BL > 0) {
		return k, true
	}
	below, okB := fitPart(gp, ge, low, s.Break)
	from := s.Break
	if clear := s.Break + kneePart*(high-s.Break); below.B*(high-clear) > kneeCounts*d.countM {
		from = clear
	}
	above, okA := fitPart(gp, ge, from, high)
	if !okA || !okB || !(below.B > 0) {
		return k, true
	}
	k.spanSI, k.fromSI, k.found = high-s.Break, s.Break, true
	k.ratio = above.B / below.B
	// A count hides as much at either end of the part as a whole one.
	hidden := d.countM / math.Sqrt(6) / (high - from)
	k.std = math.Sqrt(above.VarB+hidden*hidden+k.ratio*k.ratio*below.VarB) / below.B
	return k, true
}

func fitPart(p, e []float64, from, to float64) (estimate.Line, bool) {
	var x, y []float64
	for i := range p {
		if p[i] >= from && p[i] <= to {
			x, y = append(x, p[i]), append(y, e[i])
		}
	}
	if len(x) < 4 {
		return estimate.Line{}, false
	}
	l, err := serialLine(x, y)
	return l, err == nil
}

func (d *data) knees() []knee {
	var out []knee
	if !d.usable() {
		return nil
	}
	for _, c := range d.r.Cycles {
		if c.Role != analyze.Ramp {
			continue
		}
		if k, ok := d.topKnee(c); ok {
			out = append(out, k)
		}
	}
	return out
}

func (d *data) topSlope() estimate.Estimate {
	var values, stds []float64
	for _, k := range d.knees() {
		values, stds = append(values, k.ratio), append(stds, k.std)
	}
	return over(values, stds, "broken line through the rise", "no rise is long enough to look at its top")
}

func (d *data) topSpan() estimate.Estimate {
	var values, stds []float64
	for _, k := range d.knees() {
		values = append(values, k.spanSI/d.workingSI)
		stds = append(stds, math.Max(2*d.noiseM/d.up.b, 0.05*k.spanSI)/d.workingSI)
	}
	return over(values, stds, "broken line through the rise", "no rise is long enough to look at its top")
}

// bind is the slope of the upper third of both branches over the lower third.
func (d *data) bind() estimate.Estimate {
	var values, stds []float64
	if !d.usable() {
		return estimate.Unknown("too little was recorded")
	}
	for _, c := range d.r.Cycles {
		if c.Role != analyze.Ramp {
			continue
		}
		for _, leg := range [][2]int{{c.First, c.Peak}, {c.Peak, c.Last}} {
			if v, s, ok := d.thirds(leg[0], leg[1]); ok {
				values, stds = append(values, v), append(stds, s)
			}
		}
	}
	return over(values, stds, "lines through the two thirds, both branches", "no branch is long enough")
}

func (d *data) thirds(first, last int) (ratio, std float64, ok bool) {
	var p, e []float64
	for i := first; i <= last && i < len(d.t); i++ {
		if ph := d.phase[i]; (ph == analyze.Loading || ph == analyze.Unloading || ph == analyze.Seating) && d.follow.good[i] {
			p, e = append(p, d.follow.p[i]), append(e, d.e[i])
		}
	}
	if len(p) < 24 {
		return 0, 0, false
	}
	low, high := estimate.Quantile(p, 0), estimate.Quantile(p, 1)
	lower, okL := fitPart(p, e, low, low+(high-low)/3)
	upper, okU := fitPart(p, e, high-(high-low)/3, high)
	if !okL || !okU || !(lower.B > 0) {
		return 0, 0, false
	}
	// A count hides as much at either end of a third as a whole one; the more of
	// them it has, the better they average out.
	third := (high - low) / 3
	hidden := d.countM / math.Sqrt(6) / third / math.Sqrt(math.Max(1, lower.B*third/d.countM))
	ratio = upper.B / lower.B
	return ratio, math.Sqrt(upper.VarB+hidden*hidden+ratio*ratio*(lower.VarB+hidden*hidden)) / lower.B, true
}

// saturated counts the readings at the end of a range.
func (d *data) saturated() estimate.Estimate {
	if d.set == nil {
		return estimate.Unknown("the readings themselves are not at hand")
	}
	n := 0
	for _, c := range d.set.Counters {
		n += c.Saturated
	}
	return estimate.Exact(float64(n), "counted")
}

// flatTop is how much the stretch grows while the setting shows one and the
// same highest count, of the working stretch: a gauge at its end.
func (d *data) flatTop() estimate.Estimate {
	if d.set == nil || !(d.workingM > 0) || !d.usable() {
		return estimate.Unknown("the readings themselves are not at hand")
	}
	grown := 0.0
	first, last := d.longestTop(d.set.Setting)
	if last-first < leastFlatS {
		return known(0, 1e-4, math.Inf(1), "the highest setting is never shown for long")
	}
	if last > first {
		a, b := search(d.t, first), search(d.t, last)-1
		if b > a && b < len(d.t) {
			start := estimate.Median(d.e[a : min(b, a+4)+1])
			for i := a + 4; i <= b; i++ {
				grown = math.Max(grown, estimate.Median(d.e[i-4:i+1])-start)
			}
		}
	}
	return known(math.Max(0, grown)/d.workingM, d.noiseM/d.workingM, math.Inf(1), "longest run of the highest setting shown")
}

// A gauge at its end shows one value for longer than this, s. Judgement.
const leastFlatS = 1.0

// longestTop is the times between which a channel shows its highest value
// without a change for longest.
func (d *data) longestTop(c pairing.Channel) (first, last float64) {
	top := math.Inf(-1)
	rising := d.r.Setup.Tensioner.Rising
	for _, r := range c.Readings {
		if r.Status.Ok() {
			top = math.Max(top, rising(r.Value))
		}
	}
	long := 0.0
	begun := math.NaN()
	for _, r := range c.Readings {
		switch {
		case !r.Status.Ok() || rising(r.Value) < top:
			begun = math.NaN()
		case math.IsNaN(begun):
			begun = r.T
		case r.T-begun > long:
			long, first, last = r.T-begun, begun, r.T
		}
	}
	return first, last
}
