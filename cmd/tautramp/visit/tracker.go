package visit

import (
	"math"

	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// stage is where in a cycle the tensioner is.
type stage int

const (
	atRest stage = iota // at the low end, before a rise
	onRise
	onFall
)

const (
	// A dead band is above the noise from peak to peak and above the sag between
	// two strokes of a pump. Judgement, as all figures here.
	bandNoises = 8.0
	bandLimit  = 0.015 // of the limit
	bandMost   = 0.05  // of the limit: noise measured while somebody pumps
	// Noise is measured over the first pairs.
	noisePairs = 8
	noiseS     = 2.0

	countsAsCycle = 0.20 // of the setting for the target: the least rise
	countsNoAim   = 0.15 // of the limit, where no target is known
	closedRest    = 0.10 // of the rise left, at rest for closedS
	closedAgain   = 0.25 // of the rise left, and rising again; as the analysis has it
	closedS       = 4.0

	trendS      = 2.0
	paceS       = 6.0
	stillRate   = 0.0012 // of the limit per s
	stillDoubts = 2.0    // and so many standard uncertainties of the rate
)

// tracker follows the cycles from pairs as they come, and only from what has
// come.
type tracker struct {
	site site
	plan recording.Plan

	aimSI   float64 // setting to stop at; 0: what the plan needs
	countM  float64 // least count of the extension
	periodS float64 // between its readings
	noiseSI float64 // of the setting
	noiseM  float64 // of the extension
	band    float64 // dead band of the setting
	early   []pairing.Pair
	turner  *analyze.Turner // nil before the noise is known
	rate    trend
	pace    trend
	lately  recent  // extension
	now     float64 // time of the last pair
	setting float64
	stretch float64 // extension, lightly smoothed
	part    int
	seen    bool
	stillAt float64 // since when the setting stands still; NaN while it moves
	stage   stage
	cycle   cycle
	closed  int
	zero    zero
	guard   guard
	check   slopeCheck
	step    step
	goal    float64 // setting to hold this ramp at; NaN where it is not known
	heldAt  float64 // since when it is held; NaN before
	phase   analyze.PhaseKind

	aimedHalf bool // the goal is for half of the target
	finished  bool
	events    []recording.Event
}

// cycle is the rise and fall going on.
type cycle struct {
	start  float64 // setting at its low start
	low    float64 // lowest setting since the last top
	top    float64 // highest setting
	startM float64 // extension at its start, lowest before it moved
	highM  float64 // highest extension since the last bottom
	lowM   float64 // lowest extension since the last top
	moved  bool    // the extension has followed
}

func newTracker(s site, plan recording.Plan, aimSI float64) *tracker {
	k := &tracker{site: s, plan: plan, aimSI: aimSI, rate: trend{span: trendS}, pace: trend{span: paceS},
		lately: recent{most: 3}, setting: math.NaN(), stretch: math.NaN(), stillAt: math.NaN(),
		heldAt: math.NaN(), goal: math.NaN()}
	k.zero = newZero(s)
	k.guard = newGuard(s)
	k.cycle.low, k.cycle.highM = math.Inf(1), math.Inf(-1)
	return k
}

// planned is the number of cycles planned, 0 where there is no end.
func (k *tracker) planned() int {
	if k.plan.Ramps == 0 {
		return 0
	}
	return k.plan.Exercise + k.plan.Ramps
}

// number is the cycle going on or coming next, from 1.
func (k *tracker) number() int {
	if k.finished {
		return k.closed
	}
	return k.closed + 1
}

// pair takes the next pair.
func (k *tracker) pair(p pairing.Pair) {
	if k.finished {
		return
	}
	if k.seen && p.Part != k.part {
		k.gap()
	}
	k.part, k.seen = p.Part, true
	k.lately.add(p.Extension)
	k.now, k.setting, k.stretch = p.T, p.Setting, k.lately.median()
	k.rate.add(p.T, p.Setting)
	k.pace.add(p.T, p.Setting)
	if k.turner == nil {
		k.settleNoise(p)
	} else {
		k.follow(p)
	}
	k.settlePhase()
}

// settleNoise waits for enough pairs to tell the noise, then follows them.
func (k *tracker) settleNoise(p pairing.Pair) {
	k.early = append(k.early, p)
	if n := len(k.early); n < noisePairs || p.T-k.early[0].T < noiseS {
		return
	}
	settings, extensions := make([]float64, len(k.early)), make([]float64, len(k.early))
	for i, e := range k.early {
		settings[i], extensions[i] = e.Setting, e.Extension
	}
	k.noiseSI, k.noiseM = estimate.Noise(settings), estimate.Noise(extensions)
	k.band = min(max(bandNoises*k.noiseSI, bandLimit*k.site.limit), bandMost*k.site.limit)
	k.turner = analyze.NewTurner(k.band)
	for _, e := range k.early {
		k.follow(e)
	}
	k.early = nil
}

// gap is a break in time: what was compared across it no longer is. The
// indicator may show another zero after it.
func (k *tracker) gap() {
	k.rate.reset()
	k.pace.reset()
	k.lately.values = k.lately.values[:0]
	k.stillAt = math.NaN()
	k.zero.forget()
	k.guard.gap()
	k.check.points = k.check.points[:0]
}

func (k *tracker) follow(p pairing.Pair) {
	k.watchStill(p.T)
	c := &k.cycle
	_, turn, _ := k.turner.Add(p.Setting)
	switch {
	case turn == analyze.Top:
		c.low, c.lowM = p.Setting, k.stretch
		k.stage = onFall
	case turn == analyze.Bottom && k.stage == onFall:
		k.turnUp()
	}
	c.low = min(c.low, p.Setting)
	switch k.stage {
	case atRest:
		if p.Setting > c.low+k.band {
			k.begin()
		}
	case onFall:
		k.tryClose()
	}
	k.zero.take(k, p)
	if k.guard.short = k.guard.short && k.stage == onRise; k.stage == onRise {
		k.climb(p)
	}
	c.highM, c.lowM = max(c.highM, k.stretch), min(c.lowM, k.stretch)
	k.steer()
}

// watchStill notes since when the setting stands still: when its rate is not
// clear of its noise and of a creep.
func (k *tracker) watchStill(t float64) {
	rate, _ := k.rate.slope()
	switch {
	case math.IsNaN(rate) || math.Abs(rate) > stillRate*k.site.limit+k.doubt(&k.rate):
		k.stillAt = math.NaN()
	case math.IsNaN(k.stillAt):
		k.stillAt = t - trendS/2
	}
}

// doubt is two standard uncertainties of a trend's slope, from the noise alone:
// of a line through n equally spaced points, sd sqrt(12/n) / span. A pump's
// strokes make no doubt about whether the setting moves.
func (k *tracker) doubt(of *trend) float64 {
	n := 1
	for _, s := range of.slots {
		n += s.n
	}
	return stillDoubts * k.noiseSI * math.Sqrt(12/float64(n)) / of.span
}

// stillS is for how long the setting has stood still, s.
func (k *tracker) stillS() float64 { return orElse(k.now-k.stillAt, 0) }

// begin starts a cycle from the low end.
func (k *tracker) begin() {
	k.stage = onRise
	k.cycle = cycle{start: k.cycle.low, low: k.setting, top: k.setting, startM: k.stretch, highM: k.stretch, lowM: k.stretch}
	k.guard.begin(k.cycle.start)
	k.check.points, k.check.judged = k.check.points[:0], false
	k.step, k.heldAt = raising, math.NaN()
	k.goal, k.aimedHalf = k.aim(), k.halfOnly()
}

// leastRise is what a rise must be to count as a cycle.
func (k *tracker) leastRise() float64 {
	return orElse(countsAsCycle*k.site.full, countsNoAim*k.site.limit)
}

func (k *tracker) rise() float64 { return k.cycle.top - k.cycle.start }

// turnUp is a bottom on the way down: a new cycle where the setting had come
// down far enough, else a wiggle of the old one.
func (k *tracker) turnUp() {
	if k.cycle.low > k.cycle.start+max(closedAgain*k.rise(), k.band) {
		k.stage, k.cycle.highM = onRise, k.stretch
		if k.cycle.top-k.cycle.low > clearFall*k.site.limit {
			k.step, k.heldAt = raising, math.NaN()
		}
		return
	}
	k.close()
	k.begin()
}

// tryClose closes the cycle at rest at the low end.
func (k *tracker) tryClose() {
	if k.low() && k.stillS() >= closedS {
		k.close()
		k.stage = atRest
		k.cycle.low = k.setting
	}
}

// declareTurn is the operator saying that this is the low end: a screw never
// comes to rest at a slack band. A cycle that has come down is closed.
func (k *tracker) declareTurn() ReplyKind {
	if k.stage != onFall || k.rise() < k.leastRise() || k.cycle.top-k.setting < clearFall*k.site.limit {
		return TurnRefused
	}
	k.close()
	k.stage, k.cycle.low = atRest, k.setting
	return TurnTaken
}

// close ends a cycle; a bump does not count.
func (k *tracker) close() {
	if k.rise() < k.leastRise() {
		return
	}
	k.closed++
	k.judgeSlope()
	k.say(recording.CycleEnd, itoa(k.closed))
	if n := k.planned(); n > 0 && k.closed >= n && !k.finished {
		k.finished = true
		k.say(recording.PlanClosed, "")
	}
}

// climb follows a rise: the top, the extension's first move, and the guard.
func (k *tracker) climb(p pairing.Pair) {
	c := &k.cycle
	c.top = max(c.top, p.Setting)
	if !c.moved {
		c.startM = min(c.startM, k.stretch)
		c.moved = k.stretch-c.startM > k.movesM()
	}
	k.guard.watch(k)
	k.learnSlope()
}

// movesM is a change of the extension that is beyond its count and noise.
func (k *tracker) movesM() float64 { return 1.5*k.countM + 4*k.noiseM }

func (k *tracker) say(kind recording.EventKind, text string) {
	k.events = append(k.events, recording.Event{Kind: kind, Text: text})
}

// take hands over the events that are to be recorded.
func (k *tracker) take() []recording.Event {
	out := k.events
	k.events = nil
	return out
}
