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

	paceSlow = 0.0015 // of the limit per s
	paceFast = 0.012
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
	return k.setting <= k.cycle.start+max(closedRest*k.rise(), k.band)
}

// paceNow judges the rate over several seconds, so that a pump's strokes do not
// count one by one.
func (k *tracker) paceNow() Pace {
	rate, _ := k.pace.slope()
	part := math.Abs(rate) / k.site.limit
	switch {
	case k.stage == atRest || k.stillS() >= holdShows || math.IsNaN(part):
		return ""
	case part > paceFast:
		return TooFast
	case part < paceSlow:
		return TooSlow
	}
	return GoodPace
}
