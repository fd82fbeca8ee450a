package visit

import (
	"fmt"
	"strconv"

	"tautramp/protocol"
)

func itoa(n int) string { return strconv.Itoa(n) }

func (s site) limitText(setting float64) string {
	return fmt.Sprintf("the %s stands at %s and its limit is %s: stop, %s", s.words.name, s.figure(setting), s.figure(s.limit), s.words.release)
}

func (s site) underText() string {
	return fmt.Sprintf("the %s rises and the stretch does not follow; a slipped rig, a closed valve or an end-stop reads low: stop, %s", s.words.name, s.words.release)
}

func (s site) blindText(c seen) string {
	why := "no reading of %s"
	switch c.status {
	case protocol.High, protocol.Low:
		why = "the sensor of %s is at the end of its range"
	case protocol.Fault:
		why = "the sensor of %s reports a fault"
	}
	return fmt.Sprintf(why+" while the %s rises: stop, %s", c.name, s.words.name, s.words.release)
}

func (s site) abortText() string {
	return "the switch was held: stop, " + s.words.release
}

func (s site) slopeAdvice(ratio float64) string {
	return fmt.Sprintf("do not go higher yet: the stretch grows %.2f times as fast as cylinders and band section say; check the clamps, the gauge length, the bore and the band's measures", ratio)
}

// Words of Status.Link, and sentences of Status.Next.
const (
	nextWait      = "wait for the boards"
	linkLost      = "lost, waiting for it"
	linkSilent    = "silent"
	linkRestarted = "started again"
	linkQuiet     = "sends no readings"

	nextAway  = "wait: a board is away"
	onlyHalf  = "to about half of the target only, and hold"
	recheck   = onlyHalf + ": the stretch has not fitted cylinders and band section yet"
	nextDone  = "all planned cycles are closed"
	nextHold  = "hold"
	nextRest  = "rest, then start the next ramp"
	nextSlack = "let the band go slack and keep still"
)

// next is what the operator should do now.
func (k *tracker) next() string {
	w := k.site.words
	switch {
	case k.finished:
		return nextDone
	case !k.seen:
		return nextWait
	case k.stage != atRest && k.step == lowering:
		return w.lower + w.toSlack
	case k.stage != atRest && k.atGoal() && k.check.advice != "":
		return k.check.advice
	case k.stage != atRest && k.step == holding:
		return nextHold
	case k.stage == atRest && k.check.advice != "":
		return k.check.advice
	case k.stage == atRest && k.zero.value != k.zero.value:
		return nextSlack
	}
	return k.upward()
}

// upward sends the operator up.
func (k *tracker) upward() string {
	switch w := k.site.words; {
	case k.check.advice != "":
		return recheck
	case k.stage == atRest && k.closed > 0:
		return nextRest
	case k.halfOnly():
		return w.raise + ", " + onlyHalf
	default:
		return w.raise
	}
}
