package station

import (
	"fmt"
	"math"

	"tautramp/analyze/gauge"
)

// follow looks at the newest reading of what leads, and does what needs no
// press.
func (b *Bench) follow() {
	l := b.lead()
	t, _ := l.now()
	if math.IsNaN(b.begunAt) {
		b.begunAt = t
	}
	if b.gap != nil && !b.closeGap() {
		return
	}
	if !l.settled() {
		return
	}
	if !b.hasBase && !b.plan.ReferenceStreams() {
		_, v := l.now()
		b.baseSI, b.hasBase = v-b.plan.Low.SI, true // until the zero is taken
	}
	x := b.x()
	switch s := b.step(); s.kind {
	case WarmUp:
		if t-b.begunAt >= b.plan.WarmUpS {
			b.advance(b.at + 1)
		}
	case Exercise:
		b.swing(x)
	case ZeroBefore, ZeroAfter:
		if b.plan.Found != gauge.ByPress {
			b.zeroByRest(b.heardBy(t))
		}
	case TopHold:
		b.holdTop(s, t, x)
	case PointStep:
		b.approach.follow(s, x)
		b.watchTurn(s, x)
		if b.byRest(s) {
			to := b.heardBy(t)
			b.pointByRest(s, to, l.at(to)-b.baseSI)
		} else if b.plan.Found == gauge.BySweep {
			b.pointBySweep(s, t, x)
		}
	}
}

// swing follows an exercise cycle: to the top, and down again.
func (b *Bench) swing(x float64) {
	share := (x - b.plan.Low.SI) / b.plan.SpanSI()
	switch {
	case !b.swung && share >= topShare:
		b.swung = true
	case b.swung && share <= lowShare:
		b.advance(b.at + 1)
	}
}

// topNear is the part of a step by which the top may sag while it is held.
const topNear = 4

// holdTop counts the time at the top, and from the beginning where it is left.
func (b *Bench) holdTop(s step, t, x float64) {
	if math.Abs(x-s.target.Nominal.SI) > s.near/topNear {
		b.begunAt = nan()
		return
	}
	if t-b.begunAt >= b.plan.TopHoldS {
		b.advance(b.at + 1)
	}
}

// byRest tells whether a point is taken by itself wherever things rest at it; a
// sweep cannot pass the end of everything.
func (b *Bench) byRest(s step) bool {
	return b.plan.Found == gauge.ByPlateau || b.plan.Found == gauge.BySweep && b.atEnd(s)
}

// restedEnough tells whether things have been still for long enough for a point
// that nobody presses for. No two points share readings.
func (b *Bench) restedEnough(t float64) bool {
	allowed := b.plan.Steady * b.plan.SpanSI()
	l := b.lead()
	return t-b.begunAt >= b.plan.WindowS && l.swing(t-b.plan.WindowS, t) <= allowed && l.restS(t, restTimes*allowed) >= b.plan.SettleS
}

func (b *Bench) zeroByRest(t float64) {
	switch {
	case !b.restedEnough(t) || b.whyNoZero(t) != "":
	case b.testedRead(t-b.plan.WindowS, t):
		b.takeZero(t)
	default:
		b.tellTestedGone()
	}
}

// tellTestedGone says once that things wait for the tested instrument; nobody
// presses, so nobody would be told.
func (b *Bench) tellTestedGone() {
	if b.testedGone() && !b.toldOff {
		b.toldOff = true
		b.refuse(noTested)
	}
}

// nearShare is how near to a point things must rest to be taken for it, as a
// share of the distance to the next point. Judgement.
const nearShare = 0.25

// pointByRest takes a point where things rest near it, and says once why it
// does not.
func (b *Bench) pointByRest(s step, t, x float64) {
	if math.Abs(x-s.target.Nominal.SI) > nearShare*s.near || !b.restedEnough(t) {
		b.toldOff = b.toldOff && b.lead().swing(t-b.plan.WindowS, t) <= restTimes*b.plan.Steady*b.plan.SpanSI()
		return
	}
	if why := b.whyWrongSide(s, x); why != "" {
		if !b.toldOff {
			b.toldOff = true
			b.refuse(why)
		}
		return
	}
	if !b.testedRead(t-b.plan.WindowS, t) {
		b.tellTestedGone()
		return
	}
	b.takePoint(t-b.plan.WindowS, t, false)
}

// sweepShare is how much of the distance between two points a sweep may cover
// within the window of one. Judgement.
const sweepShare = 0.25

// pointBySweep takes a point once a sweep has passed it by half a window.
func (b *Bench) pointBySweep(s step, t, x float64) {
	l, sign, nominal := b.lead(), signOf(s.target.Direction), s.target.Nominal.SI
	if math.IsNaN(b.crossed) {
		from, to := l.window(t-b.plan.WindowS, t)
		if to-from < 2 || !(sign*(l.smooth[from]-b.baseSI) < sign*nominal && sign*x >= sign*nominal) {
			return
		}
		b.crossed = t - smoothS/2 // the smoothed reading lags by half of its window
	}
	half := b.plan.WindowS / 2
	if t < b.crossed+half {
		return
	}
	from, to := b.crossed-half, b.crossed+half
	if swept := l.swing(from, to); swept > sweepShare*s.near {
		back, _ := s.backTo()
		b.crossed = nan()
		b.refuse(fmt.Sprintf("too fast: %s within %s; go back beyond %s, then pass %s at half the speed or slower",
			b.show(swept), seconds(b.plan.WindowS), b.show(back), s.target.Nominal.Entered))
		return
	}
	switch {
	case b.testedRead(from, to):
		b.takePoint(from, to, true)
	case b.testedGone():
		back, _ := s.backTo()
		b.crossed = nan()
		b.refuse(fmt.Sprintf("%s; then go back beyond %s and pass %s again", noTested, b.show(back), s.target.Nominal.Entered))
	}
}
