package visit

import (
	"math"

	"tautramp/analyze"
)

const (
	holdShows  = 2.0  // s of standing still that are a hold and no pause between two strokes
	stillShows = 1.5  // s, before the word for a motion gives way
	seatingEnd = 0.15 // of the setting for the target, beyond the lift: the toe is over
	cleanRate  = 0.5  // of a still rate: the standard uncertainty of a rate that two seconds tell,
	cleanNoise = 0.75 // or so much of the doubt that the noise alone makes

	// Slower than this, warmth and creep move the stretch as far as a step of the
	// ramp does.
	paceSlow = 0.0015 // of the limit per s
	// Faster than this, a delay that nobody notices puts an error of paceError
	// between the branches: it opens the loop by rate times delay.
	paceFast   = 0.012 // of the limit per s, where no target is known
	paceError  = 0.005 // of the setting for the target
	paceDelayS = 0.2   // beside the indicator's own period
)

// motion is the setting's rate as it is shown, and its standard uncertainty;
// NaN where it is not known: of the last two seconds where these are straight,
// else, as between the strokes of a pump, of several.
func (k *tracker) motion() (rate, std float64) {
	rate, std = k.rate.slope()
	if pace, paceStd := k.pace.slope(); !math.IsNaN(pace) && std > max(cleanRate*stillRate*k.site.limit, cleanNoise*k.doubt(&k.rate)) {
		return pace, paceStd
	}
	return rate, std
}

func (k *tracker) shownRate() float64 {
	rate, _ := k.motion()
	return rate
}

// direction is that of the motion: 1, -1, or 0 for a setting that stands still.
func (k *tracker) direction() int {
	rate, std := k.motion()
	switch least := stillRate*k.site.limit + max(k.doubt(&k.rate), stillDoubts*std); {
	case rate > least:
		return 1
	case rate < -least:
		return -1
	}
	return 0
}

// settlePhase finds the analysis's word for what goes on, such that it agrees
// with the direction.
func (k *tracker) settlePhase() {
	switch direction := k.direction(); {
	case direction > 0:
		k.phase = k.upPhase()
	case direction < 0:
		k.phase = k.downPhase()
	case k.phase == "" || k.stillS() >= stillShows:
		k.phase = k.stillPhase()
	}
}

func (k *tracker) upPhase() analyze.PhaseKind {
	c := &k.cycle
	switch {
	case k.stage == atRest || !c.moved:
		return analyze.SlackLift
	case k.setting < c.top-k.band && k.stretch-c.lowM <= k.movesM():
		return analyze.Inside
	case c.top < orElse(k.site.lift, 0)+seatingEnd*orElse(k.site.full, k.site.limit):
		return analyze.Seating
	}
	return analyze.Loading
}

func (k *tracker) downPhase() analyze.PhaseKind {
	if k.cycle.highM-k.stretch <= k.movesM() {
		return analyze.Inside
	}
	return analyze.Unloading
}

func (k *tracker) stillPhase() analyze.PhaseKind {
	if k.stage == atRest || k.low() || !k.cycle.moved {
		return analyze.Resting
	}
	return analyze.Holding
}

// low reports that the setting is down where a cycle closes.
func (k *tracker) low() bool {
	return k.setting <= k.closesAt()
}

// closesAt is the setting below which a cycle closes at rest.
func (k *tracker) closesAt() float64 {
	if k.site.stepped { // somebody stands still on every step: only the first one again ends it
		return k.cycle.start + 1e-6*k.site.limit
	}
	return k.cycle.start + max(closedRest*k.rise(), k.band)
}

// paceBounds are the slowest and the fastest good pace, setting per second.
func (k *tracker) paceBounds() (slow, fast float64) {
	slow = paceSlow * k.site.limit
	fast = orElse(paceError*k.site.full/(paceDelayS+k.periodS), paceFast*k.site.limit)
	return slow, max(fast, 2*slow)
}

// paceNow judges the rate over several seconds, so that a pump's strokes do not
// count one by one.
func (k *tracker) paceNow() (Pace, float64) {
	rate, _ := k.pace.slope()
	slow, fast := k.paceBounds()
	switch {
	case k.stage == atRest || k.stillS() >= holdShows || math.IsNaN(rate):
		return "", math.NaN()
	case math.Abs(rate) > fast:
		return TooFast, rate
	case math.Abs(rate) < slow:
		return TooSlow, rate
	}
	return GoodPace, rate
}
