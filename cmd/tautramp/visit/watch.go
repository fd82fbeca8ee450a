package visit

import (
	"context"
	"fmt"
	"slices"
	"time"

	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
)

// watch sees every entry of the capture, in order, from one goroutine.
type watch struct {
	cfg     Config
	live    *pairing.Live
	lens    *lens
	tracker *tracker
	alarms  *alarms
	stop    func() // ends the capture

	latest  [2]pairing.Reading
	source  [2]source // of latest
	reply   Reply
	link    []string
	now     time.Duration
	begun   bool
	next    string // as recorded last
	advised string
	factor  float64 // clock seconds per real second
	press   hold    // on a board's own button
	drawn   Status
	drawnAt time.Duration
}

// source is where a channel's readings come from.
type source struct {
	device int
	period float64       // nominal, s
	at     time.Duration // when the newest one came
}

// statusEvery is the shortest real time between two statuses that differ in
// numbers only.
const statusEvery = 100 * time.Millisecond

func newWatch(cfg Config) (*watch, error) {
	s, err := newSite(cfg.Header)
	if err != nil {
		return nil, err
	}
	live, err := pairing.NewLive(cfg.Header)
	if err != nil {
		return nil, fmt.Errorf("start a visit: %w", err)
	}
	w := &watch{cfg: cfg, live: live, lens: newLens(s.tensioner), tracker: newTracker(s, cfg.Plan, cfg.AimSI), alarms: newAlarms(s),
		stop: func() {}, factor: 1, link: make([]string, len(cfg.Header.Devices))}
	if c := cfg.Acquire.Clock; c != nil {
		w.factor = c.Factor()
	}
	w.alarms.factor = w.factor
	return w, nil
}

// entry takes one entry and returns what is to be recorded because of it.
func (w *watch) entry(e recording.Entry) []recording.Event {
	w.now = max(w.now, e.At)
	out := w.begin()
	if e.Event != nil {
		w.event(e)
	} else if e.Device >= 0 && e.Device < len(w.link) {
		w.link[e.Device] = ""
		out = append(out, w.button(e.Wire)...)
	}
	out = append(out, w.held()...)
	paired := false
	for _, p := range w.live.Add(e) {
		paired = true
		p = w.lens.pair(p)
		w.tracker.pair(p)
		if w.tracker.guard.short {
			w.alarms.short(p.Setting)
		}
	}
	w.readings()
	out = append(out, w.tracker.take()...)
	out = append(out, w.raised()...)
	if alarm, _ := w.alarms.gravest(); paired || e.Event != nil || alarm != w.drawn.Alarm || w.due() {
		status := w.status()
		out = append(out, w.prompt(status.Next)...)
		w.draw(status)
	}
	return out
}

// due reports that it is time for another status.
func (w *watch) due() bool {
	return float64(w.now-w.drawnAt) >= float64(statusEvery)*w.factor
}

// begin gives the cautions, once.
func (w *watch) begin() []recording.Event {
	if w.begun {
		return nil
	}
	w.begun = true
	var out []recording.Event
	for _, text := range w.cfg.Cautions {
		out = append(out, recording.Event{Kind: recording.Prompted, Text: text})
	}
	return out
}

// readings hands what is new of the two channels to the alarms.
func (w *watch) readings() {
	setting, extension, ok := w.live.Channels()
	if !ok {
		return
	}
	now := w.now.Seconds()
	w.tracker.countM, w.tracker.periodS = extension.CountSI, extension.PeriodS
	newest := [2]pairing.Reading{}
	newest[0], newest[1] = w.live.Latest()
	newest[0] = w.lens.reading(newest[0])
	for i, r := range newest {
		if r.Status == 0 || r.T == w.latest[i].T && r.Part == w.latest[i].Part && r.Status == w.latest[i].Status {
			continue
		}
		w.latest[i], w.source[i].at = r, w.now
		if i == 0 {
			w.alarms.setting(r, now)
		} else {
			w.alarms.extension(r, now)
		}
	}
	for i, c := range []pairing.Channel{setting, extension} {
		w.alarms.seen[i].period = c.PeriodS
		w.source[i].device, w.source[i].period = c.Device, c.PeriodS
	}
	w.alarms.time(now)
}

// event takes what the host did.
func (w *watch) event(e recording.Entry) {
	switch e.Event.Kind {
	case recording.ZeroMark:
		w.answer(w.zeroMark(), 0)
	case recording.Mark:
		w.answer(MarkTaken, w.tracker.zero.markPlain())
	case recording.Undo:
		w.answer(w.tracker.zero.undo(), 0)
	case recording.Vented:
		w.answer(VentTaken, 0)
	case recording.Confirmed:
		w.answer(Noted, 0)
	case recording.LowerTurn:
		w.answer(w.tracker.declareTurn(), 0)
	case recording.Abort:
		w.alarms.abort()
		w.answer(AbortTaken, 0)
	case recording.LostPort:
		w.setLink(e.Device, linkLost)
	case recording.Silent:
		w.setLink(e.Device, linkSilent)
	case recording.Restarted:
		w.setLink(e.Device, linkRestarted)
	case recording.PlanClosed:
		w.stop()
	}
}

func (w *watch) setLink(device int, text string) {
	if device >= 0 && device < len(w.link) {
		w.link[device] = text
	}
}

// raised is the alarms to record.
func (w *watch) raised() []recording.Event {
	var out []recording.Event
	for _, kind := range w.alarms.fresh {
		out = append(out, recording.Event{Kind: recording.Alarm, Text: string(kind) + ": " + w.alarms.on[kind].text})
	}
	w.alarms.fresh = w.alarms.fresh[:0]
	return out
}

// prompt records what the operator is asked to do, when it changes, and at once
// a slope that does not fit.
func (w *watch) prompt(next string) []recording.Event {
	var out []recording.Event
	for _, p := range []struct {
		last *string
		text string
	}{{&w.advised, w.tracker.check.advice}, {&w.next, next}} {
		if p.text != *p.last && p.text != "" && !(p.last == &w.next && p.text == w.advised) {
			out = append(out, recording.Event{Kind: recording.Prompted, Text: p.text})
		}
		*p.last = p.text
	}
	return out
}

// draw shows a status when something changed that matters, or when it is time.
func (w *watch) draw(s Status) {
	last := w.drawn
	changed := s.Phase != last.Phase || s.Alarm != last.Alarm || s.Cycle != last.Cycle || s.Next != last.Next ||
		s.Done != last.Done || s.Reply.At != last.Reply.At || s.Reply.Kind != last.Reply.Kind || s.Reply.Number != last.Reply.Number || !slices.Equal(s.Link, last.Link)
	if !changed && !w.due() {
		return
	}
	w.drawn, w.drawnAt = s, w.now
	if w.cfg.OnStatus != nil {
		w.cfg.OnStatus(s)
	}
}

// end sums up, and draws for the last time.
func (w *watch) end(ctx context.Context, failed error) Summary {
	s := Summary{Cycles: w.tracker.closed, Closed: w.tracker.finished, Alarms: w.alarms.raised, Counters: w.live.Counters()}
	s.Alarm = w.alarms.worst()
	switch {
	case failed != nil:
		s.Reason = "the capture failed"
	case s.Closed:
		s.Reason = nextDone
	case ctx.Err() != nil:
		s.Reason = "stopped by the operator"
	default:
		s.Reason = "the capture ended"
	}
	if w.cfg.OnStatus != nil {
		last := w.status()
		last.Done = true
		w.cfg.OnStatus(last)
	}
	return s
}
