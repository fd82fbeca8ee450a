package visit

import (
	"math"
	"slices"
)

// A reading that is older than so many real seconds, or sample periods, is no
// reading of now.
const (
	oldS       = 2.0
	oldPeriods = 3.0
)

// zeroMark is the operator's zero; without readings there is none to take.
func (w *watch) zeroMark() ReplyKind {
	if !w.fresh(0) || !w.fresh(1) {
		return w.tracker.refuseZero()
	}
	return w.tracker.markZero()
}

func (w *watch) answer(kind ReplyKind, number int) {
	w.reply = Reply{Kind: kind, At: w.now, SettingSI: math.NaN(), Number: number}
	if w.fresh(0) {
		w.reply.SettingSI = w.latest[0].Value
	}
	if kind == MarkTaken { // the entry is not paired yet: this press is still the next one
		_, w.reply.Mark = w.live.Presses()
	}
	if w.tracker.site.stepped { // it is the last press's, not this one's
		w.reply.SettingSI = math.NaN()
	}
}

// fresh reports that the newest reading of a channel is good and of now.
func (w *watch) fresh(channel int) bool {
	s := w.source[channel]
	return w.latest[channel].Status.Ok() && w.link[s.device] == "" &&
		(w.now-s.at).Seconds() <= max(oldS*w.factor, oldPeriods*s.period)
}

// links is what is not well with each board.
func (w *watch) links() (links []string, away bool) {
	links = slices.Clone(w.link)
	for i, s := range w.source {
		old := (w.now - s.at).Seconds() > max(oldS*w.factor, oldPeriods*s.period)
		if w.latest[i].Status != 0 && links[s.device] == "" && old {
			links[s.device] = linkQuiet
		}
		away = away || w.latest[i].Status != 0 && w.link[s.device] != ""
	}
	return links, away
}

// status is all that a screen shows now.
func (w *watch) status() Status {
	k := w.tracker
	s := Status{At: w.now, Phase: k.phase, Cycle: k.number(), Planned: k.planned(),
		Resting: k.stage == atRest, Exercise: k.number() <= k.plan.Exercise, Next: k.next(), GoalSI: k.goalSI(), LowSI: k.lowSI(), Reply: w.reply, Done: k.finished, Simulated: w.live.Simulated()}
	w.figures(&s)
	s.SlowSI, s.FastSI = k.paceBounds()
	for _, c := range w.live.Counters() {
		s.Lost += c.Lost
		s.Rejected += c.Rejected
	}
	var away bool
	s.Link, away = w.links()
	w.stepped(&s)
	said := s.Next
	if s.Alarm, s.AlarmText = w.alarms.gravest(); s.Alarm != NoAlarm {
		s.Next = "STOP - " + k.site.words.release
	} else if away && !k.finished {
		s.Next = nextAway
	} else if c := w.alarms.missing(w.now.Seconds()); c != nil && k.seen && !k.finished {
		s.Next = "wait: there is no reading of " + c.name
	}
	if s.Next != said {
		s.GoalSI, s.LowSI = math.NaN(), math.NaN()
	}
	return s
}

// figures fills in the numbers, of now or none.
func (w *watch) figures(s *Status) {
	nan := math.NaN()
	s.SettingSI, s.RateSI, s.StretchM, s.StressPa, s.PaceSI = nan, nan, nan, nan, nan
	setting, extension := w.fresh(0), w.fresh(1)
	if setting {
		s.SettingSI = w.latest[0].Value
		s.RateSI, _ = w.alarms.raw.slope()
		s.Pace, s.PaceSI = w.tracker.paceNow()
	}
	if setting && extension {
		s.StretchM, s.StressPa = w.tracker.stretchM(), w.tracker.stressPa()
		s.RateSI = orElse(w.tracker.shownRate(), s.RateSI)
	}
}

// stepped is what differs where presses stand for something: the next mark, and
// where they tell the setting that it jumps, and has no rate.
func (w *watch) stepped(s *Status) {
	var standing int
	standing, s.Mark = w.live.Presses()
	if !w.tracker.site.stepped {
		return
	}
	s.RateSI, s.PaceSI, s.Pace = math.NaN(), math.NaN(), ""
	if standing == 0 && w.latest[1].Status != 0 {
		s.Next = "set " + s.Mark + ", hold still, then press: there the steps begin"
	}
}
