package findings

import (
	"math"

	"tautramp/analyze/estimate"
)

// hold is a stretch in which nobody drove the setting while the band was taut.
type hold struct {
	first, last int // points
	rateSI      estimate.Estimate
	rateM       estimate.Estimate
	meanSI      float64
	meanM       float64 // from the slack band
	lostSI      float64 // from the start of the hold to its end
	lostM       float64
}

const (
	// After the drive stops, oil and tyres settle. Judgement: 20 s, or two fifths
	// of a shorter hold.
	settleS     = 20.0
	settleShare = 0.4
	// A shorter hold tells no rate.
	leastHoldS = 12.0
	// A hold is what moves more slowly than this share of the ramps' rate.
	heldShare = 0.35
	// Over which that is judged, s: longer than from stroke to stroke.
	rateWindowS = 3.0
)

// findHolds looks for stretches with a slow setting and a taut band.
func (d *data) findHolds() []hold {
	rate := d.rampRate()
	held := make([]bool, len(d.t))
	for i := range d.t {
		before, after := d.around(d.t[i], rateWindowS)
		slow := d.t[after] > d.t[before] &&
			math.Abs(d.follow.p[after]-d.follow.p[before])/(d.t[after]-d.t[before]) < heldShare*rate
		held[i] = slow && d.follow.good[i]
	}
	var out []hold
	for i := 0; i < len(held); i++ {
		if !held[i] {
			continue
		}
		k := i
		for k+1 < len(held) && held[k+1] {
			k++
		}
		if h, ok := d.newHold(i, k); ok {
			out = append(out, h)
		}
		i = k
	}
	return out
}

// around is the first and the last point within half a window about a time.
func (d *data) around(t, window float64) (before, after int) {
	before = search(d.t, t-window/2)
	after = search(d.t, t+window/2+1e-9) - 1
	return min(before, len(d.t)-1), max(after, 0)
}

// search is the index of the first of sorted values that is at least v.
func search(sorted []float64, v float64) int {
	low, high := 0, len(sorted)
	for low < high {
		if mid := (low + high) / 2; sorted[mid] < v {
			low = mid + 1
		} else {
			high = mid
		}
	}
	return low
}

func (d *data) rampRate() float64 {
	var rates []float64
	for _, c := range d.r.Cycles {
		if c.Rising.Points > 0 && c.RateSI > 0 {
			rates = append(rates, c.RateSI)
		}
	}
	return estimate.Median(rates)
}

func (d *data) newHold(first, last int) (hold, bool) {
	long := d.t[last] - d.t[first]
	if long < leastHoldS {
		return hold{}, false
	}
	from := search(d.t, d.t[first]+math.Min(settleS, settleShare*long))
	h := hold{first: from, last: last}
	t, p, e := d.t[from:last+1], d.follow.p[from:last+1], d.e[from:last+1]
	if len(t) < 8 {
		return hold{}, false
	}
	h.meanSI, _ = estimate.Mean(p)
	h.meanM, _ = estimate.Mean(e)
	h.meanM -= d.zeroM()
	h.rateSI = d.slope(t, p, d.r.Setup.CountSI)
	h.rateM = d.slope(t, e, d.countM)
	begun, ended := d.edge(first, first+d.points(edgeS)), d.edge(last-d.points(edgeS), last)
	h.lostSI, h.lostM = begun[0]-ended[0], begun[1]-ended[1]
	return h, h.rateSI.Known() && h.rateM.Known()
}

// edgeS is over how long either end of a hold is averaged, s.
const edgeS = 1.5

// points is how many points that is.
func (d *data) points(s float64) int { return max(2, int(s/math.Max(d.stepS, 1e-3))) }

// edge is the median setting and stretch over some points.
func (d *data) edge(from, to int) [2]float64 {
	from, to = max(0, from), min(len(d.t)-1, to)
	return [2]float64{estimate.Median(d.follow.p[from : to+1]), estimate.Median(d.e[from : to+1])}
}

// slope is the rate of a held value, and at least as doubtful as one count over
// the hold leaves it: a still display hides that much.
func (d *data) slope(t, y []float64, count float64) estimate.Estimate {
	l, err := serialLine(t, y)
	if err != nil {
		return estimate.Unknown("the hold gives no rate")
	}
	long := t[len(t)-1] - t[0]
	return known(l.B, math.Hypot(math.Sqrt(l.VarB), count/math.Sqrt(12)/long), math.Max(2, l.DoF), "straight line through the hold, settling left out")
}

// pooled is a rate over all holds, each weighted by how well it tells it.
func (d *data) pooled(of func(h hold) (value, std float64)) estimate.Estimate {
	var sum, weight, n float64
	var values, stds []float64
	for _, h := range d.holds {
		v, s := of(h)
		if math.IsNaN(v) || !(s > 0) {
			continue
		}
		values, stds = append(values, v), append(stds, s)
		sum += v / (s * s)
		weight += 1 / (s * s)
		n++
	}
	if n == 0 {
		return estimate.Unknown(noHold)
	}
	mean := sum / weight
	chi := 0.0
	for i, v := range values {
		chi += (v - mean) * (v - mean) / (stds[i] * stds[i])
	}
	std := 1 / math.Sqrt(weight)
	if n > 1 {
		std *= math.Sqrt(math.Max(1, chi/(n-1)))
	}
	return known(mean, std, 10*n, "holds with a taut band")
}

const noHold = "the setting was never held for long enough with the band taut: hold it for two minutes at the top"

