package visit

import (
	"math"

	"tautramp/acquire/pairing"
	"tautramp/protocol"
)

// All figures are judgement.
const (
	limitClear  = 0.97 // of the limit: below it for clearS the limit's alarm is over
	clearS      = 1.0
	underClear  = 0.10 // of the limit: by so much the setting must come down after an under-reading
	blindS      = 1.5  // without a good reading
	blindPeriod = 5.0  // or so many sample periods, whichever is longer
	blindHeldS  = 0.3  // real s that this must last: what waited in a queue comes at once,
	abortClear  = 0.20 // of the limit: below it an abort has been followed
	rehearsedS  = 2.0  // and so many on a faster clock, where every hiccup of the computer is long
	risingS     = 3.0  // the setting counts as rising for so long after it last did
)

// alarms raises and ends the alarms. It sees each single reading as it comes,
// not smoothed and not paired. Times are of the entries, s.
type alarms struct {
	site   site
	on     map[AlarmKind]*alarm
	fresh  []AlarmKind          // raised and not yet told
	raised []string             // all texts, in order
	first  map[AlarmKind]string // text of the first of each kind
	raw    trend                // of the setting
	rising float64              // when the setting was last seen to rise; -Inf before
	seen   [2]seen              // setting, extension
	factor float64              // clock seconds per real second
	lackAt float64              // since when readings stay away; NaN while none does
}

// alarm is one that is on.
type alarm struct {
	text    string
	level   float64 // highest setting since it was raised
	clearAt float64 // since when its reason is gone; NaN while it is not
}

// seen is what is known of one channel's readings.
type seen struct {
	name   string
	goodAt float64 // when the last good one came; NaN before the first look
	status protocol.Status
	period float64 // nominal, s
}

func newAlarms(s site) *alarms {
	return &alarms{site: s, on: map[AlarmKind]*alarm{}, first: map[AlarmKind]string{}, raw: trend{span: trendS}, rising: math.Inf(-1), factor: 1, lackAt: math.NaN(),
		seen: [2]seen{{name: "the " + s.words.name, goodAt: math.NaN()}, {name: "the stretch", goodAt: math.NaN()}}}
}

// setting takes a new reading of the setting. One reading over the limit is
// enough, and so is one at the sensor's end while the setting rises.
func (a *alarms) setting(r pairing.Reading, now float64) {
	a.note(0, r, now)
	good, atEnd := r.Status.Ok(), r.Status == protocol.High
	switch {
	case (good || atEnd) && r.Value >= a.site.limit:
		a.raise(OverLimit, r.Value, a.site.limitText(r.Value))
	case good && r.Value < limitClear*a.site.limit:
		a.over(OverLimit, now)
	default:
		a.stays(OverLimit)
	}
	if atEnd && now-a.rising <= risingS {
		a.raise(Blind, r.Value, a.site.blindText(a.seen[0]))
	}
	if !good {
		return
	}
	a.raw.add(r.T, r.Value)
	if rate, std := a.raw.slope(); rate-stillDoubts*std > stillRate*a.site.limit {
		a.rising = now
	}
	if r.Value < abortClear*a.site.limit {
		a.over(Aborted, now)
	} else {
		a.stays(Aborted)
	}
	if u := a.on[UnderReading]; u != nil && r.Value < u.level-underClear*a.site.limit {
		a.over(UnderReading, now)
	} else {
		a.stays(UnderReading)
	}
}

// extension takes a new reading of the extension.
func (a *alarms) extension(r pairing.Reading, now float64) { a.note(1, r, now) }

func (a *alarms) note(channel int, r pairing.Reading, now float64) {
	s := &a.seen[channel]
	s.status = r.Status
	if r.Status.Ok() {
		s.goodAt = now
	}
}

// short takes the guard's word that the stretch does not follow.
func (a *alarms) short(setting float64) { a.raise(UnderReading, setting, a.site.underText()) }

// abort is the operator's own word to stop.
func (a *alarms) abort() { a.raise(Aborted, math.NaN(), a.site.abortText()) }

// missing is a channel that cannot be read, or nil: unseen for long enough.
func (a *alarms) missing(now float64) *seen {
	if now-a.lackAt >= a.heldS() {
		return a.unseen(now)
	}
	return nil // also while nothing lacks: lackAt is not a number then
}

// unseen is a channel without a good reading for too long, or nil.
func (a *alarms) unseen(now float64) *seen {
	for i := range a.seen {
		if s := &a.seen[i]; now-s.goodAt > s.patience() {
			return s
		}
	}
	return nil
}

// heldS is how long readings must stay away, in seconds of the clock.
func (a *alarms) heldS() float64 {
	if a.factor > 1 {
		return rehearsedS * a.factor
	}
	return blindHeldS * a.factor
}

func (s *seen) patience() float64 { return max(blindS, blindPeriod*s.period) }

// time looks for readings that stay away while the setting rises.
func (a *alarms) time(now float64) {
	for i := range a.seen {
		a.seen[i].goodAt = orElse(a.seen[i].goodAt, now)
	}
	s := a.unseen(now)
	if s == nil {
		a.lackAt = math.NaN()
		a.over(Blind, now)
		return
	}
	a.stays(Blind)
	a.lackAt = orElse(a.lackAt, now)
	if a.missing(now) != nil && now-a.rising <= risingS+s.patience()+a.heldS() {
		a.raise(Blind, math.NaN(), a.site.blindText(*s))
	}
}

func (a *alarms) raise(kind AlarmKind, level float64, text string) {
	if on := a.on[kind]; on != nil {
		on.clearAt, on.level = math.NaN(), max(on.level, level)
		return
	}
	a.on[kind] = &alarm{text: text, level: level, clearAt: math.NaN()}
	a.fresh = append(a.fresh, kind)
	a.raised = append(a.raised, text)
	if a.first[kind] == "" {
		a.first[kind] = text
	}
}

func (a *alarms) stays(kind AlarmKind) {
	if on := a.on[kind]; on != nil {
		on.clearAt = math.NaN()
	}
}

// over ends an alarm whose reason has been gone for long enough.
func (a *alarms) over(kind AlarmKind, now float64) {
	on := a.on[kind]
	switch {
	case on == nil:
	case math.IsNaN(on.clearAt):
		on.clearAt = now
	case now-on.clearAt >= clearS:
		delete(a.on, kind)
	}
}

// gravest is the alarm to show.
func (a *alarms) gravest() (AlarmKind, string) {
	for _, kind := range gravity() {
		if on := a.on[kind]; on != nil {
			return kind, on.text
		}
	}
	return NoAlarm, ""
}

// worst is the text of the gravest alarm that ever was on.
func (a *alarms) worst() string {
	for _, kind := range gravity() {
		if text := a.first[kind]; text != "" {
			return text
		}
	}
	return ""
}

// gravity lists the alarms, the gravest first.
func gravity() []AlarmKind { return []AlarmKind{OverLimit, UnderReading, Aborted, Blind} }
