package visit

import "math"

const (
	goalStress = 1.15 // of the target: where a ramp ends
	goalEnough = 1.02 // of the target: enough where the setting has reached its goal
	goalHalf   = 0.47 // of the target: where the first cycle ends, near enough to half
	goalSlack  = 1.15 // of the frictionless setting, where nothing better is known
	goalLimit  = 0.95 // of the limit: no ramp goes higher
	holdS      = 5.0  // how long the top is held
	clearFall  = 0.08 // of the limit: a fall that no sag between two strokes makes
)

// step is what the operator is asked to do in the cycle going on. Within one
// ramp it only goes forward.
type step int

const (
	raising step = iota
	holding
	lowering
)

// halfOnly reports that this ramp is meant for half of the target: the first of
// exercise, a first one without exercise until its slope is known to fit the
// geometry, and every one while the slope does not.
func (k *tracker) halfOnly() bool {
	return k.closed == 0 && (k.plan.Exercise > 0 || !k.check.judged) || k.check.advice != ""
}

// atGoal reports that the rise has gone as far as it should. To half of the
// target it goes by the setting too: a stress that reads low must not be chased.
func (k *tracker) atGoal() bool {
	stress, target := k.stressPa(), k.site.target
	// Comparisons with what is not known are false.
	there := k.setting >= k.goal-k.band/2
	switch {
	case k.setting >= goalLimit*k.site.limit:
		return true
	case k.halfOnly():
		return there || stress >= goalHalf*target
	}
	if k.aimSI > 0 {
		return there
	}
	return stress >= goalStress*target || there && !(stress < goalEnough*target)
}

// aim is the setting to hold this ramp at, NaN where it cannot be told.
func (k *tracker) aim() float64 {
	goal := goalSlack * k.site.full
	if k.halfOnly() {
		goal = k.site.half
	} else if k.aimSI > 0 {
		goal = k.aimSI
	} else if e := k.check.fitted.settingAt(goalStress * k.site.target * k.site.gauge / k.site.modulus); !math.IsNaN(e) && !math.IsNaN(goal) {
		goal = max(e, k.site.full) // friction of the rise included
	}
	if math.IsNaN(goal) {
		return goal
	}
	return min(goal, goalLimit*k.site.limit)
}

// goalSI is the goal for the screen: NaN unless the operator is sent up to it,
// and once it is passed.
func (k *tracker) goalSI() float64 {
	up := k.seen && !k.finished && (k.stage == atRest && k.check.advice == "" && k.zero.value == k.zero.value ||
		k.stage != atRest && k.step == raising)
	if !up || k.setting > k.goal {
		return math.NaN()
	}
	return k.goal
}

// lowSI is where the cycle closes, while the operator is sent down.
func (k *tracker) lowSI() float64 {
	if k.finished || k.stage == atRest || k.step != lowering {
		return math.NaN()
	}
	return k.closesAt()
}

// steer moves on what the operator is asked to do.
func (k *tracker) steer() {
	if half := k.halfOnly(); k.stage == atRest || half != k.aimedHalf {
		k.goal, k.aimedHalf = k.aim(), half
	}
	if k.stage == atRest {
		k.step, k.heldAt = raising, math.NaN()
		return
	}
	fell := k.cycle.top - k.setting
	switch k.step {
	case raising:
		if k.stage == onFall && fell > clearFall*k.site.limit {
			k.step = lowering
		} else if k.atGoal() {
			k.step = holding
		}
	case holding:
		k.watchHold()
		if k.stage == onFall || k.now-k.heldAt >= holdS {
			k.step = lowering
		}
	}
}

// watchHold notes since when the goal is held.
func (k *tracker) watchHold() {
	switch {
	case k.setting < k.cycle.top-k.band:
		k.heldAt = math.NaN()
	case math.IsNaN(k.heldAt) && k.stillS() > 0:
		k.heldAt = k.now
	}
}
