package acquire

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"strconv"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// hearing is what came in on one connection.
type hearing struct {
	lines  protocol.Assembler
	last   chunk         // being taken apart
	bytes  int           // in all
	good   int           // lines not refused
	goodAt time.Duration // receive time of the last good line
	next   int64         // offset at which the next line should start
	cut    bool          // the last line was too long to keep whole
}

// device is what is known of the board itself.
type device struct {
	known         bool // it has said who it is, once at least
	model, serial string
	channels      []protocol.Chan
	boot          uint32
	hasBoot       bool // boot is that of its present life
	running       bool
	bootLine      bool // the last chunk held its identity, unasked
}

// asking is the outstanding command and what was answered so far.
type asking struct {
	verb     protocol.Verb // "" when nothing is outstanding
	first    byte          // token of the first try; a late answer is an answer
	token    byte          // of the last try
	until    time.Duration // no other command before this (wire rule 7.1)
	done     bool
	refusal  string          // the word of its last "wont"
	here     *protocol.Here  // the answer to "who"
	channels []protocol.Chan // after here
}

var (
	errLate      = errors.New("no answer in time")
	errRestarted = errors.New("the board started again")
)

// await takes what comes in until done says so. It ends with errLate at the
// time given, errRestarted after the boot line of a known device, a
// *lostError, or ctx's error.
func (l *link) await(ctx context.Context, until time.Duration, done func() bool) error {
	timed, cancel := l.s.until(ctx, until)
	defer cancel()
	for !done() {
		select {
		case c := <-l.conn.chunks:
			if err := l.take(c); err != nil {
				return err
			}
		case err := <-l.conn.failed:
			return &lostError{fmt.Errorf("write to it: %w", err)}
		case <-l.waiting:
			l.waiting = nil // only to wake up once
		case <-timed.Done():
			if ctx.Err() != nil {
				return ctx.Err()
			}
			return errLate
		}
	}
	return nil
}

// until is ctx, cancelled at a time of the capture's clock at the latest.
func (s *session) until(ctx context.Context, at time.Duration) (context.Context, context.CancelFunc) {
	timed, cancel := context.WithCancel(ctx)
	if at == forever {
		return timed, cancel
	}
	go func() {
		defer cancel()
		if wait := at - s.cfg.Clock.Now(); wait > 0 {
			_ = s.cfg.Clock.Sleep(timed, wait) // its only error is that timed has ended
		}
	}()
	return timed, cancel
}

// take records what one Read returned.
func (l *link) take(c chunk) error {
	l.device.bootLine = false
	l.hearing.last = c
	l.hearing.bytes += len(c.data)
	l.hearing.lines.Feed(c.data, l.line)
	if c.err != nil {
		return &lostError{fmt.Errorf("read from it: %w", c.err)}
	}
	if l.device.bootLine && l.device.known {
		return errRestarted
	}
	return nil
}

// line records one line, good or refused, and learns from it.
func (l *link) line(line protocol.Line) {
	h := &l.hearing
	if lost := line.Offset - h.next; h.cut && lost > 0 {
		l.event(recording.Discarded, strconv.FormatInt(lost, 10))
	}
	h.next = line.Offset + int64(len(line.Text)) + 1
	h.cut = line.Err != nil && len(line.Text) == protocol.MaxLine
	l.s.items <- item{wall: h.last.wall, entry: recording.Entry{
		Device: l.index, At: h.last.at, HasAt: true, Wire: bytes.Clone(line.Text),
	}}
	if line.Err == nil {
		h.good++
		h.goodAt = h.last.at
		l.learn(line.Record)
	}
}

func (l *link) learn(r protocol.Record) {
	a := &l.asking
	switch r := r.(type) {
	case protocol.Here:
		l.here(r)
	case protocol.Chan:
		if a.here != nil && len(a.channels) <= a.here.Channels {
			a.channels = append(a.channels, r)
		}
	case protocol.Did:
		a.done = a.done || a.mine(r.Token, r.Verb)
	case protocol.Echo:
		a.done = a.done || a.mine(r.Token, protocol.EchoMe)
	case protocol.Wont:
		if a.mine(r.Token, protocol.Verb(r.Verb)) {
			a.refusal = r.Why
		}
	}
}

// mine reports whether an answer is to one of the tries of this command.
func (a *asking) mine(token byte, verb protocol.Verb) bool {
	return verb == a.verb && token-a.first <= a.token-a.first
}

func (l *link) here(h protocol.Here) {
	d := &l.device
	unasked := h.Cause != protocol.CauseAsked
	otherBoot := d.hasBoot && h.HasBoot && h.Boot != d.boot
	stopped := d.running && !h.Running
	if d.known && (unasked || otherBoot || stopped) {
		l.restarted(h)
	}
	d.bootLine = d.bootLine || unasked
	d.boot, d.hasBoot = h.Boot, h.HasBoot
	if l.asking.verb == protocol.Who {
		l.asking.here, l.asking.channels, l.asking.done = &h, nil, false
	}
}

func (l *link) restarted(h protocol.Here) {
	text := "cause " + string(h.Cause)
	if h.HasBoot {
		text += ", boot " + strconv.FormatUint(uint64(h.Boot), 10)
	}
	l.event(recording.Restarted, text)
	l.startOutage()
}
