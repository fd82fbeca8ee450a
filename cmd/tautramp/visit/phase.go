package visit

import (
	"math"

	"tautramp/analyze"
)

const (
	goalStress = 1.15 // of the target: where a ramp ends
	goalHalf   = 0.47 // of the target: where the first cycle ends, near enough to half
	goalSlack  = 1.15 // of the frictionless setting, where the stress is not known
	goalLimit  = 0.95 // of the limit: no ramp goes higher
	holdS      = 5.0  // how long the top is held
	holdShows  = 2.0  // s of standing still that are a hold and no pause between two strokes
	seatingEnd = 0.15 // of the setting for the target, beyond the lift: the toe is over

	paceSlow = 0.0015 // of the limit per s
	paceFast = 0.012
)

// halfOnly reports that this cycle is the first of exercise, meant for half of
// the target.
func (k *tracker) halfOnly() bool { return k.closed == 0 && k.plan.Exercise > 0 }

// atGoal reports that the rise has gone as far as it should.
func (k *tracker) atGoal() bool {
	stress, setting := goalStress*k.site.target, goalSlack*k.site.full
	if k.halfOnly() {
		stress, setting = goalHalf*k.site.target, goalSlack*k.site.half
	}
	// Comparisons with what is not known are false.
	return k.stressPa() >= stress || k.setting >= goalLimit*k.site.limit ||
		math.IsNaN(k.stressPa()) && k.setting >= setting
}

// watchGoal notes since when the goal is held.
func (k *tracker) watchGoal() {
	switch {
	case k.stage != onRise || k.setting < k.cycle.top-k.band:
		k.heldAt = math.NaN()
	case math.IsNaN(k.heldAt) && k.atGoal() && k.stillS() > 0:
		k.heldAt = k.now
	}
}

func (k *tracker) heldEnough() bool { return k.now-k.heldAt >= holdS }

// phase is the analysis's word for what goes on.
func (k *tracker) phase() analyze.PhaseKind {
	c := &k.cycle
	still := k.stillS() >= holdShows
	switch {
	case k.stage == atRest:
		return analyze.Resting
	case k.stage == onFall && still && k.low():
		return analyze.Resting
	case still && c.moved:
		return analyze.Holding
	case k.stage == onFall && c.topM-k.stretch <= k.movesM():
		return analyze.Inside
	case k.stage == onFall:
		return analyze.Unloading
	case !c.moved:
		return analyze.SlackLift
	case k.setting < c.top-k.band || k.falling():
		return analyze.Inside
	case c.top < orElse(k.site.lift, 0)+seatingEnd*orElse(k.site.full, k.site.limit):
		return analyze.Seating
	}
	return analyze.Loading
}

// falling reports that the setting goes down, before its dead band says so; over
// several seconds, so that the sag after a stroke does not.
func (k *tracker) falling() bool {
	rate, _ := k.pace.slope()
	return rate < -k.doubt(&k.pace)
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
