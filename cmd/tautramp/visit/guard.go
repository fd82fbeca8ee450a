package visit

import "math"

// The guard against under-reading. All figures are judgement.
const (
	guardShare  = 0.5  // of the expected gain: below it the stretch does not follow
	guardWindow = 0.15 // of the limit: the rise looked back over
	guardLeast  = 0.07 // of the limit: the least rise that tells
	guardHeldS  = 0.5  // it must last so long,
	guardPairs  = 3    // and so many pairs: a slow indicator catches up
	sagShare    = 0.04 // of the top: below it the setting is not rising
	spacing     = 0.005

	// Before the extension has moved after a rest, nothing is expected of it up
	// to the weight with friction, and a margin; and, where the band did not go
	// slack, up to the reversal that friction makes.
	liftFriction  = 1.15
	liftMargin    = 0.10 // of the limit
	liftElse      = 0.25 // of the limit, where the weight is not known
	reversalShare = 0.30 // of the setting for the target
	reversalElse  = 0.25 // of the limit, where no target is known
)

// state is a setting and an extension at the same time.
type state struct{ p, e float64 }

// guard compares, along the running maximum of the setting, what the extension
// gains with what the expected slope gives. Within what this cycle has already
// reached, where friction holds the band still, nothing is expected.
type guard struct {
	site     site
	expected float64 // m per SI; NaN where neither geometry nor a cycle tells
	own      float64 // best slope of this rise, for where nothing is expected yet
	grace    float64 // setting below which nothing is expected in this cycle
	points   []state // along the running maximum, above grace, oldest first
	badSince float64 // NaN while all is well
	bad      int     // pairs since
	short    bool    // it falls short, and has for long enough
	raised   bool    // it did so in this cycle
}

func newGuard(s site) guard { return guard{site: s, expected: s.slope, badSince: math.NaN()} }

// begin starts a cycle from a low setting.
func (g *guard) begin(start float64) {
	g.points, g.own, g.raised = g.points[:0], math.NaN(), false
	g.calm()
	g.grace = g.site.graceOf(start)
}

func (g *guard) calm() { g.badSince, g.bad, g.short = math.NaN(), 0, false }

// gap is a break in time: points before it are not compared with points after.
func (g *guard) gap() {
	g.points = g.points[:0]
	g.calm()
}

// graceOf is the setting up to which a cycle may rise without the extension.
func (s site) graceOf(start float64) float64 {
	lift := orElse(liftFriction*s.lift+liftMargin*s.limit, liftElse*s.limit)
	reversal := start + orElse(reversalShare*s.full, reversalElse*s.limit)
	return max(lift, reversal)
}

// watch looks at the newest pair of a rise.
func (g *guard) watch(k *tracker) {
	c := &k.cycle
	if g.short = false; k.setting < c.top-max(k.band, sagShare*c.top) {
		return // between two strokes: neither well nor ill
	}
	if c.top < g.grace {
		return
	}
	if n := len(g.points); c.moved && (n == 0 || c.top > g.points[n-1].p+spacing*g.site.limit) {
		g.points = append(g.points, state{c.top, k.stretch})
	}
	if !g.falls(k) {
		g.calm()
		return
	}
	g.bad++
	if math.IsNaN(g.badSince) {
		g.badSince = k.now
	}
	if g.bad >= guardPairs && k.now-g.badSince >= guardHeldS {
		g.short, g.raised = true, true
	}
}

// falls reports that the extension falls short over the window.
func (g *guard) falls(k *tracker) bool {
	c := &k.cycle
	if !c.moved {
		return c.top > g.grace+g.showsAfter(k.movesM())
	}
	from, ok := g.back(c.top - guardWindow*g.site.limit)
	rise, gain := c.top-from.p, k.stretch-from.e
	if !ok || rise < guardLeast*g.site.limit {
		return false
	}
	slope := g.expected
	if math.IsNaN(slope) {
		slope = g.own
		g.own = math.Max(orElse(g.own, 0), gain/rise)
	}
	return gain < guardShare*slope*rise-2*k.countM-4*k.noiseM
}

// showsAfter is how far the setting must go on before a move of the extension
// by so much can be asked for, with half of the expected slope.
func (g *guard) showsAfter(moveM float64) float64 {
	return orElse(moveM/(guardShare*g.expected), liftMargin*g.site.limit)
}

// back is the oldest point at or above a setting.
func (g *guard) back(p float64) (state, bool) {
	for _, s := range g.points {
		if s.p >= p {
			return s, true
		}
	}
	return state{}, false
}
