package station

import (
	"math"

	"tautramp/acquire/pairing"
	"tautramp/protocol"
)

// All figures are judgement, those of a visit.
const (
	limitClear = 0.97 // of the limit: below it for clearS the alarm is over
	clearS     = 1.0
	blindS     = 1.5 // without a good reading
	blindReal  = 0.3 // and so many real s,
	rehearsedS = 2.0 // and so many on a faster clock, where every hiccup is long
	loadShare  = 0.1 // of the span: above it there is something to let out
)

// guard raises the alarms. Times are of the entries, s.
type guard struct {
	limit, span float64
	factor      float64
	on          map[AlarmKind]string
	clearAt     float64 // since when the limit's reason is gone; NaN while it is not
	lastX       float64 // last good reading
	seenAt      float64 // when it came
	fresh       []AlarmKind
	raised      []string
	worst       map[AlarmKind]string
}

func newGuard(limit, span float64) guard {
	return guard{limit: limit, span: span, factor: 1, on: map[AlarmKind]string{}, worst: map[AlarmKind]string{},
		clearAt: nan(), lastX: nan(), seenAt: nan()}
}

// gap forgets what was read before a time without readings.
func (g *guard) gap() { g.lastX, g.seenAt = nan(), nan() }

// reading takes a reading of what leads, x from its zero.
func (b *Bench) guardLimit(x float64, atEnd bool, now float64) {
	g := &b.guard
	switch {
	case x >= g.limit || atEnd:
		g.clearAt = nan()
		g.raise(OverLimit, b.limitText(x, atEnd))
	case x >= limitClear*g.limit:
		g.clearAt = nan()
	case g.on[OverLimit] == "":
	case math.IsNaN(g.clearAt):
		g.clearAt = now
	case now-g.clearAt >= clearS:
		delete(g.on, OverLimit)
	}
}

func (g *guard) reading(r pairing.Reading, now float64) {
	if !r.Status.Ok() {
		return
	}
	g.lastX, g.seenAt = r.Value, now
	delete(g.on, Blind)
}

// watchGuard looks at the newest reading, and for readings that stay away while
// there is load.
func (b *Bench) watchGuard() {
	l, g := b.lead(), &b.guard
	if l == nil || l.latest.Status == 0 {
		return
	}
	r := l.latest
	if r.Status.Ok() || r.Status == protocol.High {
		b.guardLimit(r.Value-b.baseSI, r.Status == protocol.High, b.now)
	}
	patience := blindS + blindReal
	if g.factor > 1 {
		patience = blindS + rehearsedS*g.factor
	}
	if b.now-g.seenAt > patience && g.lastX-b.baseSI-b.plan.Low.SI > loadShare*g.span && b.working() {
		g.raise(Blind, b.blindText(r.Status))
	}
	for _, kind := range g.fresh {
		b.say(alarmEvent(kind, g.on[kind]))
	}
	g.fresh = nil
}

// working tells whether somebody is loading the instrument now.
func (b *Bench) working() bool { k := b.step().kind; return k != Done && k != WarmUp && k != Mounting }

func (g *guard) raise(kind AlarmKind, text string) {
	if g.on[kind] != "" {
		return
	}
	g.on[kind] = text
	g.fresh = append(g.fresh, kind)
	g.raised = append(g.raised, text)
	if g.worst[kind] == "" {
		g.worst[kind] = text
	}
}

// gravest is the alarm to show.
func (g *guard) gravest() (AlarmKind, string) {
	for _, kind := range []AlarmKind{OverLimit, Blind} {
		if text := g.on[kind]; text != "" {
			return kind, text
		}
	}
	return NoAlarm, ""
}

// gravestEver is the text of the gravest alarm that was raised; "" for none.
func (g *guard) gravestEver() string {
	for _, kind := range []AlarmKind{OverLimit, Blind} {
		if text := g.worst[kind]; text != "" {
			return text
		}
	}
	return ""
}
