package station

import (
	"fmt"
	"math"

	"tautramp/analyze/gauge"
)

// All figures are judgement.
const (
	againS    = 1.0 // two presses so close together are one
	lateS     = 1.0 // a press waits no longer for the readings of its instant
	zeroShare = 0.02
	topShare  = 0.95 // of the span: reached in exercise
	lowShare  = 0.05
	restTimes = 2.0 // the steady share that a mark may wander while it is held
)

// judgePending judges the presses whose readings have come in.
func (b *Bench) judgePending() {
	for len(b.pending) > 0 && b.known {
		t, l := b.pending[0], b.lead()
		if (l == nil || !l.ready(t) || !b.testedRead(t-b.plan.WindowS, t)) && b.now < t+lateS*b.factor {
			return
		}
		b.pending = b.pending[1:]
		b.judge(t)
	}
}

// judge says what a press at t is worth.
func (b *Bench) judge(t float64) {
	last := b.lastTap
	b.lastTap = t
	if t-last < againS {
		b.refuse("pressed twice: counted once")
		return
	}
	if why := b.whyNotNow(t); why != "" {
		b.refuse(why)
		return
	}
	switch s := b.step(); s.kind {
	case Mounting:
		b.taken("mounted again")
		b.finish()
	case ZeroBefore, ZeroAfter:
		if why := b.whyNoZero(t); why != "" {
			b.refuse(why)
			return
		}
		b.takeZero(t)
	case PointStep:
		if why := b.whyNoPoint(t); why != "" {
			b.refuse(why)
			return
		}
		b.takePoint(t-b.plan.WindowS, t, false)
	}
}

func (b *Bench) refuse(why string) {
	b.reply(why, true)
	b.out = append(b.out, refusal(why))
}

func (b *Bench) taken(what string) {
	b.reply(what, false)
	b.out = append(b.out, acceptance(what))
}

// whyNotNow is why no press counts now, or "".
func (b *Bench) whyNotNow(t float64) string {
	if alarm, _ := b.guard.gravest(); alarm != NoAlarm {
		return "not now: let it down first"
	}
	switch s := b.step(); s.kind {
	case WarmUp:
		return fmt.Sprintf("not yet: it warms up for another %s", seconds(b.waitS()))
	case Exercise:
		return "not yet: this is exercise, no press is needed"
	case TopHold:
		return fmt.Sprintf("not yet: hold at the top for another %s", seconds(b.waitS()))
	case Done:
		return "the test is done"
	}
	if l := b.lead(); l == nil || !l.ready(t-b.plan.WindowS) || b.now-l.seenAt > lateS*b.factor+blindS {
		return "there is no reading of " + b.leadName()
	}
	if b.step().kind != Mounting && !b.testedRead(t-b.plan.WindowS, t) {
		return noTested
	}
	return ""
}

// whyNotAtRest is why what leads is not at rest at t, or "".
func (b *Bench) whyNotAtRest(t float64) string {
	l, allowed := b.lead(), b.plan.Steady*b.plan.SpanSI()
	if swing := l.swing(t-b.plan.WindowS, t); swing > allowed {
		return fmt.Sprintf("not at rest: %s moved by %s within %s, and %s is allowed; hold still, press again",
			b.leadName(), b.show(swing), seconds(b.plan.WindowS), b.show(allowed))
	}
	if held := l.restS(t, restTimes*allowed); held < b.plan.SettleS {
		return fmt.Sprintf("too early: held for %s of %s; hold still, press again", seconds(held), seconds(b.plan.SettleS))
	}
	return ""
}

func (b *Bench) whyNoZero(t float64) string {
	if b.plan.ReferenceStreams() {
		if x := b.lead().at(t); math.Abs(x) > zeroShare*b.plan.SpanSI() {
			return fmt.Sprintf("the reference stands at %s: let all of it out, then press", b.show(x))
		}
	}
	return b.whyNotAtRest(t)
}

// whyNoPoint is why a press at t is no point, or "".
func (b *Bench) whyNoPoint(t float64) string {
	s, x := b.step(), b.lead().at(t)-b.baseSI
	if far := math.Abs(x - s.target.Nominal.SI); far > s.near/2 {
		return fmt.Sprintf("%s stands at %s, and the point asked for is %s", b.leadName(), b.show(x), s.target.Nominal.Entered)
	}
	if why := b.whyWrongSide(s, x); why != "" {
		return why
	}
	return b.whyNotAtRest(t)
}

// whyWrongSide is why a point at x was not come to as the plan wants, or "".
func (b *Bench) whyWrongSide(s step, x float64) string {
	past := b.approach.past(x)
	if past <= b.plan.WrongSide*b.plan.SpanSI() || b.atEnd(s) {
		return ""
	}
	side, go1, go2, beyond := "above", "down", "up", "below"
	if s.target.Direction == gauge.Down {
		side, go1, go2, beyond = "below", "up", "down", "above"
	}
	back, _ := s.backTo()
	return fmt.Sprintf("come to from %s: it had gone %s too far; go back %s, %s %s, then come %s to %s",
		side, b.show(past), go1, beyond, b.show(back), go2, s.target.Nominal.Entered)
}

// atEnd tells a point that can be come to from one side only: nothing on the
// instrument.
func (b *Bench) atEnd(s step) bool {
	return math.Abs(s.target.Nominal.SI-b.zeroSI()) <= b.plan.WrongSide*b.plan.SpanSI()
}

// zeroSI is what leads reads with nothing on the instrument.
func (b *Bench) zeroSI() float64 {
	if b.plan.ReferenceStreams() {
		return 0
	}
	return b.plan.Low.SI
}
