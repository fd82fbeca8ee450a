package visit

import (
	"context"

	"tautramp/acquire"
	"tautramp/acquire/recording"
)

// Run captures until the planned cycles are closed, or ctx ends, or the
// capture fails; the recording then holds everything up to there, and the
// caller closes it. Its error is acquire's, or one about the header.
func Run(ctx context.Context, cfg Config) (Summary, error) {
	w, err := newWatch(cfg)
	if err != nil {
		return Summary{}, err
	}
	// The capture ends by a context of its own, so that why it ends is written
	// before it does.
	running, stop := context.WithCancel(context.WithoutCancel(ctx))
	defer stop()
	w.stop = stop
	relayed := make(chan struct{})
	cfg.Acquire.OnEntry = w.entry
	cfg.Acquire.Operator = relay(ctx, running, cfg.Acquire.Operator, stop, relayed)
	err = acquire.Run(running, cfg.Acquire)
	stop()
	<-relayed
	return w.end(ctx, err), err
}

// relay passes the operator's events on, and ends the capture when ctx does.
func relay(ctx, running context.Context, from <-chan recording.Event, stop func(), done chan<- struct{}) <-chan recording.Event {
	to := make(chan recording.Event, 1)
	go func() {
		defer close(done)
		for {
			select {
			case <-running.Done():
				return
			case <-ctx.Done():
				pass(running, to, recording.Event{Kind: recording.Interrupt})
				stop()
				return
			case e, ok := <-from:
				if !ok {
					from = nil
					continue
				}
				pass(running, to, e)
			}
		}
	}()
	return to
}

func pass(running context.Context, to chan<- recording.Event, e recording.Event) {
	select {
	case to <- e:
	case <-running.Done():
	}
}
