package acquire

import (
	"context"
	"errors"
	"fmt"
	"io"
	"time"

	"tautramp/acquire/recording"
)

// link holds one device: it opens the port, leads the conversation (talk.go),
// and opens the port again after a loss. One goroutine owns it.
type link struct {
	s       *session
	index   int
	dev     Device
	conn    *conn
	hearing hearing // of this connection
	asking  asking
	device  device
	outage  outage
	waiting <-chan struct{} // the gate; nil once it was seen open
}

// outage is the time since a device last ran as it should.
type outage struct {
	on    bool
	since time.Duration
	wait  time.Duration // before the next attempt to get it back
}

// Waits between attempts to get a device back.
const (
	firstRetry = 100 * time.Millisecond
	slowRetry  = 2 * time.Second
)

// lostError is a connection that is of no more use.
type lostError struct{ err error }

func (e *lostError) Error() string { return e.err.Error() }
func (e *lostError) Unwrap() error { return e.err }

func newLink(s *session, index int) *link {
	return &link{s: s, index: index, dev: s.cfg.Devices[index], waiting: s.gate.open}
}

// run returns nil when the capture ends, or a *DeviceError.
func (l *link) run() error {
	for {
		err := l.open(l.s.going)
		if err == nil {
			err = l.talk(l.s.going)
			if stopped := l.s.going.Err(); stopped != nil && errors.Is(err, stopped) {
				l.farewell(l.s.talking)
			}
			l.drop()
		}
		if l.s.going.Err() != nil {
			return nil
		}
		var lost *lostError
		if !errors.As(err, &lost) {
			l.event(recording.Abandoned, err.Error())
			return &DeviceError{Device: l.index, Name: l.dev.Name, Err: err}
		}
		l.lose(lost.err)
	}
}

// open opens the port. The first time an error is final; after a loss it tries
// again until GiveUpAfter.
func (l *link) open(ctx context.Context) error {
	var last error
	for {
		if err := l.pause(ctx, last); err != nil {
			return err
		}
		rwc, err := l.dial(ctx)
		if err == nil {
			l.conn = connect(rwc, l.s.cfg.Clock)
			l.hearing = hearing{}
			l.event(recording.Opened, l.dev.Name)
			return nil
		}
		if !l.outage.on {
			return err
		}
		last = err
	}
}

// dial opens the port once, and waits no longer for it than for a lost one.
func (l *link) dial(ctx context.Context) (io.ReadWriteCloser, error) {
	wait := l.s.cfg.GiveUpAfter
	if l.outage.on {
		wait = max(0, l.outage.since+wait-l.now())
	}
	timed, cancel := l.s.until(ctx, l.now()+wait)
	defer cancel()
	rwc, err := l.dev.Dial(timed)
	if err != nil && timed.Err() != nil && ctx.Err() == nil {
		if l.outage.on {
			return nil, errors.New("its port does not open")
		}
		return nil, fmt.Errorf("%w: its port did not open within %.1f s", ErrNoAnswer, l.realS(wait))
	}
	return rwc, err
}

// realS is a time of the capture's clock in seconds of the wall, which is what
// people wait for.
func (l *link) realS(d time.Duration) float64 { return d.Seconds() / l.s.cfg.Clock.Factor() }

// pause waits before the port is opened again, or gives up.
func (l *link) pause(ctx context.Context, last error) error {
	if !l.outage.on {
		return nil
	}
	if err := l.overdue(last); err != nil {
		return err
	}
	left := l.outage.since + l.s.cfg.GiveUpAfter - l.now()
	if err := l.s.cfg.Clock.Sleep(ctx, min(l.backOff(), left)); err != nil {
		return err
	}
	return l.overdue(last)
}

// backOff is how long to leave the device alone, longer each time.
func (l *link) backOff() time.Duration {
	wait := l.outage.wait
	l.outage.wait = min(2*wait, slowRetry)
	return wait
}

// overdue gives the device up when its outage has lasted too long. last is why
// the port could not be opened, if that is so.
func (l *link) overdue(last error) error {
	after := l.now() - l.outage.since
	if !l.outage.on || after < l.s.cfg.GiveUpAfter {
		return nil
	}
	why := fmt.Sprintf("not running for %.1f s", l.realS(after))
	if last != nil {
		why += ": " + last.Error()
	}
	return fmt.Errorf("%w: %s; what was captured is kept", ErrGaveUp, why)
}

// drop closes the connection and records what was read and not yet taken, and
// what was left of a line. An error of Close, or one that the reader ends with,
// changes nothing of what was heard.
func (l *link) drop() {
	_ = l.conn.close(func(c chunk) { _ = l.take(c) })
	l.hearing.lines.Flush(l.line)
	l.conn = nil
}

func (l *link) lose(err error) {
	l.s.gate.leave(l.index)
	l.event(recording.LostPort, err.Error())
	l.startOutage()
}

func (l *link) startOutage() {
	l.device.running = false
	if !l.outage.on {
		l.outage = outage{on: true, since: l.now(), wait: firstRetry}
	}
}

func (l *link) now() time.Duration { return l.s.cfg.Clock.Now() }

// event puts something that the host did or noticed into the stream. The stream
// is read until every link has ended, so this always comes back.
func (l *link) event(kind recording.EventKind, text string) {
	l.s.items <- l.s.event(l.index, recording.Event{Kind: kind, Text: text})
}
