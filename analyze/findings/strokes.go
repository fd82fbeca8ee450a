package findings

import (
	"math"
	"slices"

	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// dip is a fall of the setting that is made good again, and what the stretch
// did meanwhile.
type dip struct {
	share float64 // of the setting before it
	rate  float64 // the same a second
	level float64 // SI, before it
	fell  float64 // SI
	backM float64 // m, by which the stretch went back meanwhile
}

const (
	// A smaller dip, as a share of the setting, is the sag of any hand pump.
	// Judgement.
	leastDip = 0.04
	// Fewer dips are an accident. Judgement.
	leastDips = 3
)

// dips looks for falls that come back, by the turning points of the setting
// alone: it needs no fitted line.
func (d *data) dips() []dip {
	p, e := d.p, d.e
	top := estimate.Quantile(p, 0.999)
	noise := estimate.Noise(p)
	turns := analyze.Turning(p, math.Max(0.02*top, 6*noise))
	var out []dip
	for k := 1; k+1 < len(turns); k++ {
		from, low, after := turns[k-1], turns[k], turns[k+1]
		fall, back := p[from]-p[low], p[after]-p[low]
		if fall < leastDip*p[from] || back < 0.8*fall || p[from] < 0.15*top {
			continue
		}
		x := dip{share: fall / p[from], level: p[from], fell: fall, backM: e[from] - e[low]}
		// The fall itself, a pause after it left out: to nine tenths.
		end := from
		for end < low && p[end] > p[from]-0.9*fall {
			end++
		}
		x.rate = 0.9 * x.share / math.Max(d.t[end]-d.t[from], 0.05)
		out = append(out, x)
	}
	return out
}

// dipFollow is how much the stretch goes with those dips, of what they ask for
// beyond what friction locks: nothing where the setting is read before the check
// valve.
func (d *data) dipFollow() estimate.Estimate {
	all := d.dips()
	if len(all) < leastDips {
		return estimate.Unknown("the setting did not dip")
	}
	perSI := d.down.b
	if !d.usable() {
		perSI = (estimate.Quantile(d.e, 0.999) - estimate.Quantile(d.e, 0.01)) / estimate.Quantile(d.p, 0.999)
	}
	went, asked := 0.0, 0.0
	for _, x := range all {
		beyond := x.fell
		if d.usable() {
			beyond = math.Max(0, x.fell-d.lockAt(x.level))
		}
		went, asked = went+x.backM, asked+beyond*perSI
	}
	each := math.Hypot(d.countM/math.Sqrt(6), math.Sqrt2*d.noiseM)
	if !(asked > 0) {
		return estimate.Unknown("no dip goes beyond what friction locks")
	}
	return known(went/asked, each*math.Sqrt(float64(len(all)))/asked, float64(len(all)), "all dips together")
}

// collapse is how far the setting falls and comes back,
// in widths that friction locks, and those no narrower than the sag of any hand
// pump: the median of the dips.
func (d *data) collapse() estimate.Estimate {
	held := d.dips()
	if len(d.p) < leastPoints {
		return estimate.Unknown("too little was recorded")
	}
	if len(held) < leastDips {
		return known(0, 0.2, math.Inf(1), "no such dips")
	}
	var sizes []float64
	for _, x := range held {
		lock := 0.0
		if d.usable() {
			lock = d.lockAt(x.level) / x.level
		}
		sizes = append(sizes, x.share/math.Max(lock, leastDip))
	}
	v := estimate.Median(sizes)
	return known(v, math.Max(0.05*v, estimate.MAD(sizes)/math.Sqrt(float64(len(sizes)))), 10, "median of the dips")
}

// collapseRate is how fast it falls.
func (d *data) collapseRate() estimate.Estimate {
	held := d.dips()
	if len(held) < leastDips {
		return known(0, 1e-4, math.Inf(1), "no such dips")
	}
	var rates []float64
	for _, x := range held {
		rates = append(rates, x.rate)
	}
	v := estimate.Median(rates)
	return known(v, 0.1*v, 10, "median of the dips")
}

// tautShare is the part of the working stretch above which the band is taut
// for certain. Judgement.
const tautShare = 0.05

// soft is how slowly the setting comes up with the band still slack, of the pace
// of the ramp: the time from a tenth to seven tenths of the way from rest to the
// slack lift, over what the ramp's pace would take. Oil needs no time for it,
// air has to be squeezed first.
func (d *data) soft() estimate.Estimate {
	if !d.usable() {
		return estimate.Unknown("too little was recorded")
	}
	var values, stds []float64
	waits := 0.0
	for _, c := range d.r.Cycles {
		if v, wait, ok := d.softness(c); ok && c.Role != analyze.Incomplete {
			values, stds = append(values, v), append(stds, 0.1)
			waits = math.Max(waits, wait)
		}
	}
	e := over(values, stds, "time up to the slack lift", "the ramps do not begin with a slack band, well below its lift")
	if e.Known() {
		e.System = waits
	}
	return e
}

// pauseS is how long an operator may pause or a stroke take, s: so much of the
// time up to the lift is no sign of air. Judgement.
const pauseS = 2.5

// softness is of one rise; wait is what a pause makes of it.
func (d *data) softness(c analyze.Cycle) (ratio, wait float64, ok bool) {
	p := d.follow.p
	rest := search(d.t, d.t[c.First]-3)
	// The slack band's own reading: a zero found otherwise may lie a count off.
	slack := estimate.Median(d.e[rest : min(len(d.e)-1, c.First+8)+1])
	leaves := c.First
	for leaves <= c.Peak && leaves < len(p) && d.e[leaves] <= slack+math.Max(tautShare*d.workingM, 1.2*d.countM) {
		leaves++
	}
	if leaves-rest < 16 {
		return 0, 0, false
	}
	from := estimate.Quantile(p[rest:leaves], 0.05)
	lift := standing(p[rest:leaves], from+0.15*(p[leaves-1]-from))
	rise, rate := lift-from, d.meanRate(c)
	if !(rise > 20*d.follow.noise) || !(rate > 0) {
		return 0, 0, false
	}
	begun, end := -1, -1
	for i := rest; i < leaves; i++ {
		if p[i] < from+0.1*rise {
			begun, end = i, -1
		}
		if end < 0 && p[i] > from+0.7*rise {
			end = i
		}
	}
	if begun < 0 || end <= begun {
		return 0, 0, false
	}
	pace := rate / (0.6 * rise)
	return (d.t[end] - d.t[begun]) * pace, pauseS * pace, true
}

// standing is the level above a bound at which a setting stands for longest: that
// at which the wheel crosses its slack. The middle of the narrowest window with
// half of the values.
func standing(v []float64, above float64) float64 {
	var x []float64
	for _, p := range v {
		if p > above {
			x = append(x, p)
		}
	}
	if len(x) == 0 {
		return math.NaN()
	}
	slices.Sort(x)
	n := max(1, len(x)/2)
	best, narrowest := x[len(x)/2], math.Inf(1)
	for i := 0; i+n < len(x); i++ {
		if w := x[i+n] - x[i]; w < narrowest {
			best, narrowest = (x[i]+x[i+n])/2, w
		}
	}
	return best
}

// meanRate is the pace of the middle half of a rise, rests and strokes included.
func (d *data) meanRate(c analyze.Cycle) float64 {
	low, span := d.p[c.First], c.TopSI-d.p[c.First]
	from, to := c.First, c.Peak
	for i := c.First; i <= c.Peak && i < len(d.p); i++ {
		if d.p[i] <= low+span/4 {
			from = i
		}
		if d.p[i] <= low+span*3/4 {
			to = i
		}
	}
	if !(d.t[to] > d.t[from]) {
		return 0
	}
	return (d.p[to] - d.p[from]) / (d.t[to] - d.t[from])
}

// ragged is the largest fall within a rise, in widths that friction locks, and
// no narrower than a twentieth of the working setting: what is smaller does no
// harm.
func (d *data) ragged() estimate.Estimate {
	if !d.usable() {
		return estimate.Unknown("too little was recorded")
	}
	worst := 0.0
	for _, c := range d.r.Cycles {
		if c.Rising.Points == 0 {
			continue
		}
		best := math.Inf(-1)
		for i := c.First; i <= c.Peak && i < len(d.t); i++ {
			best = math.Max(best, d.follow.p[i])
			if d.follow.good[i] {
				worst = math.Max(worst, (best-d.follow.p[i])/math.Max(d.lockAt(best), 0.05*d.workingSI))
			}
		}
	}
	half := d.r.Working.HalfSI
	doubt := 0.0
	if half.Known() && d.lockSI > 0.05*d.workingSI {
		doubt = worst * half.Std() / half.Value
	}
	return known(worst, doubt, 10, "highest setting so far less the setting")
}
