package station

import (
	"math"
	"slices"
	"sort"

	"tautramp/acquire/pairing"
	"tautramp/analyze/gauge"
)

// smoothS is over how long a reading is averaged before it is compared with
// anything: noise of single readings would pass for an overshoot.
const smoothS = 0.5

// trail is the last readings of one channel, oldest first.
type trail struct {
	keepS  float64
	t, v   []float64 // good readings, s and SI
	smooth []float64 // mean of each with those within smoothS before it
	latest pairing.Reading
	seenAt float64 // when the last good one came in, s; NaN before
	part   int
}

func newTrail(keepS float64) *trail { return &trail{keepS: keepS, seenAt: math.NaN()} }

// add takes a reading; broke tells that it is not comparable in time with those
// before it, which are forgotten.
func (l *trail) add(r pairing.Reading, now float64) (broke bool) {
	l.latest = r
	if !r.Status.Ok() {
		return false
	}
	l.seenAt = now
	if n := len(l.t); n > 0 && (r.Part != l.part || r.T <= l.t[n-1]) {
		broke = r.Part != l.part
		if !broke {
			return false // its clock's mapping has moved back since
		}
		l.clear()
	}
	l.part = r.Part
	l.t, l.v = append(l.t, r.T), append(l.v, r.Value)
	from := l.since(r.T - smoothS)
	l.smooth = append(l.smooth, mean(l.v[from:]))
	l.forget(r.T - l.keepS)
	return broke
}

func (l *trail) clear() { l.t, l.v, l.smooth = l.t[:0], l.v[:0], l.smooth[:0] }

// forget drops what is older, now and then.
func (l *trail) forget(before float64) {
	n := l.since(before)
	if n < 256 || n < len(l.t)/2 {
		return
	}
	l.t, l.v, l.smooth = l.t[:copy(l.t, l.t[n:])], l.v[:copy(l.v, l.v[n:])], l.smooth[:copy(l.smooth, l.smooth[n:])]
}

// since is the index of the first reading later than t.
func (l *trail) since(t float64) int {
	return sort.Search(len(l.t), func(i int) bool { return l.t[i] > t })
}

// now is the newest smoothed reading and its time; NaN where there is none.
func (l *trail) now() (t, v float64) {
	if n := len(l.t); n > 0 {
		return l.t[n-1], l.smooth[n-1]
	}
	return nan(), nan()
}

// settled tells that readings have come in for long enough to be smoothed.
func (l *trail) settled() bool {
	n := len(l.t)
	return n > 1 && l.t[n-1]-l.t[0] >= smoothS
}

// ready tells that the readings reach up to t.
func (l *trail) ready(t float64) bool { n := len(l.t); return n > 0 && l.t[n-1] >= t }

// window is the readings after a, up to b.
func (l *trail) window(a, b float64) (from, to int) { return l.since(a), l.since(b) }

// level is what was read after a, up to b. Where it moves steadily, it is the
// line through the readings halfway, and the spread is about that line.
func (l *trail) level(a, b float64, moving bool) gauge.Level {
	from, to := l.window(a, b)
	n := to - from
	if n == 0 {
		return gauge.Level{SI: nan()}
	}
	m := mean(l.v[from:to])
	slope := 0.0
	if moving {
		slope = slopeOf(l.t[from:to], l.v[from:to])
	}
	mt, ss := mean(l.t[from:to]), 0.0
	for i := from; i < to; i++ {
		d := l.v[i] - m - slope*(l.t[i]-mt)
		ss += d * d
	}
	if moving {
		m += slope * ((a+b)/2 - mt)
	}
	return gauge.Level{SI: m, Spread: math.Sqrt(ss / math.Max(1, float64(n-1))), N: n}
}

// swing is the difference between the highest and the lowest smoothed reading
// after a, up to b.
func (l *trail) swing(a, b float64) float64 {
	from, to := l.window(a, b)
	low, high := math.Inf(1), math.Inf(-1)
	for _, v := range l.smooth[from:to] {
		low, high = math.Min(low, v), math.Max(high, v)
	}
	return math.Max(0, high-low)
}

// restS is for how long before t the smoothed readings have kept within so much
// of what they are at t.
func (l *trail) restS(t, within float64) float64 {
	last := l.since(t) - 1
	if last < 0 {
		return 0
	}
	first := last
	for first > 0 && math.Abs(l.smooth[first-1]-l.smooth[last]) <= within {
		first--
	}
	return l.t[last] - l.t[first]
}

// at is the smoothed reading at t, or the last one before it.
func (l *trail) at(t float64) float64 {
	if i := l.since(t) - 1; i >= 0 {
		return l.smooth[i]
	}
	return nan()
}

// between is the reading at t on the straight line between its neighbours; NaN
// beyond them.
func (l *trail) between(t float64) float64 {
	i := l.since(t)
	if i == 0 || i == len(l.t) {
		return nan()
	}
	share := (t - l.t[i-1]) / (l.t[i] - l.t[i-1])
	return l.v[i-1] + share*(l.v[i]-l.v[i-1])
}

// reaches tells that the readings begin at t or earlier.
func (l *trail) reaches(t float64) bool { return len(l.t) > 0 && l.t[0] <= t }

// highest is the highest smoothed reading that is kept.
func (l *trail) highest() float64 { return slices.Max(l.smooth) }

// speed is how fast it moves now, a second.
func (l *trail) speed() float64 {
	from := l.since(l.t[len(l.t)-1] - smoothS)
	return math.Abs(slopeOf(l.t[from:], l.v[from:]))
}

func mean(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x
	}
	return sum / float64(len(v))
}

// slopeOf is the slope of the least-squares line.
func slopeOf(t, v []float64) float64 {
	mt, mv := mean(t), mean(v)
	var sxy, sxx float64
	for i := range t {
		sxy += (t[i] - mt) * (v[i] - mv)
		sxx += (t[i] - mt) * (t[i] - mt)
	}
	if sxx == 0 {
		return 0
	}
	return sxy / sxx
}
