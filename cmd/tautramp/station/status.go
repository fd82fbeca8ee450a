package station

import (
	"math"
	"slices"
	"time"
)

// Status is all that a screen shows now.
func (b *Bench) Status() Status {
	s := b.step()
	st := Status{At: time.Duration(b.now * float64(time.Second)), Step: s.kind, Target: s.target, Cycle: s.cycle, Cycles: b.plan.Exercise,
		Taken: len(b.points), Planned: b.planned(), NowSI: nan(), TestedSI: nan(), GoSI: nan(), Goes: s.target.Direction,
		WaitS: b.waitS(), Next: b.instruction(), Answer: b.answer, Link: slices.Clone(b.link), Points: slices.Clip(b.points), Done: s.kind == Done}
	if l := b.lead(); l != nil && b.now-l.seenAt <= lateS*math.Max(1, b.factor)+blindS {
		st.NowSI = b.x()
	}
	if b.plan.ReferenceStreams() && b.roles.tested != nil {
		if l := b.trails[*b.roles.tested]; l != nil {
			_, st.TestedSI = l.now()
		}
	}
	if s.kind == PointStep || s.kind == TopHold {
		st.GoSI = s.target.Nominal.SI
		if s.kind == PointStep && b.mustGoBack(s) {
			st.GoSI, _ = s.backTo()
			st.Back = true
		}
	}
	st.Alarm, st.AlarmText = b.guard.gravest()
	for _, c := range b.stream.Counters() {
		st.Lost += c.Lost
		st.Rejected += c.Rejected
	}
	return st
}

// waitS is how long things must still be kept as they are, s.
func (b *Bench) waitS() float64 {
	l := b.lead()
	if l == nil {
		return 0
	}
	t, _ := l.now()
	since := 0.0
	if !math.IsNaN(b.begunAt) {
		since = t - b.begunAt
	}
	switch b.step().kind {
	case WarmUp:
		return math.Max(0, b.plan.WarmUpS-since)
	case TopHold:
		return math.Max(0, b.plan.TopHoldS-since)
	case ZeroBefore, ZeroAfter, PointStep:
		held := l.restS(t, restTimes*b.plan.Steady*b.plan.SpanSI())
		return math.Max(0, b.plan.SettleS-held)
	}
	return 0
}