func (d *data) holdSetting() estimate.Estimate {
	return d.pooled(func(h hold) (float64, float64) {
		return -60 * h.rateSI.Value / h.meanSI, 60 * h.rateSI.Random / h.meanSI
	})
}

func (d *data) holdRise() estimate.Estimate { return d.holdSetting().Scale(-1) }

// holdBeyond is the loss of setting less that of a band whose drift is its own
// warmth: shut in, the pull goes by the same share of itself as the stretch drifts.
func (d *data) holdBeyond() estimate.Estimate {
	loss := d.holdSetting()
	drift := estimate.Unknown("no drift was told")
	if loss.Known() {
		drift = d.drift()
	}
	if !loss.Known() || !drift.Known() {
		return loss
	}
	loss.Value -= math.Abs(drift.Value) / d.workingM
	loss.Random = math.Hypot(loss.Random, drift.Random/d.workingM)
	return loss
}

func (d *data) holdStretch() estimate.Estimate {
	return d.pooled(func(h hold) (float64, float64) {
		return -60 * h.rateM.Value / h.meanM, 60 * h.rateM.Random / h.meanM
	})
}

// deepest is the hold that lost most of what friction locks.
func (d *data) deepest() (h hold, ok bool) {
	best := math.Inf(-1)
	for _, c := range d.holds {
		if share := c.lostSI / math.Max(d.lockAt(c.meanSI), 1e-9*d.workingSI); share > best {
			best, h, ok = share, c, true
		}
	}
	return h, ok
}

// lockAt is how far the setting may fall from a rising setting before the band
// follows.
func (d *data) lockAt(risingSI float64) float64 { return 2 * d.halfAt(risingSI) }

func (d *data) holdFreed() estimate.Estimate {
	h, ok := d.deepest()
	if !ok {
		return estimate.Unknown(noHold)
	}
	lock := d.lockAt(h.meanSI)
	half := d.r.Working.HalfSI
	if !(lock > 0) || !half.Known() {
		return estimate.Unknown("the loop's width is not known")
	}
	v := h.lostSI / lock
	return known(v, math.Hypot(d.lossStd()/lock, v*half.Std()/math.Max(half.Value, half.Std())), 10, "the hold that lost most")
}

// lossStd is the doubt of a difference of two edges, SI of setting.
func (d *data) lossStd() float64 {
	return d.follow.noise * math.Sqrt(2/float64(d.points(edgeS)))
}

// holdFollow is how much of the stretch went with the setting once the setting
// had fallen beyond what friction locks.
func (d *data) holdFollow() estimate.Estimate {
	h, ok := d.deepest()
	if !ok {
		return estimate.Unknown(noHold)
	}
	if late := d.lateFollow(h); late.Known() && late.Value > 3*late.Std() {
		return late
	}
	half := d.r.Working.HalfSI
	beyond := h.lostSI - d.lockAt(h.meanSI)
	asks := d.down.b * beyond
	if !half.Known() || !(asks > 2*d.countM+3*d.noiseM) || !(beyond > 2*half.Std()) {
		return estimate.Unknown("the setting did not fall beyond what friction locks: hold for longer")
	}
	v := h.lostM / asks
	return known(v, math.Hypot(d.noiseM/asks, v*2*half.Std()/beyond), 10, "the hold that lost most")
}

// lateFollow is the same by the last third of the loss alone: a stretch that goes
// with the setting there has been let go, however wide the loop is.
func (d *data) lateFollow(h hold) estimate.Estimate {
	last := h.last + 1
	from := last
	until := estimate.Median(d.follow.p[max(h.first, last-d.points(edgeS)):last]) + h.lostSI/3
	for from > h.first && d.follow.p[from-1] < until {
		from--
	}
	fell := until - d.follow.p[h.last]
	if last-from < 16 || !(fell > 0) || !(d.down.b > 0) {
		return estimate.Unknown("the hold is too short")
	}
	l, err := serialLine(d.follow.p[from:last], d.e[from:last])
	if err != nil {
		return estimate.Unknown("the hold is too short")
	}
	hidden := d.countM / math.Sqrt(6) / fell
	return known(l.B/d.down.b, math.Hypot(math.Sqrt(l.VarB), hidden)/d.down.b, math.Max(2, l.DoF), "last third of the loss in the hold that lost most")
}

// holdCreeps is which law the longest hold's loss follows, where one can be told.
func (d *data) holdCreeps() estimate.Estimate {
	best, long := -1, 0.0
	for i, h := range d.holds {
		if l := d.t[h.last] - d.t[h.first]; l > long {
			best, long = i, l
		}
	}
	if best < 0 {
		return estimate.Unknown(noHold)
	}
	h := d.holds[best]
	t, p := thinned(d.t[h.first:h.last+1], 120), thinned(d.follow.p[h.first:h.last+1], 120)
	fit, err := estimate.FitHold(t, p)
	switch {
	case err != nil:
		return estimate.Unknown("the hold is too short")
	case fit.Kind == estimate.HoldCreep:
		return estimate.Exact(1, "law that fits the longest hold")
	case fit.Kind == estimate.HoldLeak:
		return estimate.Exact(0, "law that fits the longest hold")
	}
	return estimate.Unknown("the hold is too short to tell a leak from what settles: hold for two minutes or more")
}

// thinned averages neighbours so that at most so many values are left.
func thinned(v []float64, most int) []float64 {
	by := (len(v) + most - 1) / most
	if by <= 1 {
		return v
	}
	var out []float64
	for i := 0; i < len(v); i += by {
		mean, _ := estimate.Mean(v[i:min(i+by, len(v))])
		out = append(out, mean)
	}
	return out
}
