package station

import (
	"context"
	"time"

	"tautramp/acquire"
	"tautramp/acquire/recording"
)

// Config is one bench test while it happens.
type Config struct {
	// Acquire is the capture: Devices, Clock, Out and Operator are the
	// caller's; Run sets OnEntry and Fits, and passes the operator's events on.
	Acquire acquire.Config
	// Bench is new, or has followed the earlier recordings and was told to
	// Continue with this one.
	Bench *Bench

	// OnStatus draws. It is called from one goroutine, at most about ten times a
	// real second and at once when step, answer, alarm or instruction change;
	// while it works the capture waits. It may be nil.
	OnStatus func(Status)
}

// Run captures until the plan is done, or ctx ends, or the capture fails; the
// recording then holds everything up to there, and the caller closes it. Its
// error is acquire's, or wraps ErrNoChannel.
func Run(ctx context.Context, cfg Config) (Summary, error) {
	// The capture ends by a context of its own, so that why it ends is written
	// before it does.
	running, stop := context.WithCancel(context.WithoutCancel(ctx))
	defer stop()
	w := &watch{cfg: cfg, bench: cfg.Bench, stop: stop, factor: cfg.Acquire.Clock.Factor()}
	relayed := make(chan struct{})
	cfg.Acquire.OnEntry = w.entry
	cfg.Acquire.Fits = Fits(cfg.Bench.plan)
	cfg.Acquire.Operator = relay(ctx, running, cfg.Acquire.Operator, stop, relayed)
	err := acquire.Run(running, cfg.Acquire)
	stop()
	<-relayed
	if err == nil {
		err = cfg.Bench.Fault()
	}
	return w.end(err), err
}

// relay passes the operator's events on, and ends the capture when ctx does.
func relay(ctx, running context.Context, from <-chan recording.Event, stop func(), done chan<- struct{}) <-chan recording.Event {
	to := make(chan recording.Event, 1)
	pass := func(e recording.Event) {
		select {
		case to <- e:
		case <-running.Done():
		}
	}
	go func() {
		defer close(done)
		for {
			select {
			case <-running.Done():
				return
			case <-ctx.Done():
				pass(recording.Event{Kind: recording.Interrupt})
				stop()
				return
			case e, ok := <-from:
				if !ok {
					from = nil
					continue
				}
				pass(e)
			}
		}
	}()
	return to
}

// watch sees every entry of the capture, in order, from one goroutine.
type watch struct {
	cfg     Config
	bench   *Bench
	stop    func() // ends the capture
	factor  float64
	begun   bool
	stopped bool // by the operator
	drawn   Status
}

// statusEvery is the shortest real time between two statuses that differ in
// numbers only.
const statusEvery = 100 * time.Millisecond

func (w *watch) entry(e recording.Entry) []recording.Event {
	var out []recording.Event
	if !w.begun {
		w.begun = true
		for _, text := range Cautions(w.bench.plan) {
			out = append(out, recording.Event{Kind: recording.Prompted, Text: text})
		}
	}
	if e.Event != nil && e.Event.Kind == recording.Interrupt {
		w.stopped = true
	}
	out = append(out, w.bench.Add(e)...)
	w.draw()
	if w.bench.Finished() || w.bench.Fault() != nil {
		w.stop()
	}
	return out
}

func (w *watch) draw() {
	s := w.bench.Status()
	d := &w.drawn
	same := s.Step == d.Step && s.Next == d.Next && s.Answer == d.Answer && s.Alarm == d.Alarm && s.Taken == d.Taken
	if same && float64(s.At-d.At) < float64(statusEvery)*w.factor {
		return
	}
	w.drawn = s
	if w.cfg.OnStatus != nil {
		w.cfg.OnStatus(s)
	}
}

func (w *watch) end(err error) Summary {
	b := w.bench
	s := Summary{Taken: len(b.points), Planned: b.planned(), Finished: b.Finished(), Alarm: b.guard.gravestEver(),
		Alarms: b.guard.raised, Counters: b.stream.Counters(), Reason: "the capture ended"}
	switch {
	case err != nil:
		s.Reason = "the capture failed"
	case s.Finished:
		s.Reason = "all points are taken"
	case w.stopped:
		s.Reason = "stopped by the operator"
	}
	return s
}
