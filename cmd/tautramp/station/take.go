package station

import (
	"fmt"
	"math"

	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/analyze/estimate"
	"tautramp/analyze/gauge"
)

func refusal(why string) recording.Event {
	return recording.Event{Kind: recording.Refused, Text: why}
}

func acceptance(what string) recording.Event {
	return recording.Event{Kind: recording.Taken, Text: what}
}

// takePoint makes a point of the readings after a, up to b.
func (b *Bench) takePoint(from, to float64, moving bool) {
	s := b.step()
	p := gauge.Point{
		Target: s.target, T: to, Temperature: b.celsius(from, to),
		Reference: b.level(b.roles.reference, from, to, moving, s.target.Nominal.SI),
		Indicated: b.level(b.roles.tested, from, to, moving, s.target.Nominal.SI),
	}
	b.points = append(b.points, p)
	b.taken(fmt.Sprintf("point %d of %d taken: %s", len(b.points), b.planned(), b.readingOf(s.target.Nominal.Entered, p.Reference, p.Indicated)))
	b.finish()
}

// level is what a channel read, or what was brought to the mark by hand.
func (b *Bench) level(s *pairing.Source, from, to float64, moving bool, nominal float64) gauge.Level {
	if s == nil {
		return gauge.Level{SI: nominal}
	}
	if l := b.trails[*s]; l != nil {
		return l.level(from, to, moving)
	}
	return gauge.Level{SI: nan()}
}

// takeZero takes the readings with nothing on the instrument.
func (b *Bench) takeZero(t float64) {
	s, from := b.step(), t-b.plan.WindowS
	z := gauge.Zero{Series: s.target.Series, Run: s.target.Run, Repeat: s.target.Repeat, T: t,
		Reference: b.level(b.roles.reference, from, t, false, b.zeroSI()),
		Indicated: b.level(b.roles.tested, from, t, false, b.zeroSI()),
	}
	if s.kind == ZeroBefore {
		b.before = append(b.before, z)
		b.approach = approach{}
		if !b.plan.ReferenceStreams() {
			b.baseSI, b.hasBase = z.Indicated.SI-b.plan.Low.SI, true
		}
	} else {
		b.after = append(b.after, z)
	}
	b.taken(fmt.Sprintf("%s taken: %s", s.kind, b.readingOf("", z.Reference, z.Indicated)))
	b.finish()
}

// finish ends a step that took something.
func (b *Bench) finish() {
	b.done = append(b.done, b.at)
	b.advance(b.at + 1)
}

// undo takes the last thing taken back.
func (b *Bench) undo() {
	b.pending = nil
	n := len(b.done)
	if n == 0 || b.Finished() {
		b.reply("nothing to take back", true)
		return
	}
	back := b.done[n-1]
	b.done = b.done[:n-1]
	s := b.steps[back]
	what := string(s.kind)
	switch s.kind {
	case PointStep:
		b.points = b.points[:len(b.points)-1]
		what = "point " + s.target.Nominal.Entered
	case ZeroBefore:
		b.before = b.before[:len(b.before)-1]
	case ZeroAfter:
		b.after = b.after[:len(b.after)-1]
	}
	b.advance(back)
	b.reply(what+" taken back", false)
	b.out = append(b.out, recording.Event{Kind: recording.Prompted, Text: b.answer.Text})
}

// restartSeries drops what the series has taken, and begins it again.
func (b *Bench) restartSeries(why string) {
	about := b.step().target
	b.points = without(b.points, func(p gauge.Point) bool { return sameSeries(p.Target, about) })
	b.turns = without(b.turns, func(t turn) bool { return sameSeries(t.target, about) })
	zero := func(z gauge.Zero) bool {
		return z.Series == about.Series && z.Run == about.Run && z.Repeat == about.Repeat
	}
	b.before, b.after = without(b.before, zero), without(b.after, zero)
	first := b.at
	for first > 0 && !(b.steps[first].kind == ZeroBefore && sameSeries(b.steps[first].target, about)) {
		first--
	}
	b.done = without(b.done, func(i int) bool { return i >= first })
	b.approach = approach{}
	b.advance(first)
	b.reply(why, true)
	b.say(recording.Again, why)
}

func without[T any](list []T, drop func(T) bool) []T {
	var kept []T
	for _, e := range list {
		if !drop(e) {
			kept = append(kept, e)
		}
	}
	return kept
}

// inSeries tells whether something of the series under way would be lost by a
// step back.
func (b *Bench) inSeries() bool {
	switch b.step().kind {
	case PointStep, TopHold, ZeroAfter:
		return true
	}
	return false
}

func (b *Bench) planned() int { return len(b.plan.Targets()) }

// iceK is 0 degrees Celsius in kelvin.
const iceK = 273.15

// celsius is the temperature about a window; sensors send it slowly.
func (b *Bench) celsius(from, to float64) estimate.Estimate {
	const reach = 30.0 // s
	c, ok := b.channelOf(b.roles.temperature)
	if !ok || b.trails[*b.roles.temperature] == nil {
		return estimate.Unknown("nothing measured it")
	}
	level := b.trails[*b.roles.temperature].level(from-reach, to, false)
	if level.N == 0 {
		return estimate.Unknown("its sensor gave no reading")
	}
	return estimate.Estimate{Value: level.SI - iceK, Random: level.Spread / math.Sqrt(float64(level.N)),
		System: c.CountSI / math.Sqrt(12), DoF: math.Inf(1), Method: "mean of the temperature sensor"}
}
